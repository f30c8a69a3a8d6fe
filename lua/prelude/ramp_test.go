package prelude_test

import (
	"bytes"
	"context"
	"image/color"
	"image/png"
	"testing"

	"lampbook/engine/render"
	"lampbook/engine/run"
	"lampbook/output/encode"
)

// TestRampShows holds the ramp's table in stands.lua against the program from scene to picture file, with settings as they are by
// default: patches that face a metered light show, each all over, the codes of their reflectances.
func TestRampShows(t *testing.T) {
	// The codes of stands.ramp_values (source: IEC 61966-2-1, 8 bits; the default tone leaves values up to 0.8 as they are).
	want := []int{41, 60, 85, 118, 162, 221}
	const pitch, height = 20, 20 // pixels of a patch
	p, library, err := evaluate(t, `
		local sun = rig{ light.directional{ direction = {0, -0.5, -math.sqrt(0.75)}, intensity = 5000 } } -- faced by what leans by 60 degrees
		local row = stands.ramp{ width = 0.12 }
		local middle = row[3].at
		local target = { 0, middle[2], middle[3] }
		settings{ size = {120, 20}, samples = 4, exposure = sun:meter{ at = target, facing = {0, 0.5, math.sqrt(0.75)} } }
		frame{ name = "ramp", things = row, lights = sun, camera = camera{
		  projection = "orthographic", height = 0.02, target = target, position = { 0, target[2] + 0.5, target[3] + math.sqrt(0.75) } } }`)
	if err != nil {
		t.Fatal(err)
	}
	var file bytes.Buffer
	_, err = run.Run(context.Background(), render.NewEngine(library), p, run.Options{}, func(f run.Finished) error {
		if p.Frames[f.Frame].Name != "ramp" {
			return nil
		}
		return encode.PNG(&file, f.Display, encode.Options{})
	})
	if err != nil {
		t.Fatal(err)
	}
	picture, err := png.Decode(&file)
	if err != nil {
		t.Fatal(err)
	}
	for patch, code := range want {
		for y := 3; y < height-3; y++ {
			for x := patch*pitch + 3; x < (patch+1)*pitch-3; x++ { // the filter mixes neighbours within 1.5 pixels
				c := color.NRGBAModel.Convert(picture.At(x, y)).(color.NRGBA)
				for _, got := range []uint8{c.R, c.G, c.B} {
					if int(got) < code-1 || int(got) > code+1 {
						t.Fatalf("patch %d shows %v at %d, %d; want %d ± 1", patch+1, c, x, y, code)
					}
				}
			}
		}
	}
}

package render

import (
	"math"
	"testing"

	"lampbook/engine/aim"
	"lampbook/engine/kernel/tint"
	"lampbook/engine/model"
)

// TestMeterAgreesWithThePicture renders an 18 % grey card at the exposure that the meter reads.
func TestMeterAgreesWithThePicture(t *testing.T) {
	var s studio
	ids := s.lights(
		model.Light{Name: "key", Kind: model.LightArea, Shape: model.AreaRectangle, Width: 1, Height: 0.5, Intensity: 900, Position: [3]float64{1, 1, 0.5}},
		model.Light{Name: "lamp", Kind: model.LightSpot, Outer: 60, Intensity: 400, Position: [3]float64{-1, 2, 0}},
		model.Light{Name: "room", Kind: model.LightAmbient, Intensity: 40})
	stops, err := aim.Meter(s.plan.Lights, origin, [3]float64{0, 1, 0})
	if err != nil {
		t.Fatal(err)
	}
	card := s.thing(floor, model.Material{Diffuse: tint.Grey(0.18), Ambient: tint.Grey(0.18)})
	set := model.Settings{Width: 1, Height: 1, Samples: 4096, Filter: model.BoxFilter, Exposure: stops, Tone: model.ToneClip}
	r := s.render(t, Options{}, s.frame(ortho([3]float64{0, 0.1, 0}, origin, zUp, 1e-4), set, ids, card))[0]
	if got := at(r.Linear, 0, 0)[1]; off(got, 0.18) > 2e-3 {
		t.Errorf("the card reads %v, want 0.18", got)
	}
	// 18 % linear is sRGB code 118 (reference trap 9: IEC 61966-2-1).
	if code := math.Round(float64(r.Display.Plane("G")[0]) * 255); code != 118 {
		t.Errorf("the card shows code %v, want 118", code)
	}
}

func TestDevelop(t *testing.T) {
	grey := model.Background{Color: tint.Grey(0.25)}
	clear := model.Background{Transparent: true}
	encoded := func(x float64) float32 { return float32(1.055*math.Pow(x, 1/2.4) - 0.055) } // IEC 61966-2-1, upper part
	tests := []struct {
		name        string
		light       float32
		alpha       float32
		set         model.Settings
		want, wantA float32
	}{
		{"covered", 0.5, 1, model.Settings{Tone: model.ToneClip, Background: grey}, encoded(0.5), 1},
		{"half covered", 0.25, 0.5, model.Settings{Tone: model.ToneClip, Background: grey}, encoded(0.375), 1},
		{"half covered, no ground", 0.25, 0.5, model.Settings{Tone: model.ToneClip, Background: clear}, encoded(0.5), 0.5},
		{"open, no ground", 0, 0, model.Settings{Background: clear}, 0, 0},
		{"open ground, whatever the tone", 0, 0, model.Settings{Tone: model.ToneNeutral, Background: grey}, encoded(0.25), 1},
		{"clipped", 7, 1, model.Settings{Tone: model.ToneClip, Background: grey}, 1, 1},
		{"reinhard's white", 3, 1, model.Settings{Tone: model.ToneReinhard, White: 3, Background: grey}, 1, 1},
	}
	for _, tt := range tests {
		got, a := Develop(tint.Grey(tt.light), tt.alpha, tt.set)
		if math.Abs(float64(got.G-tt.want)) > 2e-6 || a != tt.wantA {
			t.Errorf("%s: got %v with alpha %v, want %v with %v", tt.name, got.G, a, tt.want, tt.wantA)
		}
	}
}

func TestShowPass(t *testing.T) {
	var s studio
	set := square(16, 4)
	set.Passes = []model.Pass{model.PassDepth, model.PassNormal, model.PassSpecular}
	set.Background.Transparent = true
	set.Tone = model.ToneClip
	cam := lens([3]float64{0, 0, 4}, origin, 60)
	img := s.shoot(t, cam, set, s.lights(keyLamp), s.thing(ball, gloss))
	middle := 8*16 + 8
	for _, pass := range set.Passes {
		shown, err := ShowPass(img, pass, set)
		if err != nil {
			t.Fatal(err)
		}
		if a := shown.Plane("A"); a[0] != 0 || a[middle] != 1 {
			t.Errorf("pass %d: alpha is %v in the corner and %v in the middle", pass, a[0], a[middle])
		}
		switch pass {
		case model.PassDepth:
			if v := shown.Plane("R")[middle]; v < 0.9 {
				t.Errorf("the nearest depth shows as %v", v)
			}
		case model.PassNormal:
			if z := shown.Plane("B")[middle]; z < 0.97 {
				t.Errorf("a normal towards the camera has %v in blue", z)
			}
		}
	}
	if _, err := ShowPass(img, model.PassAmbient, set); err == nil {
		t.Error("a pass that the picture lacks is shown")
	}
}

package scenes_test

import (
	"context"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"sync"
	"testing"

	"lampbook/engine/kernel/tint"
	"lampbook/engine/pixmap"
	"lampbook/engine/render"
	"lampbook/engine/run"
	"lampbook/lua/bind"
	"lampbook/lua/host"
)

// TestTilesTellApart: a sheet is there to compare. No two tiles of the scene that README.md teaches, nor of the first example, may be so
// alike that a reader sees no difference.
func TestTilesTellApart(t *testing.T) {
	text, err := os.ReadFile("../README.md")
	if err != nil {
		t.Fatal(err)
	}
	_, section, ok := strings.Cut(string(text), "\n## Your first scene\n")
	if !ok {
		t.Fatal("README.md has no section \"Your first scene\"")
	}
	section, _, _ = strings.Cut(section, "\n## ")
	var taught strings.Builder
	for _, m := range regexp.MustCompile("(?s)```lua\n(.*?)```").FindAllStringSubmatch(section, -1) {
		taught.WriteString(singleFrame.ReplaceAllString(m[1], ""))
	}
	first, err := os.ReadFile("first_sheet.lua")
	if err != nil {
		t.Fatal(err)
	}
	for _, test := range []struct {
		name, scene string
		tiles       int
	}{{"README.md", taught.String(), 9}, {"first_sheet.lua", string(first), 12}} {
		t.Run(test.name, func(t *testing.T) {
			shown, names := shownTiles(t, test.scene)
			if len(shown) != test.tiles {
				t.Fatalf("%d tiles, want %d", len(shown), test.tiles)
			}
			for i := range shown {
				for j := range i {
					if d := differing(shown[i], shown[j]); d < leastShare {
						t.Errorf("%s and %s differ visibly in %.2f %% of their pixels, want %.2f %%", names[j], names[i], 100*d, 100*leastShare)
					}
				}
			}
		})
	}
}

// shownTiles renders a scene's pictures a quarter as wide and high.
func shownTiles(t *testing.T, text string) ([]*pixmap.Image, []string) {
	t.Helper()
	scene := filepath.Join(t.TempDir(), "scene.lua")
	if err := os.WriteFile(scene, []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
	p, library, err := host.Evaluate(context.Background(), scene, host.Options{Forced: bind.Forced{Width: 120, Height: 90, Samples: 16}})
	if err != nil {
		t.Fatal(err)
	}
	shown, names := make([]*pixmap.Image, len(p.Frames)), make([]string, len(p.Frames))
	for i := range p.Frames {
		names[i] = p.Frames[i].Name
	}
	var mu sync.Mutex
	_, err = run.Run(context.Background(), render.NewEngine(library), p, run.Options{}, func(f run.Finished) error {
		mu.Lock()
		defer mu.Unlock()
		shown[f.Frame] = f.Display
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	return shown, names
}

// singleFrame is the frame of README.md whose place the loop takes, as the text says.
var singleFrame = regexp.MustCompile(`(?m)^frame\{ name = "cup".*\n( .*\n)*`)

// leastShare is the least share of a picture's pixels in which two tiles differ visibly: a highlight 16 pixels wide and high in a picture
// of 480 × 360.
const leastShare = 16.0 * 16 / (480 * 360)

// differing is the share of pixels that differ by more than 3 in CIEDE2000. A difference of 1 is about the least that is seen side by
// side; noise adds none where frames have the same rays.
func differing(a, b *pixmap.Image) float64 {
	lab := func(m *pixmap.Image, i int) tint.Lab {
		return tint.ToLab(tint.FromSRGB(m.Plane("R")[i], m.Plane("G")[i], m.Plane("B")[i]))
	}
	count := 0
	for i := range a.Plane("R") {
		if tint.DeltaE2000(lab(a, i), lab(b, i)) > 3 {
			count++
		}
	}
	return float64(count) / float64(a.Width*a.Height)
}

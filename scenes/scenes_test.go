package scenes_test

import (
	"bytes"
	"context"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"sync"
	"testing"

	"lampbook/engine/mesh"
	"lampbook/engine/model"
	"lampbook/engine/pixmap"
	"lampbook/engine/render"
	"lampbook/engine/run"
	"lampbook/lua/bind"
	"lampbook/lua/host"
	"lampbook/scenes"
)

// examples says of each scene what it makes.
var examples = map[string]struct {
	frames, failed, casts, sheets int
	set                           []host.Override
}{
	"first_sheet.lua": {frames: 12, casts: 1, sheets: 1},
	"turntable.lua": {
		frames: 16, casts: 9, sheets: 2, // eight views of the turning object, and one cast for all of the turning lights
		set: []host.Override{{Name: "views", Text: "8"}},
	},
	"catalogue.lua":  {frames: 36, failed: 3, casts: 33, sheets: 1},
	"lights.lua":     {frames: 12, casts: 1, sheets: 2},
	"components.lua": {frames: 3, casts: 1, sheets: 1},
}

// damagedFile is the mesh of the catalogue that does not load, and the line at which it breaks off.
const damagedFile = "damaged.obj:44"

// evaluated copies the examples into a folder of their own, as the program writes them, and evaluates one there.
func evaluated(t *testing.T, name string, o host.Options) (*model.Plan, *mesh.Library) {
	t.Helper()
	dir := t.TempDir()
	if err := os.CopyFS(dir, scenes.Files()); err != nil {
		t.Fatal(err)
	}
	p, library, err := host.Evaluate(context.Background(), filepath.Join(dir, name), o)
	if err != nil {
		t.Fatal(err)
	}
	for _, w := range p.Warnings {
		if !strings.Contains(w.Text, damagedFile) {
			t.Errorf("%s:%d: %s", w.Pos.File, w.Pos.Line, w.Text)
		}
	}
	return p, library
}

func names(t *testing.T) []string {
	t.Helper()
	files, err := fs.Glob(scenes.Files(), "*.lua")
	if err != nil {
		t.Fatal(err)
	}
	return files
}

func TestEveryExampleIsListed(t *testing.T) {
	var listed []string
	for name := range examples {
		listed = append(listed, name)
	}
	slices.Sort(listed)
	if found := names(t); !slices.Equal(found, listed) {
		t.Errorf("the folder holds %v, the tests know %v", found, listed)
	}
}

func TestExamplesAreShort(t *testing.T) {
	for _, name := range names(t) {
		text, err := fs.ReadFile(scenes.Files(), name)
		if err != nil {
			t.Fatal(err)
		}
		if lines := bytes.Count(text, []byte("\n")); lines >= 60 {
			t.Errorf("%s has %d lines: an example has fewer than 60", name, lines)
		}
		for i, line := range strings.Split(string(text), "\n") {
			if strings.ContainsRune(line, '\t') || strings.HasSuffix(line, " ") {
				t.Errorf("%s:%d: tabs or spaces at the end of the line", name, i+1)
			}
		}
	}
}

// TestExamplesRender renders every example small. No two of its pictures may be the same: each tile of a sheet shows something.
func TestExamplesRender(t *testing.T) {
	for _, name := range names(t) {
		want := examples[name]
		t.Run(name, func(t *testing.T) {
			p, library := evaluated(t, name, host.Options{Set: want.set, Forced: bind.Forced{Width: 32, Height: 32, Samples: 1}})
			var mu sync.Mutex
			shown := make([]*pixmap.Image, len(p.Frames))
			summary, err := run.Run(context.Background(), render.NewEngine(library), p, run.Options{}, func(f run.Finished) error {
				mu.Lock()
				defer mu.Unlock()
				shown[f.Frame] = f.Display
				return nil
			})
			if err != nil {
				t.Fatal(err)
			}
			if summary.Done != want.frames-want.failed || summary.Failed != want.failed || summary.Left != 0 {
				t.Errorf("%d frames done, %d failed, %d left; want %d, %d, 0", summary.Done, summary.Failed, summary.Left, want.frames-want.failed, want.failed)
			}
			if casts := run.Casts(p, run.Options{}); len(casts) != want.casts {
				t.Errorf("%d casts, want %d", len(casts), want.casts)
			}
			if len(p.Sheets) != want.sheets {
				t.Errorf("%d sheets, want %d", len(p.Sheets), want.sheets)
			}
			for i, a := range shown {
				for j := range i {
					if b := shown[j]; a != nil && b != nil && samePicture(a, b) {
						t.Errorf("frames %s and %s are the same picture", p.Frames[j].Name, p.Frames[i].Name)
					}
				}
			}
		})
	}
}

func samePicture(a, b *pixmap.Image) bool {
	for i := range a.Planes {
		if !slices.Equal(a.Planes[i].Pix, b.Planes[i].Pix) {
			return false
		}
	}
	return true
}

// TestDamagedProductFailsAlone holds the catalogue to what its first lines say.
func TestDamagedProductFailsAlone(t *testing.T) {
	p, _ := evaluated(t, "catalogue.lua", host.Options{})
	for _, f := range p.Frames {
		damaged := slices.ContainsFunc(f.Tags, func(g model.Tag) bool { return g.Key == "product" && g.Value.Text == "T-19 Heron cruet" })
		if failed := strings.Contains(f.Failure, damagedFile); failed != damaged {
			t.Errorf("frame %s: failure %q", f.Name, f.Failure)
		}
	}
}

// TestFirstSheet holds the first example to what it is measured by: twelve tiles of 480 × 360 at 64 samples, two lights of which one
// is an area light.
func TestFirstSheet(t *testing.T) {
	p, _ := evaluated(t, "first_sheet.lua", host.Options{})
	for _, f := range p.Frames {
		var kinds []model.LightKind
		for _, l := range f.Lights {
			kinds = append(kinds, p.Lights[l].Kind)
		}
		got := fmt.Sprint(f.Settings.Width, f.Settings.Height, f.Settings.Samples, kinds)
		if want := fmt.Sprint(480, 360, 64, []model.LightKind{model.LightArea, model.LightAmbient}); got != want {
			t.Errorf("frame %s: %s, want %s", f.Name, got, want)
		}
	}
}

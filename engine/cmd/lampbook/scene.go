package main

import (
	"context"
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"lampbook/engine/mesh"
	"lampbook/engine/model"
	"lampbook/engine/run"
	"lampbook/lua/bind"
	"lampbook/lua/host"
)

// job is a scene evaluated, checked and narrowed to the frames asked for.
type job struct {
	plan    *model.Plan
	files   []string // what the whole plan, before --only, is written to
	library *mesh.Library
}

// load makes the job that a request describes: the same for render, plan and check. What the scene prints is shown by v.
func load(ctx context.Context, r *request, v *view) (*job, error) {
	if err := findScene(r.scene); err != nil {
		return nil, err
	}
	o := host.Options{
		Assets: r.assets,
		Forced: bind.Forced{Width: r.size[0], Height: r.size[1], Samples: r.samples, Formats: r.formats, Draft: r.draft},
	}
	o.Print = v.printer()
	for _, a := range r.set {
		o.Set = append(o.Set, bind.Override{Name: a.name, Text: a.value})
	}
	plan, library, err := host.Evaluate(ctx, r.scene, o)
	if err != nil {
		return nil, wrong(err)
	}
	run.Refuse(plan, r.memory)
	files, err := planFiles(plan)
	if err != nil {
		return nil, wrong(err)
	}
	j := &job{plan: plan, files: files, library: library}
	if len(r.only) > 0 {
		narrowed := *plan
		narrowed.Frames, narrowed.Sheets = slices.Clone(plan.Frames), slices.Clone(plan.Sheets)
		if err := choose(&narrowed, r.only); err != nil {
			return nil, err
		}
		j.plan = &narrowed
	}
	if len(j.plan.Frames) == 0 {
		return nil, wrongf("%s: the scene registers no frame: end it with frame{ … }", r.scene)
	}
	return j, nil
}

// findScene checks that the scene is a file, and names a near one where it is not there.
func findScene(path string) error {
	info, err := os.Stat(path)
	switch {
	case errors.Is(err, fs.ErrNotExist):
		var near []string
		entries, _ := os.ReadDir(filepath.Dir(path))
		for _, e := range entries {
			if strings.HasSuffix(e.Name(), ".lua") {
				near = append(near, filepath.Join(filepath.Dir(path), e.Name()))
			}
		}
		return wrongf("%s: no such file%s", path, didYouMean(path, near))
	case err != nil:
		return wrongf("%v", err)
	case info.IsDir():
		return wrongf("%s: is a folder; a scene file is accepted, such as %s", path, filepath.Join(path, "scene.lua"))
	}
	return nil
}

// faultyFrames words why frames fail, one line for each place and reason, in the plan's order. reason returns a
// frame's, or "".
func faultyFrames(p *model.Plan, reason func(frame int) string) []string {
	type cause struct {
		pos  model.Pos
		text string
	}
	var order []cause
	names := map[cause][]string{}
	for i, f := range p.Frames {
		if text := reason(i); text != "" {
			c := cause{f.Pos, text}
			if names[c] == nil {
				order = append(order, c)
			}
			names[c] = append(names[c], f.Name)
		}
	}
	var lines []string
	for _, c := range order {
		if strings.HasPrefix(c.text, c.pos.File+":") { // the reason names its own line
			lines = append(lines, c.text+": "+framesText(names[c])+" cannot be rendered")
		} else {
			lines = append(lines, place(c.pos)+framesText(names[c])+": "+c.text)
		}
	}
	return lines
}

// framesText names frames: one by its name, several by how many they are and the first few names.
func framesText(names []string) string {
	const most = 4
	if len(names) == 1 {
		return "frame " + names[0]
	}
	shown := names
	if len(names) > most {
		shown = append(slices.Clone(names[:most-1]), "…")
	}
	return count(len(names), "frame") + " (" + strings.Join(shown, ", ") + ")"
}

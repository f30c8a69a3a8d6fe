package main

import (
	"context"
	"fmt"
	"io"

	"github.com/spf13/cobra"

	"lampbook/engine/model"
)

func newCheck() *cobra.Command {
	var r request
	cmd := &cobra.Command{
		Use:   "check SCENE [options]",
		Short: "Evaluates a scene and reads its files without casting a ray",
		Long: `Evaluates a scene, checks everything that it asks for and reads every file that it names, without
casting a ray or writing a file. Exit status 0: render would start with every frame; 1: some
frames would fail; 2: the scene is wrong; 3: stopped by a signal.`,
		Example: "  lampbook check scenes/catalogue.lua",
		RunE: func(cmd *cobra.Command, args []string) error {
			return answer(cmd, &r, args[0], check)
		},
	}
	addOptions(cmd, &r)
	return cmd
}

// check reads everything that the plan names.
func check(ctx context.Context, r *request, v *view) error {
	j, err := load(ctx, r, v)
	if err != nil {
		return err
	}
	p := j.plan
	v.warn(p)
	reasons, err := j.readMeshes(ctx)
	if err != nil {
		return wrong(err)
	}
	faulty := 0
	for i := range p.Frames {
		if reasons[i] != "" {
			faulty++
		}
		v.emit(checkedLine{"frame", p.Frames[i].Name, reasons[i]})
	}
	for _, line := range faultyFrames(p, func(i int) string { return reasons[i] }) {
		v.fault(line)
	}
	v.summary = checkSummary{Frames: len(p.Frames), Faulty: faulty}
	verdict := "nothing wrong"
	if faulty > 0 {
		verdict = count(faulty, "frame") + " would fail"
	}
	v.say("%s: %s, %s, %s: %s", r.scene, count(len(p.Frames), "frame"), count(len(p.Sheets), "sheet"), meshesText(len(p.Meshes)), verdict)
	if faulty > 0 {
		return fault{status: statusFailed}
	}
	return nil
}

// checkedLine and checkSummary are the JSON lines of check.
type checkedLine struct {
	Event  string `json:"event"`
	Name   string `json:"name"`
	Reason string `json:"reason,omitempty"` // why the frame would fail
}

type checkSummary struct {
	ending
	Frames int `json:"frames"`
	Faulty int `json:"faulty"`
}

func (s checkSummary) ended(e ending) any {
	s.ending = e
	return s
}

// readMeshes builds every mesh that a frame shows, holding one at a time, and returns, for each frame, why it would fail, or "". The
// error is the cause of ctx's end.
func (j *job) readMeshes(ctx context.Context) ([]string, error) {
	faults := map[model.MeshID]error{}
	reasons := make([]string, len(j.plan.Frames))
	for i := range j.plan.Frames {
		f := &j.plan.Frames[i]
		reasons[i] = f.Failure
		if reasons[i] != "" {
			continue
		}
		for _, t := range f.Things {
			err, read := faults[t.Mesh]
			if !read {
				if ctx.Err() != nil {
					return nil, context.Cause(ctx)
				}
				_, err = j.library.Get(j.plan.Meshes[t.Mesh])
				if err == nil {
					j.library.Forget(j.plan.Meshes[t.Mesh])
				}
				faults[t.Mesh] = err
			}
			if err != nil {
				reasons[i] = err.Error()
				break
			}
		}
	}
	return reasons, nil
}

// meshesText is count for the one word here that does not end in s.
func meshesText(n int) string {
	if n == 1 {
		return "1 mesh"
	}
	return fmt.Sprintf("%d meshes", n)
}

// printLine writes a line of results to standard output; a line that cannot be written is a failure.
func printLine(w io.Writer, format string, args ...any) error {
	if _, err := fmt.Fprintf(w, format+"\n", args...); err != nil {
		return failed(fmt.Errorf("lampbook: standard output: %w", err))
	}
	return nil
}

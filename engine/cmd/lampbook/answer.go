package main

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"io"
	"slices"

	"github.com/spf13/cobra"
)

// answer carries out a request about a scene and, with --json, says how it ended: its faults, each an object, and last of all an
// "end" with the exit status.
func answer(cmd *cobra.Command, r *request, scene string, do func(context.Context, *request, *view) error) error {
	v := newView(cmd.OutOrStdout(), cmd.ErrOrStderr(), r)
	err := r.accept(scene)
	if err == nil {
		err = do(cmd.Context(), r, v)
	}
	if v.json == nil {
		return v.orUnwritten(err)
	}
	err = v.orUnwritten(err)
	v.end(err)
	return v.orUnwritten(told(err))
}

// orUnwritten is the error, or, where there is none of its own, that of results which could not be written.
func (v *view) orUnwritten(err error) error {
	unwritten := v.unwritten()
	if unwritten == nil || errors.Is(err, v.wrongOut) {
		return err
	}
	return failed(errors.Join(err, unwritten))
}

// end emits the faults and the end.
func (v *view) end(err error) {
	for _, text := range faults(err) {
		v.emit(textLine{"error", text})
	}
	if v.summary == nil {
		v.emit(ending{"end", statusOf(err)})
		return
	}
	v.emit(v.summary.ended(ending{"end", statusOf(err)}))
}

// endWithoutView is the end of a command line with --json that no command took, because an option of it is wrong.
func endWithoutView(args []string, out io.Writer, err error) {
	if err == nil || isTold(err) || !slices.Contains(args, "--json") {
		return
	}
	v := view{json: json.NewEncoder(out)}
	v.json.SetEscapeHTML(false)
	v.end(err) // where it cannot be written, the status says no less
}

// ending is the last JSON line of a command, or the beginning of it.
type ending struct {
	Event  string `json:"event"`
	Status int    `json:"status"` // the exit status
}

// summary is what the last JSON line of a command says besides.
type summary interface{ ended(ending) any }

// textLine is the JSON line of an error, a remark, or a line that the scene has printed.
type textLine struct {
	Event string `json:"event"`
	Text  string `json:"text"`
}

// warningLine is the JSON line of what the scene's author should know.
type warningLine struct {
	Event string `json:"event"`
	File  string `json:"file"`
	Line  int    `json:"line"`
	Text  string `json:"text"`
}

// printer is where what the scene prints goes: to people as it is, with --json a line at a time as an object.
func (v *view) printer() io.Writer {
	switch {
	case v.json != nil:
		return &printedLines{view: v}
	case v.quiet:
		return nil
	}
	return v.errs
}

// printedLines makes JSON lines of text.
type printedLines struct {
	view *view
	rest []byte // of a line that is not yet whole
}

func (p *printedLines) Write(b []byte) (int, error) {
	p.rest = append(p.rest, b...)
	for {
		line, rest, whole := bytes.Cut(p.rest, []byte("\n"))
		if !whole {
			return len(b), nil
		}
		p.view.emit(textLine{"print", string(line)})
		p.rest = rest
	}
}

package main

import (
	"errors"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"lampbook/engine/model"
)

// request is what render, plan and check are asked for.
type request struct {
	scene   string // the scene's file, as typed
	out     string // the run's folder
	set     []assignment
	only    []assignment
	draft   bool
	size    [2]int         // 0, 0: as the scene says
	samples int            // 0: as the scene says
	formats []model.Format // nil: as the scene says
	assets  []string
	threads int   // 0: one for each core
	memory  int64 // bytes of pictures that a run holds; 0: half the machine's
	alone   bool
	stamp   string
	quiet   bool
	json    bool
}

// addOptions gives a command the options that render, plan and check have in common.
func addOptions(cmd *cobra.Command, r *request) {
	f := cmd.Flags()
	f.SortFlags = false
	f.VarP(folderPath{&r.out}, "out", "o", "folder that the run goes to, a `DIR` made where it is missing; out/<scene> if not given, out/<scene>-draft with --draft")
	f.VarP(assignmentList{&r.set, "NAME=VALUE"}, "set", "s", "gives a parameter of the scene another value; may be repeated")
	f.Var(assignmentList{&r.only, "TAG=VALUE"}, "only", "takes only the frames with that tag; another value of the same tag adds frames, another tag narrows")
	f.BoolVarP(&r.draft, "draft", "d", false, "a quarter of the samples and half the size, where --samples and --size do not say otherwise, for a first look")
	f.Var(pictureSize{&r.size}, "size", "size of every picture in pixels, 1 to 16384 a side; the scene's if not given")
	f.Var(wholeNumber{&r.samples, 1, model.MaxSamples}, "samples", "camera rays a pixel, 1 to 65536; the scene's if not given")
	f.Var(formatList{&r.formats}, "formats", "picture files to write, of png, png16, exr and exr_half, with commas between; the scene's if not given")
	f.Var(folderPaths{&r.assets}, "assets", "further folder, a `DIR` that the scene may read from besides its own; may be repeated")
	f.Var(wholeNumber{&r.threads, 1, 1024}, "threads", "processor cores to use, 1 to 1024; every core if not given")
	f.Var(byteSize{&r.memory}, "memory", "bound on the pictures that a run holds, such as 800MB or 4GiB; half the machine's memory if not given")
	f.BoolVar(&r.alone, "alone", false, "casts each frame's rays for it alone; slower, the same pictures")
	f.StringVar(&r.stamp, "stamp", "", "a `TEXT` for the foot of the sheets, such as a date or a build")
	f.BoolVarP(&r.quiet, "quiet", "q", false, "says nothing but what went wrong")
	f.BoolVar(&r.json, "json", false, "says everything as JSON, one object a line, on standard output")
	cmd.Args = oneArgument("scene")
	for _, name := range []string{"out", "assets"} {
		_ = cmd.MarkFlagDirname(name)
	}
	cmd.ValidArgsFunction = func(*cobra.Command, []string, string) ([]string, cobra.ShellCompDirective) {
		return []string{"lua"}, cobra.ShellCompDirectiveFilterFileExt
	}
}

// accept completes a request with the scene and checks what options say together.
func (r *request) accept(scene string) error {
	if scene == "" {
		return wrongf(`scene: the path of a scene file is accepted, such as scenes/first_sheet.lua, got ""`)
	}
	r.scene = scene
	if r.memory == 0 {
		r.memory = halfOfMemory()
	}
	if r.quiet && r.json {
		return wrongf("--quiet and --json exclude each other")
	}
	if strings.ContainsFunc(r.stamp, func(c rune) bool { return c < ' ' || c == 0x7f }) {
		return wrongf("--stamp: one line of text is accepted, got %q", r.stamp)
	}
	if r.out == "" {
		base := filepath.Base(filepath.Clean(scene))
		r.out = filepath.Join("out", strings.TrimSuffix(base, filepath.Ext(base)))
		if r.draft {
			r.out += "-draft" // never in the place of the pictures that were waited for
		}
	}
	if strings.ContainsRune(r.out+r.scene, 0) {
		return wrong(errors.New("lampbook: a path must not hold a zero byte"))
	}
	return nil
}

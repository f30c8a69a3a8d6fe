package main

import (
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strings"
	"testing"

	"github.com/spf13/pflag"

	"lampbook/lua/host"
)

// TestReadmeListsEveryCommandAndOption holds the tables of README.md against the commands, both ways.
func TestReadmeListsEveryCommandAndOption(t *testing.T) {
	text, err := os.ReadFile("../../../README.md")
	if err != nil {
		t.Fatal(err)
	}
	listed := func(pattern string) []string {
		var out []string
		for _, m := range regexp.MustCompile(pattern).FindAllStringSubmatch(string(text), -1) {
			out = append(out, m[1])
		}
		slices.Sort(out)
		return out
	}
	var commands, options []string
	for _, c := range newRoot().Commands() {
		if c.Name() != "completion" && c.Name() != "help" && c.IsAvailableCommand() {
			commands = append(commands, c.Name())
		}
	}
	slices.Sort(commands)
	newRender().Flags().VisitAll(func(f *pflag.Flag) { options = append(options, f.Name) })
	slices.Sort(options)
	if got := listed("(?m)^\\| `lampbook ([a-z]+) "); !slices.Equal(got, commands) {
		t.Errorf("README.md lists the commands %v, there are %v", got, commands)
	}
	if got := listed("(?m)^\\| `--([a-z]+)[ `]"); !slices.Equal(got, options) {
		t.Errorf("README.md lists the options %v, there are %v", got, options)
	}
	newRender().Flags().VisitAll(func(f *pflag.Flag) {
		if f.Shorthand != "" && !strings.Contains(string(text), "`-"+f.Shorthand+"`") {
			t.Errorf("README.md does not name -%s", f.Shorthand)
		}
	})
}

// TestCommandsShareTheirOptions: render, plan and check take the same, so that the plan listed is the plan rendered.
func TestCommandsShareTheirOptions(t *testing.T) {
	names := func(f *pflag.FlagSet) string {
		var all []string
		f.VisitAll(func(f *pflag.Flag) { all = append(all, f.Name+"/"+f.Shorthand) })
		return strings.Join(all, " ")
	}
	want := names(newRender().Flags())
	for _, c := range []*pflag.FlagSet{newPlan().Flags(), newCheck().Flags()} {
		if got := names(c); got != want {
			t.Errorf("options %q, want %q", got, want)
		}
	}
}

func TestStampIsOneLine(t *testing.T) {
	for stamp, want := range map[string]int{"build 12": statusDone, "": statusDone, "a\nb": statusWrong, "\x1b[2J": statusWrong} {
		r := request{stamp: stamp}
		if got := statusOf(r.accept("scene.lua")); got != want {
			t.Errorf("stamp %q: status %d, want %d", stamp, got, want)
		}
	}
}

func TestDefaultFolder(t *testing.T) {
	for scene, want := range map[string]string{
		"scenes/first_sheet.lua": "out/first_sheet", "cup.lua": "out/cup", "./a/b.c.lua": "out/b.c", "plain": "out/plain",
	} {
		r := request{}
		if err := r.accept(scene); err != nil || strings.ReplaceAll(r.out, "\\", "/") != want {
			t.Errorf("%s: folder %q, error %v; want %q", scene, r.out, err, want)
		}
	}
}

// TestReadmeScene runs the first scene of README.md as a reader types it: its first four steps, and all of them.
func TestReadmeScene(t *testing.T) {
	text, err := os.ReadFile("../../../README.md")
	if err != nil {
		t.Fatal(err)
	}
	var steps []string
	for _, m := range regexp.MustCompile("(?s)```lua\n(.*?)```").FindAllStringSubmatch(string(text), -1) {
		steps = append(steps, m[1])
	}
	if len(steps) != 5 {
		t.Fatalf("README.md has %d steps of Lua, want 5", len(steps))
	}
	for _, test := range []struct{ steps, frames int }{{4, 1}, {5, 10}} {
		scene := filepath.Join(t.TempDir(), "cup.lua")
		if err := os.WriteFile(scene, []byte(strings.Join(steps[:test.steps], "\n")), 0o666); err != nil {
			t.Fatal(err)
		}
		plan, _, err := host.Evaluate(t.Context(), scene, host.Options{})
		if err != nil {
			t.Fatalf("the first %d steps: %v", test.steps, err)
		}
		if len(plan.Frames) != test.frames || len(plan.Sheets) != 1 || len(plan.Warnings) > 0 {
			t.Errorf("the first %d steps: %d frames, %d sheets, remarks %v; want %d, 1, none", test.steps, len(plan.Frames), len(plan.Sheets), plan.Warnings, test.frames)
		}
	}
}

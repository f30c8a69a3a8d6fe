package main

import (
	"os"
	"regexp"
	"slices"
	"strings"
	"testing"

	"github.com/spf13/pflag"
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

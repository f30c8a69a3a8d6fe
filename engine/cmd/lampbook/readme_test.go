package main

import (
	"errors"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strings"
	"testing"

	"github.com/spf13/pflag"

	"lampbook/lua/api"
	"lampbook/lua/host"
	"lampbook/lua/prelude"
	"lampbook/scenes"
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

// TestReadmeScene runs the first scene of README.md as a reader types it: its first four steps, all of them, and each further example after
// the first four, beside the tables that the examples read.
func TestReadmeScene(t *testing.T) {
	text, err := os.ReadFile("../../../README.md")
	if err != nil {
		t.Fatal(err)
	}
	var steps []string
	for _, m := range regexp.MustCompile("(?s)```lua\n(.*?)```").FindAllStringSubmatch(string(text), -1) {
		steps = append(steps, m[1])
	}
	if len(steps) != 9 {
		t.Fatalf("README.md has %d pieces of Lua, want 5 steps and 4 further examples", len(steps))
	}
	products, err := scenes.Files().Open("products.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer products.Close()
	table, err := io.ReadAll(products)
	if err != nil {
		t.Fatal(err)
	}
	rows := strings.Count(strings.TrimSpace(string(table)), "\n")
	for _, test := range []struct {
		what   string
		pieces []string
		frames int
	}{
		{"the first 4 steps", steps[:4], 1},
		{"the first 5 steps", steps[:5], 10},
		{"the turntable", append(slices.Clone(steps[:4]), steps[5]), 1 + 24},
		{"the catalogue", append(slices.Clone(steps[:4]), steps[6]), 1 + rows},
		{"the passes", append(slices.Clone(steps[:4]), steps[7]), 2},
		{"EXR", append(slices.Clone(steps[:4]), steps[8]), 2},
	} {
		dir := t.TempDir()
		scene := filepath.Join(dir, "cup.lua")
		err := errors.Join(os.WriteFile(filepath.Join(dir, "products.csv"), table, 0o666), os.WriteFile(scene, []byte(strings.Join(test.pieces, "\n")), 0o666))
		if err != nil {
			t.Fatal(err)
		}
		plan, _, err := host.Evaluate(t.Context(), scene, host.Options{})
		if err != nil {
			t.Fatalf("%s: %v", test.what, err)
		}
		if len(plan.Frames) != test.frames || len(plan.Sheets) != 1 || len(plan.Warnings) > 0 {
			t.Errorf("%s: %d frames, %d sheets, remarks %v; want %d, 1, none", test.what, len(plan.Frames), len(plan.Sheets), plan.Warnings, test.frames)
		}
	}
}

// TestReadmeTableOfCalls: the table of calls names every function of the scene language and of the modules.
func TestReadmeTableOfCalls(t *testing.T) {
	text, err := os.ReadFile("../../../README.md")
	if err != nil {
		t.Fatal(err)
	}
	_, table, found := strings.Cut(string(text), "| call | gives |")
	table, _, ends := strings.Cut(table, "\n\n")
	if !found || !ends {
		t.Fatal("README.md has no table of calls")
	}
	defined := regexp.MustCompile(`(?m)^(?:function (\w+(?:[.:]\w+)?)\(|(surfaces\.\w+) = surface\()`)
	checked := 0
	for _, files := range []fs.FS{api.Files(), prelude.Files()} {
		names, err := fs.Glob(files, "*.lua")
		if err != nil {
			t.Fatal(err)
		}
		for _, name := range names {
			source, err := fs.ReadFile(files, name)
			if err != nil {
				t.Fatal(err)
			}
			for _, m := range defined.FindAllStringSubmatch(string(source), -1) {
				full := m[1] + m[2]
				last := full[strings.LastIndexAny(full, ".:")+1:]
				if !regexp.MustCompile("[`.:]" + last + "\\b").MatchString(table) {
					t.Errorf("%s: README.md's table of calls has no %s", name, full)
				}
				checked++
			}
		}
	}
	const least = 80 // of 83 today; fewer would mean that the pattern misses some
	if checked < least {
		t.Errorf("%d functions were found, want at least %d", checked, least)
	}
}

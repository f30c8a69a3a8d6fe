package prelude

import (
	"embed"
	"io/fs"
	"slices"
	"strings"
)

//go:embed *.lua
var modules embed.FS

// Files are the modules, in one folder.
func Files() fs.FS { return modules }

// Source returns the text of a module; ok is false where the program has none of that name.
func Source(name string) (text string, ok bool) {
	b, err := modules.ReadFile(name + ".lua")
	return string(b), err == nil
}

// Names lists the modules in the order of the alphabet.
func Names() []string {
	files, err := fs.Glob(modules, "*.lua")
	if err != nil {
		panic(err) // only a malformed pattern can fail
	}
	names := make([]string, len(files))
	for i, f := range files {
		names[i] = strings.TrimSuffix(f, ".lua")
	}
	slices.Sort(names)
	return names
}

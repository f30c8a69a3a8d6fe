package engine

import (
	"go/parser"
	"go/token"
	"io/fs"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
)

// importPolicy is a statement of policy, not a description: a new arrow is a reviewed one-line change here.
// "a < b" means b may import a, and by transitivity whatever a may import. Lines end with ";".
// Command packages and test files may import everything; external modules are not in question here.
const importPolicy = `
	num < geom < sample, tri, tint;
	geom, tri < bvh;
	geom, num, sample, tint < shade, lamp;
	geom, tint < model;
	geom, model < mesh;
	model, mesh, lamp < aim;
	model, mesh, aim, bvh, shade, lamp, pixmap < render;
	render < run;
	model, mesh, aim < bind;
	model, mesh, bind, prelude < host;
	pixmap < encode, compare;
	model, pixmap, encode < sheet;
	model, pixmap, encode, compare, sheet < report;
`

// folders gives the folder of each name in the policy, relative to the module.
var folders = map[string]string{
	"geom": "engine/kernel/geom", "num": "engine/kernel/num", "sample": "engine/kernel/sample", "bvh": "engine/kernel/bvh",
	"tri": "engine/kernel/tri", "shade": "engine/kernel/shade", "lamp": "engine/kernel/lamp", "tint": "engine/kernel/tint",
	"model": "engine/model", "mesh": "engine/mesh", "pixmap": "engine/pixmap", "aim": "engine/aim", "render": "engine/render",
	"run": "engine/run", "bind": "lua/bind", "host": "lua/host", "prelude": "lua/prelude", "api": "lua/api",
	"encode": "output/encode", "compare": "output/compare", "sheet": "output/sheet", "report": "output/report",
}

// allowed returns, for each package name, everything that it may import.
func allowed(t *testing.T) map[string]map[string]bool {
	t.Helper()
	direct := map[string][]string{}
	for _, line := range strings.Split(importPolicy, ";") {
		if strings.TrimSpace(line) == "" {
			continue
		}
		levels := strings.Split(line, "<")
		for i := 1; i < len(levels); i++ {
			for _, b := range names(levels[i]) {
				direct[b] = append(direct[b], names(levels[i-1])...)
			}
		}
	}
	all := map[string]map[string]bool{}
	var visit func(p string, into map[string]bool)
	visit = func(p string, into map[string]bool) {
		for _, d := range direct[p] {
			if folders[d] == "" {
				t.Fatalf("importPolicy names %q, which has no folder", d)
			}
			if !into[d] {
				into[d] = true
				visit(d, into)
			}
		}
	}
	for p := range folders {
		all[p] = map[string]bool{}
		visit(p, all[p])
		if all[p][p] {
			t.Fatalf("importPolicy has a circle through %s", p)
		}
	}
	return all
}

func names(list string) []string {
	var out []string
	for _, n := range strings.Split(list, ",") {
		out = append(out, strings.TrimSpace(n))
	}
	return out
}

// TestImports reads every Go file of the project and checks its imports against importPolicy.
func TestImports(t *testing.T) {
	all := allowed(t)
	nameOf := map[string]string{}
	for n, f := range folders {
		nameOf[f] = n
	}
	seen := 0
	for _, root := range []string{"engine", "lua", "output"} {
		err := filepath.WalkDir(filepath.Join("..", root), func(path string, d fs.DirEntry, err error) error {
			if err != nil || d.IsDir() || !strings.HasSuffix(path, ".go") || strings.HasSuffix(path, "_test.go") {
				return err
			}
			folder := filepath.ToSlash(filepath.Dir(strings.TrimPrefix(path, ".."+string(filepath.Separator))))
			if strings.HasPrefix(folder, "engine/cmd") || folder == "engine" {
				return nil
			}
			name, ok := nameOf[folder]
			if !ok {
				t.Errorf("%s: package %s is not in importPolicy", path, folder)
				return nil
			}
			file, err := parser.ParseFile(token.NewFileSet(), path, nil, parser.ImportsOnly)
			if err != nil {
				return err
			}
			for _, spec := range file.Imports {
				p, err := strconv.Unquote(spec.Path.Value)
				if err != nil {
					return err
				}
				p, ours := strings.CutPrefix(p, "lampbook/")
				if !ours {
					continue
				}
				seen++
				if !all[name][nameOf[p]] {
					t.Errorf("%s imports %s, which importPolicy does not allow", path, p)
				}
			}
			return nil
		})
		if err != nil {
			t.Fatal(err)
		}
	}
	if seen == 0 {
		t.Fatal("no import of the project's own packages was seen: does this test still run in engine/?")
	}
}

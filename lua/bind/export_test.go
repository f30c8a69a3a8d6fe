package bind

import (
	"slices"
	"strings"
)

// Binding describes one entry of the scene language, for documentation and tests.
type Binding struct {
	Name   string // "steps", "light.area", "rig:turned"
	Params []Key  // values given in order
	Keys   []Key  // keys of the table that follows them; none: it takes no table, or only a list
	List   string // what the table's list holds: "lights"; "" if it holds none
	Change bool   // a method "with": takes any key that made the value
}

// Bindings lists every entry of the scene language, in the order of the files of lua/api.
func Bindings() []Binding {
	var all []Binding
	for _, c := range calls() {
		all = append(all, Binding{Name: c.name, Params: keysOf(c.params), Keys: keysOf(c.keys), List: c.list, Change: c.change})
	}
	return all
}

// Globals lists the global names of the scene language, in the order of the alphabet.
func Globals() []string {
	var names []string
	for _, c := range calls() {
		if strings.Contains(c.name, ":") {
			continue
		}
		head, _, _ := strings.Cut(c.name, ".")
		names = append(names, head)
	}
	names = sorted(names)
	return slices.Compact(names)
}

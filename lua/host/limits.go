package host

import (
	"fmt"
	"time"
)

// Limits bound what one evaluation may use. The zero value of a field means its default.
type Limits struct {
	Steps  int64         // work units, one virtual-machine instruction or 32 bytes each; default 250 million (about two seconds)
	Memory int64         // bytes that the heap may grow by, meshes not counted; default 512 MiB
	Time   time.Duration // processor time, the engine's work on files and meshes not counted; default 10 s, the net under Steps
	Meshes int64         // bytes that the heap may grow by while files are read and meshes built; default 4 GiB
	Build  time.Duration // processor time for reading files, building meshes and framing them; default 15 min
	Source int           // bytes of one Lua file; default 1 MiB
	File   int64         // bytes of one file that the scene reads; default 512 MiB
}

// Fixed bounds. They are part of the language, not a question of the machine.
const (
	maxString     = 16 << 20 // bytes of one string
	maxArrayItems = 25_550   // positional items in one table constructor; the script library silently drops the rest
	maxDepth      = 190      // nesting of expressions and blocks in a source text
	maxJumps      = 1_000    // labels and gotos in one source text
	maxSpread     = 8_000    // values returned by unpack or string.byte
	maxProtected  = 100      // pcall within pcall
	maxModules    = 200      // modules in one evaluation
	maxMessage    = 2_000    // bytes of an error message
	maxPrinted    = 1 << 20  // bytes written by print
	compileWork   = 200_000_000
	codeLength    = 131_071 // instructions of one function: the reach of the virtual machine's jumps
	maxUpvalues   = 60      // as in the reference implementation
)

// validate refuses negative bounds.
func (l Limits) validate() error {
	for _, bound := range []struct {
		name string
		v    int64
	}{
		{"steps", l.Steps}, {"memory", l.Memory}, {"time", int64(l.Time)}, {"meshes", l.Meshes}, {"build", int64(l.Build)},
		{"source", int64(l.Source)}, {"file", l.File},
	} {
		if bound.v < 0 {
			return &Error{Msg: fmt.Sprintf("limits: %s must be at least 0, got %d", bound.name, bound.v)}
		}
	}
	return nil
}

// withDefaults replaces zero fields.
func (l Limits) withDefaults() Limits {
	if l.Steps == 0 {
		l.Steps = 250_000_000
	}
	if l.Memory == 0 {
		l.Memory = 512 << 20
	}
	if l.Time == 0 {
		l.Time = 10 * time.Second
	}
	if l.Meshes == 0 {
		l.Meshes = 4 << 30
	}
	if l.Build == 0 {
		l.Build = 15 * time.Minute
	}
	if l.Source == 0 {
		l.Source = 1 << 20
	}
	if l.File == 0 {
		l.File = 512 << 20
	}
	return l
}

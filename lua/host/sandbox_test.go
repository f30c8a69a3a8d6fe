package host

import (
	"context"
	"io/fs"
	"strings"

	lua "github.com/yuin/gopher-lua"
)

// trial runs a script in the sandbox alone, without the scene language, and returns what it printed.
type trial struct {
	modules map[string]string
	limits  Limits
	open    func(l *lua.LState)
	ctx     context.Context
}

func (tr trial) run(script string) (printed string, err error) {
	if tr.ctx == nil {
		tr.ctx = context.Background()
	}
	limits := tr.limits.withDefaults()
	s := newSandbox(newMeter(tr.ctx, limits), limits, tr.open)
	var out strings.Builder
	s.printer.w = &out
	s.find = func(module string) (string, []byte, error) {
		text, ok := tr.modules[module]
		if !ok {
			return "", nil, fs.ErrNotExist
		}
		return module + ".lua", []byte(text), nil
	}
	err = s.run("scene.lua", []byte(script))
	return out.String(), err
}

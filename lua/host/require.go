package host

import (
	"cmp"
	"errors"
	"fmt"
	"io/fs"
	"path"
	"slices"
	"strings"

	lua "github.com/yuin/gopher-lua"

	"lampbook/lua/bind"
	"lampbook/lua/prelude"
)

// luaRequire is require "name": a module of the program's own, or the file name.lua beside the scene. Each runs once; what it
// returns is what every require of it gives. A dot stands for a folder.
func (s *sandbox) luaRequire(l *lua.LState) int {
	name := s.text(l, "require", 1)
	if !moduleName(name) {
		s.raise(l, "require: %s is no module name: letters, digits and '_' are accepted, a dot for a folder", quote(name))
	}
	if v, ok := s.loaded[name]; ok {
		l.Push(v)
		return 1
	}
	if at := slices.Index(s.loading, name); at >= 0 {
		s.raise(l, "require: modules wait for each other: %s", strings.Join(append(s.loading[at:len(s.loading):len(s.loading)], name), " → "))
	}
	if len(s.chunks) >= maxModules {
		s.raise(l, "require: more than %d modules", maxModules)
	}
	file, text, err := s.find(name)
	if err != nil {
		s.raise(l, "require: %v", err)
	}
	s.chunks[file] = &chunk{name: file}
	c, err := load(file, text, s.limits)
	if err != nil {
		l.Error(lua.LString(err.Error()), 0)
	}
	s.charge(l, len(text))
	s.chunks[file] = c
	s.loading = append(s.loading, name)
	l.Push(l.NewFunctionFromProto(c.proto))
	l.Push(lua.LString(name))
	l.Call(1, 1)
	s.loading = s.loading[:len(s.loading)-1]
	v := l.Get(-1)
	if v == lua.LNil {
		v = lua.LTrue
		l.Pop(1)
		l.Push(v)
	}
	s.loaded[name] = v
	return 1
}

// moduleName reports whether a name can be one of a module.
func moduleName(name string) bool {
	if name == "" || len(name) > 200 {
		return false
	}
	for _, part := range strings.Split(name, ".") {
		if part == "" || strings.Trim(part, "abcdefghijklmnopqrstuvwxyzABCDEFGHIJKLMNOPQRSTUVWXYZ0123456789_") != "" {
			return false
		}
	}
	return true
}

// finder returns how modules are found: the program's own first, so that a scene's folder cannot change what they mean. The scene
// itself is none.
func finder(files *Files, scene string) func(module string) (string, []byte, error) {
	return func(module string) (string, []byte, error) {
		if text, ok := prelude.Source(module); ok {
			return shippedFolder + module + ".lua", []byte(text), nil
		}
		file, err := files.Find(strings.ReplaceAll(module, ".", "/") + ".lua")
		if errors.Is(err, fs.ErrNotExist) {
			known := append(prelude.Names(), files.modules(path.Dir(strings.ReplaceAll(module, ".", "/")))...)
			known = slices.DeleteFunc(known, func(name string) bool { return name+".lua" == scene })
			return "", nil, fmt.Errorf("no module is called %s%s accepted: %s, or a .lua file beside the scene",
				quote(module), cmp.Or(bind.Guess(module, known), ";"), strings.Join(prelude.Names(), ", "))
		}
		if err != nil {
			return "", nil, err
		}
		text, err := files.Read(file)
		return file, text, err
	}
}

// asError makes an error of another package into an Error, taking the place off its head.
func asError(err error) *Error {
	var e *Error
	if errors.As(err, &e) {
		return e
	}
	at, msg := splitPlace(err.Error())
	return &Error{Pos: at, Msg: plain(msg), Cause: err}
}

package host

import (
	"context"
	"fmt"
	"io"
	"os"
	"path"
	"path/filepath"
	"strings"

	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/mesh"
	"lampbook/engine/model"
	"lampbook/lua/bind"
)

// Options say how a scene is evaluated. The zero value suits a scene that reads files of its own folder alone.
type Options struct {
	Set    []Override  // values for the scene's parameters, in the order of the command line; the last of one name counts
	Forced bind.Forced // settings that win over the scene's
	Assets []string    // further folders that the scene may read from
	Limits Limits
	Print  io.Writer // where the scene's print goes, at most a mebibyte of it; nil: nowhere
}

// Override is a value for a parameter from the command line.
type Override = bind.Override

// Evaluate runs the scene file and returns its plan, which is valid, and the library in which the scene's meshes were built, and which
// builds the rest from the same files. The same files and options give the same plan, byte for byte. An error is an *Error.
//
// Evaluate ends in bounded time and memory whatever the scene says (Limits), and soon after ctx is done. It may be called from several
// goroutines at once, though the bound on memory then counts what all of them use.
func Evaluate(ctx context.Context, scene string, o Options) (*model.Plan, *mesh.Library, error) {
	if err := o.Limits.validate(); err != nil {
		return nil, nil, err
	}
	limits := o.Limits.withDefaults()
	name := filepath.ToSlash(filepath.Clean(scene))
	if shipped(name) {
		name = "./" + name
	}
	files, err := OpenFiles(path.Dir(name), o.Assets, limits.File)
	if err != nil {
		return nil, nil, asError(err)
	}
	text, err := readScene(scene, limits)
	if err != nil {
		return nil, nil, err
	}
	if err := ctx.Err(); err != nil {
		return nil, nil, &Error{Pos: model.Pos{File: name}, Msg: interrupted(err), Cause: err}
	}
	meter := newMeter(ctx, limits)
	defer meter.end()
	reading := metered{meter, files}
	library := mesh.NewLibrary(reading.Read)
	env := &bind.Env{Scene: name, Files: reading, Meshes: meteredMeshes{meter, library}, Overrides: o.Set, Forced: o.Forced,
		Shipped: shipped, Engine: meter.compute, Charge: meter.inside}
	s := newSandbox(meter, limits, func(l *lua.LState) { bind.Open(l, env) })
	s.find = finder(files, path.Base(name))
	s.fatal = env.Fatal
	s.printer.w = o.Print
	if err := s.run(name, text); err != nil {
		return nil, nil, err
	}
	plan, err := s.finish(env)
	if err != nil {
		return nil, nil, err
	}
	return plan, library, nil
}

// readScene reads the scene's own file.
func readScene(scene string, limits Limits) ([]byte, error) {
	at := model.Pos{File: filepath.ToSlash(filepath.Clean(scene))}
	if plain(at.File) != at.File {
		return nil, &Error{Msg: fmt.Sprintf("%s: control characters are not accepted in a scene's path", plain(at.File))}
	}
	info, err := os.Stat(scene)
	if err == nil && info.IsDir() {
		return nil, &Error{Pos: at, Msg: "a folder, not a scene: name a .lua file"}
	}
	if err == nil && !info.Mode().IsRegular() {
		return nil, &Error{Pos: at, Msg: "not a regular file"}
	}
	if err == nil && path.Ext(at.File) != ".lua" {
		return nil, &Error{Pos: at, Msg: "a scene's file name ends in .lua"}
	}
	if err != nil {
		return nil, &Error{Pos: at, Msg: reason(err), Cause: err}
	}
	in, err := os.Open(scene)
	if err != nil {
		return nil, &Error{Pos: at, Msg: reason(err), Cause: err}
	}
	defer in.Close()
	text, err := io.ReadAll(io.LimitReader(in, int64(limits.Source)+1))
	if err != nil {
		return nil, &Error{Pos: at, Msg: reason(err), Cause: err}
	}
	return text, nil
}

// run evaluates the text of a scene.
func (s *sandbox) run(name string, text []byte) error {
	c, err := load(name, text, s.limits)
	if err != nil {
		return err
	}
	s.chunks[name] = c
	s.meter.look()
	fault := s.call(s.main, s.main.NewFunctionFromProto(c.proto), nil)
	if s.meter.stopped != nil {
		return s.meter.stopped
	}
	if s.fatal != nil {
		if bug := s.fatal(); bug != nil {
			e := asError(fmt.Errorf("%s", firstLine(bug.Error())))
			e.Cause = bug
			return e
		}
	}
	if fault == nil {
		return nil
	}
	return s.uncaught(fault)
}

// uncaught makes an Error of what the script threw.
func (s *sandbox) uncaught(fault *lua.ApiError) *Error {
	e := &Error{}
	if from, ok := fault.Cause.(*Error); ok {
		e.Trace = from.Trace
	}
	switch v := fault.Object.(type) {
	case lua.LString:
		e.Pos, e.Msg = splitPlace(string(v))
		if s.chunks[e.Pos.File] == nil { // a text that only looks like a place
			e.Pos, e.Msg = model.Pos{}, string(v)
		}
	case *lua.LNilType:
		e.Msg = "error was called without a message"
	case lua.LNumber:
		e.Msg = formatNumber(float64(v))
	default:
		e.Msg = fmt.Sprintf("error was called with %s instead of a text", article(kind(v)))
	}
	e.Msg = plain(e.Msg)
	if e.Msg == "" {
		e.Msg = "error was called with an empty text"
	}
	if e.Pos.File == "" {
		e.Pos = blame(e.Trace)
	}
	return e
}

// finish takes the plan from the bindings. A panic there is a bug of ours.
func (s *sandbox) finish(env *bind.Env) (plan *model.Plan, err error) {
	defer func() {
		if r := recover(); r != nil {
			plan, err = nil, &Error{Pos: model.Pos{File: env.Scene}, Msg: fmt.Sprintf("internal error at the end of the scene (%s), please report it", plain(fmt.Sprint(r)))}
		}
	}()
	plan, err = env.Finish()
	if s.meter.stopped != nil {
		return nil, s.meter.stopped
	}
	if err != nil {
		e := asError(err)
		if e.Pos.File == "" {
			e.Pos.File, e.Msg = env.Scene, strings.TrimPrefix(e.Msg, env.Scene+": ")
		}
		return nil, e
	}
	return plan, nil
}

// metered lets the meter set reading apart from the scene's own work.
type metered struct {
	meter *meter
	files *Files
}

// Find is Files.Find.
func (m metered) Find(name string) (string, error) { return m.files.Find(name) }

// Read is Files.Read.
func (m metered) Read(file string) (text []byte, err error) {
	m.meter.engine(func() { text, err = m.files.Read(file) })
	return text, err
}

// meteredMeshes does the same for the building of meshes.
type meteredMeshes struct {
	meter   *meter
	library *mesh.Library
}

// Get is mesh.Library.Get.
func (m meteredMeshes) Get(description model.Mesh) (built *mesh.Mesh, err error) {
	m.meter.engine(func() { built, err = m.library.Get(description) })
	return built, err
}

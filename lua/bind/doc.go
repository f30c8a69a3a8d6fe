// Package bind is the scene language: the globals that a scene's Lua sees, one file for each table of them.
//
// A binding checks what it is given, builds a value and remembers the line; what has to be worked out is asked of
// package aim, what has to be built of package mesh. Values are immutable. Every name of the language, with its keys, stands in one
// table (Bindings), against which the annotation files of lua/api are tested. One Env serves one evaluation of one scene; it
// is single-threaded. May import: model, mesh, aim and the kernels below them. Start at Env and Open, then call.go
// (the table of names), args.go, get.go (what a call was given).
package bind

// Package host runs a scene's Lua inside a sandbox and gives back the plan.
//
// A scene may be wrong or hostile: it ends with a plan or with one Error that carries file and line, in bounded time and memory.
// The way through: source.go reads and checks the text, check.go and rewrite.go work on its syntax tree, state.go builds the Lua
// state from a list of allowed names, meter.go counts what the scene uses, explain.go turns the script library's messages into plain words.
// The library's own functions are not used where they are unbounded, show addresses or differ from the Lua 5.1 manual:
// base.go, protect.go, operators.go, lib_*.go and pattern.go replace them. Numbers in Lua are float64; each operation of the virtual machine rounds by itself, but
// math.sin and its like may differ in the last bit among processors.
// May import: model, mesh, lua/bind, lua/prelude. Start at Evaluate.
package host

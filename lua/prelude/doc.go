// Package prelude holds the Lua modules that come inside the program: rigs, stands, surfaces, forms and keys.
//
// They are ordinary Lua, written with the scene language alone; a scene loads one by require "name". May import nothing of the
// project. Start at Source.
package prelude

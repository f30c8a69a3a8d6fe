// Package model is the plan: pure data, from which every picture follows.
//
// A scene's Lua writes a Plan and ends; everything after reads it. Values are plain structs and slices that can be printed,
// hashed and compared: no functions, no engine state, no clock. Meshes, materials and lights stand once in the
// plan's tables and are named by index. Encode and hash: hash.go. Check: validate.go.
// Lengths in metres, angles in degrees, Y up, right-handed; light in the units of KHR_lights_punctual.
// May import: geom, tint. Start at Plan.
package model

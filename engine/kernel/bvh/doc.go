// Package bvh builds hierarchies of boxes over triangles and casts rays into them.
//
// Two levels: a Tree holds one mesh, a Scene places trees. What is hit is what package tri says; boxes only save work, so every
// walk (portable or vectorised, one ray or many) gives the same answer to the last bit, and ties in distance go to the lowest
// placement, then to the lowest triangle. Nothing here starts goroutines: Build is handed an executor, and each goroutine that
// casts brings its own Walker. Trees and scenes do not change once made and may be shared.
// May import: geom, tri. Start at Build, then NewScene, then Scene.Closest.
package bvh

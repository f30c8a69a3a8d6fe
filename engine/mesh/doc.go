// Package mesh makes triangle meshes: primitives, turned and extruded forms, tables, and files, one Go file per format read.
//
// A built mesh is immutable and may be shared. A Library builds each mesh of a plan once; it is single-threaded.
// May import: geom, model. Start at Build.
package mesh

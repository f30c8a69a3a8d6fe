// Package engine is the map of the engine; it holds no code but the test of the import arrows.
//
// The way of the data, one direction, every arrow a value that can be printed, hashed and compared:
//
//	scenes/*.lua ──lua/host──▶ model.Plan ──run──▶ casts ──render──▶ pixmap.Image ──output/encode──▶ files
//	                               │                                      │
//	                               └──────────── output/{sheet,report} ◀──┘
//
// Lua has ended before the plan exists; a worker needs no Lua. A frame's pixels depend on its description alone.
//
//	model/            pure data: Plan, Frame, Placement, Material, Light, Camera, Settings, Sheet
//	kernel/           hot, pure, leaf: no interfaces, errors, maps, goroutines, allocation per ray
//	  geom/           vectors, transforms, rays, boxes
//	  num/            exp2, log2, pow, sincos that give the same bits everywhere
//	  sample/         Owen-scrambled Sobol' points, warps to shapes
//	  tri/            the watertight ray-triangle test
//	  bvh/            hierarchies over triangles and over placements: build and walk
//	  shade/          surface models
//	  lamp/           light sampling and the closed forms of irradiance
//	  tint/           colour: transfer functions, tone, temperature, Lab, colour difference
//	mesh/             triangle meshes: primitives, turned and extruded forms, files
//	aim/              what a scene asks to have worked out before any ray is cast: camera fits, the light meter
//	pixmap/           images as named float32 planes
//	render/           one cast: hits and visibilities once, every look shaded from them
//	run/              many frames: grouped into casts, rendered, handed to a sink
//	cmd/lampbook/     options to calls, one file a subcommand; the files of a run, and what it shows
//
// Start at model.Plan, then render.Engine.Render. Where a change goes: DEVELOPERS.md.
package engine

// Package geom holds the vectors, boxes, rays and transforms that every other package shares.
//
// What is walked or shaded is float32 (Vec3, Ray, Box); what sets a scene up is float64 (Vec3d, Affine).
// Right-handed, Y up, metres. Everything passes by value and may be shared among goroutines.
// May import: num. Start at Vec3, then Affine.
package geom

// Package tri decides whether a ray hits a triangle, and where.
//
// The test is watertight: two triangles that share an edge leave no gap between them, however the ray meets the edge
// (Woop, Benthin & Wald 2013, "Watertight ray/triangle intersection", JCGT 2(1)). What it answers is what every walk of
// package bvh, portable or vectorised, must answer to the last bit. Everything here is float32, rounded after each
// product; float64 only decides what lies exactly on an edge.
// May import: geom. Start at Ray, then Triangle, then Closest.
package tri

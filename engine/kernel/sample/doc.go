// Package sample makes the points at which the engine samples, and warps them onto discs, spheres and the pixel filter.
//
// A Key stands for one stream of points; the same key gives the same points on every machine, in any order.
// Streams are Owen-scrambled, index-shuffled Sobol' points in two dimensions (Joe & Kuo 2008, Burley 2020); a sample
// with more dimensions takes one stream for each pair of them.
// May import: geom, num. Start at PixelAt, then Pixel.For, Stream.Points; the warps are in warp.go.
package sample

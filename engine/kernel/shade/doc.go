// Package shade holds the surface models: what a surface makes of the light that reaches it.
//
// Plain functions on small structs, all directions unit and pointing away from the surface. Safe to share.
// May import: geom, num, sample, tint. Start at BlinnPhong.
package shade

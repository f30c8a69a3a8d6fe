// Package tint is colour: linear Rec. 709 values, transfer functions, tone curves, matrices, colour temperature, Lab
// and colour difference.
//
// Plain functions on values, safe to share. May import: geom, num. Start at RGB.
package tint

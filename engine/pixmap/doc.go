// Package pixmap is the picture between the engine and the files: named float32 planes of one size.
//
// Not safe for concurrent writes to one plane, except by goroutines that own disjoint pixels.
// May import: nothing of the engine. Start at Image.
package pixmap

// Package sheet lays contact sheets: pivot tables of pictures, with headings, captions and foot.
//
// The plan says what stands where (pivot.go, pure), the frames' settings whether the comparison is fair (fair.go), the grid
// gives every box its place (layout.go), and only then are pictures fetched, one at a time, or two where tiles have a reference (compare.go),
// and drawn (draw.go). The same plan, pictures and options give the same bytes. Nothing here is safe for concurrent use on one call; calls
// are independent of one another.
// May import: model, pixmap, encode, tint. Start at Lay.
package sheet

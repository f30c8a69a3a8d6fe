// Package encode turns images into files: one file here per format, all behind one shape of function,
//
//	func(w io.Writer, img *pixmap.Image, o Options) error
//
// Encoders take final pixels: they neither tone-map nor convert colours. Equal images and options give equal bytes. Functions
// are safe to use at the same time on different images. WriteFile puts a file on disk whole or not at all.
// May import: pixmap. Start at Options, then PNG and EXR.
package encode

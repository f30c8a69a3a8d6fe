// Package scenes holds the example scenes, with the tables and meshes that they read, as the program carries them.
//
// May import: nothing of the project. Start at Files.
package scenes

import (
	"embed"
	"io/fs"
)

//go:embed *.lua *.csv shapes
var files embed.FS

// Files are the examples, laid out as in this folder. Each .lua file at the top is a scene.
func Files() fs.FS { return files }

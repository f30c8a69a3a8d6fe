// Package api holds the annotation files of the scene language, as editors read them: one Lua file for each table of the
// language, every call with its keys, units, ranges and defaults. Tests hold them against package bind, both ways, and run
// every example. May import: nothing. Start at Files.
package api

import (
	"embed"
	"io/fs"
)

//go:embed *.lua
var files embed.FS

// Files are the annotation files, in one folder.
func Files() fs.FS { return files }

package main

import (
	"bytes"
	"io"
	"io/fs"
	"os"
	"path/filepath"

	"github.com/spf13/cobra"

	"lampbook/lua/api"
	"lampbook/lua/prelude"
	"lampbook/output/encode"
)

func newAPI() *cobra.Command {
	return &cobra.Command{
		Use:   "api DIR",
		Short: "Writes the editor annotations of the scene language and its modules",
		Long: `Writes the annotations of the scene language, as Lua files that an editor's language server
reads: every call with its keys, their types, units, ranges and defaults; and the modules that
scenes require, as they are inside the program: forms, keys, rigs, stands, surfaces. DIR is
made where it is missing; files of the same names in it are replaced.`,
		Example: "  lampbook api annotations",
		Args:    oneArgument("folder"),
		RunE: func(cmd *cobra.Command, args []string) error {
			calls, _, err := copyOut(api.Files(), args[0], replaceAll)
			if err != nil {
				return failed(err)
			}
			modules, _, err := copyOut(prelude.Files(), args[0], replaceAll)
			if err != nil {
				return failed(err)
			}
			return printLine(cmd.OutOrStdout(), "%s in %s", count(len(calls)+len(modules), "file"), args[0])
		},
	}
}

// What copyOut does with files that are there already with another content.
type copyPolicy bool

const (
	replaceAll  copyPolicy = true
	keepChanged copyPolicy = false
)

// copyOut writes every file of a file system into a folder, each whole or not at all. It returns the names written and those
// kept, slash-separated.
func copyOut(files fs.FS, dir string, policy copyPolicy) (written, kept []string, err error) {
	err = fs.WalkDir(files, ".", func(name string, d fs.DirEntry, err error) error {
		if err != nil {
			return err
		}
		path := filepath.Join(dir, filepath.FromSlash(name))
		if d.IsDir() {
			return makeFolder(path)
		}
		content, err := fs.ReadFile(files, name)
		if err != nil {
			return err
		}
		if policy == keepChanged && isFile(path) {
			if old, err := os.ReadFile(path); err == nil && !bytes.Equal(old, content) {
				kept = append(kept, name)
				return nil
			}
		}
		written = append(written, name)
		return encode.WriteFile(path, func(w io.Writer) error {
			_, err := w.Write(content)
			return err
		})
	})
	return written, kept, err
}

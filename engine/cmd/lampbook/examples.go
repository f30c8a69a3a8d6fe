package main

import (
	"fmt"
	"path/filepath"

	"github.com/spf13/cobra"

	"lampbook/scenes"
)

func newExamples() *cobra.Command {
	return &cobra.Command{
		Use:   "examples DIR",
		Short: "Writes the example scenes",
		Long: `Writes the example scenes with the tables and meshes that they read. DIR is made where it is
missing. A file that is there already and differs is left alone, for it may be your work.`,
		Example: "  lampbook examples scenes\n  lampbook render scenes/first_sheet.lua",
		Args:    oneArgument("folder"),
		RunE: func(cmd *cobra.Command, args []string) error {
			written, kept, err := copyOut(scenes.Files(), args[0], keepChanged)
			if err != nil {
				return failed(err)
			}
			for _, name := range kept {
				fmt.Fprintf(cmd.ErrOrStderr(), "%s: is there already and differs from the example: left alone\n", filepath.Join(args[0], filepath.FromSlash(name)))
			}
			if err := printLine(cmd.OutOrStdout(), "%s in %s", count(len(written), "file"), args[0]); err != nil {
				return err
			}
			if len(kept) > 0 {
				return fault{status: statusFailed}
			}
			return nil
		},
	}
}

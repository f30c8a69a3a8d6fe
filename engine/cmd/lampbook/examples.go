package main

import (
	"strings"

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
			if len(kept) == 0 {
				return printLine(cmd.OutOrStdout(), "%s in %s", count(len(written), "file"), args[0])
			}
			return printLine(cmd.OutOrStdout(), "%s: %d written, %d of yours left alone: %s", args[0], len(written), len(kept), strings.Join(kept, ", "))
		},
	}
}

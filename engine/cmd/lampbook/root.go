package main

import (
	"errors"
	"fmt"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"
)

// newRoot makes the command tree.
func newRoot() *cobra.Command {
	root := &cobra.Command{
		Use:   "lampbook",
		Short: "Renders look-development work in batches",
		Long: `Lampbook renders look-development work in batches. A scene is a Lua program that declares
forms, materials, lights and cameras and loops over their variations; every variation
becomes a picture, and labelled contact sheets collect them.`,
		Example: `  lampbook examples scenes
  lampbook render scenes/first_sheet.lua`,
		SilenceErrors: true,
		SilenceUsage:  true,
		Args: func(cmd *cobra.Command, args []string) error {
			if len(args) == 0 {
				return nil
			}
			return wrongf("unknown command %q%s; see lampbook --help", args[0], didYouMean(args[0], commandNames(cmd)))
		},
		RunE: func(cmd *cobra.Command, _ []string) error { return cmd.Help() },
	}
	root.AddCommand(newRender(), newPlan(), newCheck(), newAPI(), newExamples())
	root.SetHelpFunc(func(cmd *cobra.Command, _ []string) { fmt.Fprint(cmd.OutOrStdout(), helpText(cmd)) })
	root.SetUsageFunc(func(cmd *cobra.Command) error {
		_, err := fmt.Fprint(cmd.OutOrStderr(), helpText(cmd))
		return err
	})
	root.SetFlagErrorFunc(flagError)
	root.SetHelpCommand(newHelp())
	root.InitDefaultHelpCmd()
	root.InitDefaultCompletionCmd()
	for _, c := range root.Commands() {
		c.DisableFlagsInUseLine = true // each says itself where its options go
		c.Flags().BoolP("help", "h", false, "says this")
		if c.Name() == "completion" {
			c.Short = "Prints a script that completes options and names in your shell"
			c.Long = "Prints a script that lets your shell complete commands, options and file names.\nThe help of each shell's command says where the script goes."
		}
	}
	return root
}

// newHelp makes "lampbook help COMMAND", which says what "lampbook COMMAND --help" does.
func newHelp() *cobra.Command {
	return &cobra.Command{
		Use:   "help COMMAND",
		Short: "Says more about a command",
		RunE: func(cmd *cobra.Command, args []string) error {
			about, rest, err := cmd.Root().Find(args)
			if err != nil || len(rest) > 0 {
				return wrongf("unknown command %q%s; see lampbook --help", strings.Join(args, " "), didYouMean(strings.Join(args, " "), commandNames(cmd.Root())))
			}
			return about.Help()
		},
	}
}

// commandNames lists the commands that a user may type.
func commandNames(root *cobra.Command) []string {
	var names []string
	for _, c := range root.Commands() {
		if c.IsAvailableCommand() {
			names = append(names, c.Name())
		}
	}
	return names
}

// flagError words what is wrong with an option, with the nearest known name where it is unknown.
func flagError(cmd *cobra.Command, err error) error {
	if errors.Is(err, pflag.ErrHelp) {
		return err
	}
	var unknown *pflag.NotExistError
	var bare *pflag.ValueRequiredError
	var invalid *pflag.InvalidValueError
	switch {
	case errors.As(err, &unknown):
		given := "--" + unknown.GetSpecifiedName()
		if unknown.GetSpecifiedShortnames() != "" {
			return wrongf("unknown option -%s; see %s --help", unknown.GetSpecifiedName(), cmd.CommandPath())
		}
		var known []string
		cmd.Flags().VisitAll(func(f *pflag.Flag) { known = append(known, "--"+f.Name) })
		return wrongf("unknown option %s%s; see %s --help", given, didYouMean(given, known), cmd.CommandPath())
	case errors.As(err, &bare):
		return wrongf("--%s needs a value; see %s --help", bare.GetFlag().Name, cmd.CommandPath())
	case errors.As(err, &invalid):
		return wrongf("--%s: %v", invalid.GetFlag().Name, invalid.Unwrap())
	}
	return wrongf("%v; see %s --help", err, cmd.CommandPath())
}

// helpText is a command's help: what it is for, how it is called, its commands or options, an example.
func helpText(cmd *cobra.Command) string {
	var b strings.Builder
	say := func(format string, args ...any) { fmt.Fprintf(&b, format, args...) }
	what := cmd.Long
	if what == "" {
		what = cmd.Short + "."
	}
	say("%s\n\n", strings.TrimSpace(what))
	if cmd.HasAvailableSubCommands() {
		say("%s COMMAND\n\n", cmd.CommandPath())
		for _, c := range cmd.Commands() {
			if c.IsAvailableCommand() {
				say("  %-12s%s\n", c.Name(), c.Short)
			}
		}
		say("\n%s COMMAND --help says more about one of them.\n", cmd.CommandPath())
	} else {
		say("%s\n", cmd.UseLine())
	}
	if options := cmd.LocalFlags().FlagUsagesWrapped(100); options != "" && !cmd.HasAvailableSubCommands() {
		say("\n%s", options)
	}
	if cmd.Example != "" {
		say("\nFor example:\n%s\n", strings.TrimRight(cmd.Example, "\n"))
	}
	return b.String()
}

// oneArgument accepts exactly one argument and names what is missing otherwise.
func oneArgument(what string) cobra.PositionalArgs {
	return func(cmd *cobra.Command, args []string) error {
		switch {
		case len(args) == 0:
			return wrongf("%s: which %s?; see %s --help", cmd.Name(), what, cmd.CommandPath())
		case len(args) > 1:
			return wrongf("%s: one %s is accepted, got %d: %s", cmd.Name(), what, len(args), strings.Join(args, " "))
		}
		return nil
	}
}

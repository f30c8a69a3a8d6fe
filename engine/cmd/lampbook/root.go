package main

import (
	"errors"
	"fmt"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"lampbook/engine/model"
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
			if filepath.Ext(args[0]) == ".lua" {
				return wrongf("unknown command %q; did you mean lampbook render %s?", args[0], args[0])
			}
			return wrongf("unknown command %q%s; see lampbook --help", args[0], didYouMean(args[0], commandNames(cmd)))
		},
		RunE: func(cmd *cobra.Command, _ []string) error {
			if asked, _ := cmd.Flags().GetBool("version"); asked {
				return printLine(cmd.OutOrStdout(), "lampbook %s, picture version %d", version(), model.PictureVersion)
			}
			return cmd.Help()
		},
	}
	root.Flags().Bool("version", false, "says which version this is")
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
			wordCompletion(c)
		}
	}
	return root
}

// wordCompletion gives the command that prints completion scripts, and those below it, our words.
func wordCompletion(c *cobra.Command) {
	c.Short = "Prints a script that completes options and names in your shell"
	c.Long = "Prints a script that lets your shell complete commands, options and file names.\nThe help of each shell's command says where the script goes."
	c.Args = cobra.ArbitraryArgs
	c.RunE = func(cmd *cobra.Command, args []string) error {
		if len(args) == 0 {
			return cmd.Help()
		}
		shells := commandNames(cmd)
		return wrongf("completion: unknown shell %q%s%s", args[0], didYouMean(args[0], shells), accepted("shells", shells))
	}
	where := map[string]string{
		"bash": `For this session:

  source <(lampbook completion bash)

For every later one, where the package bash-completion is installed:

  lampbook completion bash > ~/.local/share/bash-completion/completions/lampbook`,
		"zsh": `For every later session, if the folder is in fpath and compinit runs after:

  lampbook completion zsh > ~/.zfunc/_lampbook`,
		"fish": `For every later session:

  lampbook completion fish > ~/.config/fish/completions/lampbook.fish`,
		"powershell": `For this session; in the profile, for every later one:

  lampbook completion powershell | Out-String | Invoke-Expression`,
	}
	for _, shell := range c.Commands() {
		shell.Short = "Prints the script for " + shell.Name()
		shell.Long = shell.Short + ".\n\n" + where[shell.Name()]
		shell.DisableFlagsInUseLine = true
		shell.Flags().BoolP("help", "h", false, "says this")
		if f := shell.Flags().Lookup("no-descriptions"); f != nil {
			f.Usage = "completes without saying what things are"
		}
	}
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
	if !cmd.HasParent() {
		say("%s --version says which version this is.\n", cmd.CommandPath())
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

package main

import (
	"github.com/spf13/cobra"

	"nearcell/engine/present"
)

// completeInShells tells the shells' completion what stands behind flags and
// commands; the scripts themselves are the library's.
func completeInShells(root *cobra.Command) error {
	var formats []cobra.Completion
	for _, f := range present.Formats {
		formats = append(formats, string(f))
	}
	if err := root.RegisterFlagCompletionFunc("as", cobra.FixedCompletions(formats, cobra.ShellCompDirectiveNoFileComp)); err != nil {
		return err
	}
	if err := root.MarkPersistentFlagDirname("catalog"); err != nil {
		return err
	}
	scripts := func(*cobra.Command, []string, string) ([]cobra.Completion, cobra.ShellCompDirective) {
		return []cobra.Completion{"ncell"}, cobra.ShellCompDirectiveFilterFileExt
	}
	for _, c := range root.Commands() {
		switch c.Name() {
		case "run", "check":
			c.ValidArgsFunction = scripts
		default:
			c.ValidArgsFunction = cobra.NoFileCompletions
		}
	}
	return nil
}

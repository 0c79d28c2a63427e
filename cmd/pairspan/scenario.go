package main

import (
	"fmt"
	"io"

	"github.com/spf13/cobra"

	"pairspan/scenarios"
)

func (c *commands) newCommand() *cobra.Command {
	return &cobra.Command{
		Use:     "new",
		Short:   "Print a commented scenario that plans without edits",
		Example: "  pairspan new > link.yaml",
		Args:    cobra.NoArgs,
		RunE: func(*cobra.Command, []string) error {
			return c.print(scenarios.Starter())
		},
	}
}

func (c *commands) entriesCommand() *cobra.Command {
	return &cobra.Command{
		Use:     "entries [PREFIX]",
		Short:   "List every scenario entry: meaning, unit, range, default and its source",
		Example: "  pairspan entries\n  pairspan entries arms.bob",
		Args:    cobra.MaximumNArgs(1),
		RunE: func(_ *cobra.Command, args []string) error {
			prefix := ""
			if len(args) == 1 {
				prefix = args[0]
			}
			listing := scenarios.Listing(prefix)
			if listing == "" {
				return fmt.Errorf("no entry begins with %q; pairspan entries lists them all", prefix)
			}
			return c.print(listing)
		},
	}
}

// print writes to standard output.
func (c *commands) print(s string) error {
	if _, err := io.WriteString(c.out, s); err != nil {
		return outputError{err}
	}
	return nil
}

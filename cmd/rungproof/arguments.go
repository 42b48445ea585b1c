package main

import (
	"fmt"
	"strings"

	"github.com/spf13/cobra"
)

// exactly takes one argument for each name, and says which is missing.
func exactly(names ...string) cobra.PositionalArgs {
	return func(c *cobra.Command, args []string) error {
		switch {
		case len(args) < len(names):
			return usage(c, fmt.Sprintf("%s needs %s", c.CommandPath(), strings.Join(names[len(args):], " and ")))
		case len(args) > len(names):
			return usage(c, fmt.Sprintf("%s takes %s; %q is one too many", c.CommandPath(), strings.Join(names, " and "), args[len(names)]))
		}
		return nil
	}
}

func atMost(n int, name string) cobra.PositionalArgs {
	return func(c *cobra.Command, args []string) error {
		if len(args) > n {
			return usage(c, fmt.Sprintf("%s takes one %s; %q is one too many", c.CommandPath(), name, args[n]))
		}
		return nil
	}
}

func usage(c *cobra.Command, text string) error {
	return hinted{text, strings.TrimSpace(c.Example)}
}

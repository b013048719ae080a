package main

import (
	"fmt"

	"github.com/spf13/cobra"

	"lotproof/runner"
)

func versionCommand() *cobra.Command {
	return &cobra.Command{
		Use:   "version",
		Short: "Print the version of the program",
		Args: func(_ *cobra.Command, args []string) error {
			if len(args) > 0 {
				return usage{"version takes no argument"}
			}
			return nil
		},
		RunE: func(c *cobra.Command, _ []string) error {
			_, err := fmt.Fprintf(c.OutOrStdout(), "lotproof %s\n", runner.Version)
			return err
		},
	}
}

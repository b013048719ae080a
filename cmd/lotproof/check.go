package main

import (
	"github.com/spf13/cobra"

	"lotproof/report"
)

func checkCommand() *cobra.Command {
	return &cobra.Command{
		Use:   "check PLAN",
		Short: "Check a plan and its data and show what would run, without drawing",
		Args:  one("plan"),
		RunE: func(c *cobra.Command, args []string) error {
			study, err := prepare(args[0])
			if err != nil {
				return err
			}
			return report.Outline(c.OutOrStdout(), study.Outline())
		},
	}
}

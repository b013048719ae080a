package main

import (
	"fmt"

	"github.com/spf13/cobra"

	"lotproof/report"
)

func catalogueCommand() *cobra.Command {
	return &cobra.Command{
		Use:   "catalogue [NAME]",
		Short: "List statistics, intervals and advisories with formula and source, or one of them",
		Args: func(_ *cobra.Command, args []string) error {
			if len(args) > 1 {
				return usage{"catalogue takes one name at most; put a name of several words in quotes"}
			}
			return nil
		},
		RunE: func(c *cobra.Command, args []string) error {
			if len(args) == 0 {
				return report.Catalogue(c.OutOrStdout())
			}
			found, err := report.CatalogueEntry(c.OutOrStdout(), args[0])
			if err == nil && !found {
				return usage{fmt.Sprintf("the catalogue has no %q; see lotproof catalogue", args[0])}
			}
			return err
		},
	}
}

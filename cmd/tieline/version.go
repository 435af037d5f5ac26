package main

import (
	"fmt"

	"github.com/spf13/cobra"

	"tieline/pipeline"
)

func versionCommand() *cobra.Command {
	var asJSON bool
	cmd := &cobra.Command{
		Use:     "version",
		Short:   "Print the version",
		Example: "  tieline version",
		Args:    cobra.NoArgs,
		RunE: work(func(cmd *cobra.Command, _ []string) error {
			if asJSON {
				return printJSON(cmd.OutOrStdout(), map[string]string{"made_by": pipeline.MadeBy, "version": pipeline.Version})
			}
			fmt.Fprintf(cmd.OutOrStdout(), "tieline %s\n", pipeline.Version)
			return nil
		}),
	}
	cmd.Flags().BoolVar(&asJSON, "json", false, "print it as JSON")
	return cmd
}

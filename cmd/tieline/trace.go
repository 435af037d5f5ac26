package main

import (
	"fmt"

	"github.com/spf13/cobra"

	"tieline/pipeline"
)

func traceCommand() *cobra.Command {
	var result string
	var asJSON bool
	cmd := &cobra.Command{
		Use:   "trace COMPILATION ESTIMATE",
		Short: "Follow one temperature back to file, line and cells",
		Long: `trace reads the sources again, works one estimate out, and prints the cells it
came from, every quantity and constant on the way, and the temperature; then it
compares that with the result folder, out/<compilation> unless --result names
another; exit code 1 says that they differ. ESTIMATE is an estimate_id of the
estimates table.`,
		Example: `  tieline trace manifests/elkins-grove-1990 "elkins-grove-1990/L3/1:two-feldspar|two-feldspar/elkins-grove-1990|Ab"`,
		Args:    cobra.ExactArgs(2),
		RunE: work(func(cmd *cobra.Command, args []string) error {
			t, err := pipeline.TraceEstimate(args[0], args[1], result)
			if err != nil {
				return err
			}
			if asJSON {
				return printJSON(cmd.OutOrStdout(), t)
			}
			fmt.Fprint(cmd.OutOrStdout(), t.Text())
			if t.Run != "" && !t.SameAsRun {
				return fmt.Errorf("the result in %s is of other inputs", t.Run)
			}
			return nil
		}),
	}
	cmd.Flags().StringVar(&result, "result", "", "result folder to compare with, instead of out/<compilation>")
	cmd.Flags().BoolVar(&asJSON, "json", false, "print the trace as JSON")
	return cmd
}

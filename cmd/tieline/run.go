package main

import (
	"fmt"

	"github.com/spf13/cobra"

	"tieline/pipeline"
	"tieline/pipeline/problem"
)

func runCommand() *cobra.Command {
	var out string
	var replace, asJSON bool
	var workers int
	cmd := &cobra.Command{
		Use:   "run COMPILATION",
		Short: "Work a compilation out and write its result folder",
		Long: `run reads the manifest (a folder that holds compilation.toml, or the file itself)
and its sources, and writes tables, record.json and run.log to out/<compilation>,
whole or not at all. A result that is there from an earlier run is replaced.`,
		Example: `  tieline run manifests/demo
  tieline run terrane/compilation.toml --out results/terrane --replace
  tieline run manifests/demo --json > record.json`,
		Args: cobra.ExactArgs(1),
		PreRunE: func(*cobra.Command, []string) error {
			if workers < 0 {
				return fmt.Errorf("--workers %d: give how many blocks are worked at once, or 0 for one per processor", workers)
			}
			return nil
		},
		RunE: work(func(cmd *cobra.Command, args []string) error {
			bar := newProgress(cmd.ErrOrStderr())
			r, err := pipeline.Run(args[0], pipeline.Options{Out: out, Replace: replace, Workers: workers, Progress: bar.show})
			bar.end()
			if err != nil {
				return err
			}
			fmt.Fprint(cmd.ErrOrStderr(), r.Summary.Text())
			fmt.Fprintf(cmd.ErrOrStderr(), "\nThe result is in %s: tables/*.parquet, record.json, run.log\n", problem.CleanAll(r.Folder))
			if !asJSON {
				return nil
			}
			text, err := r.Record.Encode()
			if err == nil {
				_, err = cmd.OutOrStdout().Write(text)
			}
			return err
		}),
	}
	cmd.Flags().StringVar(&out, "out", "", "result folder, instead of out/<compilation>")
	cmd.Flags().BoolVar(&replace, "replace", false, "with --out: replace a tieline result that is there")
	cmd.Flags().IntVar(&workers, "workers", 0, "how many blocks are worked at once (default: one per processor; never changes a result)")
	cmd.Flags().BoolVar(&asJSON, "json", false, "print the record on standard output")
	return cmd
}

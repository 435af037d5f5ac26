package main

import (
	"fmt"
	"io"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"tieline/ingest"
	"tieline/pipeline"
	"tieline/pipeline/pairing"
	"tieline/pipeline/problem"
)

func checkCommand() *cobra.Command {
	var asJSON bool
	cmd := &cobra.Command{
		Use:   "check COMPILATION",
		Short: "Say what a compilation's files hold and what would stop a run",
		Long: `check reads the manifest and every source as run would, works nothing out, and
prints what each column was taken for, with counts. Problems come all at once.`,
		Example: `  tieline check manifests/demo
  tieline check terrane --json`,
		Args: cobra.ExactArgs(1),
		RunE: work(func(cmd *cobra.Command, args []string) error {
			c, err := pipeline.CheckInputs(args[0])
			if c == nil {
				return err
			}
			if asJSON {
				if jsonErr := printJSON(cmd.OutOrStdout(), c); jsonErr != nil {
					return jsonErr
				}
				return err
			}
			var text strings.Builder
			printCheck(&text, c, err != nil)
			if _, writeErr := io.WriteString(cmd.OutOrStdout(), text.String()); writeErr != nil {
				return writeErr
			}
			return err
		}),
	}
	cmd.Flags().BoolVar(&asJSON, "json", false, "print what was found as JSON")
	return cmd
}

func printCheck(w io.Writer, c *pipeline.Check, stopped bool) {
	fmt.Fprintf(w, "%s\n", problem.Clean(c.Title))
	for i := range c.Sources {
		printSource(w, &c.Sources[i])
	}
	if stopped {
		fmt.Fprintln(w, "\nAnalyses and pairs were not counted, since there are problems.")
		return
	}
	fmt.Fprintf(w, "\n%d analyses", c.Analyses)
	for _, k := range pairing.Kinds {
		fmt.Fprintf(w, ", %d %s pairs", c.Pairs[k.Name], k.Name)
	}
	fmt.Fprintf(w, "; %d analyses could have a partner and have none\n", c.Unpaired)
	fmt.Fprintf(w, "Methods: %s\n", strings.Join(c.Methods, ", "))
}

func printSource(w io.Writer, s *ingest.Source) {
	fmt.Fprintf(w, "\n%s: %s, %d bytes, %s, %d rows, %d blank lines\n", s.ID, problem.Clean(s.File), s.Bytes, s.Encoding, s.Rows, s.BlankLines)
	if s.PassedOver > 0 {
		fmt.Fprintf(w, "  %d rows are passed over by the manifest and will be set aside\n", s.PassedOver)
	}
	if len(s.Unmatched) > 0 {
		fmt.Fprintf(w, "  entries of the manifest that no row matched: %s\n", strings.Join(s.Unmatched, ", "))
	}
	fmt.Fprintf(w, "  %-28s %-18s %8s %10s %10s %8s %8s %8s\n", "column", "taken for", "numbers", "lowest", "highest", "missing", "not an.", "below d.")
	columns := slices.Clone(s.Columns)
	for _, c := range columns {
		taken := c.Quantity
		if taken == "" {
			taken = "(unused)"
		}
		low, high := "", ""
		if c.Numbers > 0 {
			low, high = fmt.Sprintf("%.4g", c.Min), fmt.Sprintf("%.4g", c.Max)
		}
		fmt.Fprintf(w, "  %-28s %-18s %8d %10s %10s %8d %8d %8d\n", problem.Clean(c.Header), taken, c.Numbers, low, high, c.Missing, c.NotAnalysed, c.BelowDetection)
	}
}

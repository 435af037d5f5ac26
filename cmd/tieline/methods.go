package main

import (
	"fmt"
	"io"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"tieline/pipeline/problem"
	"tieline/thermo"
	"tieline/thermo/method"
)

func methodsCommand() *cobra.Command {
	var asJSON bool
	cmd := &cobra.Command{
		Use:   "methods [ID]",
		Short: "List the calibrations with equation, source, range and standing",
		Example: `  tieline methods
  tieline methods two-feldspar/elkins-grove-1990
  tieline methods --json`,
		Args: cobra.MaximumNArgs(1),
		ValidArgsFunction: func(*cobra.Command, []string, string) ([]string, cobra.ShellCompDirective) {
			var ids []string
			for _, m := range thermo.Methods() {
				ids = append(ids, m.ID)
			}
			return ids, cobra.ShellCompDirectiveNoFileComp
		},
		RunE: work(func(cmd *cobra.Command, args []string) error {
			list := thermo.Methods()
			if len(args) == 1 {
				if thermo.ByID(args[0]) == nil {
					return fmt.Errorf("no method is called %s; `tieline methods` lists them", problem.Quote(args[0]))
				}
				list = slices.DeleteFunc(slices.Clone(list), func(m *method.Method) bool { return m.ID != args[0] })
			}
			if asJSON {
				return printJSON(cmd.OutOrStdout(), described(list))
			}
			for i, m := range list {
				if i > 0 {
					fmt.Fprintln(cmd.OutOrStdout())
				}
				printMethod(cmd.OutOrStdout(), m)
			}
			return nil
		}),
	}
	cmd.Flags().BoolVar(&asJSON, "json", false, "print the list as JSON")
	return cmd
}

// description is a method as programs read it.
type description struct {
	ID          string          `json:"id"`
	Variant     string          `json:"variant,omitempty"` // on another iron basis than the calibration's own
	Standing    method.Standing `json:"standing"`
	Equation    string          `json:"equation"`
	Ref         string          `json:"ref"`
	Phases      []string        `json:"phases"`
	Components  []string        `json:"components"`
	Needs       []string        `json:"needs"`
	Fe3Basis    string          `json:"fe3_basis,omitempty"`
	Closes      string          `json:"closes"`
	Assemblage  string          `json:"assemblage,omitempty"`
	Range       []bound         `json:"range"`
	RangeSource string          `json:"range_source"`
	Setting     string          `json:"setting,omitempty"`
	SigmaC      []float64       `json:"sigma_c"`
	SigmaOrigin string          `json:"sigma_origin"`
	Shares      []string        `json:"shares,omitempty"`
	DerivedFrom []string        `json:"derived_from,omitempty"`
}

type bound struct {
	Name string  `json:"name"`
	Unit string  `json:"unit"`
	Min  float64 `json:"min"`
	Max  float64 `json:"max"`
}

func described(list []*method.Method) []description {
	var out []description
	for _, m := range list {
		d := description{ID: m.ID, Variant: m.Variant, Standing: m.Standing, Equation: m.Equation, Ref: m.Ref, Components: m.Components,
			Fe3Basis: m.IronConvention(), Closes: m.Closes, Assemblage: m.Assemblage, RangeSource: m.Range.Source, Setting: m.Range.Setting,
			SigmaC: m.Sigma.C, SigmaOrigin: m.Sigma.Origin, Shares: m.Shares, DerivedFrom: m.DerivedFrom}
		for _, p := range m.Phases {
			d.Phases = append(d.Phases, string(p))
		}
		for _, q := range method.Leaves(m.Needs) {
			d.Needs = append(d.Needs, q.Name)
		}
		for _, b := range m.Range.Bounds {
			d.Range = append(d.Range, bound{b.Name, b.Unit, b.Min, b.Max})
		}
		out = append(out, d)
	}
	return out
}

func printMethod(w io.Writer, m *method.Method) {
	d := described([]*method.Method{m})[0]
	title := d.ID
	if d.Variant != "" {
		title += ", variant " + d.Variant
	}
	fmt.Fprintf(w, "%s  (%s)\n", title, d.Standing)
	line := func(what, text string) {
		if text != "" {
			fmt.Fprintf(w, "  %-11s %s\n", what, strings.ReplaceAll(text, "\n", "\n"+strings.Repeat(" ", 14)))
		}
	}
	line("equation", d.Equation)
	line("source", d.Ref)
	line("phases", strings.Join(d.Phases, " + "))
	line("components", strings.Join(d.Components, ", "))
	line("needs", strings.Join(d.Needs, ", "))
	line("iron", d.Fe3Basis)
	line("closes", d.Closes)
	var spans []string
	for _, b := range d.Range {
		spans = append(spans, strings.TrimSuffix(fmt.Sprintf("%s %g to %g %s", b.Name, b.Min, b.Max, b.Unit), " 1"))
	}
	line("range", strings.Join(spans, "; ")+" ("+d.RangeSource+")")
	line("made for", d.Setting)
	var sigma []string
	for i, s := range d.SigmaC {
		sigma = append(sigma, strings.TrimSpace(fmt.Sprintf("%s +- %g degC", m.Components[i], s)))
	}
	line("error", strings.TrimSpace(strings.Join(sigma, ", ")+" ("+d.SigmaOrigin+")"))
	line("assemblage", d.Assemblage)
	line("derived", strings.Join(d.DerivedFrom, ", "))
	line("shares", strings.Join(d.Shares, ", "))
}

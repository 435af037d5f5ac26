package report

import (
	"fmt"
	"strconv"
	"strings"

	"tieline/pipeline/problem"
)

// Trace is one estimate followed back to its cells.
type Trace struct {
	EstimateID string           `json:"estimate_id"`
	Method     string           `json:"method"`
	Component  string           `json:"component,omitempty"`
	Equation   string           `json:"equation"`
	Ref        string           `json:"ref,omitempty"`
	Basis      string           `json:"fe3_basis,omitempty"`
	Pair       string           `json:"pair,omitempty"`
	Analyses   []TracedAnalysis `json:"analyses"`
	PKbar      *float64         `json:"p_kbar"`
	PSource    string           `json:"p_source"`
	Quantities []Quantity       `json:"quantities,omitempty"`
	Constants  []Constant       `json:"constants,omitempty"`
	TC         *float64         `json:"t_c"`
	SigmaC     *float64         `json:"sigma_calibration_c,omitempty"`
	BoundC     *float64         `json:"bound_c,omitempty"`
	Status     string           `json:"status"`
	Verdict    string           `json:"verdict"`
	DTDP       *float64         `json:"dt_dp_c_per_kbar,omitempty"`
	Reason     string           `json:"reason,omitempty"`
	Lineage    string           `json:"lineage"`
	Run        string           `json:"run,omitempty"` // the result it was compared with
	SameAsRun  bool             `json:"same_as_run"`
}

// TracedAnalysis is one analysis with the cells it was read from.
type TracedAnalysis struct {
	ID      string `json:"analysis_id"`
	Source  string `json:"source"`
	File    string `json:"file"`
	Line    int    `json:"line"`
	Phase   string `json:"phase"`
	Lineage string `json:"lineage"`
	PartOf  string `json:"part_of,omitempty"` // the re-integrated analysis it is a part of
	Cells   []Cell `json:"cells"`
}

// Cell is one cell as the file holds it.
type Cell struct {
	Column   int    `json:"column"`
	Header   string `json:"header"`
	Quantity string `json:"quantity"`
	Text     string `json:"text"`
}

// Quantity is one quantity on the way to the temperature.
type Quantity struct {
	Name  string   `json:"name"`
	Unit  string   `json:"unit"`
	Value *float64 `json:"value"`         // nil where there is none
	Why   string   `json:"why,omitempty"` // why there is none
	Leaf  bool     `json:"read_off_the_analysis"`
}

// Constant is one constant of the method.
type Constant struct {
	Name  string `json:"name"`
	Value string `json:"value"`
}

// Text is the trace as people read it.
func (t *Trace) Text() string {
	var b strings.Builder
	fmt.Fprintf(&b, "%s\n", problem.CleanAll(t.EstimateID))
	for _, a := range t.Analyses {
		fmt.Fprintf(&b, "\n%s (%s): %s line %d, lineage %s\n", problem.Clean(a.ID), a.Phase, problem.Clean(a.File), a.Line, a.Lineage)
		if a.PartOf != "" {
			fmt.Fprintf(&b, "  part of %s\n", problem.Clean(a.PartOf))
		}
		for _, c := range a.Cells {
			fmt.Fprintf(&b, "  column %-3d %-24s %-20s %s\n", c.Column, problem.Clean(c.Header), c.Quantity, problem.Quote(c.Text))
		}
	}
	if t.Pair != "" {
		fmt.Fprintf(&b, "\nPair %s\n", problem.CleanAll(t.Pair))
	}
	fmt.Fprintf(&b, "\nMethod %s %s\n", t.Method, t.Component)
	wrap(&b, "  ", "    ", t.Equation)
	if t.Ref != "" {
		wrap(&b, "  ", "    ", t.Ref)
	}
	if t.Basis != "" {
		fmt.Fprintf(&b, "  ferric iron: %s\n", t.Basis)
	}
	p := "none given"
	if t.PKbar != nil {
		p = digits(*t.PKbar) + " kbar"
	}
	fmt.Fprintf(&b, "  pressure: %s (%s)\n", p, t.PSource)
	t.numbers(&b)
	t.outcome(&b)
	return b.String()
}

func (t *Trace) numbers(b *strings.Builder) {
	if len(t.Constants) > 0 {
		b.WriteString("\nConstants\n")
	}
	for _, c := range t.Constants {
		fmt.Fprintf(b, "  %-36s %s\n", c.Name, c.Value)
	}
	if len(t.Quantities) > 0 {
		b.WriteString("\nQuantities, as they were worked out\n")
	}
	for _, q := range t.Quantities {
		value := "none: " + q.Why
		if q.Value != nil {
			value = digits(*q.Value)
			if q.Unit != "1" {
				value += " " + q.Unit
			}
		}
		fmt.Fprintf(b, "  %-36s %s\n", q.Name, value)
	}
}

func (t *Trace) outcome(b *strings.Builder) {
	b.WriteString("\n")
	switch {
	case t.TC != nil:
		fmt.Fprintf(b, "T = %.0f degC", *t.TC)
		if t.SigmaC != nil {
			fmt.Fprintf(b, " +- %.0f (calibration, 1 sigma)", *t.SigmaC)
		}
		fmt.Fprintf(b, ", to the last bit %s\n", digits(*t.TC))
		if t.Reason != "" {
			wrap(b, "", "  ", t.Verdict+": "+t.Reason)
		} else {
			fmt.Fprintf(b, "%s\n", t.Verdict)
		}
	case t.BoundC != nil:
		fmt.Fprintf(b, "T is %s %.0f degC: %s\n", t.Status, *t.BoundC, t.Reason)
	default:
		fmt.Fprintf(b, "T: no number: %s\n", t.Reason)
	}
	if t.DTDP != nil {
		fmt.Fprintf(b, "dT/dP = %s degC/kbar\n", strconv.FormatFloat(*t.DTDP, 'g', 6, 64))
	}
	fmt.Fprintf(b, "lineage %s\n", t.Lineage)
	switch {
	case t.Run == "":
		b.WriteString("No result to compare with; worked out afresh.\n")
	case t.SameAsRun:
		fmt.Fprintf(b, "The result in %s holds the same.\n", problem.Clean(t.Run))
	default:
		fmt.Fprintf(b, "The result in %s DIFFERS: it was made from other cells, settings or constants. Run again.\n", problem.Clean(t.Run))
	}
}

// digits prints every digit that tells this number from its neighbours.
func digits(v float64) string { return strconv.FormatFloat(v, 'g', -1, 64) }

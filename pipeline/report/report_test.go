package report

import (
	"strings"
	"testing"

	"tieline/pipeline/tables"
)

func TestSigned(t *testing.T) {
	for v, want := range map[float64]string{0: "0", -0.4: "0", 0.4: "0", -0.6: "-1", 12.3: "+12"} {
		if got := signed(v); got != want {
			t.Errorf("signed(%g) is %q, want %q", v, got, want)
		}
	}
}

// Text from files and manifests reaches the terminal inert.
func TestSummaryEscapesWhatItDidNotWrite(t *testing.T) {
	hostile := "\x1b[31mred\u202eevil\x07"
	s := &Summary{Title: hostile, Sources: []Source{{ID: hostile, Unused: []string{hostile}}},
		Findings: []Tally{{What: "rule", Effect: "flagged", N: 1, Example: hostile}}, SetAside: []Row{{ID: hostile, Why: "why"}}}
	trace := &Trace{EstimateID: hostile, Pair: hostile, Run: hostile, SameAsRun: true,
		Analyses: []TracedAnalysis{{ID: hostile, File: hostile, Cells: []Cell{{Header: hostile, Text: hostile}}}}}
	for name, text := range map[string]string{"summary": s.Text(), "trace": trace.Text()} {
		if i := strings.IndexAny(text, "\x1b\u202e\x07"); i >= 0 {
			t.Errorf("%s passes on a control or direction character: %q", name, text[max(0, i-20):i+8])
		}
		if !strings.Contains(text, `\u{1b}[31mred\u{202e}evil`) {
			t.Errorf("%s does not show the escaped text:\n%s", name, text)
		}
	}
}

func TestSummaryLinesFit(t *testing.T) {
	sd := 12.0
	s := &Summary{Title: strings.Repeat("a long title ", 40), Cautions: []string{strings.Repeat("caution ", 60)},
		Discrepancies: []tables.DiscrepancyRow{{PairKind: "two-feldspar", MethodA: "two-feldspar/fuhrman-lindsley-1988", ComponentA: "An",
			MethodB: "two-feldspar/elkins-grove-1990", ComponentB: "An", N: 3, MedianDiffC: &sd, SDC: &sd}}}
	for _, line := range strings.Split(s.Text(), "\n") {
		if len(line) > 104 {
			t.Errorf("line of %d characters: %s", len(line), line)
		}
	}
}

// A comparison across methods and components is left to the table, and counted.
func TestSummaryLeavesCrossComponentsToTheTable(t *testing.T) {
	d := 1.0
	row := func(ma, ca, mb, cb string) tables.DiscrepancyRow {
		return tables.DiscrepancyRow{PairKind: "k", MethodA: ma, ComponentA: ca, MethodB: mb, ComponentB: cb, N: 2, MedianDiffC: &d}
	}
	s := &Summary{Discrepancies: []tables.DiscrepancyRow{row("k/x", "Ab", "k/y", "Ab"), row("k/x", "Ab", "k/y", "Or"), row("k/x", "Ab", "k/x", "Or"), row("k/x", "Ab", "as-published", "")}}
	text := s.Text()
	for want, n := range map[string]int{"x Ab - y Ab": 1, "x Ab - y Or": 0, "x Ab - x Or": 1, "x Ab - as-published": 1, "1 comparisons across components": 1} {
		if got := strings.Count(text, want); got != n {
			t.Errorf("summary says %q %d times, want %d:\n%s", want, got, n, text)
		}
	}
}

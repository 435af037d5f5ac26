package report

import (
	"fmt"
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
			MethodB: "two-feldspar/elkins-grove-1990", ComponentB: "An", N: 3, MedianDiffC: &sd, MADC: &sd, SDC: &sd}}}
	for _, line := range strings.Split(s.Text(), "\n") {
		if len(line) > 104 {
			t.Errorf("line of %d characters: %s", len(line), line)
		}
	}
}

// Everything with published temperatures and within a method is listed; between
// methods only the largest, and the rest is counted.
func TestSummaryListsTheLargestDisagreements(t *testing.T) {
	row := func(ma, ca, mb, cb string, d float64) tables.DiscrepancyRow {
		return tables.DiscrepancyRow{PairKind: "k", MethodA: ma, ComponentA: ca, MethodB: mb, ComponentB: cb, N: 3, MedianDiffC: &d, MADC: &d}
	}
	s := &Summary{Discrepancies: []tables.DiscrepancyRow{row("k/x", "Ab", "k/x", "Or", 1), row("k/x", "Ab", "as-published", "", 1)}}
	for i := range 10 {
		s.Discrepancies = append(s.Discrepancies, row("k/x", "Ab", fmt.Sprintf("k/m%d", i), "", -float64(i)))
	}
	text := s.Text()
	for want, n := range map[string]int{"x Ab - x Or": 1, "x Ab - as-published": 1, "x Ab - m9": 1, "x Ab - m2": 1, "x Ab - m1": 0, "x Ab - m0": 0, "2 smaller ones": 1} {
		if got := strings.Count(text, want); got != n {
			t.Errorf("summary says %q %d times, want %d:\n%s", want, got, n, text)
		}
	}
}

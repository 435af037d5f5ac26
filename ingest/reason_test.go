package ingest

import (
	"fmt"
	"strings"
	"testing"

	"tieline/pipeline/problem"
	"tieline/thermo/chem"
)

// A number out of all reason is refused with its place, at the bound it is read.
func TestNumbersOutOfAllReason(t *testing.T) {
	const orElse = "correct the cell, or list the text in missing if it means that there is none"
	amount := "expected a number from -1e6 to 1e6; " + orElse
	number := "expected a number from -1e9 to 1e9; " + orElse
	kbar := "expected a pressure from 0 to 500 kbar; "
	for _, c := range []struct{ header, within, beyond, says string }{
		{"MgO", "1e6", "1e7", amount}, {"MgO", "-1e6", "-1e308", amount}, {"MgO", "<1e6", "<1e308", amount},
		{"MgO sigma", "1e6", "1000001", amount},
		{"P (kbar)", "500", "501", kbar + "is the unit MPa or bar? map the column to p_mpa or p_bar; else " + orElse},
		{"P (GPa)", "50", "800", kbar + "is the unit kbar, MPa or bar? map the column to p_kbar, p_mpa or p_bar; else " + orElse},
		{"P (GPa)", "0", "1e308", kbar + "is the unit kbar, MPa or bar? map the column to p_kbar, p_mpa or p_bar; else " + orElse},
		{"P (MPa)", "50000", "50001", kbar + "is the unit bar? map the column to p_bar; else " + orElse},
		{"P (bar)", "500000", "500001", kbar + orElse},
		{"published_p_kbar", "500", "8000", kbar + "is the unit MPa or bar? convert the column to kbar; else " + orElse},
		{"T (C)", "3000", "3001", "expected a temperature up to 3000 degC; check the unit, " + orElse},
		{"T (K)", "3273.15", "1e308", "expected a temperature up to 3000 degC; check the unit, " + orElse},
		{"T sigma (C)", "1e9", "1.1e9", number}, {"P sigma (kbar)", "1e9", "1e10", number},
		{"x (um)", "-1e9", "-1e10", number}, {"n", "1e9", "2e9", number},
	} {
		text := "Sample,Mineral,SiO2," + c.header + "\nR1,Pl,60,%s\n"
		_, _, problems := readText(t, "", fmt.Sprintf(text, c.within))
		same(t, c.header+" "+c.within, problems.Lines(), nil)
		_, _, problems = readText(t, "", fmt.Sprintf(text, c.beyond))
		same(t, c.header+" "+c.beyond, problems.Lines(), []string{fmt.Sprintf("t.csv:2:4 (%s): %q is out of all reason; %s", c.header, c.beyond, c.says)})
	}
}

// End members that cancel are left as they are given: divided by their sum they
// would not be finite.
func TestEndMembersThatCancelStayFinite(t *testing.T) {
	all := mustRead(t, `composition = "end-member fraction"`, "Sample,Mineral,Ab,Or,An\nR1,Pl,1e6,-1e6,1e-308\n")
	b, row := all.At(0)
	var c chem.Composition
	b.Composition(row, &c)
	for m, want := range map[chem.Measurand]float64{chem.XAb: 1e6, chem.XOr: -1e6, chem.XAn: 1e-308} {
		if c.Value[m] != want {
			t.Errorf("%s is %g, want %g", m, c.Value[m], want)
		}
	}
}

// Problems past those listed are counted and not worded, which costs more than
// reading the cell.
func TestFaultsOnlyCountedAreNotWorded(t *testing.T) {
	var text strings.Builder
	text.WriteString("Sample,Mineral,SiO2\n")
	for i := range 1000 {
		fmt.Fprintf(&text, "R1,plagioclaze %d,sixty\n", i)
	}
	_, _, problems := readText(t, "", text.String())
	lines := problems.Lines()
	if problems.Len() != 2000 || len(lines) != 2*problem.PerKind+2 {
		t.Fatalf("%d problems, %d lines; want 2000, and %d of each kind listed", problems.Len(), len(lines), problem.PerKind)
	}
	same(t, "the last listed", lines[2*problem.PerKind-1:], []string{
		`t.csv:21:3 (SiO2): "sixty" is no number; expected a number with a decimal point; list the text in not_analysed, below_detection or missing if it means one of these`,
		`t.csv: 980 more of kind "number" not listed`, `t.csv: 980 more of kind "phase" not listed`,
	})

	for full, words := range map[bool]int{false: 2, true: 0} {
		d, p := decode(strings.NewReader("Sample,Mineral,SiO2\nR1,plagioclaze,sixty\n"), "utf-8")
		if p != nil {
			t.Fatal(p)
		}
		r := newRows(d, ',')
		header, _, _ := r.next()
		plan, _, _ := newPlan(&manifestOf(t, `file = "t.csv"`).Sources[0], header, 1, nil)
		row, _, _ := r.next()
		a := newAnalyses(plan, func(string) bool { return full })
		a.read(row, r)
		worded := 0
		for _, p := range a.problems {
			if p.Found != "" {
				worded++
			}
		}
		if len(a.problems) != 2 || worded != words {
			t.Errorf("lists full: %v; %d problems, %d worded; want 2, %d worded", full, len(a.problems), worded, words)
		}
	}
}

package qc

import (
	"fmt"
	"strings"

	"tieline/thermo/chem"
	"tieline/thermo/method"
)

// Estimate is what the rules see of one temperature.
type Estimate struct {
	Info      *method.Info
	Component string
	OutOf     []*method.Bound // the bounds it is outside of
	// OutOfValue holds the variable's value for each of OutOf, in the bound's unit.
	OutOfValue []float64
	NoPressure bool     // none is given; worked at 1 bar
	Assumed    bool     // pressure is the manifest's default or line
	PKbar      float64  //
	Setting    string   // as the source gives it
	Beside     bool     // the phase Method.NeedsBeside is recorded beside the analysis
	AnAfs      *float64 // mole fractions, two-feldspar pairs
	OrPl, AnPl *float64
}

// OfEstimate applies the rules for one temperature.
func OfEstimate(e *Estimate) []Finding {
	var out []Finding
	for i, b := range e.OutOf {
		out = append(out, Finding{Rule: "outside calibrated range", Effect: Flagged, Value: number(e.OutOfValue[i]),
			Limit:  fmt.Sprintf("%s to %s %s", text(b.Min, 4), text(b.Max, 4), b.Unit),
			Detail: fmt.Sprintf("%s %s is outside the calibrated %s to %s %s", b.Name, text(e.OutOfValue[i], 4), text(b.Min, 4), text(b.Max, 4), b.Unit)})
	}
	if e.NoPressure {
		out = append(out, Finding{Rule: "no pressure", Effect: Flagged, Limit: "stated by the source",
			Detail: "no pressure is given: worked at 1 bar, and dT/dP is at most 1 degC/kbar"})
	}
	if e.Assumed {
		out = append(out, Finding{Rule: "assumed pressure", Effect: Flagged, Value: number(e.PKbar), Limit: "stated by the source",
			Detail: "assumed pressure: " + text(e.PKbar, 3) + " kbar is the manifest's, not the source's"})
	}
	out = append(out, setting(e)...)
	if need := e.Info.NeedsBeside; need != "" && !e.Beside {
		out = append(out, Finding{Rule: "assemblage", Effect: Flagged, Limit: string(need) + " beside it",
			Detail: fmt.Sprintf("no %s is recorded beside it: %s", need, e.Info.Assemblage)})
	}
	return append(out, weakComponent(e)...)
}

func setting(e *Estimate) []Finding {
	want := e.Info.Range.Setting
	if want == "" || strings.EqualFold(want, e.Setting) {
		return nil
	}
	got := "the source states no setting"
	if e.Setting != "" {
		got = "the source's setting is " + e.Setting
	}
	return []Finding{{Rule: "setting", Effect: Flagged, Limit: want, Detail: "calibrated for " + want + "; " + got}}
}

// weakComponent flags the component temperatures that rest on a small or
// misplaced fraction (limits: common practice, no source).
func weakComponent(e *Estimate) []Finding {
	flag := func(x *float64, what, limit string) []Finding {
		return []Finding{{Rule: "weak component", Effect: Flagged, Value: x, Limit: limit, Detail: fmt.Sprintf("%s is %s: %s", what, text(*x, 4), limit)}}
	}
	switch {
	case e.Component == "An" && e.AnAfs != nil && *e.AnAfs < 0.01:
		return flag(e.AnAfs, "An in alkali feldspar", "T from An wants at least 0.01")
	case e.Component == "Or" && e.OrPl != nil && *e.OrPl < 0.01:
		return flag(e.OrPl, "Or in plagioclase", "T from Or wants at least 0.01")
	case e.Component == "Ab" && e.AnPl != nil && *e.AnPl > 0.5:
		return flag(e.AnPl, "An in plagioclase", "T from Ab wants at most 0.50")
	}
	return nil
}

// OfCoverage is the finding on an analysis that no method here reads.
func OfCoverage(p chem.Phase) []Finding {
	if p.Role() != "" {
		return nil
	}
	return []Finding{{Rule: "no method", Effect: Noted, Limit: "a phase of a method", Detail: fmt.Sprintf("no method here reads %s", p)}}
}

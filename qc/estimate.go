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
	C         float64         // the temperature, degC
	Side      string          // "at most" or "at least" where there is only a bound, else ""
	Bound     float64         // degC
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
	out := implausible(e.C)
	for i, b := range e.OutOf {
		out = append(out, Finding{Rule: "outside calibrated range", Effect: Flagged, Value: number(e.OutOfValue[i]),
			Limit:  fmt.Sprintf("%s to %s%s", text(b.Min, 4), text(b.Max, 4), unitOf(b)),
			Detail: fmt.Sprintf("%s %s is outside the calibrated %s to %s%s", b.Name, text(e.OutOfValue[i], digitsOf(b)), text(b.Min, 4), text(b.Max, 4), unitOf(b))})
	}
	if e.NoPressure {
		out = append(out, Finding{Rule: "no pressure", Effect: Flagged, Limit: "stated by the source",
			Detail: "no pressure is given: worked at 1 bar, and dT/dP is at most 1 degC/kbar"})
	}
	out = append(out, OfBound(e)...)
	out = append(out, setting(e)...)
	out = append(out, coherency(e)...)
	if need := e.Info.NeedsBeside; need != "" && !e.Beside {
		out = append(out, Finding{Rule: Assemblage, Effect: Flagged, Limit: string(need) + " beside it",
			Detail: fmt.Sprintf("no %s is recorded beside it: %s", need, e.Info.Assemblage)})
	}
	return append(out, weakComponent(e)...)
}

// digitsOf is how many decimals of a variable mean anything: none of a temperature.
func digitsOf(b *method.Bound) int {
	if b.Name == "T" {
		return 0
	}
	return 4
}

// unitOf is the bound's unit behind a space, nothing for a pure number.
func unitOf(b *method.Bound) string {
	if b.Unit == "1" {
		return ""
	}
	return " " + b.Unit
}

// A rock that holds two feldspars or pyroxenes exchanged between these, degC
// (common practice, no source); a number outside says that the equation was
// carried too far.
const (
	coldestC = 200
	hottestC = 1800
)

func implausible(c float64) []Finding {
	if c >= coldestC && c <= hottestC {
		return nil
	}
	return []Finding{{Rule: "no temperature of a rock", Effect: SetAside, Value: number(c), Limit: fmt.Sprintf("%d to %d degC", coldestC, hottestC),
		Detail: fmt.Sprintf("%s degC is outside %d to %d: the equation is carried too far", text(c, 0), coldestC, hottestC)}}
}

// Assemblage is the rule whose finding says that a mineral a method asks for is
// not recorded.
const Assemblage = "assemblage"

// OfBound applies the rules that also hold for a bound.
func OfBound(e *Estimate) []Finding {
	var out []Finding
	if e.Side != "" {
		out = append(out, Finding{Rule: "below detection", Effect: SetAside, Value: number(e.Bound), Limit: "a measured amount",
			Detail: fmt.Sprintf("a component is below detection where the method takes its logarithm: %s %s degC", e.Side, text(e.Bound, 0))})
	}
	if !e.Assumed {
		return out
	}
	return append(out, Finding{Rule: "assumed pressure", Effect: Flagged, Value: number(e.PKbar), Limit: "stated by the source",
		Detail: "assumed pressure: " + text(e.PKbar, 3) + " kbar is the manifest's, not the source's"})
}

// coherency flags the strain-free solvus on lamellae whose coherency nobody
// states: where they are coherent it reads 65 to 72 degC high (Thompson &
// Waldbaum 1969 against its coherent solvus with k of 603.6 cal/mol, from memory).
func coherency(e *Estimate) []Finding {
	if !strings.HasPrefix(e.Info.ID, "alkali-feldspar-solvus/") || strings.HasSuffix(e.Info.ID, "-coherent") {
		return nil
	}
	return []Finding{{Rule: "coherency unknown", Effect: Flagged, Limit: "incoherent lamellae",
		Detail: "strain-free solvus: were the lamellae coherent, it reads 65 to 72 degC too high; see the coherent reading beside it"}}
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

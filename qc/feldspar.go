package qc

import (
	"fmt"
	"math"

	"tieline/manifests"
	"tieline/thermo/chem"
	"tieline/thermo/formula"
	"tieline/thermo/method"
)

// sites are the sums a feldspar's formula is held against, apfu on 8 O.
type sites struct {
	t      float64 // Si + Al + Fe3+ + Ti; 4
	a      float64 // Na + K + Ca + Ba + Sr; 1
	excess float64 // Al + Fe3+ above 1 + Ca + Ba + Sr; 0
	siAl   float64 // Si/Al
	ideal  float64 // Si/Al that Ab + Or + An of these alkalis and Ca asks for
}

// sitesOf needs every major cation: without one, the rest of 8 O means nothing.
func sitesOf(a *Analysis) (s sites, ok bool) {
	p := &a.Formula.Apfu
	for _, c := range []chem.Cation{chem.Si, chem.Al, chem.Ca, chem.Na, chem.K} {
		if !formula.Determined(a.Composition, c) {
			return s, false
		}
	}
	if a.Formula.Why != method.OK {
		return s, false
	}
	divalent := p[chem.Ca] + p[chem.Ba] + p[chem.Sr]
	s.t = p[chem.Si] + p[chem.Al] + p[chem.Fe3] + p[chem.Ti]
	s.a = p[chem.Na] + p[chem.K] + divalent
	s.excess = p[chem.Al] + p[chem.Fe3] - 1 - divalent
	if p[chem.Al] <= 0 || s.a <= 0 {
		return s, true
	}
	s.siAl = p[chem.Si] / p[chem.Al]
	x := divalent / s.a
	s.ideal = (3 - x) / (1 + x)
	return s, true
}

// feldspar applies the rules of a feldspar's sites.
func feldspar(limits *manifests.QC, a *Analysis) []Finding {
	out := contamination(limits, a)
	s, ok := sitesOf(a)
	if !ok {
		return out
	}
	out = append(out, site("T site", s.t, 4, limits.FeldsparTSiteKept, limits.FeldsparTSiteFlagged, "Si + Al + Fe3+ + Ti")...)
	out = append(out, site("A site", s.a, 1, limits.FeldsparASiteKept, limits.FeldsparASiteFlagged, "Na + K + Ca + Ba + Sr")...)
	out = append(out, coupledExchange(limits, a, s)...)
	return append(out, lostAlkalis(limits, s)...)
}

func site(rule string, v, ideal, kept, flagged float64, what string) []Finding {
	return band(rule, v, ideal-kept, ideal+kept, ideal-flagged, ideal+flagged, 3, what, " on 8 O")
}

// coupledExchange holds Al + Fe3+ against 1 + Ca + Ba + Sr: 8 O force the
// charges to 16, so it is this that shows what does not belong.
func coupledExchange(limits *manifests.QC, a *Analysis, s sites) []Finding {
	limit := limits.CoupledExchangeFlagged
	if math.Abs(s.excess) <= limit+eps {
		return nil
	}
	short := s.a < 1-limits.FeldsparASiteKept
	barium := formula.Determined(a.Composition, chem.Ba)
	hint := "too much Al: another Al mineral in the spot, or Al or Ca badly measured"
	switch {
	case s.excess < 0 && short:
		hint = "high Si and a short A site: quartz in the spot, or vacancies (Si4O8)"
	case s.excess < 0:
		hint = "too little Al for its Ca: Al or Ca badly measured, or another mineral in the spot"
	case short && !barium:
		hint = "a short A site with the Al of celsian: BaO was not measured"
	case short:
		hint = "a short A site with too much Al: mica or clay in the spot"
	}
	return []Finding{{Rule: "coupled exchange", Effect: Flagged, Value: number(s.excess), Limit: "0 +- " + text(limit, 4),
		Detail: fmt.Sprintf("Al + Fe3+ is off 1 + Ca + Ba + Sr by %s on 8 O, beyond %s; %s", text(s.excess, 3), text(limit, 4), hint)}}
}

// lostAlkalis is the mark of Na that left under the beam: a short A site, T
// pushed above 4 by the oxygens left over, Al in step with Ca, and Si/Al not
// below what the remaining alkalis and Ca ask for (quartz raises Si/Al too, but
// takes Al out of step; celsian lowers it).
func lostAlkalis(limits *manifests.QC, s sites) []Finding {
	low := 1 - limits.FeldsparASiteKept
	if s.a >= low-eps || s.t <= 4 || math.Abs(s.excess) > limits.CoupledExchangeFlagged+eps || s.siAl < s.ideal-0.005 {
		return nil
	}
	return []Finding{{Rule: "lost alkalis", Effect: Flagged, Value: number(s.a), Limit: text(low, 4),
		Detail: fmt.Sprintf("A site %s on 8 O, below %s, with Si/Al %s where %s would balance: alkalis, Na first, were lost under the beam", text(s.a, 3), text(low, 4), text(s.siAl, 3), text(s.ideal, 3))}}
}

// contamination flags what a feldspar does not hold.
func contamination(limits *manifests.QC, a *Analysis) []Finding {
	if a.Composition.Kind != chem.OxideWt {
		return nil
	}
	var out []Finding
	check := func(v, limit float64, what string) {
		if v > limit+eps {
			out = append(out, Finding{Rule: "contamination", Effect: Flagged, Value: number(v), Limit: text(limit, 4) + " wt%",
				Detail: fmt.Sprintf("%s %s wt%% in a feldspar, above %s: another mineral in the spot", what, text(v, 3), text(limit, 4))})
		}
	}
	iron, parts, _, agrees := formula.IronTwice(a.Composition)
	if agrees || iron == 0 {
		iron = parts
	}
	check(iron, limits.FeldsparFeOFlaggedWt, "FeO total")
	check(a.Composition.Amount(chem.MeasurandOf(chem.MgO)), limits.FeldsparMgOFlaggedWt, "MgO")
	return out
}

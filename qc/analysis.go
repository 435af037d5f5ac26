package qc

import (
	"fmt"
	"math"
	"strings"

	"tieline/manifests"
	"tieline/thermo/chem"
	"tieline/thermo/formula"
	"tieline/thermo/method"
)

// Analysis is what the rules see of one analysis.
type Analysis struct {
	Phase         chem.Phase
	Composition   *chem.Composition
	Formula       *formula.Formula // on the basis of the analyses table
	Total         float64          // wt%, iron by the basis used; 0 where the source gives no oxides
	Pyroxene      *formula.Formula // cations per 6 O, all Fe2+; nil but for pyroxenes
	Feldspar      *[3]float64      // Ab, Or, An; nil but for feldspars that have them
	Celsian       float64          // mole fraction before it is taken out; feldspars only
	EndMemberSum  float64          // before renormalising; 0 where none are given
	ReportedTotal *float64         // wt%, as the source prints it; nil where it prints none
	SetAside      string           // why ingest set the row aside
}

// eps is what two decimal numbers may differ by in binary and be equal.
const eps = 1e-9

// majors are the oxides without which a formula says nothing, by role.
var majors = map[chem.Phase][]chem.Oxide{
	chem.Afs: {chem.SiO2, chem.Al2O3, chem.CaO, chem.Na2O, chem.K2O},
	chem.Pl:  {chem.SiO2, chem.Al2O3, chem.CaO, chem.Na2O, chem.K2O},
	chem.Opx: {chem.SiO2, chem.Al2O3, chem.FeO, chem.MgO, chem.CaO},
	chem.Cpx: {chem.SiO2, chem.Al2O3, chem.FeO, chem.MgO, chem.CaO, chem.Na2O},
}

// minors are the oxides whose absence is flagged and counted as zero, by role.
var minors = map[chem.Phase][]chem.Oxide{
	chem.Opx: {chem.TiO2, chem.Cr2O3, chem.MnO, chem.Na2O, chem.K2O},
	chem.Cpx: {chem.TiO2, chem.Cr2O3, chem.MnO, chem.K2O},
}

// OfAnalysis applies the rules for one analysis.
func OfAnalysis(m *manifests.Manifest, a *Analysis) []Finding {
	if a.SetAside != "" {
		return []Finding{{Rule: "passed over", Effect: SetAside, Detail: a.SetAside}}
	}
	var out []Finding
	limits := &m.QC
	out = append(out, endMemberSum(m.Normalisation.EndMemberTolerance, a)...)
	out = append(out, components(a)...)
	out = append(out, ironTwice(a)...)
	out = append(out, negative(a)...)
	out = append(out, total(limits, a)...)
	out = append(out, cationSum(limits, a)...)
	out = append(out, celsian(limits, a)...)
	out = append(out, reported(limits, a)...)
	out = append(out, charge(limits, a)...)
	out = append(out, identity(limits, a)...)
	switch a.Phase.Role() {
	case chem.Afs, chem.Pl:
		return append(out, feldspar(limits, a)...)
	case chem.Opx, chem.Cpx:
		return append(out, pyroxene(limits, a)...)
	}
	return out
}

// endMemberSetAside is how far a sum of fractions may lie from 1 and be used
// (common practice, no source).
const endMemberSetAside = 0.1

func endMemberSum(tol float64, a *Analysis) []Finding {
	if a.Composition.Kind != chem.EndMember {
		return nil
	}
	if a.EndMemberSum <= 0 {
		return []Finding{{Rule: "end-member sum", Effect: SetAside, Value: number(a.EndMemberSum), Limit: "above 0",
			Detail: "end-member fractions sum to " + text(a.EndMemberSum, 4)}}
	}
	// Percent, mixed units or a misread column: renormalising would hide it.
	if math.Abs(a.EndMemberSum-1) > endMemberSetAside+eps {
		detail := "end-member fractions sum to " + text(a.EndMemberSum, 4)
		if math.Abs(a.EndMemberSum-100) < 10 {
			detail += ": percent, or other units than fractions"
		}
		return []Finding{{Rule: "end-member sum", Effect: SetAside, Value: number(a.EndMemberSum), Limit: "1 +- " + text(endMemberSetAside, 2), Detail: detail}}
	}
	// A sum printed as .998 is off by .002, not by the .0020000000000000018 of binary fractions.
	if math.Abs(a.EndMemberSum-1) <= tol+eps {
		return nil
	}
	return []Finding{{Rule: "end-member sum", Effect: Flagged, Value: number(a.EndMemberSum), Limit: "1 +- " + text(tol, 4),
		Detail: "end-member fractions sum to " + text(a.EndMemberSum, 4) + " and were renormalised"}}
}

func components(a *Analysis) []Finding {
	role := a.Phase.Role()
	var out []Finding
	gone := unmeasured(a.Composition, majors[role])
	switch a.Composition.Kind {
	case chem.Apfu:
		gone = unknownCations(a.Composition, majors[role])
	case chem.EndMember:
		gone = unknownEndMembers(a.Composition, role)
	}
	if gone != "" {
		out = append(out, Finding{Rule: "major component not measured", Effect: Flagged, Limit: "measured",
			Detail: gone + " not measured: methods that need it give no number"})
	}
	if a.Composition.Kind != chem.OxideWt {
		return out
	}
	if gone := unmeasured(a.Composition, minors[role]); gone != "" {
		out = append(out, Finding{Rule: "minor component not measured", Effect: Flagged, Limit: "measured",
			Detail: gone + " not measured and counted as zero in the formula"})
	}
	if (role == chem.Afs || role == chem.Pl) && unmeasured(a.Composition, []chem.Oxide{chem.BaO}) != "" {
		out = append(out, bariumUnknown(a))
	}
	return out
}

// unknownCations lists, joined, the cations of oxides that were not determined.
func unknownCations(c *chem.Composition, oxides []chem.Oxide) string {
	var gone []string
	for _, o := range oxides {
		if cation := chem.Oxides[o].Cation; !formula.Determined(c, cation) {
			gone = append(gone, cation.String())
		}
	}
	return strings.Join(gone, ", ")
}

// unknownEndMembers lists, joined, the end members a feldspar lacks.
func unknownEndMembers(c *chem.Composition, role chem.Phase) string {
	if role != chem.Afs && role != chem.Pl {
		return ""
	}
	var gone []string
	for _, m := range []chem.Measurand{chem.XAb, chem.XOr, chem.XAn} {
		if !known(c, m) {
			gone = append(gone, m.String())
		}
	}
	return strings.Join(gone, ", ")
}

// bariumUnknown says that BaO was not analysed, and flags it where the A site
// and Al leave room for celsian (BaAl2Si2O8 takes K's place and one Si's).
func bariumUnknown(a *Analysis) Finding {
	f := Finding{Rule: "BaO not measured", Effect: Noted, Limit: "A site 0.98, Al - 1 - Ca 0.02", Detail: "BaO not measured; A site and Al leave no room for celsian"}
	if a.Formula.Why != method.OK {
		return f
	}
	p := &a.Formula.Apfu
	site := p[chem.Na] + p[chem.K] + p[chem.Ca] + p[chem.Sr]
	excess := p[chem.Al] + p[chem.Fe3] - 1 - p[chem.Ca]
	if site < 0.98 && excess > 0.02 {
		f.Effect, f.Value = Flagged, number(site)
		f.Detail = fmt.Sprintf("BaO not measured, and the formula leaves room for it: A site %s, Al above 1 + Ca by %s", text(site, 3), text(excess, 3))
	}
	return f
}

// unmeasured lists, joined, the oxides that were not measured; iron counts in any form.
func unmeasured(c *chem.Composition, oxides []chem.Oxide) string {
	var gone []string
	for _, o := range oxides {
		if known(c, chem.MeasurandOf(o)) {
			continue
		}
		if o == chem.FeO && (known(c, chem.FeOT) || known(c, chem.Fe2O3T) || known(c, chem.MeasurandOf(chem.Fe2O3))) {
			continue
		}
		gone = append(gone, o.String())
	}
	return strings.Join(gone, ", ")
}

func known(c *chem.Composition, m chem.Measurand) bool {
	return c.State[m] == chem.Measured || c.State[m] == chem.BelowDetection
}

func ironTwice(a *Analysis) []Finding {
	if asFeO, asFe2O3, both, differ := formula.TotalsDiffer(a.Composition); both && differ {
		return []Finding{{Rule: "iron listed twice", Effect: Flagged, Value: number(asFe2O3), Limit: text(asFeO, 3) + " wt% FeO total",
			Detail: fmt.Sprintf("iron total of %s wt%% FeO stands beside one of Fe2O3 that holds %s; the first was used", text(asFeO, 2), text(asFe2O3, 2))}}
	}
	total, parts, twice, agrees := formula.IronTwice(a.Composition)
	if a.Composition.Kind == chem.Apfu {
		return ironTwiceApfu(a.Composition)
	}
	if !twice {
		return nil
	}
	f := Finding{Rule: "iron listed twice", Effect: Noted, Value: number(parts), Limit: text(total, 3) + " wt% FeO total",
		Detail: "a total of iron stands beside FeO and Fe2O3; iron was counted once"}
	if !agrees {
		f.Effect = Flagged
		f.Detail = fmt.Sprintf("iron total of %s wt%% FeO stands beside FeO and Fe2O3 that hold %s; the total was used", text(total, 2), text(parts, 2))
	}
	return []Finding{f}
}

// ironTwiceApfu is ironTwice for cations.
func ironTwiceApfu(c *chem.Composition) []Finding {
	total, parts, twice, agrees := formula.IronTwiceApfu(c)
	if !twice {
		return nil
	}
	f := Finding{Rule: "iron listed twice", Effect: Noted, Value: number(parts), Limit: text(total, 4) + " apfu Fe",
		Detail: "Fe stands beside Fe2 and Fe3; iron was counted once"}
	if !agrees {
		f.Effect = Flagged
		f.Detail = fmt.Sprintf("Fe of %s apfu stands beside Fe2 and Fe3 that sum to %s; Fe was used", text(total, 3), text(parts, 3))
	}
	return []Finding{f}
}

// Below these an amount is no background noise (common practice, no source).
const (
	negativeWt       = -0.1  // wt%
	negativeFraction = -0.01 // apfu and mole fraction
)

func negative(a *Analysis) []Finding {
	var out []Finding
	for m := chem.Measurand(0); m < chem.NumMeasurands; m++ {
		if a.Composition.State[m] == chem.Measured && a.Composition.Value[m] < 0 {
			f := Finding{Rule: "negative amount", Effect: Flagged, Value: number(a.Composition.Value[m]), Limit: "0",
				Detail: m.String() + " is negative (" + text(a.Composition.Value[m], 4) + ") and was used as given"}
			least := negativeWt
			if m.Kind() != chem.OxideWt {
				least = negativeFraction
			}
			if a.Composition.Value[m] < least-eps {
				f.Effect, f.Limit = SetAside, text(least, 2)
				f.Detail = m.String() + " is negative (" + text(a.Composition.Value[m], 4) + "), more than a background explains"
			}
			out = append(out, f)
		}
	}
	return out
}

func total(limits *manifests.QC, a *Analysis) []Finding {
	if a.Composition.Kind != chem.OxideWt || a.Phase.Role() == "" {
		return nil
	}
	kept, flagged := limits.TotalsKeptWt, limits.TotalsFlaggedWt
	return band("oxide total", a.Total, kept[0], kept[1], flagged[0], flagged[1], 2, "oxide total", " wt%")
}

func cationSum(limits *manifests.QC, a *Analysis) []Finding {
	if a.Formula.Why != method.OK {
		return nil
	}
	switch a.Phase.Role() {
	case chem.Afs, chem.Pl:
		k, f := limits.FeldsparSumKept, limits.FeldsparSumFlagged
		return band("cation sum", a.Formula.Sum, 5-k, 5+k, 5-f, 5+f, 3, "feldspar cation sum", " on 8 O")
	case chem.Opx, chem.Cpx:
		k, f := limits.PyroxeneSumKept, limits.PyroxeneSumFlagged
		return band("cation sum", a.Pyroxene.Sum, k[0], k[1], f[0], f[1], 3, "pyroxene cation sum", " on 6 O, all Fe2+")
	}
	return nil
}

// band keeps v inside [k0, k1], flags it inside [f0, f1], sets it aside beyond.
// Limits are inclusive to 1e-9: they are decimal, v is binary.
func band(rule string, v, k0, k1, f0, f1 float64, digits int, what, unit string) []Finding {
	if v >= k0-eps && v <= k1+eps {
		return nil
	}
	f := Finding{Rule: rule, Effect: Flagged, Value: number(v), Limit: text(k0, digits) + " to " + text(k1, digits)}
	if v < f0-eps || v > f1+eps {
		f.Effect, f.Limit = SetAside, text(f0, digits)+" to "+text(f1, digits)
	}
	f.Detail = fmt.Sprintf("%s %s%s, outside %s", what, text(v, digits), unit, f.Limit)
	return []Finding{f}
}

func celsian(limits *manifests.QC, a *Analysis) []Finding {
	if r := a.Phase.Role(); r != chem.Afs && r != chem.Pl {
		return nil
	}
	f := Finding{Rule: "celsian", Effect: Flagged, Value: number(a.Celsian)}
	switch {
	case a.Celsian > limits.CelsianSetAside:
		f.Effect, f.Limit = SetAside, text(limits.CelsianSetAside, 4)
	case a.Celsian > limits.CelsianFlagged:
		f.Limit = text(limits.CelsianFlagged, 4)
	default:
		return nil
	}
	f.Detail = fmt.Sprintf("celsian %s, above %s: no method here includes Ba", text(a.Celsian, 3), f.Limit)
	return []Finding{f}
}

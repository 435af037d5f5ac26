package qc

import (
	"fmt"
	"math"

	"tieline/manifests"
	"tieline/thermo/chem"
	"tieline/thermo/formula"
	"tieline/thermo/method"
)

// PhaseIdentity is the rule whose finding says that a composition contradicts
// the phase it goes by.
const PhaseIdentity = "phase identity"

// What no feldspar and no pyroxene has (common practice, no source). Quartz has
// Si 4 on 8 O, nepheline a sum of 6; olivine has Si 1.5 and a sum of 4.5 on 6 O,
// tremolite Si 2.09 and a sum of 3.91, hornblende more K than any crustal
// pyroxene.
const (
	feldsparSiLow, feldsparSiHigh = 1.9, 3.1
	feldsparSumOff                = 0.2
	olivineSum, olivineSi         = 4.3, 1.65
	amphiboleSum, amphiboleSi     = 3.96, 2.05
	hornblendeK, hornblendeTotal  = 0.02, 98.5
)

// identity doubts a phase's name where the composition speaks against it.
// Nothing is ever renamed.
func identity(limits *manifests.QC, a *Analysis) []Finding {
	switch a.Phase.Role() {
	case chem.Afs, chem.Pl:
		if f := noFeldspar(a); f != nil {
			return f
		}
		return whichFeldspar(limits, a)
	case chem.Opx, chem.Cpx:
		if a.Pyroxene == nil || a.Pyroxene.Why != method.OK {
			return nil
		}
		if f := noPyroxene(a); f != nil {
			return f
		}
		return whichPyroxene(limits, a)
	}
	return nil
}

func doubt(a *Analysis, e Effect, v float64, limit, what, looks string) []Finding {
	return []Finding{{Rule: PhaseIdentity, Effect: e, Value: number(v), Limit: limit,
		Detail: fmt.Sprintf("listed as %s, and %s is %s (%s): %s; the name was left as it is", a.Phase, what, text(v, 3), limit, looks)}}
}

func noFeldspar(a *Analysis) []Finding {
	if _, ok := sitesOf(a); !ok {
		return nil
	}
	si := a.Formula.Apfu[chem.Si]
	if si < feldsparSiLow-eps || si > feldsparSiHigh+eps {
		return doubt(a, SetAside, si, text(feldsparSiLow, 2)+" to "+text(feldsparSiHigh, 2), "Si on 8 O", "no feldspar has it")
	}
	if math.Abs(a.Formula.Sum-5) > feldsparSumOff+eps {
		return doubt(a, SetAside, a.Formula.Sum, "5 +- "+text(feldsparSumOff, 2), "the cation sum on 8 O", "no feldspar has it")
	}
	return nil
}

func whichFeldspar(limits *manifests.QC, a *Analysis) []Finding {
	if a.Feldspar == nil {
		return nil
	}
	or, an := a.Feldspar[1], a.Feldspar[2]
	switch {
	case a.Phase.Role() == chem.Pl && or > limits.PlOrFlagged+eps:
		return doubt(a, Flagged, or, "at most "+text(limits.PlOrFlagged, 3), "Or", "it looks like an alkali feldspar")
	case a.Phase.Role() == chem.Afs && an > limits.AfsAnFlagged+eps:
		return doubt(a, Flagged, an, "at most "+text(limits.AfsAnFlagged, 3), "An", "it looks like a plagioclase")
	}
	return nil
}

func noPyroxene(a *Analysis) []Finding {
	f := a.Pyroxene
	si, sum := f.Apfu[chem.Si], f.Sum
	switch {
	case !formula.Determined(a.Composition, chem.Si):
		return nil
	case sum >= olivineSum-eps && si <= olivineSi+eps:
		return doubt(a, SetAside, sum, "below "+text(olivineSum, 2), "the cation sum on 6 O", "it looks like an olivine, Si "+text(si, 3))
	case sum < amphiboleSum-eps && si > amphiboleSi+eps:
		return doubt(a, SetAside, sum, "at least "+text(amphiboleSum, 2), "the cation sum on 6 O", "it looks like an amphibole, Si "+text(si, 3))
	case f.Apfu[chem.K] >= hornblendeK-eps && a.Composition.Kind == chem.OxideWt && a.Total < hornblendeTotal-eps:
		return doubt(a, SetAside, f.Apfu[chem.K], "below "+text(hornblendeK, 2), "K on 6 O", "with a total of "+text(a.Total, 2)+" wt% it looks like a hornblende")
	}
	return nil
}

func whichPyroxene(limits *manifests.QC, a *Analysis) []Finding {
	if !formula.Determined(a.Composition, chem.Ca) {
		return nil
	}
	ca := a.Pyroxene.Apfu[chem.Ca]
	switch {
	case a.Phase.Role() == chem.Opx && ca > limits.OpxCaFlagged+eps:
		return doubt(a, Flagged, ca, "at most "+text(limits.OpxCaFlagged, 3), "Ca on 6 O", "it looks like a clinopyroxene or pigeonite")
	case a.Phase.Role() == chem.Cpx && ca < limits.CpxCaFlagged-eps:
		return doubt(a, Flagged, ca, "at least "+text(limits.CpxCaFlagged, 3), "Ca on 6 O", "it looks like an orthopyroxene or pigeonite")
	}
	return nil
}

// charge holds the charges of a formula given as apfu against twice its
// oxygens. Where iron is one number, it may be Fe2+, Fe3+ or between.
func charge(limits *manifests.QC, a *Analysis) []Finding {
	c := a.Composition
	if c.Kind != chem.Apfu || c.Oxygens <= 0 || !chargesKnown(a) {
		return nil
	}
	var sum float64
	for i := range chem.NumCations {
		if i == chem.Fe2 || i == chem.Fe3 {
			continue
		}
		o := chem.Oxides[chem.Cations[i].Oxide]
		sum += float64(c.Amount(chem.MeasurandOfCation(i)) * 2 * o.Oxygens / o.Cations)
	}
	fe2, fe3, iron := c.Amount(chem.MeasurandOfCation(chem.Fe2)), c.Amount(chem.MeasurandOfCation(chem.Fe3)), c.Amount(chem.FeT)
	low, high := sum+float64(2*fe2)+float64(3*fe3), sum+float64(2*fe2)+float64(3*fe3)
	if c.State[chem.FeT] == chem.Measured {
		low, high = sum+float64(2*iron), sum+float64(3*iron)
	}
	want, off := float64(2*c.Oxygens), 0.0
	switch {
	case low > want:
		off = low - want
	case high < want:
		off = high - want
	}
	if math.Abs(off) <= limits.ChargeFlagged+eps {
		return nil
	}
	return []Finding{{Rule: "charge", Effect: Flagged, Value: number(off), Limit: "0 +- " + text(limits.ChargeFlagged, 4),
		Detail: fmt.Sprintf("the cations' charges are off those of %s O by %s, beyond %s: a cation is missing, or the oxygens are others", text(c.Oxygens, 3), text(off, 3), text(limits.ChargeFlagged, 4))}}
}

// chargesKnown says whether the major cations of the phase are all given.
func chargesKnown(a *Analysis) bool {
	needed, ok := majors[a.Phase.Role()]
	for _, o := range needed {
		ok = ok && formula.Determined(a.Composition, chem.Oxides[o].Cation)
	}
	return ok
}

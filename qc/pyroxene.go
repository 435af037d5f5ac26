package qc

import (
	"fmt"

	"tieline/manifests"
	"tieline/thermo/chem"
	"tieline/thermo/formula"
	"tieline/thermo/method"
)

// ferricRoom is how far the Fe3+ that charges ask for may pass the iron there
// is, apfu on 6 O: rounding (common practice, no source).
const ferricRoom = 0.005

// pyroxene applies the rules of a pyroxene's tetrahedra and its ferric iron.
func pyroxene(limits *manifests.QC, a *Analysis) []Finding {
	f := a.Pyroxene
	if f == nil || f.Why != method.OK || !formula.Determined(a.Composition, chem.Si) {
		return nil
	}
	return append(tetrahedra(limits, a), ferric(a)...)
}

// tetrahedra: Si and what Al it takes fill 2 sites of 6 O.
func tetrahedra(limits *manifests.QC, a *Analysis) []Finding {
	t, low := a.Pyroxene.Apfu[chem.Si]+a.Pyroxene.Apfu[chem.Al], 2-limits.PyroxeneTSiteFlagged
	if t >= low-eps || !formula.Determined(a.Composition, chem.Al) {
		return nil
	}
	return []Finding{{Rule: "T site short", Effect: Flagged, Value: number(t), Limit: "at least " + text(low, 4),
		Detail: fmt.Sprintf("Si + Al is %s on 6 O, below %s: nothing is left to fill the tetrahedra", text(t, 3), text(low, 4))}}
}

// ferric notes where charges ask for more Fe3+ than there is iron: it was
// clipped, and the charges do not balance.
func ferric(a *Analysis) []Finding {
	f := a.Pyroxene
	if f.Sum <= 4 || !formula.Determined(a.Composition, chem.Fe2) {
		return nil
	}
	wanted := 12 * (1 - 4/f.Sum)
	iron := (f.Apfu[chem.Fe2] + f.Apfu[chem.Fe3]) * 4 / f.Sum
	if wanted <= iron+ferricRoom+eps {
		return nil
	}
	return []Finding{{Rule: "Fe3+ above total Fe", Effect: Noted, Value: number(wanted), Limit: text(iron, 3) + " apfu of iron",
		Detail: fmt.Sprintf("the charges ask for %s Fe3+ on 4 cations and there is %s iron; Fe3+ by charge balance is all of it", text(wanted, 3), text(iron, 3))}}
}

package formula

import (
	"tieline/thermo/chem"
	"tieline/thermo/method"
)

// Feldspar gives the end members of a feldspar: Ab + Or + An = 1 after celsian
// is taken out, and celsian cn of all four. They come from Na, K, Ca and Ba of
// oxides or apfu, or from given fractions. The first three must have been
// looked for; below detection counts as zero, and so does Ba where it was not
// analysed. NoFormula where all three are zero.
func Feldspar(c *chem.Composition) (ab, or, an, cn float64, why method.Reason) {
	m := feldsparMeasurands[c.Kind]
	for _, needed := range m[:3] {
		if !c.Determined(needed) {
			return 0, 0, 0, 0, method.NotMeasured
		}
	}
	ab, or, an, cn = c.Amount(m[0]), c.Amount(m[1]), c.Amount(m[2]), c.Amount(m[3])
	if c.Kind == chem.OxideWt {
		ab = float64(ab * molesPerGram[chem.Na2O])
		or = float64(or * molesPerGram[chem.K2O])
		an = float64(an * molesPerGram[chem.CaO])
		cn = float64(cn * molesPerGram[chem.BaO])
	}
	sum := ab + or + an
	if !(sum > 0) {
		return 0, 0, 0, 0, method.NoFormula
	}
	return ab / sum, or / sum, an / sum, cn / (sum + cn), method.OK
}

// feldsparMeasurands hold Ab, Or, An, Cn for each kind of composition.
var feldsparMeasurands = [...][4]chem.Measurand{
	chem.OxideWt: {chem.MeasurandOf(chem.Na2O), chem.MeasurandOf(chem.K2O),
		chem.MeasurandOf(chem.CaO), chem.MeasurandOf(chem.BaO)},
	chem.Apfu: {chem.MeasurandOfCation(chem.Na), chem.MeasurandOfCation(chem.K),
		chem.MeasurandOfCation(chem.Ca), chem.MeasurandOfCation(chem.Ba)},
	chem.EndMember: {chem.XAb, chem.XOr, chem.XAn, chem.XCn},
}

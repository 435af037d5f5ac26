package formula

import (
	"math"

	"tieline/thermo/chem"
)

// Iron as FeO and Fe2O3 and, beside them, as a total is the same iron. The two
// agree where they differ by no more than rounding and old atomic weights
// explain (common practice, no source).
const (
	agreeWt       = 0.02  // wt% FeO
	agreeApfu     = 0.002 // apfu
	agreeRelative = 0.005
)

func agree(total, parts, absolute float64) bool {
	return math.Abs(total-parts) <= absolute+float64(agreeRelative*total)
}

// IronSplit says whether the source gives iron as ferrous and as ferric, and that
// split is what counts: no total stands beside it that disagrees.
func IronSplit(c *chem.Composition) bool {
	if c.Kind == chem.Apfu {
		fe2, fe3 := chem.MeasurandOfCation(chem.Fe2), chem.MeasurandOfCation(chem.Fe3)
		split := c.State[fe2] == chem.Measured && c.State[fe3] == chem.Measured
		return split && (c.State[chem.FeT] != chem.Measured || agree(c.Value[chem.FeT], c.Value[fe2]+c.Value[fe3], agreeApfu))
	}
	feO, fe2O3 := chem.MeasurandOf(chem.FeO), chem.MeasurandOf(chem.Fe2O3)
	_, _, twice, agrees := IronTwice(c)
	return c.State[feO] == chem.Measured && c.State[fe2O3] == chem.Measured && (!twice || agrees)
}

// TotalsDiffer compares a total of iron as FeO with one as Fe2O3, where both are
// given, as wt% FeO. The first is used.
func TotalsDiffer(c *chem.Composition) (asFeO, asFe2O3 float64, both, differ bool) {
	asFeO, asFe2O3 = c.Amount(chem.FeOT), float64(chem.FeOPerFe2O3*c.Amount(chem.Fe2O3T))
	both = c.State[chem.FeOT] == chem.Measured && c.State[chem.Fe2O3T] == chem.Measured
	return asFeO, asFe2O3, both, both && !agree(asFeO, asFe2O3, agreeWt)
}

// IronTwiceApfu is IronTwice for cations, apfu.
func IronTwiceApfu(c *chem.Composition) (total, parts float64, twice, agrees bool) {
	fe2, fe3 := chem.MeasurandOfCation(chem.Fe2), chem.MeasurandOfCation(chem.Fe3)
	total, parts = c.Amount(chem.FeT), c.Amount(fe2)+c.Amount(fe3)
	twice = c.State[chem.FeT] == chem.Measured && (c.State[fe2] == chem.Measured || c.State[fe3] == chem.Measured)
	return total, parts, twice, twice && agree(total, parts, agreeApfu)
}

// IronTwice says whether c lists iron as a total beside FeO or Fe2O3, and gives
// both as wt% FeO. A total that agrees with its parts is counted once, as the
// parts; one that does not is taken for all the iron there is, as FeO.
func IronTwice(c *chem.Composition) (total, parts float64, twice, agrees bool) {
	total, has := ironTotal(c)
	feO, fe2O3 := chem.MeasurandOf(chem.FeO), chem.MeasurandOf(chem.Fe2O3)
	twice = has && (c.State[feO] == chem.Measured || c.State[fe2O3] == chem.Measured)
	parts = c.Amount(feO) + float64(chem.FeOPerFe2O3*c.Amount(fe2O3))
	return total, parts, twice, twice && agree(total, parts, agreeWt)
}

// ironTotal is the iron a source gives as one oxide, as wt% FeO.
func ironTotal(c *chem.Composition) (feO float64, has bool) {
	if c.State[chem.FeOT] == chem.Measured {
		return c.Value[chem.FeOT], true
	}
	return float64(chem.FeOPerFe2O3 * c.Amount(chem.Fe2O3T)), c.State[chem.Fe2O3T] == chem.Measured
}

// ironOxides is each atom of iron once, as wt% FeO and Fe2O3.
func ironOxides(c *chem.Composition) (feO, fe2O3 float64) {
	total, has := ironTotal(c)
	if _, _, _, agrees := IronTwice(c); has && !agrees {
		return total, 0
	}
	return c.Amount(chem.MeasurandOf(chem.FeO)), c.Amount(chem.MeasurandOf(chem.Fe2O3))
}

// ironApfu is each atom of iron once, by the same rule.
func ironApfu(c *chem.Composition) (fe2, fe3 float64) {
	m2, m3 := chem.MeasurandOfCation(chem.Fe2), chem.MeasurandOfCation(chem.Fe3)
	fe2, fe3 = c.Amount(m2), c.Amount(m3)
	parts := c.State[m2] == chem.Measured || c.State[m3] == chem.Measured
	if c.State[chem.FeT] == chem.Measured && !(parts && agree(c.Value[chem.FeT], fe2+fe3, agreeApfu)) {
		return c.Value[chem.FeT], 0
	}
	return fe2, fe3
}

// ironDetermined says whether the source looked for iron in any form.
func ironDetermined(c *chem.Composition) bool {
	if c.Kind == chem.Apfu {
		return c.Determined(chem.FeT) || c.Determined(chem.MeasurandOfCation(chem.Fe2)) || c.Determined(chem.MeasurandOfCation(chem.Fe3))
	}
	return c.Determined(chem.FeOT) || c.Determined(chem.Fe2O3T) ||
		c.Determined(chem.MeasurandOf(chem.FeO)) || c.Determined(chem.MeasurandOf(chem.Fe2O3))
}

// Total is the analytical total in wt%: every constituent with iron as given,
// each atom once, less the oxygen that F and Cl replace. ok is false where c is
// no oxide analysis or holds no number.
func Total(c *chem.Composition) (wt float64, ok bool) {
	if c.Kind != chem.OxideWt {
		return 0, false
	}
	for o := range chem.NumOxides {
		m := chem.MeasurandOf(o)
		ok = ok || c.State[m] == chem.Measured
		if o != chem.FeO && o != chem.Fe2O3 {
			wt += c.Amount(m)
		}
	}
	iron, given := ironWeight(c)
	wt -= float64(chem.OxygenPerF * c.Amount(chem.MeasurandOf(chem.F)))
	wt -= float64(chem.OxygenPerCl * c.Amount(chem.MeasurandOf(chem.Cl)))
	return wt + iron, ok || given
}

// ironWeight is the weight of the iron oxides that count, in the form given.
func ironWeight(c *chem.Composition) (wt float64, given bool) {
	if _, has := ironTotal(c); has {
		if _, _, _, agrees := IronTwice(c); !agrees {
			if c.State[chem.FeOT] == chem.Measured {
				return c.Value[chem.FeOT], true
			}
			return c.Value[chem.Fe2O3T], true
		}
	}
	return c.Amount(chem.MeasurandOf(chem.FeO)) + c.Amount(chem.MeasurandOf(chem.Fe2O3)), false
}

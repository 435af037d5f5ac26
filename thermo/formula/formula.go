// Package formula turns a composition, as its source gives it, into what
// methods are calibrated on: cations per formula unit under a stated
// ferric-iron convention, and the end members of a feldspar.
package formula

import (
	"tieline/thermo/chem"
	"tieline/thermo/method"
)

// Formula is a structural formula.
type Formula struct {
	Apfu    [chem.NumCations]float64
	Sum     float64 // of all cations
	Oxygens float64 // half the cations' charge; under the basis's oxygens where Balanced ran out of iron to oxidise
	Why     method.Reason
}

// molesPerGram and oxygensPer are, for each oxide and each cation, cations per
// gram and oxygens per cation.
var molesPerGram, oxygensPer = func() (m [chem.NumOxides]float64, o [chem.NumCations]float64) {
	for i, d := range chem.Oxides {
		if d.Cations > 0 {
			m[i] = d.Cations / d.Mass
			o[d.Cation] = d.Oxygens / d.Cations
		}
	}
	return m, o
}()

// Of computes the formula of c on the basis. Below detection counts as zero,
// and so does what was not measured: whether a quantity read off the formula
// means anything is Reader's to say. Without a single oxide, or from end
// members, there is no formula.
//
// Given apfu stay as given. They are rescaled only where the source's oxygens,
// or the charge of iron under the basis, differ from the basis's.
func Of(c *chem.Composition, basis method.Basis) Formula {
	f := Formula{Oxygens: basis.Oxygens}
	var oxygens float64
	switch c.Kind {
	case chem.OxideWt:
		oxygens = f.fromOxides(c)
	case chem.Apfu:
		oxygens = f.fromApfu(c, basis.Oxygens)
	}
	oxygens += f.convertIron(basis.Ferric)
	if !(oxygens > 0) {
		return Formula{Why: method.NoFormula}
	}
	f.scale(basis.Oxygens / oxygens)
	if basis.Ferric == method.Balanced && f.Sum > basis.Cations {
		f.balance(basis)
	}
	return f
}

// fromOxides sets moles of cations per 100 g and gives the oxygens they bind.
func (f *Formula) fromOxides(c *chem.Composition) (oxygens float64) {
	for o := range chem.NumOxides {
		if o == chem.FeO || o == chem.Fe2O3 || molesPerGram[o] == 0 {
			continue
		}
		cation := chem.Oxides[o].Cation
		f.Apfu[cation] = float64(c.Amount(chem.MeasurandOf(o)) * molesPerGram[o])
	}
	feO, fe2O3 := ironOxides(c)
	f.Apfu[chem.Fe2] = float64(feO * molesPerGram[chem.FeO])
	f.Apfu[chem.Fe3] = float64(fe2O3 * molesPerGram[chem.Fe2O3])
	for i, n := range f.Apfu {
		oxygens += float64(n * oxygensPer[i])
	}
	return oxygens
}

// fromApfu sets the cations as given and gives the oxygens they are given on, 0
// where no cation was given.
func (f *Formula) fromApfu(c *chem.Composition, oxygens float64) float64 {
	some := false
	for cation := range chem.NumCations {
		f.Apfu[cation] = c.Amount(chem.MeasurandOfCation(cation))
		some = some || f.Apfu[cation] != 0
	}
	f.Apfu[chem.Fe2], f.Apfu[chem.Fe3] = ironApfu(c)
	switch {
	case !some && f.Apfu[chem.Fe2] == 0:
		return 0
	case c.Oxygens > 0:
		return c.Oxygens
	}
	return oxygens
}

// convertIron applies the convention and gives the oxygens that come or go with
// the charge.
func (f *Formula) convertIron(to method.Ferric) float64 {
	fe2, fe3 := &f.Apfu[chem.Fe2], &f.Apfu[chem.Fe3]
	var change float64
	switch to {
	case method.AllFe2, method.Balanced:
		change = float64(-0.5 * *fe3)
		*fe2, *fe3 = *fe2+*fe3, 0
	case method.AllFe3:
		change = float64(0.5 * *fe2)
		*fe2, *fe3 = 0, *fe2+*fe3
	}
	return change
}

// scale multiplies every cation and sums them.
func (f *Formula) scale(by float64) {
	f.Sum = 0
	for i, n := range f.Apfu {
		f.Apfu[i] = float64(n * by)
		f.Sum += f.Apfu[i]
	}
}

// balance normalises a formula with all iron as Fe2+, whose cation sum is above
// ideal, to the ideal sum and oxidises iron until the charges balance.
func (f *Formula) balance(basis method.Basis) {
	ratio := basis.Cations / f.Sum
	f.scale(ratio)
	fe := f.Apfu[chem.Fe2]
	fe3 := Droop(fe, basis.Oxygens, basis.Cations, basis.Cations/ratio)
	f.Apfu[chem.Fe2], f.Apfu[chem.Fe3] = fe-fe3, fe3
	f.Oxygens = float64(basis.Oxygens*ratio) + float64(0.5*fe3)
}

// Droop is the Fe3+ of a formula of the ideal cation sum on so many oxygens,
// where sum is the cation sum on these oxygens with all iron as Fe2+ and fe the
// iron after normalising to ideal: F = 2X(1 - T/S), not below 0 nor above fe.
// Droop GTR (1987) Mineral Mag 51:431-435, eq. 1.
func Droop(fe, oxygens, ideal, sum float64) float64 {
	return min(max(2*oxygens*(1-ideal/sum), 0), fe)
}

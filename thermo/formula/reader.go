package formula

import (
	"tieline/thermo/chem"
	"tieline/thermo/method"
)

// Reader reads leaf quantities off one analysis after another, computing each
// formula once per basis and the end members once. Its zero value is ready for
// Reset; it is used by one goroutine.
type Reader struct {
	c        *chem.Composition
	formulas []onBasis
	feldspar struct {
		done  bool
		value [3]float64 // Ab, Or, An
		why   method.Reason
	}
}

type onBasis struct {
	basis   method.Basis
	formula Formula
}

// Reset turns to the next analysis. c is not copied and must not change until
// the next Reset.
func (r *Reader) Reset(c *chem.Composition) {
	r.c = c
	r.formulas = r.formulas[:0]
	r.feldspar.done = false
}

// Formula is Of for the analysis, computed once.
func (r *Reader) Formula(basis method.Basis) *Formula {
	for i := range r.formulas {
		if r.formulas[i].basis == basis {
			return &r.formulas[i].formula
		}
	}
	r.formulas = append(r.formulas, onBasis{basis, Of(r.c, basis)})
	return &r.formulas[len(r.formulas)-1].formula
}

// Leaf is the leaf's value in the analysis. Below detection is the number 0: a
// method that takes its logarithm answers NonPositiveLog. What was not looked
// for is NotMeasured, never 0 unless it is optional. Where there is no formula of use it is NoFormula.
func (r *Reader) Leaf(l *method.Leaf) (float64, method.Reason) {
	if len(l.Cations) == 0 {
		return r.endMember(l.EndMember)
	}
	if !usable(r.c, l) {
		return 0, method.NoFormula
	}
	// Ferric iron from charge balance comes from the whole cation sum: with a
	// major cation unknown it would be zero without a word.
	if l.Basis.Ferric == method.Balanced {
		for _, major := range majors[l.Phase] {
			if !determined(r.c, major) {
				return 0, method.NotMeasured
			}
		}
	}
	f := r.Formula(l.Basis)
	if f.Why != method.OK {
		return 0, f.Why
	}
	var sum float64
	for _, cation := range l.Cations {
		if !l.Optional && !determined(r.c, cation) {
			return 0, method.NotMeasured
		}
		sum += f.Apfu[cation]
	}
	return sum, method.OK
}

// majors are the cations without which the sum of a formula says nothing.
var majors = map[chem.Phase][]chem.Cation{
	chem.Opx: {chem.Si, chem.Al, chem.Fe2, chem.Mg, chem.Ca},
	chem.Cpx: {chem.Si, chem.Al, chem.Fe2, chem.Mg, chem.Ca, chem.Na},
}

func (r *Reader) endMember(m chem.Measurand) (float64, method.Reason) {
	if !r.feldspar.done {
		v := &r.feldspar
		v.value[0], v.value[1], v.value[2], _, v.why = Feldspar(r.c)
		v.done = true
	}
	return r.feldspar.value[m-chem.XAb], r.feldspar.why
}

// usable says whether a formula of the leaf's phase can be made: every phase
// that is read through a formula so far is a silicate, and a pyroxene without
// magnesium is an incomplete one. Given apfu need the cation sum only where
// ferric iron comes from it.
func usable(c *chem.Composition, l *method.Leaf) bool {
	switch c.Kind {
	case chem.OxideWt:
		pyroxene := l.Phase == chem.Cpx || l.Phase == chem.Opx
		return c.State[chem.MeasurandOf(chem.SiO2)] == chem.Measured &&
			(!pyroxene || c.Determined(chem.MeasurandOf(chem.MgO)))
	case chem.Apfu:
		return l.Basis.Ferric != method.Balanced || c.State[chem.MeasurandOfCation(chem.Si)] == chem.Measured
	}
	return false
}

// determined says whether the source looked for the cation, iron in any form.
func determined(c *chem.Composition, cation chem.Cation) bool {
	switch {
	case cation == chem.Fe2 || cation == chem.Fe3:
		return ironDetermined(c)
	case c.Kind == chem.Apfu:
		return c.Determined(chem.MeasurandOfCation(cation))
	}
	return c.Determined(chem.MeasurandOf(chem.Cations[cation].Oxide))
}

// Determined says whether the source looked for the cation, iron in any form.
func Determined(c *chem.Composition, cation chem.Cation) bool { return determined(c, cation) }

// Measurands are what a source of a kind reports a leaf as: the oxides or
// cations of its cations, or what its end member is made from.
func Measurands(kind chem.Kind, l *method.Leaf) []chem.Measurand {
	if len(l.Cations) == 0 {
		i := l.EndMember - chem.XAb
		return feldsparMeasurands[kind][i : i+1]
	}
	var out []chem.Measurand
	for _, cation := range l.Cations {
		if kind == chem.Apfu {
			out = append(out, chem.MeasurandOfCation(cation))
		} else {
			out = append(out, chem.MeasurandOf(chem.Cations[cation].Oxide))
		}
	}
	return out
}

package pyroxene

import (
	"tieline/thermo/chem"
	"tieline/thermo/detmath"
	"tieline/thermo/method"
)

const kretzFeMgID = "two-pyroxene/kretz-1982-fe-mg"

// Kretz1982FeMg is the Fe-Mg exchange thermometer of Kretz (1982):
//
//	T(K) = 1130/(ln KD + 0.505),  KD = (Fe2+/Mg)_Opx/(Fe2+/Mg)_Cpx
//
// Its numbers are sure and it is a poor instrument: ferric iron rules it, and it
// runs away as KD falls to 1. Kretz1982FeMgAllFe2 takes all iron as Fe2+.
var Kretz1982FeMg, Kretz1982FeMgAllFe2 = kretzFeMgOn(balanced), kretzFeMgOn(allFe2)

func kretzFeMgOn(f *ferrous) *method.Method {
	k := &kretzFeMg{H: 1130, S: 0.505, Least: 0.2}
	ln := f.lnKD()
	return &method.Method{
		Info: method.Info{
			ID:         kretzFeMgID,
			Variant:    f.variant,
			Equation:   "T(K) = 1130/(ln KD + 0.505), KD = (Fe2+/Mg)_Opx/(Fe2+/Mg)_Cpx",
			Ref:        kretz,
			Phases:     []chem.Phase{chem.Cpx, chem.Opx},
			Components: []string{""},
			Shares:     []string{kretzCaID},
			Closes:     "Fe-Mg",
			Needs:      []*method.Quantity{ln},
			Basis:      f.basis,
			Standing:   method.Recalled,
			Sigma:      method.Sigma{Origin: "none: no quoted value is remembered, and no experiment here tests it"},
			Range: method.Range{
				Source: "from memory",
				Bounds: []method.Bound{{Name: "T", Unit: "degC", Min: 600, Max: 900}},
			},
		},
		Const: k,
		Eval: func(b *method.Block, lanes []method.Lane) {
			lane, ln := &lanes[0], b.Of(ln)
			for i := range ln {
				d := ln[i] + k.S
				if lane.Why[i] == method.OK && d > -k.Least && d < k.Least {
					lane.Why[i] = method.NearPole
				}
				write(lane, i, chem.Kelvin(k.H/d))
			}
		},
	}
}

// kretzFeMg holds the constants of the equation, and how near to zero the divisor
// may come: 0.2, 5650 K (common practice, no source).
type kretzFeMg struct{ H, S, Least float64 }

func (f *ferrous) lnKD() *method.Quantity {
	fc, mc, fo, mo := f.cpx.fe2, f.cpx.mg, f.opx.fe2, f.opx.mg
	return &method.Quantity{
		Name: "ln KD, (Fe2+/Mg)_Opx/(Fe2+/Mg)_Cpx (" + basisName(f.basis) + ")", Unit: "1", Needs: []*method.Quantity{fc, mc, fo, mo},
		Fill: func(b *method.Block, q []float64, why []method.Reason) {
			fc, mc, fo, mo := b.Of(fc), b.Of(mc), b.Of(fo), b.Of(mo)
			for i := range q {
				q[i] = detmath.Log(float64(fo[i]*mc[i]) / float64(mo[i]*fc[i]))
				if why[i] == method.OK && !(fc[i] > 0 && mc[i] > 0 && fo[i] > 0 && mo[i] > 0) {
					why[i] = method.NonPositiveLog
				}
			}
		},
	}
}

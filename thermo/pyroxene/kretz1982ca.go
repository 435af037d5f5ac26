package pyroxene

import (
	"tieline/thermo/chem"
	"tieline/thermo/detmath"
	"tieline/thermo/method"
)

const (
	kretzCaID = "clinopyroxene/kretz-1982-ca"
	kretz     = "Kretz R (1982) Transfer and exchange equilibria in a portion of the pyroxene quadrilateral as deduced from natural " +
		"and experimental data. Geochim Cosmochim Acta 46:411-421"
)

// Kretz1982Ca is the Ca-transfer thermometer of Kretz (1982) on clinopyroxene,
// x = Fe2+/(Fe2+ + Mg), [Ca] = Ca/(Ca + Mg + Fe2+), L = ln(1 - 2[Ca]):
//
//	T(K) = 1000/(0.468 + 0.246 x - 0.123 L)  above 1080 degC
//	T(K) = 1000/(0.054 + 0.608 x - 0.304 L)  below
//
// The two cross at 1061.4 degC for every x, so the lesser is taken: that is
// continuous. No term for P, Na, or Al. Kretz1982CaAllFe2 takes all iron as Fe2+.
var Kretz1982Ca, Kretz1982CaAllFe2 = kretzCaOn(balanced), kretzCaOn(allFe2)

func kretzCaOn(f *ferrous) *method.Method {
	k := &kretzCa{High: [3]float64{.468, .246, -.123}, Low: [3]float64{.054, .608, -.304}}
	x, l := f.cpx.xFe, lnLessCa(f)
	return &method.Method{
		Info: method.Info{
			ID:      kretzCaID,
			Variant: f.variant,
			Equation: "T(K) = the lesser of 1000/(0.468 + 0.246 x - 0.123 L) and 1000/(0.054 + 0.608 x - 0.304 L), " +
				"x = Fe2+/(Fe2+ + Mg), L = ln(1 - 2 Ca/(Ca + Mg + Fe2+)) of Cpx",
			Ref:         kretz,
			Phases:      []chem.Phase{chem.Cpx},
			Components:  []string{""},
			Shares:      []string{kretzFeMgID},
			Closes:      "Ca solvus",
			Assemblage:  "Opx must coexist; without it the temperature is a minimum",
			NeedsBeside: chem.Opx,
			Needs:       []*method.Quantity{x, l},
			Basis:       f.basis,
			Standing:    method.Consistent,
			Sigma:       method.Sigma{C: []float64{60}, Origin: "quoted, from memory, and not remembered well"},
			Range: method.Range{
				Source: "no range is remembered; 900-1400 degC is where it was checked, on iron-free pairs",
				Bounds: []method.Bound{{Name: "T", Unit: "degC", Min: 900, Max: 1400}},
			},
		},
		Const: k,
		Eval: func(b *method.Block, lanes []method.Lane) {
			x, l := b.Of(x), b.Of(l)
			for i := range x {
				write(&lanes[0], i, chem.Kelvin(min(branch(&k.High, x[i], l[i]), branch(&k.Low, x[i], l[i]))))
			}
		},
	}
}

// kretzCa holds the constants of the two branches in the order of the equations.
type kretzCa struct{ High, Low [3]float64 }

func branch(c *[3]float64, x, l float64) float64 {
	return 1000 / (c[0] + float64(c[1]*x) + float64(c[2]*l))
}

// lnLessCa is L = ln(1 - 2[Ca]).
func lnLessCa(f *ferrous) *method.Quantity {
	fe2, mg, ca := f.cpx.fe2, f.cpx.mg, f.cpx.ca
	return &method.Quantity{
		Name: "ln(1 - 2[Ca]) in Cpx (" + basisName(f.basis) + ")", Unit: "1", Needs: []*method.Quantity{ca, mg, fe2},
		Fill: func(b *method.Block, q []float64, why []method.Reason) {
			ca, mg, fe2 := b.Of(ca), b.Of(mg), b.Of(fe2)
			for i := range q {
				rest := 1 - float64(2*ca[i])/(ca[i]+mg[i]+fe2[i])
				q[i] = detmath.Log(rest)
				if why[i] == method.OK && !(rest > 0) {
					why[i] = method.CaHalf
				}
			}
		},
	}
}

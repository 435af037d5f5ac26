package feldspar

import (
	"tieline/thermo/chem"
	"tieline/thermo/method"
)

// closed makes a method of one temperature, T(K) = (h + P v)/d with P in bar.
func closed(info method.Info, k any, s solution) *method.Method {
	info.Phases = []chem.Phase{chem.Afs, chem.Pl}
	info.Components = []string{""}
	info.Closes = "Na-K"
	info.Basis = Basis
	info.Needs = s.uses()
	return &method.Method{Info: info, Const: k, Eval: func(b *method.Block, lanes []method.Lane) { s.eval(b, lanes[0]) }}
}

// expanded are the constants of an alkali-feldspar solvus against an ideal
// plagioclase, multiplied out in x = X_Ab,Afs: polynomials of rising power, cal,
// cal/mol/bar and cal/mol/K.
//
//	T(K) = (H(x) + P V(x)) / (S(x) - R ln(x/y)),  y = X_Ab,Pl
type expanded struct {
	H, V, S [4]float64
	R       float64
}

func (k *expanded) method(info method.Info) *method.Method {
	s := polynomial("S", "cal/mol/K", info.ID, &k.S)
	d := &method.Quantity{
		Name: "S(x) - R ln(x/y) (" + info.ID + ")", Unit: "cal/mol/K", Needs: []*method.Quantity{s, lnMolecular[0]},
		Fill: func(b *method.Block, q []float64, _ []method.Reason) {
			s, ln := b.Of(s), b.Of(lnMolecular[0]) // ln(y/x)
			for i := range q {
				q[i] = s[i] + float64(k.R*ln[i])
			}
		},
	}
	return closed(info, k, solution{polynomial("H", "cal/mol", info.ID, &k.H), polynomial("V", "cal/mol/bar", info.ID, &k.V), d})
}

// polynomial is c0 + c1 x + c2 x^2 + c3 x^3 of x = X_Ab,Afs.
func polynomial(name, unit, id string, c *[4]float64) *method.Quantity {
	return &method.Quantity{
		Name: name + "(x) (" + id + ")", Unit: unit, Needs: []*method.Quantity{inAfs[0]},
		Fill: func(b *method.Block, q []float64, _ []method.Reason) {
			for i, x := range b.Of(inAfs[0])[:len(q)] {
				q[i] = c[0] + float64(x*(c[1]+float64(x*(c[2]+float64(x*c[3])))))
			}
		},
	}
}

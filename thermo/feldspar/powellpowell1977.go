package feldspar

import "tieline/thermo/method"

// PowellPowell1977 is the thermometer of Powell & Powell (1977), Thompson &
// Waldbaum's solvus (1969) with rounded figures against an ideal plagioclase,
// x = X_Ab,Afs, o = X_Or,Afs, y = X_Ab,Pl, P in bar, cal:
//
//	T(K) = -{o^2 [6330 + .093 P + 2x (1340 + .019 P)]} / {o^2 (-4.63 + 1.54 x) + 1.987 ln(x/y)}
//
// It reads low, plagioclase not being ideal.
var PowellPowell1977 = (&powellPowell{H: 6330, HX: 1340, V: .093, VX: .019, S: -4.63, SX: 1.54, R: 1.987}).method(method.Info{
	ID: powellID,
	Equation: "T(K) = -{o^2 [6330 + .093 P(bar) + 2x (1340 + .019 P)]} / {o^2 (-4.63 + 1.54 x) + 1.987 ln(x/y)}, " +
		"x = X_Ab,Afs, o = X_Or,Afs, y = X_Ab,Pl",
	Ref:         "Powell M, Powell R (1977) Plagioclase-alkali-feldspar geothermometry revisited. Mineral Mag 41:253-256",
	DerivedFrom: []string{thompsonWaldbaumID},
	Shares:      []string{stormerID},
	Standing:    method.Recalled,
	Sigma: method.Sigma{C: []float64{78},
		Origin: "misfit (rms) on the 20 runs of Elkins & Grove 1990, to which the method was not fitted; it reads 54 degC low there"},
	Range: solvusRange,
})

const powellID = "two-feldspar/powell-powell-1977"

// powellPowell holds the constants in the order of the equation.
type powellPowell struct{ H, HX, V, VX, S, SX, R float64 }

func (k *powellPowell) method(info method.Info) *method.Method {
	x, o := inAfs[0], inAfs[1]
	// times is o^2 (a + b x).
	times := func(name, unit string, a, b float64) *method.Quantity {
		return &method.Quantity{
			Name: name + " (" + info.ID + ")", Unit: unit, Needs: []*method.Quantity{x, o},
			Fill: func(bl *method.Block, q []float64, _ []method.Reason) {
				x, o := bl.Of(x), bl.Of(o)
				for i := range q {
					q[i] = float64(float64(o[i]*o[i]) * (a + float64(b*x[i])))
				}
			},
		}
	}
	s := times("o^2 S(x)", "cal/mol/K", -k.S, -k.SX)
	d := &method.Quantity{
		Name: "o^2 S(x) - R ln(x/y) (" + info.ID + ")", Unit: "cal/mol/K", Needs: []*method.Quantity{s, lnMolecular[0]},
		Fill: func(b *method.Block, q []float64, _ []method.Reason) {
			s, ln := b.Of(s), b.Of(lnMolecular[0]) // ln(y/x)
			for i := range q {
				q[i] = s[i] + float64(k.R*ln[i])
			}
		},
	}
	return closed(info, k, solution{times("o^2 H(x)", "cal/mol", k.H, 2*k.HX), times("o^2 V(x)", "cal/mol/bar", k.V, 2*k.VX), d})
}

package feldspar

import (
	"tieline/thermo/chem"
	"tieline/thermo/detmath"
	"tieline/thermo/method"
)

// Putirka2008 is equation 27b of Putirka (2008), P in kbar:
//
//	T(degC) = (-442 - 3.72 P) / (-.11 + .1 ln(X_Ab,Afs/X_Ab,Pl) - 3.27 X_An,Afs + .098 ln X_An,Afs + .52 X_An,Pl X_Ab,Pl)
//
// The sign of its pressure term is not verified.
var Putirka2008 = func() *method.Method {
	k := &putirka{H: -442, V: -3.72, S: -.11, Ab: .1, An: -3.27, LnAn: .098, Pl: .52}
	d := k.divisor()
	return &method.Method{
		Info: method.Info{
			ID: putirkaID,
			Equation: "eq. 27b: T(degC) = (-442 - 3.72 P(kbar)) / (-.11 + .1 ln(X_Ab,Afs/X_Ab,Pl) - 3.27 X_An,Afs + .098 ln X_An,Afs + " +
				".52 X_An,Pl X_Ab,Pl)",
			Ref:        "Putirka KD (2008) Thermometers and barometers for volcanic systems. Rev Mineral Geochem 69:61-120, eq. 27b",
			Phases:     []chem.Phase{chem.Afs, chem.Pl},
			Components: []string{""},
			Shares:     []string{"two-feldspar/elkins-grove-1990", "two-feldspar/holland-powell-2003", benisekID},
			Closes:     "Na-K (Ab, Or), An (An)",
			Needs:      []*method.Quantity{d},
			Basis:      Basis,
			Standing:   method.Consistent,
			Precise:    []method.Precision{{Leaf: inAfs[2], MaxRelative: 0.3}},
			Sigma: method.Sigma{C: []float64{28},
				Origin: "misfit (rms) on the 20 runs of Elkins & Grove 1990, to which the method was probably partly fitted; 23 (calibration) and 44 (test) are quoted, from memory"},
			Range: method.Range{
				Source: "mostly magmatic experiments, from memory; bounds are those of the runs of Elkins & Grove 1990 it was checked on",
				Bounds: []method.Bound{
					{Name: "T", Unit: "degC", Min: 650, Max: 900},
					{Name: "P", Unit: "kbar", Min: 1, Max: 3},
				},
			},
		},
		Const: k,
		Eval: func(b *method.Block, lanes []method.Lane) {
			lane, d := &lanes[0], b.Of(d)
			for i, p := range b.P {
				lane.T[i] = chem.Celsius((k.H + float64(k.V*float64(p.Kbar()))) / d[i]).Kelvin()
				if lane.Why[i] == method.OK {
					lane.Why[i] = method.ReasonFor(lane.T[i])
				}
			}
		},
	}
}()

const putirkaID = "two-feldspar/putirka-2008-27b"

// putirka holds the constants in the order of the equation.
type putirka struct{ H, V, S, Ab, An, LnAn, Pl float64 }

func (k *putirka) divisor() *method.Quantity {
	return &method.Quantity{
		Name: "divisor (" + putirkaID + ")", Unit: "1/degC",
		Needs: []*method.Quantity{lnMolecular[0], inAfs[2], inPl[2], inPl[0]},
		Fill: func(b *method.Block, q []float64, why []method.Reason) {
			ln, an, pl, ab := b.Of(lnMolecular[0]), b.Of(inAfs[2]), b.Of(inPl[2]), b.Of(inPl[0])
			for i := range q {
				q[i] = k.S - float64(k.Ab*ln[i]) + float64(k.An*an[i]) + // ln(y/x)
					float64(k.LnAn*detmath.Log(an[i])) + float64(k.Pl*float64(pl[i]*ab[i]))
				if why[i] == method.OK && !(an[i] > 0) {
					why[i] = method.NonPositiveLog
				}
			}
		},
	}
}

package pyroxene

import (
	"tieline/thermo/chem"
	"tieline/thermo/detmath"
	"tieline/thermo/method"
)

const naID = "two-pyroxene/brey-koehler-1990-na"

// BreyKoehler1990Na is the thermometer of Brey & Koehler (1990) on the partition
// of Na, P in kbar:
//
//	T(K) = (35000 + 61.5 P) / [(ln D)^2 + 19.8],  D = Na_Opx/Na_Cpx
//
// At low temperature it is no better than the analysis of Na in Opx.
var BreyKoehler1990Na = func() *method.Method {
	k := &naPartition{H: 35000, V: 61.5, S: 19.8}
	return &method.Method{
		Info: method.Info{
			ID:         naID,
			Equation:   "T(K) = (35000 + 61.5 P(kbar)) / [(ln D)^2 + 19.8], D = Na_Opx/Na_Cpx",
			Ref:        breyKoehler,
			Phases:     []chem.Phase{chem.Cpx, chem.Opx},
			Components: []string{""},
			Shares:     []string{"two-pyroxene/brey-koehler-1990", caInOpxID},
			Closes:     "Na partition",
			Needs:      []*method.Quantity{lnNaRatio},
			Precise:    []method.Precision{{Leaf: naInOpx, MaxRelative: 0.3}, {Leaf: naInCpx, MaxRelative: 0.3}},
			Basis:      SixOxygens,
			Range: method.Range{
				Source:  breyKoehlerRange.Source,
				Setting: mantle,
				Bounds: []method.Bound{
					{Name: "T", Unit: "degC", Min: 900, Max: 1400},
					{Name: "P", Unit: "kbar", Min: 10, Max: 60},
				},
			},
			Standing: method.Recalled,
			Sigma:    method.Sigma{Origin: "none: no quoted value is remembered, and no experiment here tests it"},
		},
		Const: k,
		Eval: func(b *method.Block, lanes []method.Lane) {
			ln := b.Of(lnNaRatio)
			for i := range ln {
				h := k.H + float64(k.V*float64(b.P[i].Kbar()))
				write(&lanes[0], i, chem.Kelvin(h/(float64(ln[i]*ln[i])+k.S)))
			}
		},
	}
}()

// naPartition holds the constants in the order of the equation.
type naPartition struct{ H, V, S float64 }

// lnNaRatio is ln D, D = Na_Opx/Na_Cpx.
var lnNaRatio = &method.Quantity{
	Name: "ln(Na_Opx/Na_Cpx)", Unit: "1", Needs: []*method.Quantity{naInOpx, naInCpx},
	Fill: func(b *method.Block, q []float64, why []method.Reason) {
		opx, cpx := b.Of(naInOpx), b.Of(naInCpx)
		for i := range q {
			q[i] = detmath.Log(opx[i] / cpx[i])
			if why[i] == method.OK && !(opx[i] > 0 && cpx[i] > 0) {
				why[i] = method.NonPositiveLog
			}
		}
	},
}

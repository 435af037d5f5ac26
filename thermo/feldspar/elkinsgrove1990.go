package feldspar

import (
	"tieline/thermo/chem"
	"tieline/thermo/method"
	"tieline/thermo/mixing"
)

// ElkinsGrove1990 is the ternary-feldspar model of Elkins & Grove (1990), with
// molecular mixing, fitted to their own 20 runs at 650-900 degC and 1-3 kbar.
// Its binary Ab-Or enthalpies and entropies are those of Haselton HT, Hovis GL,
// Hemingway BS, Robie RA (1983) Am Mineral 68:398-413. No pressure term is
// tested by the runs.
var ElkinsGrove1990 = twoFeldspar(method.Info{
	ID:       "two-feldspar/elkins-grove-1990",
	Ref:      "Elkins LT, Grove TL (1990) Ternary feldspar experiments and thermodynamic models. Am Mineral 75:544-559",
	Shares:   []string{"two-feldspar/fuhrman-lindsley-1988", "two-feldspar/holland-powell-2003", benisekID, putirkaID, haseltonID, haseltonSolvusID},
	Standing: method.Confirmed,
	Sigma: method.Sigma{C: []float64{31, 16, 19},
		Origin: "misfit (rms) on the 20 runs of Elkins & Grove 1990, to which the method was fitted"},
	Range: method.Range{
		Source: "the 20 runs of Elkins & Grove 1990, Table 5",
		Bounds: []method.Bound{
			{Name: "T", Unit: "degC", Min: 650, Max: 900},
			{Name: "P", Unit: "kbar", Min: 1, Max: 3},
			{Name: inAfs[2].Name, Unit: inAfs[2].Unit, Quantity: inAfs[2], Min: 0.005, Max: 0.045, Composition: true},
			{Name: inPl[2].Name, Unit: inPl[2].Unit, Quantity: inPl[2], Min: 0.05, Max: 0.86, Composition: true},
		},
	},
}, &Constants{
	Ideal: mixing.Molecular,
	Excess: mixing.Solution{
		H: mixing.Margules{AbOr: 18810, OrAb: 27320, AbAn: 7924, AnAb: 0, OrAn: 40317, AnOr: 38974, AbOrAn: 12545},
		S: mixing.Margules{AbOr: 10.3, OrAb: 10.3},
		V: mixing.Margules{AbOr: 0.4602, OrAb: 0.3264, AnOr: -0.1037, AbOrAn: -1.095},
	},
	R:          chem.GasConstant,
	MinEntropy: smallEntropy,
})

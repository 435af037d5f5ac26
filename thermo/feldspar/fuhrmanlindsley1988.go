package feldspar

import (
	"tieline/thermo/chem"
	"tieline/thermo/method"
	"tieline/thermo/mixing"
)

// FuhrmanLindsley1988 is the ternary-feldspar model of Fuhrman & Lindsley
// (1988), with Al avoidance, fitted to the experiments of Seck (1971) at about
// 1 kbar. Its binary Ab-An enthalpies are those of Newton RC, Charlu TV, Kleppa
// OJ (1980) Geochim Cosmochim Acta 44:933-941. No pressure term is tested by
// experiments here.
var FuhrmanLindsley1988 = twoFeldspar(method.Info{
	ID:       "two-feldspar/fuhrman-lindsley-1988",
	Ref:      "Fuhrman ML, Lindsley DH (1988) Ternary-feldspar modeling and thermometry. Am Mineral 73:201-215",
	Shares:   []string{"two-feldspar/elkins-grove-1990", "two-feldspar/holland-powell-2003", benisekID, haseltonID, haseltonSolvusID},
	Standing: method.Confirmed,
	Sigma: method.Sigma{C: []float64{31, 31, 42},
		Origin: "misfit (rms) on the 17 runs of Elkins & Grove 1990 with plagioclase below An50, to which the method was not fitted"},
	Range: method.Range{
		Source: "Seck 1971, 650-900 degC at about 1 kbar, from memory; checked on Elkins & Grove 1990 at 1-3 kbar",
		Bounds: []method.Bound{
			{Name: "T", Unit: "degC", Min: 650, Max: 900},
			{Name: "P", Unit: "kbar", Min: 1, Max: 3},
			// Above An50 it misses the runs of Elkins & Grove by up to 220 degC.
			{Name: inPl[2].Name, Unit: inPl[2].Unit, Quantity: inPl[2], Min: 0, Max: 0.5, Composition: true},
		},
	},
}, &Constants{
	Ideal: mixing.AlAvoidance,
	Excess: mixing.Solution{
		H: mixing.Margules{AbOr: 18810, OrAb: 27320, AbAn: 28226, AnAb: 8471, OrAn: 47396, AnOr: 52468, AbOrAn: 8700},
		S: mixing.Margules{AbOr: 10.3, OrAb: 10.3},
		V: mixing.Margules{AbOr: 0.394, OrAb: 0.394, AnOr: -0.120, AbOrAn: -1.094},
	},
	R:          chem.GasConstant,
	MinEntropy: smallEntropy,
})

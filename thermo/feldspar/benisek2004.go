package feldspar

import (
	"tieline/thermo/chem"
	"tieline/thermo/method"
	"tieline/thermo/mixing"
)

const benisekID = "two-feldspar/benisek-2004-al-avoidance"

// Benisek2004 is the ternary-feldspar model of Benisek, Kroll & Cemic (2004)
// with Al avoidance. The ternary enthalpy is recalled as 13000 or 8000 J/mol;
// 13000 is used, with 8000 T_An is some 30 degC lower. Their model with
// molecular mixing is not here: one of its entropies is not remembered.
var Benisek2004 = twoFeldspar(method.Info{
	ID: benisekID,
	Ref: "Benisek A, Kroll H, Cemic L (2004) New developments in two-feldspar thermometry. Am Mineral 89:1496-1504; " +
		"the ternary enthalpy is recalled as 13000 (used) or 8000 J/mol",
	Shares: []string{"two-feldspar/elkins-grove-1990", "two-feldspar/fuhrman-lindsley-1988", "two-feldspar/holland-powell-2003",
		putirkaID, hovisID},
	Standing: method.Recalled,
	Sigma: method.Sigma{C: []float64{32, 34, 31},
		Origin: "misfit (rms) on the 17 runs of Elkins & Grove 1990 with plagioclase below An50, to which the method was partly fitted"},
	Range: method.Range{
		Source: "experiments of Seck 1971 and Elkins & Grove 1990, from memory; no pressure term is tested",
		Bounds: []method.Bound{
			{Name: "T", Unit: "degC", Min: 650, Max: 900},
			{Name: "P", Unit: "kbar", Min: 1, Max: 3},
		},
	},
}, &Constants{
	Ideal: mixing.AlAvoidance,
	Excess: mixing.Solution{
		H: mixing.Margules{AbOr: 19550, OrAb: 22820, AbAn: 31000, AnAb: 9800, OrAn: 90600, AnOr: 60300, AbOrAn: 13000},
		S: mixing.Margules{AbOr: 10.5, OrAb: 6.3, AbAn: 4.5, AnAb: -1.7, OrAn: 29.5, AnOr: 11.2},
		V: mixing.Margules{AbOr: 0.327, OrAb: 0.461, AbAn: 0.069, AnAb: -0.049, OrAn: -0.257, AnOr: -0.210, AbOrAn: -0.467},
	},
	R:          chem.GasConstant,
	MinEntropy: smallEntropy,
})

package feldspar

import "tieline/thermo/method"

// Heuser2024 is the solvus of disordered alkali feldspar of Heuser et al.
// (2024), from ion exchange at 800-1000 degC and 1 bar, extrapolated down to the
// solvus, W in J. W_H is 14916 +- 4272 and 19754 +- 3140, W_S 3.55 +- 3.64 and
// 2.33 +- 2.67. It has no pressure term.
var Heuser2024 = solvus(method.Info{
	ID:       "alkali-feldspar-solvus/heuser-2024",
	Ref:      "Heuser et al. (2024) Phys Chem Minerals, doi 10.1007/s00269-024-01270-z; which parameter is which by a crest below X_Or .5",
	Standing: method.Consistent,
	Sigma:    method.Sigma{Origin: "none: errors are given for the parameters only, W_H 4272 and 3140 J/mol, W_S 3.64 and 2.67 J/mol/K"},
	Range: method.Range{
		Source: "ion exchange at 1 bar, from the abstract; extrapolated to the solvus",
		Bounds: []method.Bound{
			{Name: "T", Unit: "degC", Min: 800, Max: 1000},
			{Name: "P", Unit: "kbar", Min: 0, Max: 0.001},
		},
	},
}, "J", joules(Binary{AbOr: 14916, OrAb: 19754}, Binary{AbOr: 3.55, OrAb: 2.33}, Binary{}))

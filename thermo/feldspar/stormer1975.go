package feldspar

import "tieline/thermo/method"

// Stormer1975 is the thermometer of Stormer (1975): the solvus of Thompson &
// Waldbaum (1969) against an ideal plagioclase, x = X_Ab,Afs, y = X_Ab,Pl, P in
// bar, cal:
//
//	T(K) = {6326.7 - 9963.2 x + 946.3 x^2 + 2690.2 x^3 + (.0925 - .1458 x + .0141 x^2 + .0392 x^3) P} /
//	       {-1.9872 ln(x/y) + 4.6321 - 10.815 x + 7.7345 x^2 - 1.5512 x^3}
//
// 946.3 makes the first cubic vanish at x = 1 as it must; the 943.3 often met is
// a misprint, worth less than 1 degC. It reads low, plagioclase not being ideal.
var Stormer1975 = (&expanded{
	H: [4]float64{6326.7, -9963.2, 946.3, 2690.2},
	V: [4]float64{.0925, -.1458, .0141, .0392},
	S: [4]float64{4.6321, -10.815, 7.7345, -1.5512},
	R: 1.9872,
}).method(method.Info{
	ID: stormerID,
	Equation: "T(K) = {6326.7 - 9963.2 x + 946.3 x^2 + 2690.2 x^3 + (.0925 - .1458 x + .0141 x^2 + .0392 x^3) P(bar)} / " +
		"{-1.9872 ln(x/y) + 4.6321 - 10.815 x + 7.7345 x^2 - 1.5512 x^3}, x = X_Ab,Afs, y = X_Ab,Pl",
	Ref:         "Stormer JC (1975) A practical two-feldspar geothermometer. Am Mineral 60:667-674; 946.3 for the 943.3 often printed",
	DerivedFrom: []string{thompsonWaldbaumID},
	Shares:      []string{powellID},
	Standing:    method.Consistent,
	Sigma: method.Sigma{C: []float64{69},
		Origin: "misfit (rms) on the 20 runs of Elkins & Grove 1990, to which the method was not fitted; it reads 36 degC low there"},
	Range: solvusRange,
})

const stormerID = "two-feldspar/stormer-1975"

// solvusRange is of the solvus experiments of Thompson & Waldbaum (1969).
var solvusRange = method.Range{
	Source: "alkali-feldspar solvus experiments, from memory; for alkali feldspar low in An",
	Bounds: []method.Bound{
		{Name: "T", Unit: "degC", Min: 500, Max: 700},
		{Name: "P", Unit: "kbar", Min: 0, Max: 10},
	},
}

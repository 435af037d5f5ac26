package feldspar

import "tieline/thermo/method"

// WhitneyStormer1977 is the thermometer of Whitney & Stormer (1977) for ordered
// feldspars, microcline and low albite: the solvus of Bachinski & Mueller (1971)
// against an ideal plagioclase, x = X_Ab,Afs, y = X_Ab,Pl, P in bar, cal:
//
//	T(K) = {7973.1 - 16910.6 x + 9901.9 x^2 - 964.4 x^3 + (.11 - .22 x + .11 x^2) P} /
//	       {-1.9872 ln(x/y) + 6.48 - 21.58 x + 23.72 x^2 - 8.62 x^3}
//
// On disordered feldspars it reads high.
var WhitneyStormer1977 = (&expanded{
	H: [4]float64{7973.1, -16910.6, 9901.9, -964.4},
	V: [4]float64{.11, -.22, .11, 0},
	S: [4]float64{6.48, -21.58, 23.72, -8.62},
	R: 1.9872,
}).method(method.Info{
	ID: "two-feldspar/whitney-stormer-1977",
	Equation: "T(K) = {7973.1 - 16910.6 x + 9901.9 x^2 - 964.4 x^3 + (.11 - .22 x + .11 x^2) P(bar)} / " +
		"{-1.9872 ln(x/y) + 6.48 - 21.58 x + 23.72 x^2 - 8.62 x^3}, x = X_Ab,Afs, y = X_Ab,Pl",
	Ref: "Whitney JA, Stormer JC (1977) The distribution of NaAlSi3O8 between coexisting microcline and plagioclase and its effect " +
		"on geothermometric calculations. Am Mineral 62:687-691",
	DerivedFrom: []string{bachinskiMuellerID},
	Assemblage:  ordered,
	Standing:    method.Consistent,
	Sigma: method.Sigma{C: []float64{143},
		Origin: "misfit (rms) on the 17 runs of Elkins & Grove 1990 with plagioclase below An50, whose feldspars are disordered: it reads 45 degC high there, as expected; no ordered pairs test it"},
	Range: orderedRange,
})

const ordered = "both feldspars ordered (microcline, low albite) while they exchanged Na and K"

// orderedRange is of the exchange experiments on ordered feldspars.
var orderedRange = method.Range{
	Source: "exchange experiments on ordered feldspars, from memory",
	Bounds: []method.Bound{{Name: "T", Unit: "degC", Min: 500, Max: 900}},
}

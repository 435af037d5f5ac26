package feldspar

import "tieline/thermo/method"

// BachinskiMueller1971 is the solvus of ordered alkali feldspar, microcline and
// low albite, of Bachinski & Mueller (1971), W in cal. Its crest lies near 884
// degC at 1 bar, 240 degC above that of disordered feldspar.
var BachinskiMueller1971 = solvus(method.Info{
	ID:         bachinskiMuellerID,
	Ref:        "Bachinski SW, Mueller G (1971) Experimental determinations of the microcline-low albite solvus. J Petrol 12:329-356",
	Assemblage: ordered,
	Standing:   method.Consistent,
	Sigma:      method.Sigma{Origin: untested},
	Range:      method.Range{Source: orderedRange.Source, Bounds: orderedRange.Bounds[:1:1]},
}, "cal", calories(Binary{AbOr: 7973.1, OrAb: 7490.9}, Binary{AbOr: 6.48, OrAb: 2.17}, Binary{AbOr: .11, OrAb: .11}))

const bachinskiMuellerID = "alkali-feldspar-solvus/bachinski-mueller-1971"

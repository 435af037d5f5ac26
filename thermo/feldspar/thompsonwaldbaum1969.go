package feldspar

import "tieline/thermo/method"

// ThompsonWaldbaum1969 is the solvus of disordered alkali feldspar of Thompson &
// Waldbaum (1969), W in cal. Its critical line is T_c(K) = 921.23 + 13.4607 P(kbar)
// at X_Or 1/3.
var ThompsonWaldbaum1969 = solvus(method.Info{
	ID:       thompsonWaldbaumID,
	Ref:      thompsonWaldbaum,
	Standing: method.Confirmed,
	Sigma:    method.Sigma{Origin: untested},
	Range:    method.Range{Source: solvusRange.Source, Bounds: solvusRange.Bounds[:2:2]},
}, "cal", thompsonWaldbaumConst())

const (
	thompsonWaldbaumID = "alkali-feldspar-solvus/thompson-waldbaum-1969"
	thompsonWaldbaum   = "Thompson JB, Waldbaum DR (1969) Mixing properties of sanidine crystalline solutions: III. Calculations based on " +
		"two-phase data. Am Mineral 54:811-838"
)

func thompsonWaldbaumConst() *SolvusConstants {
	return calories(Binary{AbOr: 6326.7, OrAb: 7671.8}, Binary{AbOr: 4.6321, OrAb: 3.8565}, Binary{AbOr: .0925, OrAb: .1121})
}

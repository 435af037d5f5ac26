package feldspar

import "tieline/thermo/method"

// Hovis1991 is the solvus of disordered alkali feldspar of Hovis et al. (1991),
// from calorimetry and ion exchange, W in J.
var Hovis1991 = solvus(method.Info{
	ID: hovisID,
	Ref: "Hovis GL, Delbove F, Roll Bose M (1991) Gibbs energies and entropies of K-Na mixing for alkali feldspars from phase " +
		"equilibrium data: implications for feldspar solvi and short-range order. Am Mineral 76:913-927",
	Shares:   []string{benisekID},
	Standing: method.Recalled,
	Sigma:    method.Sigma{Origin: untested},
	Range:    exchangeRange(),
}, "J", joules(Binary{AbOr: 19550, OrAb: 22820}, Binary{AbOr: 10.5, OrAb: 6.3}, Binary{AbOr: .327, OrAb: .461}))

const hovisID = "alkali-feldspar-solvus/hovis-1991"

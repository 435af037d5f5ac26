package feldspar

import "tieline/thermo/method"

// ThompsonHovis1979 is the solvus of disordered alkali feldspar of Thompson &
// Hovis (1979), from ion exchange and calorimetry, W in J.
var ThompsonHovis1979 = solvus(method.Info{
	ID:       "alkali-feldspar-solvus/thompson-hovis-1979",
	Ref:      "Thompson JB, Hovis GL (1979) Entropy of mixing in sanidine. Am Mineral 64:57-65",
	Standing: method.Consistent,
	Sigma:    method.Sigma{Origin: untested},
	Range:    exchangeRange(),
}, "J", joules(Binary{AbOr: 30978, OrAb: 17062}, Binary{AbOr: 21.40}, Binary{AbOr: .361, OrAb: .361}))

// exchangeRange is of ion-exchange experiments at low pressure.
func exchangeRange() method.Range {
	return method.Range{
		Source: "ion exchange and calorimetry, low pressure, from memory",
		Bounds: []method.Bound{{Name: "T", Unit: "degC", Min: 600, Max: 800}},
	}
}

package feldspar

import "tieline/thermo/method"

// HaseltonSolvus1983 is the solvus of analbite-sanidine of Haselton et al.
// (1983), from calorimetry, W in J.
var HaseltonSolvus1983 = solvus(method.Info{
	ID: haseltonSolvusID,
	Ref: "Haselton HT, Hovis GL, Hemingway BS, Robie RA (1983) Calorimetric investigation of the excess entropy of mixing in " +
		"analbite-sanidine solid solutions: lack of evidence for Na,K short-range order and implications for two-feldspar thermometry. " +
		"Am Mineral 68:398-413",
	Shares:   []string{haseltonID, "two-feldspar/elkins-grove-1990", "two-feldspar/fuhrman-lindsley-1988"},
	Standing: method.Consistent,
	Sigma:    method.Sigma{Origin: untested},
	Range:    method.Range{Source: "calorimetry of the binary; the limit on An is common practice, no source"},
}, "J", joules(Binary{AbOr: 18810, OrAb: 27320}, Binary{AbOr: 10.3, OrAb: 10.3}, Binary{AbOr: .364, OrAb: .364}))

const haseltonSolvusID = "alkali-feldspar-solvus/haselton-1983"

package feldspar

import "tieline/thermo/method"

// CoherentThompsonWaldbaum1969 is the solvus of Thompson & Waldbaum (1969) for
// coherent lamellae: their elastic energy k (X - X')^2 takes k from both W. k is
// 603.6 cal/mol, empirical and bound to this solvus; coherent lamellae read 65-72
// degC too high with the strain-free one.
var CoherentThompsonWaldbaum1969 = solvus(method.Info{
	ID: "alkali-feldspar-solvus/thompson-waldbaum-1969-coherent",
	Ref: thompsonWaldbaum + "; coherency after Robin PYF (1974) Stress and strain in cryptoperthite lamellae and the coherent solvus " +
		"of alkali feldspars. Am Mineral 59:1299-1318",
	DerivedFrom: []string{thompsonWaldbaumID},
	Assemblage:  "lamellae coherent and disordered; once they are not, the strain-free solvus holds",
	Standing:    method.Consistent,
	Sigma:       method.Sigma{Origin: untested},
	Range:       method.Range{Source: solvusRange.Source, Bounds: solvusRange.Bounds[:2:2]},
}, "cal", func() *SolvusConstants {
	k := thompsonWaldbaumConst()
	k.Coherency = 603.6
	return k
}())

package feldspar

import (
	"tieline/thermo/chem"
	"tieline/thermo/detmath"
	"tieline/thermo/method"
	"tieline/thermo/mixing"
)

// Basis is the formula feldspars are seen on: all iron is ferric, on the
// tetrahedral site. End members do not depend on it.
var Basis = method.Basis{Oxygens: 8, Cations: 5, Ferric: method.AllFe3}

var components = [3]string{"Ab", "Or", "An"}

// The mole fractions of both feldspars, in the order of components.
var (
	inAfs = [3]*method.Quantity{
		fraction(chem.Afs, 0, 0.15, 0.4), fraction(chem.Afs, 1, 0.55, 0.85), fraction(chem.Afs, 2, 0.005, 0.05)}
	inPl = [3]*method.Quantity{
		fraction(chem.Pl, 0, 0.45, 0.8), fraction(chem.Pl, 1, 0.03, 0.15), fraction(chem.Pl, 2, 0.1, 0.45)}
	fractions = append(inAfs[:], inPl[:]...)
)

// parts is part/(part + other): the fraction in a binary.
func parts(part, other *method.Quantity, name string) *method.Quantity {
	return &method.Quantity{
		Name:  name,
		Unit:  "1",
		Needs: []*method.Quantity{part, other},
		Fill: func(b *method.Block, q []float64, why []method.Reason) {
			x, y := b.Of(part), b.Of(other)
			for i := range q {
				sum := x[i] + y[i]
				q[i] = x[i] / sum
				if why[i] == method.OK && !(sum > 0) {
					why[i] = method.NonPositiveLog
				}
			}
		},
	}
}

func fraction(phase chem.Phase, c int, probeMin, probeMax float64) *method.Quantity {
	return &method.Quantity{
		Name: components[c] + " in " + string(phase),
		Unit: "mole fraction",
		Leaf: &method.Leaf{Phase: phase, Basis: Basis, EndMember: chem.XAb + chem.Measurand(c), Probe: [2]float64{probeMin, probeMax}},
	}
}

// The logarithms of ideal activity ratios, plagioclase over alkali feldspar,
// per component. A component that is absent from either feldspar has none, and
// that is the business of its own lane only.
var (
	lnMolecular   = [3]*method.Quantity{molecularRatio(0), molecularRatio(1), molecularRatio(2)}
	lnAlAvoidance = [3]*method.Quantity{avoidanceRatio(0), avoidanceRatio(1), avoidanceRatio(2)}
)

func molecularRatio(c int) *method.Quantity {
	return &method.Quantity{
		Name:  "ln(X_Pl/X_Afs) of " + components[c],
		Unit:  "1",
		Needs: []*method.Quantity{inAfs[c], inPl[c]},
		Fill: func(b *method.Block, q []float64, why []method.Reason) {
			afs, pl := b.Of(inAfs[c]), b.Of(inPl[c])
			for i := range q {
				q[i] = detmath.Log(pl[i] / afs[i])
				if why[i] == method.OK && !(pl[i] > 0 && afs[i] > 0) {
					why[i] = method.NonPositiveLog
				}
			}
		},
	}
}

// avoidanceRatio is ln(a_Pl/a_Afs) with the ideal activities of
// mixing.AlAvoidance: the molecular ratio and what Al avoidance adds to it.
func avoidanceRatio(c int) *method.Quantity {
	return &method.Quantity{
		Name:  "ln(a_Pl/a_Afs) of " + components[c] + ", Al avoidance",
		Unit:  "1",
		Needs: []*method.Quantity{lnMolecular[c], avoidance(c)},
		Fill: func(b *method.Block, q []float64, why []method.Reason) {
			molecular, more := b.Of(lnMolecular[c]), b.Of(avoidance(c))
			for i := range q {
				q[i] = molecular[i] + more[i]
			}
		},
	}
}

func avoidance(c int) *method.Quantity {
	if c == 2 {
		return lnAvoidanceAn
	}
	return lnAvoidanceAlkali
}

// What Al avoidance adds to ln(X_Pl/X_Afs), by X_An of both feldspars: for Ab
// and Or the ratio of 1 - X_An^2, for An that of (1 + X_An)^2/4.
var (
	lnAvoidanceAlkali = anRatio("ln((1 - X_An^2)_Pl/(1 - X_An^2)_Afs)", 1, func(x float64) float64 { return 1 - float64(x*x) })
	lnAvoidanceAn     = anRatio("2 ln((1 + X_An)_Pl/(1 + X_An)_Afs)", 2, func(x float64) float64 { return 1 + x })
)

func anRatio(name string, times float64, of func(x float64) float64) *method.Quantity {
	return &method.Quantity{
		Name:  name,
		Unit:  "1",
		Needs: []*method.Quantity{inAfs[2], inPl[2]},
		Fill: func(b *method.Block, q []float64, why []method.Reason) {
			afs, pl := b.Of(inAfs[2]), b.Of(inPl[2])
			for i := range q {
				above, below := of(pl[i]), of(afs[i])
				q[i] = float64(times * detmath.Log(above/below))
				if why[i] == method.OK && !(above > 0 && below > 0) {
					why[i] = method.NonPositiveLog
				}
			}
		},
	}
}

// margules are, per component, the terms of the seven Margules parameters in
// RT ln gamma of the component, plagioclase less alkali feldspar. They are
// linear in the parameters: one set serves H, S and V of every model.
var margules = func() (all [3][7]*method.Quantity) {
	for c := range all {
		for m := range all[c] {
			all[c][m] = margulesTerm(c, m)
		}
	}
	return all
}()

func margulesTerm(c, m int) *method.Quantity {
	x, fill := [3]int{c, (c + 1) % 3, (c + 2) % 3}, ternaryTerms
	if m < len(mixing.Pairs) {
		x = mixing.Pairs[m]
		switch c {
		case x[0]:
			fill = ownTerms
		case x[1]:
			fill = partnerTerms
		default:
			fill = thirdTerms
		}
	}
	return &method.Quantity{
		Name:  "term of W_" + mixing.Names[m] + " in RT ln gamma of " + components[c] + ", Pl - Afs",
		Unit:  "1",
		Needs: fractions,
		Fill: func(b *method.Block, q []float64, _ []method.Reason) {
			fill(q, b.Of(inPl[x[0]]), b.Of(inPl[x[1]]), b.Of(inPl[x[2]]), b.Of(inAfs[x[0]]), b.Of(inAfs[x[1]]), b.Of(inAfs[x[2]]))
		},
	}
}

// The four loops differ in the term only. A call through a variable for each
// term would cost as much as the term.

func ownTerms(q, pi, pj, pk, ai, aj, ak []float64) {
	for n := range q {
		q[n] = mixing.PartialI(pi[n], pj[n], pk[n]) - mixing.PartialI(ai[n], aj[n], ak[n])
	}
}

func partnerTerms(q, pi, pj, pk, ai, aj, ak []float64) {
	for n := range q {
		q[n] = mixing.PartialJ(pi[n], pj[n], pk[n]) - mixing.PartialJ(ai[n], aj[n], ak[n])
	}
}

func thirdTerms(q, pi, pj, pk, ai, aj, ak []float64) {
	for n := range q {
		q[n] = mixing.PartialK(pi[n], pj[n], pk[n]) - mixing.PartialK(ai[n], aj[n], ak[n])
	}
}

func ternaryTerms(q, pc, pa, pb, ac, aa, ab []float64) {
	for n := range q {
		q[n] = mixing.PartialTernary(pc[n], pa[n], pb[n]) - mixing.PartialTernary(ac[n], aa[n], ab[n])
	}
}

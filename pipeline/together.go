package pipeline

import (
	"slices"

	"tieline/qc"
	"tieline/thermo/chem"
	"tieline/thermo/method"
)

// together applies the rules that hold an item's estimates against each other
// or against its pair: concordance of a feldspar pair's components, resetting,
// and the Fe-Mg distribution that igneous methods ask for. estimates are by lane
// and row of the block.
func (e *evaluator) together(estimates [][]estimate, i int) {
	limits := &e.s.manifest.QC
	lane := 0
	for _, m := range e.k.methods {
		mine := estimates[lane : lane+len(m.Components)]
		lane += len(m.Components)
		if slices.Contains(m.Phases, chem.Afs) && len(mine) == 3 {
			var ts [3]*float64
			for c := range mine {
				if mine[c][i].why == method.OK {
					ts[c] = &mine[c][i].c
				}
			}
			var sigma [3]float64
			copy(sigma[:], m.Sigma.C)
			found(mine, i, qc.Concordance(limits, ts, sigma))
		}
		if at := slices.IndexFunc(m.Range.Bounds, func(b method.Bound) bool { return b.Name == igneousBound }); at >= 0 {
			kd := m.Range.Bounds[at].Quantity
			if e.block.Why(kd)[i] == method.OK {
				found(mine, i, qc.IgneousDistribution(limits, e.block.Of(kd)[i]))
			}
		}
	}
	e.reset(estimates, i)
}

// igneousBound is how a method's range says that it is for igneous pyroxenes.
const igneousBound = "KD Fe-Mg"

// reset holds every temperature of Fe-Mg exchange against every one of Ca
// exchange on the same basis of the same item. Where only one of the two states
// an error, that one decides.
func (e *evaluator) reset(estimates [][]estimate, i int) {
	for l := range estimates {
		for f := range estimates {
			ca, feMg := &estimates[l][i], &estimates[f][i]
			lc, lf := &e.k.lanes[l], &e.k.lanes[f]
			if lc.Info.Closes != closesCa || lf.Info.Closes != closesFeMg || lc.Variant != lf.Variant || ca.why != method.OK || feMg.why != method.OK {
				continue
			}
			sc, sf := sigmaOf(e.k, l), sigmaOf(e.k, f)
			if sc <= 0 && sf <= 0 {
				continue // no error is known to hold the difference against
			}
			if slices.ContainsFunc(ca.outOf, func(b *method.Bound) bool { return b.Composition }) {
				continue // a Ca temperature that means nothing shows no resetting
			}
			fs := qc.Reset(&e.s.manifest.QC, ca.c, sc, feMg.c, sf)
			ca.found, feMg.found = append(ca.found, fs...), append(feMg.found, fs...)
		}
	}
}

// The systems that the reset rule compares, as methods name them.
const (
	closesCa   = "Ca solvus"
	closesFeMg = "Fe-Mg"
)

// found gives findings to each of a method's estimates that has a number.
func found(of [][]estimate, i int, findings []qc.Finding) {
	for c := range of {
		if of[c][i].why == method.OK {
			of[c][i].found = append(of[c][i].found, findings...)
		}
	}
}

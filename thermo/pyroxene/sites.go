package pyroxene

import (
	"tieline/thermo/chem"
	"tieline/thermo/detmath"
	"tieline/thermo/method"
)

// ferrous is what the methods framed on Fe2+ read of a pair, on one iron basis:
// that of their calibration or, as a twin, all iron as Fe2+.
type ferrous struct {
	basis   method.Basis
	variant string
	cpx     sites
	opx     sites
	// lnA is ln(a_Cpx/a_Opx) of Mg2Si2O6, ideal on M1 and M2.
	lnA *method.Quantity
}

// sites are the quantities of one pyroxene.
type sites struct {
	fe2, mg, ca *method.Quantity
	xFe         *method.Quantity // Fe2+/(Fe2+ + Mg)
	mgM1, mgM2  *method.Quantity // X_Mg on M1 and M2
	alVI        *method.Quantity
}

var (
	balanced = newFerrous(FourCations, "")
	allFe2   = newFerrous(SixOxygens, "all Fe2+")
)

func newFerrous(basis method.Basis, variant string) *ferrous {
	f := &ferrous{basis: basis, variant: variant}
	// Mg and Fe2+ cover spans in which most pairs have more iron in Opx.
	f.cpx = newSites(basis, chem.Cpx, spans{si: [2]float64{1.85, 1.99}, al: [2]float64{.05, .3}, fe2: [2]float64{.05, .2},
		mg: [2]float64{.7, 1.1}, ca: [2]float64{.4, .8}, na: [2]float64{0, .15}})
	f.opx = newSites(basis, chem.Opx, spans{si: [2]float64{1.9, 1.99}, al: [2]float64{.03, .2}, fe2: [2]float64{.25, .7},
		mg: [2]float64{1.2, 1.7}, ca: [2]float64{.005, .12}, na: [2]float64{0, .03}})
	f.lnA = &method.Quantity{
		Name: "ln(a_Cpx/a_Opx) of Mg2Si2O6, ideal on M1 and M2 (" + basisName(basis) + ")", Unit: "1",
		Needs: []*method.Quantity{f.cpx.mgM1, f.cpx.mgM2, f.opx.mgM1, f.opx.mgM2},
		Fill: func(b *method.Block, q []float64, _ []method.Reason) {
			c1, c2, o1, o2 := b.Of(f.cpx.mgM1), b.Of(f.cpx.mgM2), b.Of(f.opx.mgM1), b.Of(f.opx.mgM2)
			for i := range q {
				q[i] = detmath.Log(float64(c1[i]*c2[i]) / float64(o1[i]*o2[i]))
			}
		},
	}
	return f
}

// spans are the probe spans of the cations.
type spans struct{ si, al, fe2, mg, ca, na [2]float64 }

// newSites spreads the cations over the sites: M2 takes Ca, Na, K, Mn; M1 takes
// Al(VI), Cr, Ti, Fe3+; Mg and Fe2+ fill the rest of both in the same ratio.
// Wood BJ, Banno S (1973) Contrib Mineral Petrol 42:109-124.
func newSites(basis method.Basis, phase chem.Phase, p spans) sites {
	leaf := func(name string, span [2]float64, c chem.Cation) *method.Quantity {
		return on(basis, phase, name, span[0], span[1], c)
	}
	fe2, mg := leaf("Fe2+", p.fe2, chem.Fe2), leaf("Mg", p.mg, chem.Mg)
	si, al, ca, na := leaf("Si", p.si, chem.Si), leaf("Al", p.al, chem.Al), leaf("Ca", p.ca, chem.Ca), leaf("Na", p.na, chem.Na)
	mn, k := spectator(basis, phase, "Mn", 0, .01, chem.Mn), spectator(basis, phase, "K", 0, .003, chem.K)
	ti, cr := spectator(basis, phase, "Ti", 0, .01, chem.Ti), spectator(basis, phase, "Cr", 0, .03, chem.Cr)
	if basis == SixOxygens { // the same cations as those of the methods calibrated on it
		mg, ca, na, mn, k, ti, cr, si, al = mgInOpx, caInOpx, naInOpx, mnIfInOpx, kInOpx, tiInOpx, crIfInOpx, siInOpx, alInOpx
		if phase == chem.Cpx {
			mg, ca, na, mn, k, ti, cr, si, al = mgInCpx, caInCpx, naInCpx, mnIfInCpx, kInCpx, tiInCpx, crIfInCpx, siInCpx, alInCpx
		}
	}
	s := sites{fe2: fe2, mg: mg, ca: ca}
	s.xFe = xFeOf("Fe2+/(Fe2+ + Mg) in "+string(phase)+" ("+basisName(basis)+")", fe2, mg)
	s.alVI = alVI(basis, phase, si, al)
	s.mgM2 = s.siteMg("M2", basis, phase, ca, na, k, mn)
	if basis == SixOxygens {
		s.mgM1 = s.siteMg("M1", basis, phase, s.alVI, cr, ti)
	} else {
		s.mgM1 = s.siteMg("M1", basis, phase, s.alVI, cr, ti, leaf("Fe3+", [2]float64{0, .05}, chem.Fe3))
	}
	return s
}

// siteMg is what others leave of a site, times Mg/(Mg + Fe2+).
func (s *sites) siteMg(site string, basis method.Basis, phase chem.Phase, others ...*method.Quantity) *method.Quantity {
	return &method.Quantity{
		Name: "X_Mg on " + site + " of " + string(phase) + " (" + basisName(basis) + ")", Unit: "1",
		Needs: append([]*method.Quantity{s.xFe}, others...),
		Fill: func(b *method.Block, q []float64, why []method.Reason) {
			for i := range q {
				q[i] = 1
			}
			for _, other := range others {
				for i, x := range b.Of(other)[:len(q)] {
					q[i] -= x
				}
			}
			for i, x := range b.Of(s.xFe)[:len(q)] {
				q[i] = float64(q[i] * (1 - x))
				if why[i] == method.OK && !(q[i] > 0) {
					why[i] = method.SiteFull
				}
			}
		},
	}
}

// alVI is what is left of Al when Si is made up to 2: Al(IV) = min(2 - Si, Al), not below 0.
func alVI(basis method.Basis, phase chem.Phase, si, al *method.Quantity) *method.Quantity {
	return &method.Quantity{
		Name: "Al(VI) in " + string(phase) + " (" + basisName(basis) + ")", Unit: "apfu", Needs: []*method.Quantity{si, al},
		Fill: func(b *method.Block, q []float64, _ []method.Reason) {
			si, al := b.Of(si), b.Of(al)
			for i := range q {
				q[i] = al[i] - tetrahedral(si[i], al[i])
			}
		},
	}
}

// tetrahedral is Al(IV).
func tetrahedral(si, al float64) float64 { return max(min(2-si, al), 0) }

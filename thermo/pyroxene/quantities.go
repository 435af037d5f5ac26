// Package pyroxene holds the thermometers of coexisting ortho- and
// clinopyroxene and of one pyroxene on its solvus. A calibration is one short
// file.
package pyroxene

import (
	"tieline/thermo/chem"
	"tieline/thermo/detmath"
	"tieline/thermo/method"
)

// SixOxygens is the formula the solvus methods are calibrated on: six oxygens,
// all iron as Fe2+.
var SixOxygens = method.Basis{Oxygens: 6, Cations: 4, Ferric: method.AllFe2}

// FourCations is the formula of the methods framed on Fe2+: six oxygens, four
// cations, Fe3+ by charge balance.
var FourCations = method.Basis{Oxygens: 6, Cations: 4, Ferric: method.Balanced}

// The cations the methods here read.
var (
	caInCpx = cation(chem.Cpx, "Ca", 0.4, 0.8, chem.Ca)
	naInCpx = cation(chem.Cpx, "Na", 0, 0.15, chem.Na)
	feInCpx = cation(chem.Cpx, "Fe", 0.05, 0.35, chem.Fe2, chem.Fe3)
	mgInCpx = cation(chem.Cpx, "Mg", 0.6, 1.1, chem.Mg)
	caInOpx = cation(chem.Opx, "Ca", 0.005, 0.12, chem.Ca)
	naInOpx = cation(chem.Opx, "Na", 0, 0.03, chem.Na)
	feInOpx = cation(chem.Opx, "Fe", 0.1, 0.7, chem.Fe2, chem.Fe3)
	mgInOpx = cation(chem.Opx, "Mg", 1.2, 1.85, chem.Mg)

	siInCpx = cation(chem.Cpx, "Si", 1.85, 1.99, chem.Si)
	alInCpx = cation(chem.Cpx, "Al", 0.05, 0.3, chem.Al)
	siInOpx = cation(chem.Opx, "Si", 1.9, 1.99, chem.Si)
	alInOpx = cation(chem.Opx, "Al", 0.03, 0.2, chem.Al)
	crInOpx = cation(chem.Opx, "Cr", 0, 0.03, chem.Cr)
	mnInOpx = cation(chem.Opx, "Mn", 0, 0.02, chem.Mn)

	tiInCpx   = spectator(SixOxygens, chem.Cpx, "Ti", 0, 0.02, chem.Ti)
	crIfInCpx = spectator(SixOxygens, chem.Cpx, "Cr", 0, 0.04, chem.Cr)
	mnIfInCpx = spectator(SixOxygens, chem.Cpx, "Mn", 0, 0.01, chem.Mn)
	kInCpx    = spectator(SixOxygens, chem.Cpx, "K", 0, 0.005, chem.K)
	tiInOpx   = spectator(SixOxygens, chem.Opx, "Ti", 0, 0.01, chem.Ti)
	crIfInOpx = spectator(SixOxygens, chem.Opx, "Cr", 0, 0.03, chem.Cr)
	mnIfInOpx = spectator(SixOxygens, chem.Opx, "Mn", 0, 0.02, chem.Mn)
	kInOpx    = spectator(SixOxygens, chem.Opx, "K", 0, 0.002, chem.K)
)

func cation(phase chem.Phase, name string, probeMin, probeMax float64, cations ...chem.Cation) *method.Quantity {
	return on(SixOxygens, phase, name, probeMin, probeMax, cations...)
}

// on is the cations of one phase, which must have been measured.
func on(basis method.Basis, phase chem.Phase, name string, probeMin, probeMax float64, cations ...chem.Cation) *method.Quantity {
	return &method.Quantity{
		Name: name + " in " + string(phase) + " (" + basisName(basis) + ")",
		Unit: "apfu",
		Leaf: &method.Leaf{Phase: phase, Basis: basis, Cations: cations, Probe: [2]float64{probeMin, probeMax}},
	}
}

// spectator is a minor cation that may be absent: not analysed, it counts as zero.
func spectator(basis method.Basis, phase chem.Phase, name string, probeMin, probeMax float64, cation chem.Cation) *method.Quantity {
	q := on(basis, phase, name, probeMin, probeMax, cation)
	q.Name = name + " in " + string(phase) + " (" + basisName(basis) + "; 0 where not analysed)"
	q.Leaf.Optional = true
	return q
}

func basisName(b method.Basis) string {
	if b == FourCations {
		return "4 cations, charge balance"
	}
	return "6 O, all Fe2+"
}

// Ca* = Ca/(1 - Na), all Ca and Na in M2. At 1 and above there is no
// Mg2Si2O6 left.
var (
	caStarInCpx = caStar(chem.Cpx, caInCpx, naInCpx)
	caStarInOpx = caStar(chem.Opx, caInOpx, naInOpx)
)

func caStar(phase chem.Phase, ca, na *method.Quantity) *method.Quantity {
	return &method.Quantity{
		Name:  "Ca* in " + string(phase),
		Unit:  "1",
		Needs: []*method.Quantity{ca, na},
		Fill: func(b *method.Block, q []float64, why []method.Reason) {
			ca, na := b.Of(ca), b.Of(na)
			for i := range q {
				q[i] = ca[i] / (1 - na[i])
				if why[i] == method.OK && !(na[i] < 1 && q[i] < 1) {
					why[i] = method.M2Full
				}
			}
		},
	}
}

// lnKStar is ln K*, K* = (1 - Ca*_Cpx)/(1 - Ca*_Opx).
var lnKStar = &method.Quantity{
	Name:  "ln K*",
	Unit:  "1",
	Needs: []*method.Quantity{caStarInCpx, caStarInOpx},
	Fill: func(b *method.Block, q []float64, _ []method.Reason) {
		cpx, opx := b.Of(caStarInCpx), b.Of(caStarInOpx)
		for i := range q {
			q[i] = detmath.Log((1 - cpx[i]) / (1 - opx[i]))
		}
	},
}

// X_Fe = Fe/(Fe + Mg), all iron.
var (
	xFeInCpx = xFe(chem.Cpx, feInCpx, mgInCpx)
	xFeInOpx = xFe(chem.Opx, feInOpx, mgInOpx)
)

func xFe(phase chem.Phase, fe, mg *method.Quantity) *method.Quantity {
	return xFeOf("X_Fe in "+string(phase), fe, mg)
}

func xFeOf(name string, fe, mg *method.Quantity) *method.Quantity {
	return &method.Quantity{
		Name:  name,
		Unit:  "1",
		Needs: []*method.Quantity{fe, mg},
		Fill: func(b *method.Block, q []float64, why []method.Reason) {
			fe, mg := b.Of(fe), b.Of(mg)
			for i := range q {
				sum := fe[i] + mg[i]
				q[i] = fe[i] / sum
				if why[i] == method.OK && !(sum > 0) {
					why[i] = method.NotFinite
				}
			}
		},
	}
}

// lnCaInOpx is ln Ca of orthopyroxene.
var lnCaInOpx = &method.Quantity{
	Name:  "ln Ca in Opx",
	Unit:  "1",
	Needs: []*method.Quantity{caInOpx},
	Fill: func(b *method.Block, q []float64, why []method.Reason) {
		ca := b.Of(caInOpx)
		for i := range q {
			q[i] = detmath.Log(ca[i])
			if why[i] == method.OK && !(ca[i] > 0) {
				why[i] = method.NonPositiveLog
			}
		}
	},
}

// KDFeMg is (Fe/Mg)_Cpx/(Fe/Mg)_Opx, all iron: whether the two can have
// coexisted, and no thermometer. Experimental igneous pairs have 1.09 +- 0.14
// (Putirka KD (2008) Rev Mineral Geochem 69:61-120, from memory).
var KDFeMg = &method.Quantity{
	Name:  "KD Fe-Mg, (Fe/Mg)_Cpx/(Fe/Mg)_Opx, all iron",
	Unit:  "1",
	Needs: []*method.Quantity{feInCpx, mgInCpx, feInOpx, mgInOpx},
	Fill: func(b *method.Block, q []float64, why []method.Reason) {
		fc, mc, fo, mo := b.Of(feInCpx), b.Of(mgInCpx), b.Of(feInOpx), b.Of(mgInOpx)
		for i := range q {
			q[i] = float64(fc[i]*mo[i]) / float64(mc[i]*fo[i])
			if why[i] == method.OK && !(mc[i] > 0 && fo[i] > 0) {
				why[i] = method.NotFinite
			}
		}
	},
}

// mantle is the setting of the methods made for xenoliths.
const mantle = "mantle peridotite"

// write puts a temperature and its reason into a lane's row.
func write(lane *method.Lane, i int, t chem.Kelvin) {
	lane.T[i] = t
	if lane.Why[i] == method.OK {
		lane.Why[i] = method.ReasonFor(t)
	}
}

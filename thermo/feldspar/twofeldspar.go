// Package feldspar holds the thermometers of coexisting alkali feldspar and
// plagioclase, and of two lamellae in one alkali feldspar. A calibration is one short file; what several share, logarithms
// and the terms of the Margules parameters, is filled once per block for all.
package feldspar

import (
	"tieline/thermo/chem"
	"tieline/thermo/method"
	"tieline/thermo/mixing"
)

// Constants are what a ternary two-feldspar thermometer is made of.
type Constants struct {
	Ideal      mixing.Ideal
	Excess     mixing.Solution // J/mol, J/mol/K, J/mol/bar
	R          float64         // J/mol/K
	MinEntropy float64         // J/mol/K: where |D| is less there is no number
}

// smallEntropy is the |D| below which a temperature is the ratio of two small
// numbers. Common practice, no source.
const smallEntropy = 5

const equation = "T_i = (dH_i + P dV_i) / D_i,  D_i = dS_i - R ln(a_i,Pl/a_i,Afs);  dT_i/dP = dV_i/D_i\n" +
	"dH, dS, dV: Pl - Afs of RT ln gamma_i of G_ex = sum W_ij X_i X_j (X_j + X_k/2) + W_AbOrAn X_Ab X_Or X_An, W = H - T S + P V"

// twoFeldspar makes a method of constants: three temperatures, at each of which
// one component has the same activity in both feldspars.
func twoFeldspar(info method.Info, k *Constants) *method.Method {
	ratios, ideal := lnMolecular, "a_i = X_i"
	if k.Ideal == mixing.AlAvoidance {
		ratios, ideal = lnAlAvoidance, "a_Ab = X_Ab (1 - X_An^2), a_Or = X_Or (1 - X_An^2), a_An = X_An (1 + X_An)^2/4"
	}
	info.Equation = equation + "; ideal activities: " + string(k.Ideal) + ", " + ideal
	h, s, v := k.Excess.H.Array(), k.Excess.S.Array(), k.Excess.V.Array()
	var solved [3]solution
	for c := range solved {
		solved[c] = equality{id: info.ID, component: components[c], energy: "J", terms: margules[c][:],
			h: h[:], s: s[:], v: v[:], ratio: ratios[c], r: k.R, least: k.MinEntropy}.solution()
	}
	return ternary(info, k, solved)
}

// ternary makes a method of the equalities of Ab, Or and An in a pair of feldspars.
func ternary(info method.Info, k any, solved [3]solution) *method.Method {
	info.Phases = []chem.Phase{chem.Afs, chem.Pl}
	info.Components = components[:]
	info.Closes = "Na-K (Ab, Or), An (An)"
	info.Basis = Basis
	info.Needs = fractions
	info.Precise = []method.Precision{{Component: components[2], Leaf: inAfs[2], MaxRelative: 0.3}}
	return equalities(info, k, solved[:])
}

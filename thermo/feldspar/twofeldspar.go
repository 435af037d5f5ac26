// Package feldspar holds the thermometers of coexisting alkali feldspar and
// plagioclase. A calibration is one short file; what several share, logarithms
// and the terms of the Margules parameters, is filled once per block for all.
package feldspar

import (
	"math"

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
	info.Phases = []chem.Phase{chem.Afs, chem.Pl}
	info.Components = components[:]
	info.Closes = "Na-K (Ab, Or), An (An)"
	info.Basis = Basis
	info.Needs = fractions
	for c := range components {
		info.Uses = append(info.Uses, ratios[c])
		info.Uses = append(info.Uses, margules[c][:]...)
	}
	return &method.Method{Info: info, Const: k, Eval: func(b *method.Block, lanes []method.Lane) {
		for c := range components {
			k.component(b, ratios[c], &margules[c], lanes[c])
		}
	}}
}

// component solves one component's equality of activities. W is linear in T, so
// the solution is exact.
func (k *Constants) component(b *method.Block, ratio *method.Quantity, terms *[7]*method.Quantity, lane method.Lane) {
	var f [7][]float64
	for m, q := range terms {
		f[m] = b.Of(q)[:b.N]
	}
	ln := b.Of(ratio)
	why := lane.Why[:b.N]
	method.Join(why, b.Why(ratio))
	for i := range why {
		row := mixing.Terms{f[0][i], f[1][i], f[2][i], f[3][i], f[4][i], f[5][i], f[6][i]}
		d := k.Excess.S.Times(&row) - float64(k.R*ln[i])
		h := k.Excess.H.Times(&row) + float64(float64(b.P[i])*k.Excess.V.Times(&row))
		lane.T[i] = chem.Kelvin(h / d)
		if why[i] == method.OK {
			why[i] = k.judge(d, lane.T[i])
		}
	}
}

func (k *Constants) judge(d float64, t chem.Kelvin) method.Reason {
	if math.Abs(d) < k.MinEntropy {
		return method.SmallEntropy
	}
	return method.ReasonFor(t)
}

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
	var solved [3]solution
	for c := range components {
		solved[c] = k.solution(info.ID, c, ratios[c])
		info.Uses = append(info.Uses, solved[c].h, solved[c].v, solved[c].d)
	}
	return &method.Method{Info: info, Const: k, Eval: func(b *method.Block, lanes []method.Lane) {
		for c := range solved {
			solved[c].eval(b, lanes[c])
		}
	}}
}

// solution is one component's equality of activities. W is linear in T, so it
// is exact, and P is the only thing that is not a quantity.
type solution struct{ h, v, d *method.Quantity }

func (k *Constants) solution(id string, c int, ratio *method.Quantity) solution {
	s := difference("dS", "J/mol/K", id, c, &k.Excess.S)
	return solution{
		h: difference("dH", "J/mol", id, c, &k.Excess.H),
		v: difference("dV", "J/mol/bar", id, c, &k.Excess.V),
		d: &method.Quantity{
			Name:  "D of " + components[c] + " (" + id + ")",
			Unit:  "J/mol/K",
			Needs: []*method.Quantity{s, ratio},
			Fill: func(b *method.Block, q []float64, why []method.Reason) {
				s, ln := b.Of(s), b.Of(ratio)
				for i := range q {
					q[i] = s[i] - float64(k.R*ln[i])
					if why[i] == method.OK && math.Abs(q[i]) < k.MinEntropy {
						why[i] = method.SmallEntropy
					}
				}
			},
		},
	}
}

// difference is the enthalpy, entropy or volume in RT ln gamma of component c,
// plagioclase less alkali feldspar. Parameters that are zero need no term.
func difference(name, unit, id string, c int, w *mixing.Margules) *method.Quantity {
	d := &method.Quantity{Name: name + " of " + components[c] + " (" + id + ")", Unit: unit}
	var parameters []float64
	for m, p := range w.Array() {
		if p != 0 {
			parameters = append(parameters, p)
			d.Needs = append(d.Needs, margules[c][m])
		}
	}
	d.Fill = func(b *method.Block, q []float64, _ []method.Reason) {
		clear(q)
		for m, p := range parameters {
			for i, term := range b.Of(d.Needs[m])[:len(q)] {
				q[i] += float64(p * term)
			}
		}
	}
	return d
}

func (s solution) eval(b *method.Block, lane method.Lane) {
	h, v, d := b.Of(s.h), b.Of(s.v), b.Of(s.d)
	why := lane.Why[:b.N]
	method.Join(why, b.Why(s.d))
	for i, p := range b.P {
		lane.T[i] = chem.Kelvin((h[i] + float64(float64(p)*v[i])) / d[i])
		if why[i] == method.OK {
			why[i] = method.ReasonFor(lane.T[i])
		}
	}
}

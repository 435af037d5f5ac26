package feldspar

import (
	"tieline/thermo/chem"
	"tieline/thermo/detmath"
	"tieline/thermo/method"
	"tieline/thermo/mixing"
)

// SolvusConstants are what an alkali-feldspar solvus is made of: G_ex = X_Ab X_Or
// (W_AbOr X_Or + W_OrAb X_Ab), W = H - T S + P V.
type SolvusConstants struct {
	H, S, V Binary // energy per mole, per K, per bar
	// Coherency is what elastic strain takes from both W, the k of G + k (X - X')^2;
	// 0 for strain-free lamellae.
	Coherency  float64
	R          float64 // energy/mol/K
	MinEntropy float64 // energy/mol/K: where |D| is less there is no number
}

// Binary are the two parameters of an asymmetric binary. AbOr rules dilute Ab in Or.
type Binary struct{ AbOr, OrAb float64 }

// perCalorie is J/cal, the thermochemical calorie, exact by definition.
const perCalorie = 4.184

// joules and calories make constants in the paper's unit of energy.
func joules(h, s, v Binary) *SolvusConstants {
	return &SolvusConstants{H: h, S: s, V: v, R: chem.GasConstant, MinEntropy: smallEntropy}
}

func calories(h, s, v Binary) *SolvusConstants {
	return &SolvusConstants{H: h, S: s, V: v, R: chem.GasConstant / perCalorie, MinEntropy: smallEntropy / perCalorie}
}

const solvusEquation = "T_i = (dH_i + P dV_i) / D_i,  D_i = dS_i - R ln(X_i,Na/X_i,K);  X_Ab + X_Or = 1\n" +
	"dH, dS, dV: Na side - K side of RT ln gamma_i of G_ex = X_Ab X_Or (W_AbOr X_Or + W_OrAb X_Ab), W = H - T S + P V"

// solvus makes a method of constants: two temperatures, at each of which one
// component has the same activity in both lamellae.
func solvus(info method.Info, energy string, k *SolvusConstants) *method.Method {
	info.Equation = solvusEquation
	if k.Coherency != 0 {
		info.Equation += " - k"
	}
	info.Phases = []chem.Phase{chem.NaFsp, chem.KFsp}
	info.Components = components[:2]
	info.Closes = "Na-K"
	info.Basis = Basis
	info.Needs = []*method.Quantity{orInNaBinary, orInKBinary, anInNa, anInK}
	info.Range.Bounds = append(info.Range.Bounds,
		method.Bound{Name: anInNa.Name, Unit: anInNa.Unit, Quantity: anInNa, Max: mostAn, Composition: true},
		method.Bound{Name: anInK.Name, Unit: anInK.Unit, Quantity: anInK, Max: mostAn, Composition: true})
	solved := make([]solution, len(info.Components))
	for c := range solved {
		solved[c] = equality{id: info.ID, component: components[c], energy: energy, terms: binaryTerms[c][:],
			h: []float64{k.H.AbOr - k.Coherency, k.H.OrAb - k.Coherency}, s: []float64{k.S.AbOr, k.S.OrAb}, v: []float64{k.V.AbOr, k.V.OrAb},
			ratio: lnBinary[c], r: k.R, least: k.MinEntropy}.solution()
	}
	return equalities(info, k, solved)
}

// mostAn is the An in a lamella above which the binary solvus does not apply and
// the feldspar is to be re-integrated. Common practice, no source.
const mostAn = 0.05

// untested says why a solvus has no error of its own.
const untested = "none: no quoted value is remembered, and no experiment here tests it"

// The lamellae, and the fraction of Or in each, An left out.
var (
	abInNa, orInNa, anInNa = fraction(chem.NaFsp, 0, 0.8, 0.95), fraction(chem.NaFsp, 1, 0.05, 0.2), fraction(chem.NaFsp, 2, 0, 0.05)
	abInK, orInK, anInK    = fraction(chem.KFsp, 0, 0.15, 0.5), fraction(chem.KFsp, 1, 0.5, 0.85), fraction(chem.KFsp, 2, 0, 0.05)
	orInNaBinary           = parts(orInNa, abInNa, "Or/(Ab + Or) in Na-Fsp")
	orInKBinary            = parts(orInK, abInK, "Or/(Ab + Or) in K-Fsp")
)

// lnBinary are ln(X_Na/X_K) of Ab and Or.
var lnBinary = [2]*method.Quantity{binaryRatio(0), binaryRatio(1)}

func binaryRatio(c int) *method.Quantity {
	return overBinary("ln(X_Na/X_K) of "+components[c], func(q, na, k []float64, why []method.Reason) {
		for i := range q {
			x, y := na[i], k[i]
			if c == 0 {
				x, y = 1-x, 1-y
			}
			q[i] = detmath.Log(x / y)
			if why[i] == method.OK && !(x > 0 && y > 0) {
				why[i] = method.NonPositiveLog
			}
		}
	})
}

// binaryTerms are, per component, the terms of W_AbOr and W_OrAb in RT ln gamma
// of the component, Na side less K side: those of the ternary without An.
var binaryTerms = [2][2]*method.Quantity{
	{binaryTerm(0, 0), binaryTerm(0, 1)},
	{binaryTerm(1, 0), binaryTerm(1, 1)},
}

func binaryTerm(c, m int) *method.Quantity {
	name := "term of W_" + mixing.Names[m] + " in RT ln gamma of " + components[c] + ", Na side - K side"
	return overBinary(name, func(q, na, k []float64, _ []method.Reason) {
		for n := range q {
			xi, yi := na[n], k[n]
			if m == 0 { // W_AbOr: i is Ab
				xi, yi = 1-xi, 1-yi
			}
			if c == m {
				q[n] = mixing.PartialI(xi, 1-xi, 0) - mixing.PartialI(yi, 1-yi, 0)
			} else {
				q[n] = mixing.PartialJ(xi, 1-xi, 0) - mixing.PartialJ(yi, 1-yi, 0)
			}
		}
	})
}

// overBinary is a quantity of X_Or in the two lamellae.
func overBinary(name string, fill func(q, na, k []float64, why []method.Reason)) *method.Quantity {
	return &method.Quantity{
		Name: name, Unit: "1", Needs: []*method.Quantity{orInNaBinary, orInKBinary},
		Fill: func(b *method.Block, q []float64, why []method.Reason) {
			fill(q, b.Of(orInNaBinary), b.Of(orInKBinary), why)
		},
	}
}

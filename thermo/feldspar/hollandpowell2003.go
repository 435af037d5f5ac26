package feldspar

import (
	"tieline/thermo/chem"
	"tieline/thermo/method"
	"tieline/thermo/mixing"
)

// HollandPowell2003 is the ternary-feldspar model of Holland & Powell (2003) in
// their asymmetric formalism, with molecular mixing. Its alkali-feldspar crest,
// 648 degC at 1 bar, is that of Thompson & Waldbaum (1969). T_An reads high on
// the runs of Elkins & Grove (1990), which are probably part of what it was
// fitted to.
var HollandPowell2003 = asymmetric(method.Info{
	ID: "two-feldspar/holland-powell-2003",
	Ref: "Holland TJB, Powell R (2003) Activity-composition relations for phases in petrological calculations: an asymmetric " +
		"multicomponent formulation. Contrib Mineral Petrol 145:492-501",
	Shares:   []string{"two-feldspar/elkins-grove-1990", "two-feldspar/fuhrman-lindsley-1988", benisekID, putirkaID},
	Standing: method.Consistent,
	Sigma: method.Sigma{C: []float64{49, 19, 54},
		Origin: "misfit (rms) on the 17 runs of Elkins & Grove 1990 with plagioclase below An50, to which the method was probably partly fitted"},
	Range: method.Range{
		Source: "ternary experiments at 650-900 degC and the alkali-feldspar solvus, from memory; no pressure term is tested",
		Bounds: []method.Bound{{Name: "T", Unit: "degC", Min: 650, Max: 900}},
	},
}, &ASFConstants{
	Excess: mixing.ASF{
		Alpha: [3]float64{0.643, 1, 1},
		H:     mixing.ASFParameters{AbOr: 25100, AbAn: 3100, OrAn: 40000},
		S:     mixing.ASFParameters{AbOr: 10.8},
		V:     mixing.ASFParameters{AbOr: 0.338},
	},
	R:          chem.GasConstant,
	MinEntropy: smallEntropy,
})

// ASFConstants are what a two-feldspar thermometer in the asymmetric formalism is made of.
type ASFConstants struct {
	Excess     mixing.ASF
	R          float64 // J/mol/K
	MinEntropy float64 // J/mol/K: where |D| is less there is no number
}

const asymmetricEquation = "T_i = (dH_i + P dV_i) / D_i,  D_i = dS_i - R ln(X_i,Pl/X_i,Afs);  dT_i/dP = dV_i/D_i\n" +
	"dH, dS, dV: Pl - Afs of RT ln gamma_l = -sum q_i q_j W_ij 2 alpha_l/(alpha_i + alpha_j), W = H - T S + P V, " +
	"q_i = delta_il - phi_i, phi_i = alpha_i X_i / sum alpha_k X_k"

func asymmetric(info method.Info, k *ASFConstants) *method.Method {
	info.Equation = asymmetricEquation
	afs, pl := sizes(&k.Excess, chem.Afs, inAfs), sizes(&k.Excess, chem.Pl, inPl)
	var solved [3]solution
	for c := range solved {
		h, s, v := k.Excess.H.Array(), k.Excess.S.Array(), k.Excess.V.Array()
		e := equality{id: info.ID, component: components[c], energy: "J", ratio: lnMolecular[c], r: k.R, least: k.MinEntropy}
		for m := range mixing.ASFPairs {
			e.terms = append(e.terms, asymmetricTerm(c, m, afs, pl))
			f := k.Excess.Factor(c, m)
			e.h, e.s, e.v = append(e.h, float64(f*h[m])), append(e.s, float64(f*s[m])), append(e.v, float64(f*v[m]))
		}
		solved[c] = e.solution()
	}
	return ternary(info, k, solved)
}

// sizes are the fractions by size of one feldspar.
func sizes(a *mixing.ASF, phase chem.Phase, x [3]*method.Quantity) (phi [3]*method.Quantity) {
	sum := &method.Quantity{
		Name: "sum of alpha X in " + string(phase), Unit: "1", Needs: x[:],
		Fill: func(b *method.Block, q []float64, _ []method.Reason) {
			ab, or, an := b.Of(x[0]), b.Of(x[1]), b.Of(x[2])
			for i := range q {
				q[i] = float64(a.Alpha[0]*ab[i]) + float64(a.Alpha[1]*or[i]) + float64(a.Alpha[2]*an[i])
			}
		},
	}
	for c := range phi {
		phi[c] = &method.Quantity{
			Name: "phi of " + components[c] + " in " + string(phase), Unit: "1", Needs: []*method.Quantity{x[c], sum},
			Fill: func(b *method.Block, q []float64, _ []method.Reason) {
				x, sum := b.Of(x[c]), b.Of(sum)
				for i := range q {
					q[i] = float64(a.Alpha[c]*x[i]) / sum[i]
				}
			},
		}
	}
	return phi
}

func asymmetricTerm(c, m int, afs, pl [3]*method.Quantity) *method.Quantity {
	i, j := mixing.ASFPairs[m][0], mixing.ASFPairs[m][1]
	return &method.Quantity{
		Name:  "term of W_" + mixing.ASFNames[m] + " in RT ln gamma of " + components[c] + " by phi, Pl - Afs",
		Unit:  "1",
		Needs: []*method.Quantity{pl[i], pl[j], afs[i], afs[j]},
		Fill: func(b *method.Block, q []float64, _ []method.Reason) {
			pi, pj, ai, aj := b.Of(pl[i]), b.Of(pl[j]), b.Of(afs[i]), b.Of(afs[j])
			for n := range q {
				q[n] = mixing.ASFTerm(c, i, j, pi[n], pj[n]) - mixing.ASFTerm(c, i, j, ai[n], aj[n])
			}
		},
	}
}

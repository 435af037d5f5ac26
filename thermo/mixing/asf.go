package mixing

import "tieline/thermo/chem"

// ASF is an asymmetric (van Laar) ternary solution in the formalism of Holland
// TJB, Powell R (2003) Contrib Mineral Petrol 145:492-501: every component has a
// size, every two have one parameter.
type ASF struct {
	Alpha   [3]float64    // sizes of Ab, Or, An; only their ratios count
	H, S, V ASFParameters // J/mol, J/mol/K, J/mol/bar
}

// ASFParameters are the energies of the three binaries.
type ASFParameters struct{ AbOr, AbAn, OrAn float64 }

// ASFPairs says which components each parameter joins, and ASFNames what it is called.
var (
	ASFPairs = [3][2]int{{0, 1}, {0, 2}, {1, 2}}
	ASFNames = [3]string{"AbOr", "AbAn", "OrAn"}
)

// Array is the parameters in the order of ASFPairs.
func (w *ASFParameters) Array() [3]float64 { return [3]float64{w.AbOr, w.AbAn, w.OrAn} }

// Phi are the fractions by size, alpha_i X_i / sum alpha_k X_k.
func (a *ASF) Phi(x [3]float64) (phi [3]float64) {
	var sum float64
	for i, v := range x {
		phi[i] = float64(a.Alpha[i] * v)
		sum += phi[i]
	}
	for i := range phi {
		phi[i] /= sum
	}
	return phi
}

// Factor is what parameter m is scaled by in the energy of component c: 2 alpha_c/(alpha_i + alpha_j).
func (a *ASF) Factor(c, m int) float64 {
	p := ASFPairs[m]
	return float64(2*a.Alpha[c]) / (a.Alpha[p[0]] + a.Alpha[p[1]])
}

// ASFTerm is -q_i q_j, the term of the parameter of i and j in RT ln gamma_c but
// for Factor; q is 1 - phi for c itself and -phi for the others.
func ASFTerm(c, i, j int, phiI, phiJ float64) float64 {
	qi, qj := -phiI, -phiJ
	if i == c {
		qi = 1 - phiI
	}
	if j == c {
		qj = 1 - phiJ
	}
	return -float64(qi * qj)
}

// LnGamma is the logarithm of the activity coefficient of each component:
// RT ln gamma_c = -sum q_i q_j W_ij 2 alpha_c/(alpha_i + alpha_j).
func (a *ASF) LnGamma(x [3]float64, t chem.Kelvin, p chem.Bar) (ln [3]float64) {
	phi := a.Phi(x)
	h, s, v := a.H.Array(), a.S.Array(), a.V.Array()
	for c := range ln {
		var g float64
		for m, ij := range ASFPairs {
			w := h[m] - float64(float64(t)*s[m]) + float64(float64(p)*v[m])
			g += float64(float64(w*a.Factor(c, m)) * ASFTerm(c, ij[0], ij[1], phi[ij[0]], phi[ij[1]]))
		}
		ln[c] = g / float64(chem.GasConstant*float64(t))
	}
	return ln
}

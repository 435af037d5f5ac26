// Package mixing holds solution models: the excess energy of a ternary
// asymmetric Margules solution and ideal activities of feldspar. Order Ab, Or,
// An throughout; T in K, P in bar, energies in J/mol.
package mixing

import (
	"tieline/thermo/chem"
	"tieline/thermo/detmath"
)

// Margules are the seven parameters of a ternary asymmetric solution, of its
// enthalpy (J/mol), entropy (J/mol/K) or volume (J/mol/bar). AbOr multiplies
// X_Ab X_Or (X_Or + X_An/2): it rules dilute Ab in Or.
type Margules struct{ AbOr, OrAb, AbAn, AnAb, OrAn, AnOr, AbOrAn float64 }

// Terms are the factors of the seven parameters in an energy that is linear in
// them. One set serves enthalpy, entropy and volume.
type Terms [7]float64

// Names are the parameters' names in the order of Terms.
var Names = [7]string{"AbOr", "OrAb", "AbAn", "AnAb", "OrAn", "AnOr", "AbOrAn"}

// Pairs says which components each of the first six parameters joins: i, j, and
// k for the third.
var Pairs = [6][3]int{{0, 1, 2}, {1, 0, 2}, {0, 2, 1}, {2, 0, 1}, {1, 2, 0}, {2, 1, 0}}

// Array is the parameters in the order of Terms.
func (w *Margules) Array() [7]float64 {
	return [7]float64{w.AbOr, w.OrAb, w.AbAn, w.AnAb, w.OrAn, w.AnOr, w.AbOrAn}
}

// Times is the energy: the sum of parameters times factors.
func (w *Margules) Times(f *Terms) float64 {
	return float64(w.AbOr*f[0]) + float64(w.OrAb*f[1]) + float64(w.AbAn*f[2]) + float64(w.AnAb*f[3]) +
		float64(w.OrAn*f[4]) + float64(w.AnOr*f[5]) + float64(w.AbOrAn*f[6])
}

// Expanded is the ternary parameter of the same solution written as
// sum W_ij X_i X_j^2 + W' X1 X2 X3, half of every binary one more: W' = W_t + sum W_ij / 2.
func (w *Margules) Expanded() float64 {
	return w.AbOrAn + float64(0.5*(w.AbOr+w.OrAb+w.AbAn+w.AnAb+w.OrAn+w.AnOr))
}

// Factors are the terms of the excess energy of a composition: f_ij = X_i X_j
// (X_j + X_k/2) and X_Ab X_Or X_An.
func Factors(x [3]float64) (f Terms) {
	for m, p := range Pairs {
		f[m] = factor(x[p[0]], x[p[1]], x[p[2]])
	}
	f[6] = float64(float64(x[0]*x[1]) * x[2])
	return f
}

func factor(xi, xj, xk float64) float64 { return float64(float64(xi*xj) * (xj + float64(0.5*xk))) }

// Partial are the terms of RT ln gamma of component c: df/dX_c - 2 f, f being
// homogeneous of degree 3 and the fractions summing to 1.
func Partial(c int, x [3]float64) (f Terms) {
	for m, p := range Pairs {
		xi, xj, xk := x[p[0]], x[p[1]], x[p[2]]
		switch c {
		case p[0]:
			f[m] = PartialI(xi, xj, xk)
		case p[1]:
			f[m] = PartialJ(xi, xj, xk)
		default:
			f[m] = PartialK(xi, xj, xk)
		}
	}
	f[6] = PartialTernary(x[c], x[(c+1)%3], x[(c+2)%3])
	return f
}

// PartialI is the term of W_ij in RT ln gamma_i: X_j^2 + X_j X_k/2 - 2 f_ij.
func PartialI(xi, xj, xk float64) float64 {
	return float64(xj*(xj+float64(0.5*xk))) - float64(2*factor(xi, xj, xk))
}

// PartialJ is the term of W_ij in RT ln gamma_j: 2 X_i X_j + X_i X_k/2 - 2 f_ij.
func PartialJ(xi, xj, xk float64) float64 {
	return float64(xi*(float64(2*xj)+float64(0.5*xk))) - float64(2*factor(xi, xj, xk))
}

// PartialK is the term of W_ij in RT ln gamma_k: X_i X_j/2 - 2 f_ij.
func PartialK(xi, xj, xk float64) float64 {
	return float64(0.5*float64(xi*xj)) - float64(2*factor(xi, xj, xk))
}

// PartialTernary is the term of the ternary parameter in RT ln gamma_c, a and b
// being the other two: X_a X_b - 2 X_a X_b X_c.
func PartialTernary(xc, xa, xb float64) float64 {
	return float64(float64(xa*xb) * (1 - float64(2*xc)))
}

// Solution is a ternary Margules solution, G = H - T S + P V in each parameter.
type Solution struct{ H, S, V Margules }

// Excess is the excess Gibbs energy, J/mol.
func (s *Solution) Excess(x [3]float64, t chem.Kelvin, p chem.Bar) float64 {
	f := Factors(x)
	return s.energy(&f, t, p)
}

// LnGamma is the logarithm of the activity coefficient of each component.
func (s *Solution) LnGamma(x [3]float64, t chem.Kelvin, p chem.Bar) (ln [3]float64) {
	for c := range ln {
		f := Partial(c, x)
		ln[c] = s.energy(&f, t, p) / float64(chem.GasConstant*float64(t))
	}
	return ln
}

// energy is what the parameters of H, S and V give for the factors at T and P.
func (s *Solution) energy(f *Terms, t chem.Kelvin, p chem.Bar) float64 {
	return s.H.Times(f) - float64(float64(t)*s.S.Times(f)) + float64(float64(p)*s.V.Times(f))
}

// Activity is the activity of each component, ideal times gamma.
func (s *Solution) Activity(ideal Ideal, x [3]float64, t chem.Kelvin, p chem.Bar) [3]float64 {
	a, ln := ideal.Activity(x), s.LnGamma(x, t, p)
	for c := range a {
		a[c] = float64(a[c] * detmath.Exp(ln[c]))
	}
	return a
}

// Ideal is the model of ideal activities in feldspar.
type Ideal string

// The ideal models.
const (
	Molecular   Ideal = "molecular"    // a_i = X_i
	AlAvoidance Ideal = "Al avoidance" // Kerrick DM, Darken LS (1975) Geochim Cosmochim Acta 39:1431-1442
)

// Activity is the ideal activity of each component. With Al avoidance a_Ab =
// X_Ab (1 - X_An^2), a_Or = X_Or (1 - X_An^2), a_An = X_An (1 + X_An)^2/4.
func (m Ideal) Activity(x [3]float64) [3]float64 {
	if m == Molecular {
		return x
	}
	alkali := 1 - float64(x[2]*x[2])
	return [3]float64{float64(x[0] * alkali), float64(x[1] * alkali),
		float64(float64(x[2]*float64((1+x[2])*(1+x[2]))) / 4)}
}

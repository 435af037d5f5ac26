package mixing

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"tieline/thermo/chem"
)

// The models of the two-feldspar methods, written out again for the identities
// of the project's method reference, feldspar section 0.
var (
	fl88 = Solution{
		H: Margules{18810, 27320, 28226, 8471, 47396, 52468, 8700},
		S: Margules{AbOr: 10.3, OrAb: 10.3},
		V: Margules{.394, .394, 0, 0, 0, -.120, -1.094},
	}
	eg90 = Solution{
		H: Margules{18810, 27320, 7924, 0, 40317, 38974, 12545},
		S: Margules{AbOr: 10.3, OrAb: 10.3},
		V: Margules{.4602, .3264, 0, 0, 0, -.1037, -1.095},
	}
)

func near(t rapid.TB, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s: got %.12g, want %.12g (off by %.2g, allowed %.2g)", what, got, want, got-want, tol)
	}
}

// W' of the expanded form, as both models' papers can be read either way: FL88
// 100045.5 / 10.3 / -0.760, EG90 79217.5 / 10.3 / -0.75355.
func TestExpandedTernaryParameter(t *testing.T) {
	for _, c := range []struct {
		name    string
		s       *Solution
		h, e, v float64
	}{{"FL88", &fl88, 100045.5, 10.3, -0.760}, {"EG90", &eg90, 79217.5, 10.3, -0.75355}} {
		near(t, c.name+" W'_H", c.s.H.Expanded(), c.h, 1e-9)
		near(t, c.name+" W'_S", c.s.S.Expanded(), c.e, 1e-12)
		near(t, c.name+" W'_V", c.s.V.Expanded(), c.v, 1e-12)
	}
}

// Kerrick DM, Darken LS (1975) with X_An = 0 and 1: Al avoidance is then ideal mixing.
func TestIdealActivityOfEndMembers(t *testing.T) {
	for _, x := range [][3]float64{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}, {.3, .7, 0}} {
		if got := AlAvoidance.Activity(x); got != x {
			t.Errorf("Al avoidance gives %v for %v", got, x)
		}
		if got := Molecular.Activity(x); got != x {
			t.Errorf("molecular mixing gives %v for %v", got, x)
		}
	}
}

func drawSolution(t *rapid.T) Solution {
	w := func(name string, scale float64) Margules {
		v := rapid.SliceOfN(rapid.Float64Range(-scale, scale), 7, 7).Draw(t, name)
		return Margules{v[0], v[1], v[2], v[3], v[4], v[5], v[6]}
	}
	return Solution{w("H", 60000), w("S", 30), w("V", 1)}
}

func drawFractions(t *rapid.T) [3]float64 {
	a, b := rapid.Float64Range(0.001, 1).Draw(t, "a"), rapid.Float64Range(0.001, 1).Draw(t, "b")
	c := rapid.Float64Range(0.001, 1).Draw(t, "c")
	return [3]float64{a / (a + b + c), b / (a + b + c), c / (a + b + c)}
}

const (
	kelvin chem.Kelvin = 1100
	bar    chem.Bar    = 5000
)

func rt() float64 { return chem.GasConstant * float64(kelvin) }

// Euler's theorem: the partial excess energies, weighted by the fractions, sum
// to the whole.
func TestPartialsSumToTheWhole(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s, x := drawSolution(t), drawFractions(t)
		ln := s.LnGamma(x, kelvin, bar)
		sum := rt() * (x[0]*ln[0] + x[1]*ln[1] + x[2]*ln[2])
		near(t, "sum of X RT ln gamma, J/mol", sum, s.Excess(x, kelvin, bar), 1e-8)
	})
}

// RT ln gamma is the derivative of the energy of n moles by the moles of the component.
func TestPartialIsTheDerivative(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s, x := drawSolution(t), drawFractions(t)
		extensive := func(n [3]float64) float64 {
			total := n[0] + n[1] + n[2]
			return total * s.Excess([3]float64{n[0] / total, n[1] / total, n[2] / total}, kelvin, bar)
		}
		ln := s.LnGamma(x, kelvin, bar)
		const h = 1e-5
		for c := range x {
			up, down := x, x
			up[c] += h
			down[c] -= h
			near(t, "RT ln gamma, J/mol", rt()*ln[c], (extensive(up)-extensive(down))/(2*h), 1e-3)
		}
	})
}

// Gibbs-Duhem: along any direction the changes of RT ln gamma, weighted by the
// fractions, cancel.
func TestGibbsDuhem(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s, x := drawSolution(t), drawFractions(t)
		angle := rapid.Float64Range(0, 2*math.Pi).Draw(t, "direction")
		const h = 1e-5
		d := [3]float64{h * math.Cos(angle), h * math.Sin(angle), 0}
		d[2] = -d[0] - d[1]
		up := s.LnGamma([3]float64{x[0] + d[0], x[1] + d[1], x[2] + d[2]}, kelvin, bar)
		down := s.LnGamma([3]float64{x[0] - d[0], x[1] - d[1], x[2] - d[2]}, kelvin, bar)
		sum := 0.0
		for c := range x {
			sum += x[c] * rt() * (up[c] - down[c]) / (2 * h)
		}
		near(t, "sum of X d(RT ln gamma), J/mol per mole fraction", sum, 0, 1e-2)
	})
}

// The expanded form is the same energy.
func TestExpandedFormIsTheSameEnergy(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s, x := drawSolution(t), drawFractions(t)
		w := s.H
		want := w.AbOr*x[0]*x[1]*x[1] + w.OrAb*x[1]*x[0]*x[0] + w.AbAn*x[0]*x[2]*x[2] + w.AnAb*x[2]*x[0]*x[0] +
			w.OrAn*x[1]*x[2]*x[2] + w.AnOr*x[2]*x[1]*x[1] + w.Expanded()*x[0]*x[1]*x[2]
		f := Factors(x)
		near(t, "H of mixing, J/mol", w.Times(&f), want, 1e-8)
	})
}

// Swapping two components and their parameters swaps their activity coefficients.
func TestNoComponentIsSpecial(t *testing.T) {
	swap := func(w Margules) Margules {
		return Margules{AbOr: w.OrAb, OrAb: w.AbOr, AbAn: w.OrAn, OrAn: w.AbAn, AnAb: w.AnOr, AnOr: w.AnAb, AbOrAn: w.AbOrAn}
	}
	rapid.Check(t, func(t *rapid.T) {
		s, x := drawSolution(t), drawFractions(t)
		swapped := Solution{swap(s.H), swap(s.S), swap(s.V)}
		a := s.LnGamma(x, kelvin, bar)
		b := swapped.LnGamma([3]float64{x[1], x[0], x[2]}, kelvin, bar)
		for c, other := range [3]int{1, 0, 2} {
			near(t, "ln gamma", b[other], a[c], 1e-12)
		}
	})
}

func TestActivityIsIdealTimesGamma(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x := drawFractions(t)
		for _, ideal := range []Ideal{Molecular, AlAvoidance} {
			a, id, ln := fl88.Activity(ideal, x, kelvin, bar), ideal.Activity(x), fl88.LnGamma(x, kelvin, bar)
			for c := range a {
				near(t, "activity", a[c], id[c]*math.Exp(ln[c]), 1e-12*(1+a[c]))
			}
		}
	})
}

package feldspar

import (
	"tieline/thermo/detmath"
	"tieline/thermo/method"
)

// Haselton1983 is the two-feldspar thermometer of Haselton et al. (1983): their
// alkali-feldspar solvus against plagioclase with Al avoidance, each feldspar a
// binary: x = Ab/(Ab + Or) and o = 1 - x in alkali feldspar, y = Ab/(Ab + An)
// and n = 1 - y in plagioclase, P in bar, J:
//
//	T(K) = {o^2 (18810 + 17030 x + .364 P) - n^2 (28230 - 39520 y)} / {10.3 o^2 + 8.3143 ln[y^2 (2 - y)/x]}
//
// It fails above An50. How the paper takes ternary compositions is not known here.
var Haselton1983 = (&haselton{H: 18810, HX: 17030, V: .364, Pl: 28230, PlY: -39520, S: 10.3, R: 8.3143}).method(method.Info{
	ID: haseltonID,
	Equation: "T(K) = {o^2 (18810 + 17030 x + .364 P(bar)) - n^2 (28230 - 39520 y)} / {10.3 o^2 + 8.3143 ln[y^2 (2 - y)/x]}, " +
		"x = Ab/(Ab + Or) in Afs, o = 1 - x, y = Ab/(Ab + An) in Pl, n = 1 - y",
	Ref: "Haselton HT, Hovis GL, Hemingway BS, Robie RA (1983) Calorimetric investigation of the excess entropy of mixing in " +
		"analbite-sanidine solid solutions: lack of evidence for Na,K short-range order and implications for two-feldspar thermometry. " +
		"Am Mineral 68:398-413; binary fractions of ternary compositions are our reading",
	Shares:      []string{"two-feldspar/elkins-grove-1990", "two-feldspar/fuhrman-lindsley-1988"},
	DerivedFrom: []string{haseltonSolvusID},
	Standing:    method.Consistent,
	Sigma: method.Sigma{C: []float64{52},
		Origin: "misfit (rms) on the 17 runs of Elkins & Grove 1990 with plagioclase below An50, to which the method was not fitted"},
	Range: method.Range{
		Source: "binary feldspars below An50, from memory",
		Bounds: []method.Bound{
			{Name: "An/(Ab + An) in Pl", Unit: "mole fraction", Quantity: anInPlBinary, Min: 0, Max: 0.5, Composition: true},
		},
	},
})

const haseltonID = "two-feldspar/haselton-1983"

// The binaries of the two feldspars.
var (
	abInAfsBinary = parts(inAfs[0], inAfs[1], "Ab/(Ab + Or) in Afs")
	abInPlBinary  = parts(inPl[0], inPl[2], "Ab/(Ab + An) in Pl")
	anInPlBinary  = parts(inPl[2], inPl[0], "An/(Ab + An) in Pl")
)

// haselton holds the constants in the order of the equation.
type haselton struct{ H, HX, V, Pl, PlY, S, R float64 }

func (k *haselton) method(info method.Info) *method.Method {
	quantity := func(name, unit string, fill func(b *method.Block, q []float64, why []method.Reason)) *method.Quantity {
		return &method.Quantity{Name: name + " (" + info.ID + ")", Unit: unit, Needs: []*method.Quantity{abInAfsBinary, abInPlBinary}, Fill: fill}
	}
	h := quantity("o^2 (18810 + 17030 x) - n^2 (28230 - 39520 y)", "J/mol", func(b *method.Block, q []float64, _ []method.Reason) {
		x, y := b.Of(abInAfsBinary), b.Of(abInPlBinary)
		for i := range q {
			o, n := 1-x[i], 1-y[i]
			q[i] = float64(float64(o*o)*(k.H+float64(k.HX*x[i]))) - float64(float64(n*n)*(k.Pl+float64(k.PlY*y[i])))
		}
	})
	v := quantity(".364 o^2", "J/mol/bar", func(b *method.Block, q []float64, _ []method.Reason) {
		for i, x := range b.Of(abInAfsBinary)[:len(q)] {
			q[i] = float64(k.V * float64((1-x)*(1-x)))
		}
	})
	d := quantity("10.3 o^2 + R ln[y^2 (2 - y)/x]", "J/mol/K", func(b *method.Block, q []float64, why []method.Reason) {
		x, y := b.Of(abInAfsBinary), b.Of(abInPlBinary)
		for i := range q {
			o := 1 - x[i]
			a := float64(float64(y[i]*y[i])*(2-y[i])) / x[i]
			q[i] = float64(k.S*float64(o*o)) + float64(k.R*detmath.Log(a))
			if why[i] == method.OK && !(x[i] > 0 && y[i] > 0) {
				why[i] = method.NonPositiveLog
			}
		}
	})
	return closed(info, k, solution{h, v, d})
}

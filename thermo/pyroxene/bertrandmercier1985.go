package pyroxene

import (
	"tieline/thermo/chem"
	"tieline/thermo/detmath"
	"tieline/thermo/method"
)

// BertrandMercier1985 is the two-pyroxene thermometer of Bertrand & Mercier
// (1985), P in GPa, implicit in T:
//
//	T(K) = (36273 + 399 P) / [19.31 - 8.314 ln K - 12.15 Ca*_Cpx^2],  K = (1 - Ca*_Cpx)/(1 - Ca*_Opx)
//	Ca*_Cpx = Ca/(1 - Na) + (-0.77 + 1e-3 T) Fe/(Fe + Mg),  Ca*_Opx = Ca/(1 - Na)
//
// The iron term is remembered less well than the rest: in Fe-rich crustal pairs
// it reads some 70 degC low.
var BertrandMercier1985 = func() *method.Method {
	k := &bertrandMercier{H: 36273, V: 399, S: 19.31, R: 8.314, Ca2: -12.15, Fe: -0.77, FeT: 1e-3, Min: 500, Max: 2500}
	return &method.Method{
		Info: method.Info{
			ID: "two-pyroxene/bertrand-mercier-1985",
			Equation: "T(K) = (36273 + 399 P(GPa)) / [19.31 - 8.314 ln K - 12.15 Ca*_Cpx^2], K = (1 - Ca*_Cpx)/(1 - Ca*_Opx)\n" +
				"Ca*_Cpx = Ca/(1 - Na) + (-0.77 + 1e-3 T) Fe/(Fe + Mg), Ca*_Opx = Ca/(1 - Na); solved for T between 500 and 2500 K",
			Ref: "Bertrand P, Mercier J-CC (1985) The mutual solubility of coexisting ortho- and clinopyroxene: toward an absolute " +
				"geothermometer for the natural system? Earth Planet Sci Lett 76:109-122",
			Phases:     []chem.Phase{chem.Cpx, chem.Opx},
			Components: []string{""},
			Closes:     "Ca solvus",
			Needs:      []*method.Quantity{caStarInCpx, lnOneLessCaStarInOpx, xFeInCpx},
			Basis:      SixOxygens,
			Standing:   method.Recalled,
			Sigma: method.Sigma{C: []float64{23},
				Origin: "misfit (rms) on the 30 iron-free brackets of Carlson & Lindsley 1988 within the range, the brackets' own width included; no quoted value is remembered"},
			Range: method.Range{
				Source:  "no range is remembered; 900-1400 degC and 15-60 kbar is where it was checked, and only for little iron",
				Setting: mantle,
				Bounds: []method.Bound{
					{Name: "T", Unit: "degC", Min: 900, Max: 1400},
					{Name: "P", Unit: "kbar", Min: 15, Max: 60},
					{Name: xFeInCpx.Name, Unit: "1", Quantity: xFeInCpx, Min: 0, Max: 0.15, Composition: true},
				},
			},
		},
		Const: k,
		Eval: func(b *method.Block, lanes []method.Lane) {
			lane := &lanes[0]
			ca, ln, x := b.Of(caStarInCpx), b.Of(lnOneLessCaStarInOpx), b.Of(xFeInCpx)
			for i := range ca {
				if lane.Why[i] == method.OK {
					lane.T[i], lane.Why[i] = k.solve(ca[i], ln[i], x[i], b.P[i].Kbar())
				}
			}
		},
	}
}()

// lnOneLessCaStarInOpx is ln(1 - Ca*_Opx).
var lnOneLessCaStarInOpx = &method.Quantity{
	Name: "ln(1 - Ca*) in Opx", Unit: "1", Needs: []*method.Quantity{caStarInOpx},
	Fill: func(b *method.Block, q []float64, _ []method.Reason) {
		for i, ca := range b.Of(caStarInOpx)[:len(q)] {
			q[i] = detmath.Log(1 - ca)
		}
	},
}

// bertrandMercier holds the constants in the order of the equation, and the span
// in K the solution is sought in.
type bertrandMercier struct{ H, V, S, R, Ca2, Fe, FeT, Min, Max float64 }

// solve finds T D(T) = H by Newton's steps kept inside a bracket. D grows with T
// wherever Ca*_Cpx < 1, so there is one solution at most; steps that end at a
// bound have found none.
func (k *bertrandMercier) solve(ca, lnOpx, x float64, p chem.Kbar) (chem.Kelvin, method.Reason) {
	const close = 1e-9 // K
	h := k.H + float64(k.V*float64(p)/10)
	lo, hi := k.Min, k.Max
	t := lo + float64(0.5*(hi-lo))
	for range 100 {
		f, slope, ok := k.misfit(t, h, ca, lnOpx, x)
		if ok && f < 0 {
			lo = t
		} else {
			hi = t
		}
		next := t - f/slope
		if !ok || !(next >= lo && next <= hi) {
			next = lo + float64(0.5*(hi-lo))
		}
		if d := next - t; d < close && d > -close {
			t = next
			break
		}
		t = next
	}
	if t-k.Min < 2*close || k.Max-t < 2*close {
		return 0, method.NoRoot
	}
	return chem.Kelvin(t), method.OK
}

// misfit is T D(T) - H and its slope; not ok where Ca*_Cpx is 1 or more.
func (k *bertrandMercier) misfit(t, h, ca, lnOpx, x float64) (f, slope float64, ok bool) {
	c := ca + float64(x*(k.Fe+float64(k.FeT*t)))
	if !(c < 1) {
		return 0, 0, false
	}
	d := k.S - float64(k.R*(detmath.Log(1-c)-lnOpx)) + float64(k.Ca2*float64(c*c))
	dd := float64(float64(x*k.FeT) * (k.R/(1-c) + float64(2*k.Ca2*c)))
	return float64(t*d) - h, d + float64(t*dd), true
}

package pyroxene

import (
	"tieline/thermo/chem"
	"tieline/thermo/detmath"
	"tieline/thermo/method"
)

const nimisTaylorID = "clinopyroxene/nimis-taylor-2000"

// NimisTaylor2000 is the enstatite-in-clinopyroxene thermometer of Nimis & Taylor
// (2000), P in kbar, cations on 6 O:
//
//	T(K) = (23166 + 39.28 P) / [13.25 + 15.35 Ti + 4.50 Fe - 1.55 (Al + Cr - Na - K) + (ln a)^2]
//	a = (1 - Ca - Na - K)(1 - (Al + Cr + Na + K)/2)
//
// The clinopyroxene must have grown beside orthopyroxene and garnet.
var NimisTaylor2000 = func() *method.Method {
	k := &nimisTaylor{H: 23166, V: 39.28, S: 13.25, Ti: 15.35, Fe: 4.50, Ts: -1.55}
	d := k.divisor()
	return &method.Method{
		Info: method.Info{
			ID: nimisTaylorID,
			Equation: "T(K) = (23166 + 39.28 P(kbar)) / [13.25 + 15.35 Ti + 4.50 Fe - 1.55 (Al + Cr - Na - K) + (ln a)^2]\n" +
				"a = (1 - Ca - Na - K)(1 - (Al + Cr + Na + K)/2)",
			Ref: "Nimis P, Taylor WR (2000) Single clinopyroxene thermobarometry for garnet peridotites. Part I. Calibration and testing " +
				"of a Cr-in-Cpx barometer and an enstatite-in-Cpx thermometer. Contrib Mineral Petrol 139:541-554",
			Phases:      []chem.Phase{chem.Cpx},
			Components:  []string{""},
			Shares:      []string{"two-pyroxene/taylor-1998"},
			Closes:      "Ca solvus",
			Assemblage:  "Opx and Grt must coexist",
			NeedsBeside: chem.Grt,
			Needs:       []*method.Quantity{d},
			Basis:       SixOxygens,
			Standing:    method.Consistent,
			Sigma:       method.Sigma{C: []float64{30}, Origin: "quoted in the abstract"},
			Range: method.Range{
				Source:  "experiments in CaO-MgO-SiO2, CaO-MgO-Al2O3-SiO2-Cr2O3 and lherzolite, from the abstract",
				Setting: mantle,
				Bounds: []method.Bound{
					{Name: "T", Unit: "degC", Min: 850, Max: 1500},
					{Name: "P", Unit: "kbar", Min: 0, Max: 60},
				},
			},
		},
		Const: k,
		Eval: func(b *method.Block, lanes []method.Lane) {
			d := b.Of(d)
			for i := range d {
				write(&lanes[0], i, chem.Kelvin((k.H+float64(k.V*float64(b.P[i].Kbar())))/d[i]))
			}
		},
	}
}()

// nimisTaylor holds the constants in the order of the equation.
type nimisTaylor struct{ H, V, S, Ti, Fe, Ts float64 }

func (k *nimisTaylor) divisor() *method.Quantity {
	return &method.Quantity{
		Name: "divisor (Nimis & Taylor 2000)", Unit: "1",
		Needs: []*method.Quantity{caInCpx, naInCpx, kInCpx, alInCpx, crIfInCpx, tiInCpx, feInCpx},
		Fill: func(b *method.Block, q []float64, why []method.Reason) {
			ca, na, ka, al := b.Of(caInCpx), b.Of(naInCpx), b.Of(kInCpx), b.Of(alInCpx)
			cr, ti, fe := b.Of(crIfInCpx), b.Of(tiInCpx), b.Of(feInCpx)
			for i := range q {
				m2 := 1 - ca[i] - na[i] - ka[i]
				m1 := 1 - float64(0.5*(al[i]+cr[i]+na[i]+ka[i]))
				ln := detmath.Log(float64(m2 * m1))
				q[i] = k.S + float64(k.Ti*ti[i]) + float64(k.Fe*fe[i]) + float64(k.Ts*(al[i]+cr[i]-na[i]-ka[i])) + float64(ln*ln)
				if why[i] == method.OK && !(m2 > 0 && m1 > 0) {
					why[i] = method.SiteFull
				}
			}
		},
	}
}

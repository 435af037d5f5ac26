package pyroxene

import (
	"tieline/thermo/chem"
	"tieline/thermo/detmath"
	"tieline/thermo/method"
)

// Taylor1998 is the two-pyroxene thermometer of Taylor (1998), P in GPa, cations
// of clinopyroxene on 6 O:
//
//	T(K) = (24787 + 678 P) / [15.67 + 14.37 Ti + 3.69 Fe - 3.25 (Al + Cr - Na) + (ln Kd)^2]
//	Kd = a_Cpx/a_Opx,  a = (1 - Ca - Na)(1 - (Al + Cr + Na)/2)
//
// Kd is no ratio of Ca*. In iron-free systems at 15-20 kbar it reads 25-125 degC low.
var Taylor1998 = func() *method.Method {
	k := &taylor{H: 24787, V: 678, S: 15.67, Ti: 14.37, Fe: 3.69, Ts: -3.25}
	d := k.divisor()
	return &method.Method{
		Info: method.Info{
			ID: "two-pyroxene/taylor-1998",
			Equation: "T(K) = (24787 + 678 P(GPa)) / [15.67 + 14.37 Ti + 3.69 Fe - 3.25 (Al + Cr - Na) + (ln Kd)^2], cations of Cpx\n" +
				"Kd = a_Cpx/a_Opx, a = (1 - Ca - Na)(1 - (Al + Cr + Na)/2)",
			Ref: "Taylor WR (1998) An experimental test of some geothermometer and geobarometer formulations for upper mantle peridotites " +
				"with application to the thermobarometry of fertile lherzolite and garnet websterite. N Jb Miner Abh 172:381-408",
			Phases:     []chem.Phase{chem.Cpx, chem.Opx},
			Components: []string{""},
			Shares:     []string{nimisTaylorID},
			Closes:     "Ca solvus",
			Needs:      []*method.Quantity{d},
			Basis:      SixOxygens,
			Standing:   method.Confirmed,
			Sigma:      method.Sigma{C: []float64{31}, Origin: "quoted, from memory"},
			Range: method.Range{
				Source:  "fertile, Fe3+-poor experiments, from the abstract",
				Setting: mantle,
				Bounds: []method.Bound{
					{Name: "T", Unit: "degC", Min: 1050, Max: 1260},
					{Name: "P", Unit: "kbar", Min: 10, Max: 35},
				},
			},
		},
		Const: k,
		Eval: func(b *method.Block, lanes []method.Lane) {
			d := b.Of(d)
			for i := range d {
				write(&lanes[0], i, chem.Kelvin((k.H+float64(k.V*float64(b.P[i].Kbar())/10))/d[i]))
			}
		},
	}
}()

// taylor holds the constants in the order of the equation.
type taylor struct{ H, V, S, Ti, Fe, Ts float64 }

func (k *taylor) divisor() *method.Quantity {
	return &method.Quantity{
		Name: "divisor (Taylor 1998)", Unit: "1", Needs: []*method.Quantity{lnTaylorRatio, tiInCpx, feInCpx, alInCpx, crIfInCpx, naInCpx},
		Fill: func(b *method.Block, q []float64, _ []method.Reason) {
			ln, ti, fe := b.Of(lnTaylorRatio), b.Of(tiInCpx), b.Of(feInCpx)
			al, cr, na := b.Of(alInCpx), b.Of(crIfInCpx), b.Of(naInCpx)
			for i := range q {
				q[i] = k.S + float64(k.Ti*ti[i]) + float64(k.Fe*fe[i]) + float64(k.Ts*(al[i]+cr[i]-na[i])) + float64(ln[i]*ln[i])
			}
		},
	}
}

// The activity of enstatite without its iron, a = (1 - Ca - Na)(1 - (Al + Cr + Na)/2).
var (
	enInCpx = enstatite(chem.Cpx, caInCpx, naInCpx, alInCpx, crIfInCpx)
	enInOpx = enstatite(chem.Opx, caInOpx, naInOpx, alInOpx, crIfInOpx)
)

func enstatite(phase chem.Phase, ca, na, al, cr *method.Quantity) *method.Quantity {
	return &method.Quantity{
		Name: "(1 - Ca - Na)(1 - (Al + Cr + Na)/2) in " + string(phase), Unit: "1", Needs: []*method.Quantity{ca, na, al, cr},
		Fill: func(b *method.Block, q []float64, why []method.Reason) {
			ca, na, al, cr := b.Of(ca), b.Of(na), b.Of(al), b.Of(cr)
			for i := range q {
				m2, m1 := 1-ca[i]-na[i], 1-float64(0.5*(al[i]+cr[i]+na[i]))
				q[i] = float64(m2 * m1)
				if why[i] == method.OK && !(m2 > 0 && m1 > 0) {
					why[i] = method.SiteFull
				}
			}
		},
	}
}

var lnTaylorRatio = &method.Quantity{
	Name: "ln Kd (Taylor 1998)", Unit: "1", Needs: []*method.Quantity{enInCpx, enInOpx},
	Fill: func(b *method.Block, q []float64, _ []method.Reason) {
		cpx, opx := b.Of(enInCpx), b.Of(enInOpx)
		for i := range q {
			q[i] = detmath.Log(cpx[i] / opx[i])
		}
	},
}

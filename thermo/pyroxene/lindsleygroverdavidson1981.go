package pyroxene

import (
	"tieline/thermo/chem"
	"tieline/thermo/detmath"
	"tieline/thermo/method"
)

// LindsleyGroverDavidson1981 is the solution model of Lindsley, Grover & Davidson
// (1981) for iron-free pyroxenes, J and bar, X = Ca on M2, one-site mixing:
//
//	T_En(K) = (3561 + .0355 P + RTln g_En,Cpx - 25000 X_Opx^2) / (1.91 - R ln[(1 - X_Cpx)/(1 - X_Opx)])
//	T_Di(K) = (-21178 - .0908 P + RTln g_Di,Cpx - 25000 (1 - X_Opx)^2) / (-8.16 - R ln[X_Cpx/X_Opx])
//	RTln g_En = X^2 [W_En + 2 (1 - X)(W_Di - W_En)],  RTln g_Di = (1 - X)^2 [W_Di + 2X (W_En - W_Di)]
//	W_En = 25484 + .0812 P,  W_Di = 31216 - .0061 P
//
// T_En is the one to use, T_Di a check on equilibrium. At 60 kbar it is 100 degC off.
var LindsleyGroverDavidson1981 = func() *method.Method {
	k := &lgd{
		En: reaction{3561, 1.91, .0355}, Di: reaction{-21178, -8.16, -.0908},
		WEn: [2]float64{25484, .0812}, WDi: [2]float64{31216, -.0061}, WOpx: 25000, R: chem.GasConstant,
	}
	return &method.Method{
		Info: method.Info{
			ID: "two-pyroxene/lindsley-grover-davidson-1981",
			Equation: "T_En(K) = (3561 + .0355 P(bar) + RTln g_En,Cpx - 25000 X_Opx^2) / (1.91 - R ln[(1 - X_Cpx)/(1 - X_Opx)]), X = Ca\n" +
				"T_Di(K) = (-21178 - .0908 P + RTln g_Di,Cpx - 25000 (1 - X_Opx)^2) / (-8.16 - R ln[X_Cpx/X_Opx])\n" +
				"RTln g_En = X^2 [W_En + 2 (1 - X)(W_Di - W_En)], RTln g_Di = (1 - X)^2 [W_Di + 2X (W_En - W_Di)]\n" +
				"W_En = 25484 + .0812 P, W_Di = 31216 - .0061 P; T_En is the temperature, T_Di a check",
			Ref: "Lindsley DH, Grover JE, Davidson PM (1981) The thermodynamics of the Mg2Si2O6-CaMgSi2O6 join: a review and an improved " +
				"model. Adv Phys Geochem 1:149-175",
			Phases:     []chem.Phase{chem.Cpx, chem.Opx},
			Components: []string{"En", "Di"},
			Closes:     "Ca solvus",
			Assemblage: "pyroxenes without Fe, Na and Al",
			// Fe, Na and Al are needed to know that there is none.
			Needs:    []*method.Quantity{caInCpx, caInOpx, feInCpx, feInOpx, naInCpx, naInOpx, alInCpx, alInOpx},
			Uses:     []*method.Quantity{lnEn, lnDi},
			Basis:    SixOxygens,
			Standing: method.Consistent,
			Sigma: method.Sigma{C: []float64{26, 58},
				Origin: "misfit (rms) on the 28 iron-free brackets of Carlson & Lindsley 1988 within the range, the brackets' own width included; part of them were there to be fitted"},
			Range: method.Range{
				Source: "experiments in CaO-MgO-SiO2, from memory; the limit on other cations is common practice, no source",
				Bounds: []method.Bound{
					{Name: "T", Unit: "degC", Min: 850, Max: 1400},
					{Name: "P", Unit: "kbar", Min: 0, Max: 30},
					absent("Fe in Cpx", feInCpx), absent("Fe in Opx", feInOpx), absent("Na in Cpx", naInCpx), absent("Na in Opx", naInOpx),
					absent("Al in Cpx", alInCpx), absent("Al in Opx", alInOpx),
				},
			},
		},
		Const: k,
		Eval:  k.eval,
	}
}()

func absent(name string, q *method.Quantity) method.Bound {
	return method.Bound{Name: name, Unit: q.Unit, Quantity: q, Min: 0, Max: 0.01, Composition: true}
}

// lgd holds the constants of the model; reaction is opx -> cpx of one end member,
// W of clinopyroxene are at 0 bar and their change per bar.
type (
	lgd struct {
		En, Di   reaction
		WEn, WDi [2]float64
		WOpx, R  float64
	}
	reaction struct{ H, S, V float64 }
)

// ln[(1 - X_Cpx)/(1 - X_Opx)] and ln[X_Cpx/X_Opx], X = Ca.
var (
	lnEn = lnCa("ln[(1 - Ca_Cpx)/(1 - Ca_Opx)]", method.M2Full, func(x float64) float64 { return 1 - x })
	lnDi = lnCa("ln(Ca_Cpx/Ca_Opx)", method.NonPositiveLog, func(x float64) float64 { return x })
)

func lnCa(name string, none method.Reason, of func(x float64) float64) *method.Quantity {
	return &method.Quantity{
		Name: name, Unit: "1", Needs: []*method.Quantity{caInCpx, caInOpx},
		Fill: func(b *method.Block, q []float64, why []method.Reason) {
			cpx, opx := b.Of(caInCpx), b.Of(caInOpx)
			for i := range q {
				x, y := of(cpx[i]), of(opx[i])
				q[i] = detmath.Log(x / y)
				if why[i] == method.OK && !(x > 0 && y > 0) {
					why[i] = none
				}
			}
		},
	}
}

func (k *lgd) eval(b *method.Block, lanes []method.Lane) {
	cpx, opx := b.Of(caInCpx), b.Of(caInOpx)
	en, di := b.Of(lnEn), b.Of(lnDi)
	method.Join(lanes[0].Why[:b.N], b.Why(lnEn))
	method.Join(lanes[1].Why[:b.N], b.Why(lnDi))
	for i, bar := range b.P {
		p, x, o := float64(bar), cpx[i], opx[i]
		wEn, wDi := k.WEn[0]+float64(k.WEn[1]*p), k.WDi[0]+float64(k.WDi[1]*p)
		gEn := float64(float64(x*x) * (wEn + float64(float64(2*(1-x))*(wDi-wEn))))
		gDi := float64(float64((1-x)*(1-x)) * (wDi + float64(float64(2*x)*(wEn-wDi))))
		write(&lanes[0], i, k.En.at(p, gEn-float64(k.WOpx*float64(o*o)), float64(k.R*en[i])))
		write(&lanes[1], i, k.Di.at(p, gDi-float64(k.WOpx*float64((1-o)*(1-o))), float64(k.R*di[i])))
	}
}

// at is the temperature of a reaction with excess energy g and R ln of the ratio.
func (r *reaction) at(p, g, ln float64) chem.Kelvin {
	return chem.Kelvin((r.H + float64(r.V*p) + g) / (r.S - ln))
}

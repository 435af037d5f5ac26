package pyroxene

import (
	"tieline/thermo/detmath"
	"tieline/thermo/method"
)

const putirka37ID = "two-pyroxene/putirka-2008-37"

// Putirka2008Eq37 is equation 37 of Putirka (2008), P in kbar, components as in
// putirka2008.go:
//
//	1e4/T(degC) = 13.4 - 3.40 ln(EnFs_Cpx/Fm2_Opx) + 5.59 ln Mg_Cpx - 8.8 Mg#_Cpx + 23.85 Mn_Opx
//	              + 6.48 FmAl2_Opx - 2.38 Di_Cpx - 0.044 P
var Putirka2008Eq37 = func() *method.Method {
	k := &eq37{S: 13.4, Ln: -3.40, LnMg: 5.59, MgNo: -8.8, Mn: 23.85, FmAl2: 6.48, Di: -2.38, P: -0.044}
	return reciprocal(method.Info{
		ID: putirka37ID,
		Equation: "eq. 37: 1e4/T(degC) = 13.4 - 3.40 ln(EnFs_Cpx/Fm2_Opx) + 5.59 ln Mg_Cpx - 8.8 Mg#_Cpx + 23.85 Mn_Opx " +
			"+ 6.48 FmAl2_Opx - 2.38 Di_Cpx - 0.044 P(kbar)",
		Ref:    putirka + "eq. 37",
		Shares: []string{putirka36ID},
		Sigma:  method.Sigma{C: []float64{60}, Origin: "quoted, from memory; 38 where Mg# of Cpx is above 0.75"},
	}, k, k.sum(), k.P)
}()

// eq37 holds the constants in the order of the equation.
type eq37 struct{ S, Ln, LnMg, MgNo, Mn, FmAl2, Di, P float64 }

func (k *eq37) sum() *method.Quantity {
	return &method.Quantity{
		Name: "1e4/T at P = 0 (Putirka 2008, eq. 37)", Unit: "1/degC",
		Needs: []*method.Quantity{lnEnFs, mgInCpx, xFeInCpx, mnInOpx, fmAl2, diHd, mgShareInCpx},
		Fill: func(b *method.Block, q []float64, why []method.Reason) {
			ln, mg, xFe, mn := b.Of(lnEnFs), b.Of(mgInCpx), b.Of(xFeInCpx), b.Of(mnInOpx)
			al, diHd, share := b.Of(fmAl2), b.Of(diHd), b.Of(mgShareInCpx)
			for i := range q {
				q[i] = k.S + float64(k.Ln*ln[i]) + float64(k.LnMg*detmath.Log(mg[i])) + float64(k.MgNo*(1-xFe[i])) +
					float64(k.Mn*mn[i]) + float64(k.FmAl2*al[i]) + float64(float64(k.Di*diHd[i])*share[i])
				if why[i] == method.OK && !(mg[i] > 0) {
					why[i] = method.NonPositiveLog
				}
			}
		},
	}
}

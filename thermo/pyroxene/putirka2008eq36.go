package pyroxene

import "tieline/thermo/method"

const putirka36ID = "two-pyroxene/putirka-2008-36"

// Putirka2008Eq36 is equation 36 of Putirka (2008), P in kbar, components as in
// putirka2008.go:
//
//	1e4/T(degC) = 11.2 - 1.96 ln(EnFs_Cpx/Fm2_Opx) - 3.3 Ca_Cpx - 25.8 CrCaTs_Cpx + 33.2 Mn_Opx
//	              - 23.6 Na_Opx - 2.08 En_Opx - 8.33 Di_Opx - 0.05 P
var Putirka2008Eq36 = func() *method.Method {
	k := &eq36{S: 11.2, Ln: -1.96, Ca: -3.3, CrCaTs: -25.8, Mn: 33.2, Na: -23.6, En: -2.08, Di: -8.33, P: -0.05}
	return reciprocal(method.Info{
		ID: putirka36ID,
		Equation: "eq. 36: 1e4/T(degC) = 11.2 - 1.96 ln(EnFs_Cpx/Fm2_Opx) - 3.3 Ca_Cpx - 25.8 CrCaTs_Cpx + 33.2 Mn_Opx - 23.6 Na_Opx " +
			"- 2.08 En_Opx - 8.33 Di_Opx - 0.05 P(kbar)",
		Ref:    putirka + "eq. 36",
		Shares: []string{putirka37ID},
		Sigma:  method.Sigma{C: []float64{56}, Origin: "standard error of estimate, quoted, from memory"},
	}, k, k.sum(), k.P)
}()

// eq36 holds the constants in the order of the equation.
type eq36 struct{ S, Ln, Ca, CrCaTs, Mn, Na, En, Di, P float64 }

func (k *eq36) sum() *method.Quantity {
	return &method.Quantity{
		Name: "1e4/T at P = 0 (Putirka 2008, eq. 36)", Unit: "1/degC",
		Needs: []*method.Quantity{lnEnFs, caInCpx, crIfInCpx, mnInOpx, naInOpx, fm2, caInOpx, mgShareInOpx},
		Fill: func(b *method.Block, q []float64, _ []method.Reason) {
			ln, ca, cr, mn, na := b.Of(lnEnFs), b.Of(caInCpx), b.Of(crIfInCpx), b.Of(mnInOpx), b.Of(naInOpx)
			fm2, caO, mg := b.Of(fm2), b.Of(caInOpx), b.Of(mgShareInOpx)
			for i := range q {
				q[i] = k.S + float64(k.Ln*ln[i]) + float64(k.Ca*ca[i]) + float64(float64(0.5*k.CrCaTs)*cr[i]) +
					float64(k.Mn*mn[i]) + float64(k.Na*na[i]) + float64(float64(k.En*fm2[i])*mg[i]) + float64(float64(k.Di*caO[i])*mg[i])
			}
		},
	}
}

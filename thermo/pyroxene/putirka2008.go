package pyroxene

import (
	"tieline/thermo/chem"
	"tieline/thermo/detmath"
	"tieline/thermo/method"
)

// The components of Putirka KD (2008) Rev Mineral Geochem 69:61-120 on 6 O, all
// iron as Fe2+. In clinopyroxene: Jd = min(Na, Al(VI)), CaTs = Al(VI) - Jd, CaTi =
// (Al(IV) - CaTs)/2 where positive, CrCaTs = Cr/2, DiHd = Ca - CaTs - CaTi -
// CrCaTs, EnFs = (Fe + Mg - DiHd)/2, Di = DiHd Mg/(Mg + Mn + Fe). In
// orthopyroxene: NaAl = min(Na, Al(VI)), FmAl2 = Al(VI) - NaAl - Cr where
// positive, Fm2 = (Fe + Mn + Mg - Ti - FmAl2 - Ca)/2, En = Fm2 Mg/(Mg + Mn + Fe),
// Di = Ca Mg/(Mg + Mn + Fe).
var (
	alVIInCpx = allFe2.cpx.alVI
	alVIInOpx = allFe2.opx.alVI

	diHd = &method.Quantity{
		Name: "DiHd in Cpx", Unit: "apfu", Needs: []*method.Quantity{caInCpx, naInCpx, alInCpx, alVIInCpx, crIfInCpx},
		Fill: func(b *method.Block, q []float64, _ []method.Reason) {
			ca, na, al, vi, cr := b.Of(caInCpx), b.Of(naInCpx), b.Of(alInCpx), b.Of(alVIInCpx), b.Of(crIfInCpx)
			for i := range q {
				caTs := vi[i] - min(na[i], vi[i])
				caTi := max(float64(0.5*(al[i]-vi[i]-caTs)), 0)
				q[i] = ca[i] - caTs - caTi - float64(0.5*cr[i])
			}
		},
	}
	enFs = &method.Quantity{
		Name: "EnFs in Cpx", Unit: "apfu", Needs: []*method.Quantity{feInCpx, mgInCpx, diHd},
		Fill: func(b *method.Block, q []float64, _ []method.Reason) {
			fe, mg, diHd := b.Of(feInCpx), b.Of(mgInCpx), b.Of(diHd)
			for i := range q {
				q[i] = float64(0.5 * (fe[i] + mg[i] - diHd[i]))
			}
		},
	}
	fmAl2 = &method.Quantity{
		Name: "FmAl2 in Opx", Unit: "apfu", Needs: []*method.Quantity{naInOpx, alVIInOpx, crIfInOpx},
		Fill: func(b *method.Block, q []float64, _ []method.Reason) {
			na, vi, cr := b.Of(naInOpx), b.Of(alVIInOpx), b.Of(crIfInOpx)
			for i := range q {
				q[i] = max(vi[i]-min(na[i], vi[i])-cr[i], 0)
			}
		},
	}
	fm2 = &method.Quantity{
		Name: "Fm2 in Opx", Unit: "apfu", Needs: []*method.Quantity{feInOpx, mnInOpx, mgInOpx, tiInOpx, fmAl2, caInOpx},
		Fill: func(b *method.Block, q []float64, _ []method.Reason) {
			fe, mn, mg := b.Of(feInOpx), b.Of(mnInOpx), b.Of(mgInOpx)
			ti, al, ca := b.Of(tiInOpx), b.Of(fmAl2), b.Of(caInOpx)
			for i := range q {
				q[i] = float64(0.5 * (fe[i] + mn[i] + mg[i] - ti[i] - al[i] - ca[i]))
			}
		},
	}
	mgShareInCpx = mgShare(chem.Cpx, mgInCpx, mnIfInCpx, feInCpx)
	mgShareInOpx = mgShare(chem.Opx, mgInOpx, mnInOpx, feInOpx)

	lnEnFs = &method.Quantity{
		Name: "ln(EnFs_Cpx/Fm2_Opx)", Unit: "1", Needs: []*method.Quantity{enFs, fm2},
		Fill: func(b *method.Block, q []float64, why []method.Reason) {
			cpx, opx := b.Of(enFs), b.Of(fm2)
			for i := range q {
				q[i] = detmath.Log(cpx[i] / opx[i])
				if why[i] == method.OK && !(cpx[i] > 0 && opx[i] > 0) {
					why[i] = method.NoEnFs
				}
			}
		},
	}
)

// mgShare is Mg/(Mg + Mn + Fe).
func mgShare(phase chem.Phase, mg, mn, fe *method.Quantity) *method.Quantity {
	return &method.Quantity{
		Name: "Mg/(Mg + Mn + Fe) in " + string(phase), Unit: "1", Needs: []*method.Quantity{mg, mn, fe},
		Fill: func(b *method.Block, q []float64, why []method.Reason) {
			mg, mn, fe := b.Of(mg), b.Of(mn), b.Of(fe)
			for i := range q {
				sum := mg[i] + mn[i] + fe[i]
				q[i] = mg[i] / sum
				if why[i] == method.OK && !(sum > 0) {
					why[i] = method.NotFinite
				}
			}
		},
	}
}

const putirka = "Putirka KD (2008) Thermometers and barometers for volcanic systems. Rev Mineral Geochem 69:61-120, "

// putirkaRange is of mostly volcanic experiments; at 30 kbar and more both
// equations read far too high.
func putirkaRange() method.Range {
	return method.Range{
		Source: "mostly volcanic experiments to a few tens of kbar, from memory; KD of experimental igneous pairs",
		Bounds: []method.Bound{
			{Name: "P", Unit: "kbar", Min: 0, Max: 30},
			{Name: "KD Fe-Mg", Unit: "1", Quantity: KDFeMg, Min: 1.09 - 0.14, Max: 1.09 + 0.14, Composition: true},
		},
	}
}

// reciprocal makes a method of 1e4/T(degC) = x + v P(kbar), x being a quantity.
func reciprocal(info method.Info, k any, x *method.Quantity, v float64) *method.Method {
	info.Phases = []chem.Phase{chem.Cpx, chem.Opx}
	info.Components = []string{""}
	info.Closes = "Ca solvus"
	info.Basis = SixOxygens
	info.Range = putirkaRange()
	info.Standing = method.Consistent
	info.Needs = []*method.Quantity{x}
	info.Uses = []*method.Quantity{KDFeMg}
	return &method.Method{Info: info, Const: k, Eval: func(b *method.Block, lanes []method.Lane) {
		lane, x := &lanes[0], b.Of(x)
		for i := range x {
			r := x[i] + float64(v*float64(b.P[i].Kbar()))
			if lane.Why[i] == method.OK && !(r > 0) {
				lane.Why[i] = method.NegativeT
			}
			write(lane, i, chem.Celsius(1e4/r).Kelvin())
		}
	}}
}

package pyroxene

import (
	"slices"

	"tieline/thermo/chem"
	"tieline/thermo/method"
)

// BreyKoehler1990 is the two-pyroxene thermometer of Brey & Koehler (1990), BKN:
//
//	T(K) = [23664 + (24.9 + 126.3 X_Fe,Cpx) P] / [13.38 + (ln K*)^2 + 11.59 X_Fe,Opx]
//
// with P in kbar, K* = (1 - Ca*_Cpx)/(1 - Ca*_Opx), Ca* = Ca/(1 - Na). It reads
// high where Cpx holds much Na, by up to 150 degC at 0.25 apfu (Nimis & Gruetter 2010).
var BreyKoehler1990 = func() *method.Method {
	k := &bkn{H: 23664, V: 24.9, VFe: 126.3, S: 13.38, SFe: 11.59}
	return &method.Method{
		Info: method.Info{
			ID: "two-pyroxene/brey-koehler-1990",
			Equation: "T(K) = [23664 + (24.9 + 126.3 X_Fe,Cpx) P(kbar)] / [13.38 + (ln K*)^2 + 11.59 X_Fe,Opx], " +
				"K* = (1 - Ca*_Cpx)/(1 - Ca*_Opx), Ca* = Ca/(1 - Na)",
			Ref:        breyKoehler,
			Phases:     []chem.Phase{chem.Cpx, chem.Opx},
			Components: []string{""},
			Shares:     []string{caInOpxID, nimisGruetterID, naID},
			Closes:     "Ca solvus",
			Needs:      []*method.Quantity{lnKStar, xFeInCpx, xFeInOpx},
			Basis:      SixOxygens,
			Range:      bknRange,
			Sigma:      method.Sigma{C: []float64{15}, Origin: "quoted, from memory"},
			Standing:   method.Confirmed,
		},
		Const: k,
		Eval:  k.eval,
	}
}()

const breyKoehler = "Brey GP, Koehler T (1990) Geothermobarometry in four-phase lherzolites II. New thermobarometers, " +
	"and practical assessment of existing thermobarometers. J Petrol 31:1353-1378"

// breyKoehlerRange is of the experiments both thermometers were fitted to.
var breyKoehlerRange = method.Range{
	Source:  "four-phase lherzolite experiments, from memory",
	Setting: mantle,
	Bounds: []method.Bound{
		{Name: "T", Unit: "degC", Min: 900, Max: 1400},
		{Name: "P", Unit: "kbar", Min: 10, Max: 60},
		caOfOpx,
	},
}

// bknRange adds that BKN reads high where clinopyroxene holds much sodium, by 150
// degC at Na .25 (Nimis & Gruetter 2010).
var bknRange = func() method.Range {
	r := breyKoehlerRange
	r.Bounds = append(slices.Clone(r.Bounds), method.Bound{Name: "Na in Cpx", Unit: "apfu on 6 O", Quantity: naInCpx, Min: 0, Max: 0.1, Composition: true})
	return r
}()

// caOfOpx keeps out what is no orthopyroxene: the equations give a clinopyroxene
// under that label a temperature too. Experiments reach 0.11 at 1500 degC
// (Carlson & Lindsley 1988); the limit is common practice, no source.
var caOfOpx = method.Bound{Name: "Ca in Opx", Unit: "apfu on 6 O", Quantity: caInOpx, Min: 0, Max: 0.15, Composition: true}

// bkn holds the constants in the order of the equation.
type bkn struct{ H, V, VFe, S, SFe float64 }

func (k *bkn) eval(b *method.Block, lanes []method.Lane) {
	ln, cpx, opx := b.Of(lnKStar), b.Of(xFeInCpx), b.Of(xFeInOpx)
	for i := range ln {
		p := float64(b.P[i].Kbar())
		v := k.V + float64(k.VFe*cpx[i])
		t := (k.H + float64(v*p)) / (k.S + float64(ln[i]*ln[i]) + float64(k.SFe*opx[i]))
		write(&lanes[0], i, chem.Kelvin(t))
	}
}

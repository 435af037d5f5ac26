package pyroxene

import (
	"tieline/thermo/chem"
	"tieline/thermo/method"
)

const nimisGruetterID = "orthopyroxene/nimis-gruetter-2010"

// NimisGruetter2010 is the Ca-in-orthopyroxene thermometer as corrected by Nimis
// & Gruetter (2010), with t the temperature of BreyKoehler1990Ca in degC:
//
//	T(degC) = -628.7 + 2.0690 t - 4.530e-4 t^2
//
// It agrees with t at 1114 and 1246 degC and lowers colder ones, 773 to 700.
var NimisGruetter2010 = func() *method.Method {
	k := &nimisGruetter{Ca: caInOpxConst, A: -628.7, B: 2.0690, C: -4.530e-4}
	return &method.Method{
		Info: method.Info{
			ID: nimisGruetterID,
			Equation: "T(degC) = -628.7 + 2.0690 t - 4.530e-4 t^2, " +
				"t(degC) = (6425 + 26.4 P(kbar)) / (1.843 - ln Ca_Opx) - 273.15",
			Ref: "Nimis P, Gruetter H (2010) Internally consistent geothermometers for garnet peridotites and pyroxenites. " +
				"Contrib Mineral Petrol 159:411-427",
			Phases:      []chem.Phase{chem.Opx},
			Components:  []string{""},
			Shares:      []string{"two-pyroxene/brey-koehler-1990"},
			DerivedFrom: []string{caInOpxID},
			Closes:      "Ca solvus",
			Assemblage:  besideCpx,
			NeedsBeside: chem.Cpx,
			Needs:       []*method.Quantity{lnCaInOpx},
			Basis:       SixOxygens,
			Range: method.Range{
				Source:  "from memory",
				Setting: mantle,
				Bounds: []method.Bound{
					{Name: "T", Unit: "degC", Min: 700, Max: 1400},
					{Name: "P", Unit: "kbar", Min: 10, Max: 60},
					caOfOpx,
				},
			},
			Sigma: method.Sigma{C: []float64{47},
				Origin: "misfit (rms) on the 32 iron-free brackets of Carlson & Lindsley 1988 within the range, " +
					"the brackets' own width included; no quoted value is remembered"},
			Standing: method.Confirmed,
		},
		Const: k,
		Eval: func(b *method.Block, lanes []method.Lane) {
			ln := b.Of(lnCaInOpx)
			for i := range ln {
				write(&lanes[0], i, k.at(ln[i], b.P[i].Kbar()))
			}
		},
	}
}()

// nimisGruetter holds the constants in the order of the equation.
type nimisGruetter struct {
	Ca      caInOpxTerms
	A, B, C float64
}

func (k *nimisGruetter) at(lnCa float64, p chem.Kbar) chem.Kelvin {
	t := float64(k.Ca.at(lnCa, p).Celsius())
	return chem.Celsius(k.A + float64(k.B*t) + float64(k.C*float64(t*t))).Kelvin()
}

package pyroxene

import (
	"tieline/thermo/chem"
	"tieline/thermo/method"
)

const caInOpxID = "orthopyroxene/brey-koehler-1990-ca"

// BreyKoehler1990Ca is the Ca-in-orthopyroxene thermometer of Brey & Koehler (1990):
//
//	T(K) = (6425 + 26.4 P) / (1.843 - ln Ca_Opx)
//
// with P in kbar. Cpx must coexist, else the temperature is a minimum. It reads
// high below 1000 degC, by 90 degC on average at 700 (Nimis & Gruetter 2010).
var BreyKoehler1990Ca = func() *method.Method {
	k := &caInOpxConst
	return &method.Method{
		Info: method.Info{
			ID:          caInOpxID,
			Equation:    "T(K) = (6425 + 26.4 P(kbar)) / (1.843 - ln Ca_Opx)",
			Ref:         breyKoehler,
			Phases:      []chem.Phase{chem.Opx},
			Components:  []string{""},
			Shares:      []string{"two-pyroxene/brey-koehler-1990", naID},
			Closes:      "Ca solvus",
			Assemblage:  besideCpx,
			NeedsBeside: chem.Cpx,
			Needs:       []*method.Quantity{lnCaInOpx},
			Basis:       SixOxygens,
			Range:       breyKoehlerRange,
			Sigma:       method.Sigma{C: []float64{19}, Origin: "quoted, from memory"},
			Standing:    method.Confirmed,
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

const besideCpx = "Cpx must coexist; without it the temperature is a minimum"

// caInOpxTerms holds the constants in the order of the equation.
type caInOpxTerms struct{ H, V, S float64 }

var caInOpxConst = caInOpxTerms{H: 6425, V: 26.4, S: 1.843}

func (k *caInOpxTerms) at(lnCa float64, p chem.Kbar) chem.Kelvin {
	return chem.Kelvin((k.H + float64(k.V*float64(p))) / (k.S - lnCa))
}

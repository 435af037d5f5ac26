package pyroxene

import (
	"tieline/thermo/chem"
	"tieline/thermo/method"
)

// WittEickschenSeck1991 is the Al-Cr-in-orthopyroxene thermometer of
// Witt-Eickschen & Seck (1991), cations on 6 O:
//
//	T(degC) = 636.54 + 2088.21 X_Al(M1) + 14527.32 X_Cr(M1),  X_Al(M1) = (Al - Cr - 2Ti + Na)/2,  X_Cr(M1) = Cr
//
// For spinel peridotite only; it was set up on two-pyroxene temperatures of
// xenoliths and shares their bias. No term for P.
var WittEickschenSeck1991 = func() *method.Method {
	k := &wittEickschenSeck{C: 636.54, Al: 2088.21, Cr: 14527.32}
	return &method.Method{
		Info: method.Info{
			ID:         "orthopyroxene/witt-eickschen-seck-1991",
			Equation:   "T(degC) = 636.54 + 2088.21 X_Al(M1) + 14527.32 X_Cr(M1), X_Al(M1) = (Al - Cr - 2Ti + Na)/2, X_Cr(M1) = Cr",
			Phases:     []chem.Phase{chem.Opx},
			Components: []string{""},
			Ref: "Witt-Eickschen G, Seck HA (1991) Solubility of Ca and Al in orthopyroxene from spinel peridotite: an improved version " +
				"of an empirical geothermometer. Contrib Mineral Petrol 106:431-439",
			Closes:      "Al-Cr in Opx",
			Assemblage:  "Spl must coexist, in peridotite; without it the temperature is a minimum",
			NeedsBeside: "Spl",
			Needs:       []*method.Quantity{alInOpx, crInOpx, tiInOpx, naInOpx},
			Basis:       SixOxygens,
			Standing:    method.Recalled,
			Sigma:       method.Sigma{C: []float64{20}, Origin: "quoted, from memory, and not remembered well"},
			Range: method.Range{
				Source:  "from memory",
				Setting: "spinel peridotite",
				Bounds:  []method.Bound{{Name: "T", Unit: "degC", Min: 800, Max: 1150}},
			},
		},
		Const: k,
		Eval: func(b *method.Block, lanes []method.Lane) {
			al, cr, ti, na := b.Of(alInOpx), b.Of(crInOpx), b.Of(tiInOpx), b.Of(naInOpx)
			for i := range al {
				m1 := float64(0.5 * (al[i] - cr[i] - float64(2*ti[i]) + na[i]))
				write(&lanes[0], i, chem.Celsius(k.C+float64(k.Al*m1)+float64(k.Cr*cr[i])).Kelvin())
			}
		},
	}
}()

// wittEickschenSeck holds the constants in the order of the equation.
type wittEickschenSeck struct{ C, Al, Cr float64 }

package pyroxene

import (
	"tieline/thermo/chem"
	"tieline/thermo/method"
)

// WoodBanno1973 is the two-pyroxene thermometer of Wood & Banno (1973), with the
// ideal two-site activity a of Mg2Si2O6 and X = Fe2+/(Fe2+ + Mg) of Opx:
//
//	T(K) = -10202 / [ln(a_Cpx/a_Opx) - 7.65 X + 3.88 X^2 - 4.6]
//
// In iron-free systems it reads 170 degC high, for no reason that was found.
// WoodBanno1973AllFe2 takes all iron as Fe2+.
var WoodBanno1973, WoodBanno1973AllFe2 = woodBannoOn(balanced), woodBannoOn(allFe2)

func woodBannoOn(f *ferrous) *method.Method {
	k := &woodBanno{H: -10202, X: -7.65, X2: 3.88, S: -4.6}
	return &method.Method{
		Info: method.Info{
			ID:       "two-pyroxene/wood-banno-1973",
			Variant:  f.variant,
			Equation: "T(K) = -10202 / [ln(a_Cpx/a_Opx) - 7.65 X + 3.88 X^2 - 4.6], " + twoSiteActivity,
			Ref: "Wood BJ, Banno S (1973) Garnet-orthopyroxene and orthopyroxene-clinopyroxene relationships in simple and complex " +
				"systems. Contrib Mineral Petrol 42:109-124",
			Phases:     []chem.Phase{chem.Cpx, chem.Opx},
			Components: []string{""},
			Shares:     []string{wellsID},
			Closes:     "Ca solvus",
			Needs:      []*method.Quantity{f.lnA, f.opx.xFe},
			Basis:      f.basis,
			Standing:   method.Recalled,
			Sigma:      method.Sigma{C: []float64{60}, Origin: "the abstract: almost all multicomponent data within 60 degC; it reads 173 degC high in CaO-MgO-SiO2"},
			Range: method.Range{
				Source: "from memory; below X_Fe 0.17 it reads ever higher, by 173 degC in iron-free pairs",
				Bounds: []method.Bound{
					{Name: "T", Unit: "degC", Min: 1000, Max: 1500},
					{Name: "X_Fe in Opx", Unit: "1", Quantity: f.opx.xFe, Min: 0.17, Max: 1, Composition: true},
				},
			},
		},
		Const: k,
		Eval: func(b *method.Block, lanes []method.Lane) {
			ln, x := b.Of(f.lnA), b.Of(f.opx.xFe)
			for i := range ln {
				write(&lanes[0], i, chem.Kelvin(k.H/(ln[i]+float64(k.X*x[i])+float64(k.X2*float64(x[i]*x[i]))+k.S)))
			}
		},
	}
}

const twoSiteActivity = "X = Fe2+/(Fe2+ + Mg) in Opx\n" +
	"a = X_Mg(M1) X_Mg(M2): Ca, Na, K, Mn on M2, Al(VI), Cr, Ti, Fe3+ on M1, Mg and Fe2+ fill both in the same ratio"

// woodBanno holds the constants in the order of the equation.
type woodBanno struct{ H, X, X2, S float64 }

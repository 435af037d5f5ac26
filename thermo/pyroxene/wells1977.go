package pyroxene

import (
	"tieline/thermo/chem"
	"tieline/thermo/method"
)

const wellsID = "two-pyroxene/wells-1977"

// Wells1977 is the two-pyroxene thermometer of Wells (1977), with the ideal
// two-site activity a of Mg2Si2O6 and X = Fe2+/(Fe2+ + Mg) of Opx:
//
//	T(K) = 7341 / [3.355 + 2.44 X - ln(a_Cpx/a_Opx)]
//
// In iron-free systems it reads 60 degC high at 900 degC and right at 1100-1400;
// at high pressure it reads low. Wells1977AllFe2 takes all iron as Fe2+.
var Wells1977, Wells1977AllFe2 = wellsOn(balanced), wellsOn(allFe2)

func wellsOn(f *ferrous) *method.Method {
	k := &wells{H: 7341, S: 3.355, X: 2.44}
	return &method.Method{
		Info: method.Info{
			ID:         wellsID,
			Variant:    f.variant,
			Equation:   "T(K) = 7341 / [3.355 + 2.44 X - ln(a_Cpx/a_Opx)], " + twoSiteActivity,
			Ref:        "Wells PRA (1977) Pyroxene thermometry in simple and complex systems. Contrib Mineral Petrol 62:129-139",
			Phases:     []chem.Phase{chem.Cpx, chem.Opx},
			Components: []string{""},
			Shares:     []string{"two-pyroxene/wood-banno-1973"},
			Closes:     "Ca solvus",
			Needs:      []*method.Quantity{f.lnA, f.opx.xFe},
			Basis:      f.basis,
			Standing:   method.Consistent,
			Sigma:      method.Sigma{C: []float64{70}, Origin: "quoted, from memory"},
			Range: method.Range{
				Source: "multicomponent experiments with up to about 10 wt% Al2O3, from memory",
				Bounds: []method.Bound{{Name: "T", Unit: "degC", Min: 785, Max: 1500}},
			},
		},
		Const: k,
		Eval: func(b *method.Block, lanes []method.Lane) {
			ln, x := b.Of(f.lnA), b.Of(f.opx.xFe)
			for i := range ln {
				write(&lanes[0], i, chem.Kelvin(k.H/(k.S+float64(k.X*x[i])-ln[i])))
			}
		},
	}
}

// wells holds the constants in the order of the equation.
type wells struct{ H, S, X float64 }

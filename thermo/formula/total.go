package formula

import (
	"tieline/thermo/chem"
	"tieline/thermo/method"
)

// TotalOn is Total with iron split between FeO and Fe2O3 as the formula f has
// it, so that a total of FeO is not held against limits meant for both oxides.
// It is Total where f holds no iron or there is no formula.
func TotalOn(c *chem.Composition, f *Formula) (wt float64, ok bool) {
	wt, ok = Total(c)
	iron := f.Apfu[chem.Fe2] + f.Apfu[chem.Fe3]
	if !ok || f.Why != method.OK || iron <= 0 {
		return wt, ok
	}
	given, _ := ironWeight(c)
	feO, fe2O3 := ironOxides(c)
	all := feO + float64(chem.FeOPerFe2O3*fe2O3)
	ferric := f.Apfu[chem.Fe3] / iron
	return wt - given + float64(all*(1-ferric)) + float64(all*ferric)/chem.FeOPerFe2O3, true
}

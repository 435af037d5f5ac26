// Package thermo lists the methods. Everything below it is pure: no file, no
// log, no clock.
package thermo

import (
	"tieline/thermo/feldspar"
	"tieline/thermo/method"
	"tieline/thermo/pyroxene"
)

// Methods are all methods, in the order in which they are listed and evaluated. A
// twin on another basis has its method's id and stands right after it.
func Methods() []*method.Method {
	return []*method.Method{
		feldspar.ElkinsGrove1990,
		feldspar.FuhrmanLindsley1988,
		feldspar.Benisek2004,
		feldspar.HollandPowell2003,
		feldspar.Haselton1983,
		feldspar.Stormer1975,
		feldspar.PowellPowell1977,
		feldspar.WhitneyStormer1977,
		feldspar.Putirka2008,
		feldspar.ThompsonWaldbaum1969,
		feldspar.CoherentThompsonWaldbaum1969,
		feldspar.HaseltonSolvus1983,
		feldspar.ThompsonHovis1979,
		feldspar.Hovis1991,
		feldspar.BachinskiMueller1971,
		feldspar.Heuser2024,
		pyroxene.BreyKoehler1990,
		pyroxene.BreyKoehler1990Na,
		pyroxene.Taylor1998,
		pyroxene.Wells1977,
		pyroxene.Wells1977AllFe2,
		pyroxene.WoodBanno1973,
		pyroxene.WoodBanno1973AllFe2,
		pyroxene.Kretz1982FeMg,
		pyroxene.Kretz1982FeMgAllFe2,
		pyroxene.BertrandMercier1985,
		pyroxene.Putirka2008Eq36,
		pyroxene.Putirka2008Eq37,
		pyroxene.LindsleyGroverDavidson1981,
		pyroxene.BreyKoehler1990Ca,
		pyroxene.NimisGruetter2010,
		pyroxene.WittEickschenSeck1991,
		pyroxene.Kretz1982Ca,
		pyroxene.Kretz1982CaAllFe2,
		pyroxene.NimisTaylor2000,
	}
}

// ByID is the method of an id on its own basis, nil for none.
func ByID(id string) *method.Method {
	for _, m := range Methods() {
		if m.ID == id {
			return m
		}
	}
	return nil
}

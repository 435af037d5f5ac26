package chem

import (
	"math"
	"testing"
)

// Molar masses by python3-periodictable 1.6.0-1 (Debian), which carries earlier
// IUPAC weights to more digits. The abridged ones differ from these by less
// than 0.003 g/mol, but for zinc, which IUPAC moved from 65.409 to 65.38 in 2007.
func TestMolarMasses(t *testing.T) {
	for o, want := range [NumOxides]float64{
		SiO2: 60.0843, TiO2: 79.8658, Al2O3: 101.961276, Cr2O3: 151.9904, V2O3: 149.8812, Fe2O3: 159.6882, FeO: 71.8444,
		MnO: 70.937449, NiO: 74.6928, ZnO: 81.4084 - 65.409 + 65.38, MgO: 40.3044, CaO: 56.0774, SrO: 103.6194, BaO: 153.3264,
		Na2O: 61.97894, K2O: 94.196, P2O5: 141.944522, CO2: 44.0095, H2O: 18.01528, F: 18.998403, Cl: 35.453,
	} {
		tol := 0.003
		if Oxide(o) == Cl { // 35.45 is all the digits the abridged weight has
			tol = 0.005
		}
		if d := Oxides[o].Mass - want; math.Abs(d) > tol {
			t.Errorf("%v weighs %.4f g/mol, periodictable %.4f: off by %.4f", Oxide(o), Oxides[o].Mass, want, d)
		}
	}
}

// Factors every laboratory knows: FeO = 0.8998 Fe2O3, O = 0.4211 F, O = 0.2257 Cl.
func TestFactors(t *testing.T) {
	for what, x := range map[string][2]float64{
		"FeO per Fe2O3": {FeOPerFe2O3, 0.8998}, "O per F": {OxygenPerF, 0.4211}, "O per Cl": {OxygenPerCl, 0.2257},
	} {
		if math.Abs(x[0]-x[1]) > 0.5e-4 {
			t.Errorf("%s is %.5f, want %.4f", what, x[0], x[1])
		}
	}
}

func TestUnits(t *testing.T) {
	if got := Celsius(700).Kelvin(); got != 973.15 {
		t.Errorf("700 degC is %v K", got)
	}
	if got := Kelvin(973.15).Celsius(); math.Abs(float64(got)-700) > 1e-12 {
		t.Errorf("973.15 K is %v degC", got)
	}
	if got := Kbar(2.5).Bar(); got != 2500 {
		t.Errorf("2.5 kbar is %v bar", got)
	}
	if got := Bar(2500).Kbar(); got != 2.5 {
		t.Errorf("2500 bar is %v kbar", got)
	}
}

// Every measurand has one name and the kind of its neighbours, and leads back
// to its oxide or cation.
func TestMeasurands(t *testing.T) {
	seen := map[string]Measurand{}
	kinds := map[Kind]int{}
	for m := range NumMeasurands {
		if other, twice := seen[m.String()]; twice {
			t.Errorf("measurands %d and %d are both called %q", other, m, m)
		}
		seen[m.String()] = m
		kinds[m.Kind()]++
	}
	want := map[Kind]int{OxideWt: int(NumOxides) + 2, Apfu: int(NumCations) + 1, EndMember: 4}
	for k, n := range want {
		if kinds[k] != n {
			t.Errorf("%d measurands of kind %v, want %d", kinds[k], k, n)
		}
	}
	for name, m := range map[string]Measurand{"SiO2": MeasurandOf(SiO2), "Cl": MeasurandOf(Cl), "FeO total": FeOT, "Fe2O3 total": Fe2O3T,
		"Si apfu": MeasurandOfCation(Si), "P apfu": MeasurandOfCation(P), "Fe apfu": FeT, "Ab": XAb, "Cn": XCn} {
		if m.String() != name {
			t.Errorf("measurand %d is called %q, want %q", m, m, name)
		}
	}
}

// Each cation's oxide holds that cation.
func TestCationsAndOxidesAgree(t *testing.T) {
	for c := range NumCations {
		if o := Cations[c].Oxide; Oxides[o].Cation != c || Oxides[o].Cations == 0 {
			t.Errorf("%v is made of %v, which holds %v", c, o, Oxides[o].Cation)
		}
	}
}

func TestPhaseRoles(t *testing.T) {
	for p, role := range phases {
		if role != "" && role.Role() != role {
			t.Errorf("%s plays %s, which plays %q", p, role, role.Role())
		}
	}
	for _, role := range []Phase{Afs, Pl, Opx, Cpx} {
		if role.Role() != role {
			t.Errorf("%s plays %q", role, role.Role())
		}
	}
	for _, p := range []Phase{"K-spar", "", NaFsp, KFsp} {
		if p.Known() {
			t.Errorf("%q is no IMA symbol and is known", p)
		}
	}
}

// Missing, not analysed and below detection amount to nothing, and only the
// last was looked for.
func TestStates(t *testing.T) {
	for state, want := range map[State]struct {
		amount     float64
		determined bool
	}{Missing: {0, false}, Measured: {1.5, true}, NotAnalysed: {0, false}, BelowDetection: {0, true}} {
		c := Composition{}
		c.Value[FeOT], c.State[FeOT] = 1.5, state
		if got := c.Amount(FeOT); got != want.amount {
			t.Errorf("1.5 wt%% that is %v amounts to %v", state, got)
		}
		if got := c.Determined(FeOT); got != want.determined {
			t.Errorf("%v is determined: %v", state, got)
		}
	}
}

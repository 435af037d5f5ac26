package formula

import (
	"encoding/csv"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"tieline/thermo/chem"
	"tieline/thermo/method"
)

// failer is a test of either kind.
type failer interface {
	Helper()
	Errorf(format string, args ...any)
}

func near(t failer, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s: got %.9g, want %.9g (off by %.2g, allowed %g)", what, got, want, got-want, tol)
	}
}

// set measures m as v.
func set(c *chem.Composition, m chem.Measurand, v float64) {
	c.Value[m], c.State[m] = v, chem.Measured
}

func oxides(wt map[chem.Oxide]float64) *chem.Composition {
	c := &chem.Composition{}
	for o, v := range wt {
		set(c, chem.MeasurandOf(o), v)
	}
	return c
}

func apfu(oxygens float64, n map[chem.Cation]float64) *chem.Composition {
	c := &chem.Composition{Kind: chem.Apfu, Oxygens: oxygens}
	for cation, v := range n {
		set(c, chem.MeasurandOfCation(cation), v)
	}
	return c
}

var (
	sixAsGiven  = method.Basis{Oxygens: 6, Cations: 4, Ferric: method.AsGiven}
	sixAllFe2   = method.Basis{Oxygens: 6, Cations: 4, Ferric: method.AllFe2}
	sixAllFe3   = method.Basis{Oxygens: 6, Cations: 4, Ferric: method.AllFe3}
	sixBalanced = method.Basis{Oxygens: 6, Cations: 4, Ferric: method.Balanced}
)

// Reference minerals: every cation and the sum, to the third decimal printed.
func TestReferenceMinerals(t *testing.T) {
	file, err := os.Open("../../testdata/reference-minerals.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	r := csv.NewReader(file)
	r.Comment = '#'
	rows, err := r.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	if len(rows) != 10 {
		t.Fatalf("reference-minerals.csv holds %d minerals, want 9", len(rows)-1)
	}
	for _, row := range rows[1:] {
		number := func(i int) float64 {
			v, err := strconv.ParseFloat(row[i], 64)
			if err != nil {
				t.Fatalf("%s, %s: %v", row[0], rows[0][i], err)
			}
			return v
		}
		c := &chem.Composition{}
		want := map[string]float64{}
		for i, name := range rows[0][2:] {
			oxide, isOxide := oxideNamed(name)
			switch cell := row[i+2]; {
			case !isOxide && cell != "":
				want[name] = number(i + 2)
			case cell == "" || !isOxide:
			case strings.HasPrefix(cell, "<"):
				c.State[oxide] = chem.BelowDetection
				c.Value[oxide], _ = strconv.ParseFloat(cell[1:], 64)
			default:
				set(c, chem.MeasurandOf(oxide), number(i+2))
			}
		}
		f := Of(c, method.Basis{Oxygens: number(1), Ferric: method.AsGiven})
		for cation := range chem.NumCations {
			near(t, row[0]+" "+cation.String(), f.Apfu[cation], want[cation.String()], 0.001)
		}
		near(t, row[0]+" sum", f.Sum, want["sum"], 0.001)
	}
}

func oxideNamed(name string) (chem.Oxide, bool) {
	for o := range chem.NumOxides {
		if o.String() == name {
			return o, true
		}
	}
	return 0, false
}

// Exact end members of Droop GTR (1987) Mineral Mag 51:431-435, each from all
// its iron as FeO.
func TestDroopEndMembers(t *testing.T) {
	for _, x := range []struct {
		name     string
		basis    method.Basis
		cations  map[chem.Cation]float64
		fe2, fe3 float64
	}{
		{"magnetite", method.Basis{Oxygens: 4, Cations: 3, Ferric: method.Balanced}, map[chem.Cation]float64{chem.Fe2: 3}, 1, 2},
		{"hematite", method.Basis{Oxygens: 3, Cations: 2, Ferric: method.Balanced}, map[chem.Cation]float64{chem.Fe2: 2}, 0, 2},
		{"andradite", method.Basis{Oxygens: 12, Cations: 8, Ferric: method.Balanced}, map[chem.Cation]float64{chem.Ca: 3, chem.Fe2: 2, chem.Si: 3}, 0, 2},
		{"aegirine", sixBalanced, map[chem.Cation]float64{chem.Na: 1, chem.Fe2: 1, chem.Si: 2}, 0, 1},
	} {
		c := &chem.Composition{}
		for cation, n := range x.cations {
			o := chem.Cations[cation].Oxide
			set(c, chem.MeasurandOf(o), n*chem.Oxides[o].Mass/chem.Oxides[o].Cations)
		}
		f := Of(c, x.basis)
		near(t, x.name+" Fe3", f.Apfu[chem.Fe3], x.fe3, 1e-12)
		near(t, x.name+" Fe2", f.Apfu[chem.Fe2], x.fe2, 1e-12)
		near(t, x.name+" sum", f.Sum, x.basis.Cations, 1e-12)
		near(t, x.name+" oxygens", f.Oxygens, x.basis.Oxygens, 1e-12)
		near(t, x.name+" by apfu, Fe3", Of(apfu(0, allFe2(f)), x.basis).Apfu[chem.Fe3], x.fe3, 1e-12)
	}
}

// allFe2 gives the cations of f on its own oxygens had all iron been Fe2+, as a
// source that reports total iron would.
func allFe2(f Formula) map[chem.Cation]float64 {
	ratio := f.Oxygens / (f.Oxygens - f.Apfu[chem.Fe3]/2)
	n := map[chem.Cation]float64{}
	for cation, v := range f.Apfu {
		n[chem.Cation(cation)] = v * ratio
	}
	n[chem.Fe2], n[chem.Fe3] = n[chem.Fe2]+n[chem.Fe3], 0
	return n
}

func TestDroopStaysWithinTheIron(t *testing.T) {
	for _, x := range []struct{ fe, oxygens, ideal, sum, want float64 }{
		{1, 6, 4, 3.99, 0},    // sum below ideal: none
		{0.1, 6, 4, 4.2, 0.1}, // 0.571 asked of 0.1
		{1, 6, 4, 4.2, 12 * (1 - 4/4.2)},
	} {
		near(t, "Droop", Droop(x.fe, x.oxygens, x.ideal, x.sum), x.want, 1e-15)
	}
}

// Where the sum is below ideal, there is no Fe3+ and cations are not renormalised.
func TestNoFerricBelowIdealSum(t *testing.T) {
	c := oxides(map[chem.Oxide]float64{chem.SiO2: 58, chem.Al2O3: 3, chem.FeO: 6, chem.MgO: 33, chem.CaO: 0.5})
	if got, want := Of(c, sixBalanced), Of(c, sixAllFe2); got != want {
		t.Errorf("sum %.4f: balanced formula %v differs from the all-Fe2+ one %v", want.Sum, got, want)
	}
}

// One atom of iron is one atom, however the source lists it.
func TestIronConventions(t *testing.T) {
	base := map[chem.Oxide]float64{chem.SiO2: 50.73, chem.Al2O3: 8.73, chem.MgO: 16.65, chem.CaO: 15.82}
	const feO, fe2O3 = 5.37, 1.08
	total := feO + chem.FeOPerFe2O3*fe2O3
	with := func(feO, fe2O3, feOT, fe2O3T float64) *chem.Composition {
		c := oxides(base)
		for m, v := range map[chem.Measurand]float64{chem.MeasurandOf(chem.FeO): feO, chem.MeasurandOf(chem.Fe2O3): fe2O3, chem.FeOT: feOT, chem.Fe2O3T: fe2O3T} {
			if v > 0 {
				set(c, m, v)
			}
		}
		return c
	}
	both := with(feO, fe2O3, 0, 0)
	same := func(what string, c *chem.Composition, basis method.Basis, want Formula, tol float64) {
		t.Helper()
		got := Of(c, basis)
		for cation := range chem.NumCations {
			near(t, what+" ("+basis.String()+") "+cation.String(), got.Apfu[cation], want.Apfu[cation], tol)
		}
		near(t, what+" oxygens", got.Oxygens, 6, 1e-12)
	}
	rounded := math.Round(total*100) / 100
	same("both and a total", with(feO, fe2O3, rounded, 0), sixAsGiven, Of(both, sixAsGiven), 0)
	same("both and a total", with(feO, fe2O3, rounded, 0), sixAllFe2, Of(both, sixAllFe2), 0)
	same("both and a total as Fe2O3", with(feO, fe2O3, 0, total/chem.FeOPerFe2O3), sixAsGiven, Of(both, sixAsGiven), 0)
	same("total as FeO", with(0, 0, total, 0), sixAllFe2, Of(both, sixAllFe2), 1e-12)
	same("total as FeO counts as FeO", with(0, 0, total, 0), sixAsGiven, Of(both, sixAllFe2), 1e-12)
	same("total as Fe2O3", with(0, 0, 0, total/chem.FeOPerFe2O3), sixAllFe3, Of(both, sixAllFe3), 1e-12)
	same("total as Fe2O3 counts as FeO", with(0, 0, 0, total/chem.FeOPerFe2O3), sixAsGiven, Of(both, sixAllFe2), 1e-12)
	same("a total that disagrees is all the iron", with(feO, fe2O3, 9, 0), sixAsGiven, Of(with(0, 0, 9, 0), sixAsGiven), 0)

	for _, x := range []struct {
		c             *chem.Composition
		twice, agrees bool
	}{
		{both, false, false}, {with(0, 0, total, 0), false, false},
		{with(feO, fe2O3, rounded, 0), true, true}, {with(feO, fe2O3, 9, 0), true, false}, {with(feO, 0, 0, 12), true, false},
	} {
		if _, _, twice, agrees := IronTwice(x.c); twice != x.twice || agrees != x.agrees {
			t.Errorf("IronTwice gives %v, %v, want %v, %v", twice, agrees, x.twice, x.agrees)
		}
	}
}

// Given apfu stay as given; only another number of oxygens or another charge of
// iron rescales them.
func TestGivenApfu(t *testing.T) {
	c := apfu(6, map[chem.Cation]float64{chem.Ca: 0.8, chem.Mg: 1.2})
	if f := Of(c, sixAllFe2); f.Apfu[chem.Ca] != 0.8 || f.Apfu[chem.Mg] != 1.2 || f.Sum != 2 {
		t.Errorf("Ca .8 Mg 1.2 on 6 O became %v", f)
	}
	near(t, "Ca of 3 O on 6", Of(apfu(3, map[chem.Cation]float64{chem.Ca: 0.4}), sixAllFe2).Apfu[chem.Ca], 0.8, 1e-15)
	near(t, "Ca without stated oxygens", Of(apfu(0, map[chem.Cation]float64{chem.Ca: 0.4}), sixAllFe2).Apfu[chem.Ca], 0.4, 0)

	aegirine := apfu(6, map[chem.Cation]float64{chem.Na: 1, chem.Fe3: 1, chem.Si: 2})
	near(t, "aegirine Si on 6 O, all Fe2+", Of(aegirine, sixAllFe2).Apfu[chem.Si], 2*6/5.5, 1e-15)
	near(t, "aegirine Fe2, all Fe2+", Of(aegirine, sixAllFe2).Apfu[chem.Fe2], 6/5.5, 1e-15)
	near(t, "aegirine Fe3 by charge balance", Of(aegirine, sixBalanced).Apfu[chem.Fe3], 1, 1e-14)
	near(t, "aegirine Si by charge balance", Of(aegirine, sixBalanced).Apfu[chem.Si], 2, 1e-14)

	total := apfu(6, map[chem.Cation]float64{chem.Fe2: 0.2, chem.Fe3: 0.05, chem.Si: 2})
	set(total, chem.FeT, 0.25)
	near(t, "iron listed twice", Of(total, sixAsGiven).Apfu[chem.Fe2], 0.2, 0)
	set(total, chem.FeT, 0.4)
	near(t, "a total that disagrees", Of(total, sixAsGiven).Apfu[chem.Fe2], 0.4, 0)
}

func TestNoFormula(t *testing.T) {
	for what, c := range map[string]*chem.Composition{
		"nothing measured": {}, "no cation given": {Kind: chem.Apfu, Oxygens: 6}, "end members": {Kind: chem.EndMember},
		"volatiles only": oxides(map[chem.Oxide]float64{chem.H2O: 3, chem.CO2: 2, chem.F: 1}),
	} {
		if f := Of(c, sixAllFe2); f.Why != method.NoFormula {
			t.Errorf("%s: reason %q, want %q", what, f.Why, method.NoFormula)
		}
	}
}

func TestTotal(t *testing.T) {
	kakanui := map[chem.Oxide]float64{chem.SiO2: 50.73, chem.TiO2: .74, chem.Al2O3: 8.73, chem.Fe2O3: 1.08, chem.FeO: 5.37,
		chem.MnO: .13, chem.MgO: 16.65, chem.CaO: 15.82, chem.Na2O: 1.27}
	sum := func(c *chem.Composition) float64 {
		wt, ok := Total(c)
		if !ok {
			t.Errorf("no total of %v", c.Value)
		}
		return wt
	}
	near(t, "Kakanui augite", sum(oxides(kakanui)), 100.52, 1e-12)

	c := oxides(kakanui)
	set(c, chem.FeOT, 6.34)
	near(t, "with iron listed twice", sum(c), 100.52, 1e-12)
	c = oxides(map[chem.Oxide]float64{chem.SiO2: 50})
	set(c, chem.Fe2O3T, 8)
	near(t, "with all iron as Fe2O3", sum(c), 58, 1e-12)
	set(c, chem.FeOT, 7.2)
	near(t, "with both totals", sum(c), 57.2, 1e-12)

	// Fluorapatite, ideal: Ca5(PO4)3F is 10/2 CaO + 3/2 P2O5 + F - O/2, 100 wt% in all.
	mass := 5*chem.Oxides[chem.CaO].Mass + 1.5*chem.Oxides[chem.P2O5].Mass + 18.998 - 15.999/2
	near(t, "fluorapatite", sum(oxides(map[chem.Oxide]float64{
		chem.CaO: 500 * chem.Oxides[chem.CaO].Mass / mass, chem.P2O5: 150 * chem.Oxides[chem.P2O5].Mass / mass, chem.F: 1899.8 / mass})), 100, 1e-9)

	for what, c := range map[string]*chem.Composition{"apfu": apfu(6, map[chem.Cation]float64{chem.Si: 2}), "nothing": {}} {
		if wt, ok := Total(c); ok {
			t.Errorf("%s has a total of %v wt%%", what, wt)
		}
	}
}

// The published anorthoclase of the project's method reference, feldspar section
// 8: Ab .645 Or .172 An .182; with iron as given, cations 5.000, Si 2.814, T
// (with all iron) 4.010, A .990.
func TestFeldsparOfOxides(t *testing.T) {
	c := oxides(map[chem.Oxide]float64{chem.SiO2: 62.79, chem.Al2O3: 22.12, chem.Fe2O3: .36, chem.FeO: .41, chem.CaO: 3.76, chem.Na2O: 7.35, chem.K2O: 2.98})
	ab, or, an, cn, why := Feldspar(c)
	if why != method.OK || cn != 0 {
		t.Errorf("celsian %v, reason %q", cn, why)
	}
	near(t, "Ab", ab, .645, 0.0006)
	near(t, "Or", or, .172, 0.0006)
	near(t, "An", an, .182, 0.0006)
	f := Of(c, method.Basis{Oxygens: 8, Cations: 5, Ferric: method.AsGiven})
	near(t, "T", f.Apfu[chem.Si]+f.Apfu[chem.Al]+f.Apfu[chem.Fe3]+f.Apfu[chem.Fe2], 4.010, 0.0006)
	near(t, "A", f.Apfu[chem.Na]+f.Apfu[chem.K]+f.Apfu[chem.Ca], .990, 0.0006)
	near(t, "Si", f.Apfu[chem.Si], 2.814, 0.0006)
	near(t, "cation sum", f.Sum, 5.000, 0.0006)
}

func TestFeldsparEndMembers(t *testing.T) {
	exact := func(what string, c *chem.Composition, want [4]float64) {
		t.Helper()
		ab, or, an, cn, why := Feldspar(c)
		for i, got := range [4]float64{ab, or, an, cn} {
			near(t, what+" "+[4]string{"Ab", "Or", "An", "Cn"}[i], got, want[i], 1e-12)
		}
		if why != method.OK {
			t.Errorf("%s: reason %q", what, why)
		}
	}
	exact("E2 plagioclase, whose sum is .999", fractions(.772, .078, .149), [4]float64{.772 / .999, .078 / .999, .149 / .999, 0})
	withCn := fractions(.3, .6, .05)
	set(withCn, chem.XCn, .05)
	exact("celsian is taken out", withCn, [4]float64{.3 / .95, .6 / .95, .05 / .95, .05})
	exact("apfu", apfu(8, map[chem.Cation]float64{chem.Na: .5, chem.K: .3, chem.Ca: .1, chem.Ba: .1}), [4]float64{5. / 9, 3. / 9, 1. / 9, .1})

	an := oxides(map[chem.Oxide]float64{chem.Na2O: 0, chem.CaO: 20})
	if _, _, _, _, why := Feldspar(an); why != method.NotMeasured {
		t.Errorf("K2O missing: reason %q, want %q", why, method.NotMeasured)
	}
	an.State[chem.MeasurandOf(chem.K2O)] = chem.BelowDetection
	an.Value[chem.MeasurandOf(chem.K2O)] = .02
	exact("K2O below detection counts as zero", an, [4]float64{0, 0, 1, 0})
	an.State[chem.MeasurandOf(chem.K2O)] = chem.NotAnalysed
	if _, _, _, _, why := Feldspar(an); why != method.NotMeasured {
		t.Errorf("K2O not analysed: reason %q, want %q", why, method.NotMeasured)
	}
	if _, _, _, _, why := Feldspar(fractions(0, 0, 0)); why != method.NoFormula {
		t.Errorf("all zero: reason %q, want %q", why, method.NoFormula)
	}
}

func fractions(x ...float64) *chem.Composition {
	c := &chem.Composition{Kind: chem.EndMember}
	for i, v := range x {
		set(c, chem.XAb+chem.Measurand(i), v)
	}
	return c
}

func TestReader(t *testing.T) {
	leaf := func(cations ...chem.Cation) *method.Leaf {
		return &method.Leaf{Phase: chem.Cpx, Basis: sixAllFe2, Cations: cations}
	}
	full := map[chem.Oxide]float64{chem.SiO2: 52.3, chem.Al2O3: 2.3, chem.FeO: 7.8, chem.MgO: 18, chem.CaO: 18.4, chem.Na2O: .24}
	without := func(o chem.Oxide, s chem.State) *chem.Composition {
		c := oxides(full)
		c.State[o], c.Value[o] = s, 0
		return c
	}
	totalIron := oxides(full)
	totalIron.State[chem.FeO], totalIron.Value[chem.FeO] = chem.Missing, 0
	totalIron.State[chem.FeOT] = chem.BelowDetection
	balanced := &method.Leaf{Phase: chem.Cpx, Basis: sixBalanced, Cations: []chem.Cation{chem.Ca}}
	an := &method.Leaf{Phase: chem.Pl, EndMember: chem.XAn}
	optional := &method.Leaf{Phase: chem.Cpx, Basis: sixAllFe2, Cations: []chem.Cation{chem.Na}, Optional: true}

	var r Reader
	for _, x := range []struct {
		what string
		c    *chem.Composition
		l    *method.Leaf
		want method.Reason
		zero bool
	}{
		{"measured", oxides(full), leaf(chem.Ca), method.OK, false},
		{"not analysed", without(chem.Na2O, chem.NotAnalysed), leaf(chem.Na), method.NotMeasured, true},
		{"missing", without(chem.Na2O, chem.Missing), leaf(chem.Na), method.NotMeasured, true},
		{"below detection", without(chem.Na2O, chem.BelowDetection), leaf(chem.Na), method.OK, true},
		{"optional, measured", oxides(full), optional, method.OK, false},
		{"optional, not analysed", without(chem.Na2O, chem.NotAnalysed), optional, method.OK, true},
		{"optional, SiO2 missing", without(chem.SiO2, chem.Missing), optional, method.NoFormula, true},
		{"one of two cations missing", without(chem.Na2O, chem.Missing), leaf(chem.Ca, chem.Na), method.NotMeasured, true},
		{"no iron in any form", without(chem.FeO, chem.Missing), leaf(chem.Fe2, chem.Fe3), method.NotMeasured, true},
		{"total iron below detection", totalIron, leaf(chem.Fe2, chem.Fe3), method.OK, true},
		{"SiO2 missing", without(chem.SiO2, chem.Missing), leaf(chem.Ca), method.NoFormula, true},
		{"MgO missing", without(chem.MgO, chem.NotAnalysed), leaf(chem.Ca), method.NoFormula, true},
		{"apfu of Ca alone", apfu(6, map[chem.Cation]float64{chem.Ca: .8}), leaf(chem.Ca), method.OK, false},
		{"apfu without Na", apfu(6, map[chem.Cation]float64{chem.Ca: .8}), leaf(chem.Na), method.NotMeasured, true},
		{"apfu without Si, charge balance", apfu(6, map[chem.Cation]float64{chem.Ca: .8}), balanced, method.NoFormula, true},
		{"end members through a formula", fractions(.3, .6, .1), leaf(chem.Ca), method.NoFormula, true},
		{"An of fractions", fractions(.3, .6, .1), an, method.OK, false},
		{"An of oxides", oxides(map[chem.Oxide]float64{chem.Na2O: 5, chem.K2O: 1, chem.CaO: 9}), an, method.OK, false},
		{"An without K", oxides(map[chem.Oxide]float64{chem.Na2O: 5, chem.CaO: 9}), an, method.NotMeasured, true},
	} {
		r.Reset(x.c)
		v, why := r.Leaf(x.l)
		again, whyAgain := r.Leaf(x.l)
		if why != x.want || (v == 0) != x.zero {
			t.Errorf("%s: %v with reason %q, want reason %q, zero %v", x.what, v, why, x.want, x.zero)
		}
		if v != again || why != whyAgain {
			t.Errorf("%s: read twice gives %v and %v", x.what, v, again)
		}
	}
}

func drawOxides(t *rapid.T) *chem.Composition {
	c := &chem.Composition{}
	for o := range chem.NumOxides {
		if o < chem.CO2 && rapid.Bool().Draw(t, o.String()+" measured") {
			set(c, chem.MeasurandOf(o), rapid.Float64Range(0, 60).Draw(t, o.String()))
		}
	}
	set(c, chem.MeasurandOf(chem.SiO2), rapid.Float64Range(0.1, 100).Draw(t, "SiO2"))
	return c
}

func drawBasis(t *rapid.T) method.Basis {
	return rapid.SampledFrom([]method.Basis{sixAsGiven, sixAllFe2, sixAllFe3, sixBalanced,
		{Oxygens: 8, Cations: 5, Ferric: method.AllFe3}, {Oxygens: 12, Cations: 8, Ferric: method.Balanced}}).Draw(t, "basis")
}

// A formula does not know what the analysis summed to.
func TestScaleOfTheAnalysisDoesNotMatter(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c, basis := drawOxides(t), drawBasis(t)
		scaled := *c
		by := rapid.Float64Range(0.01, 100).Draw(t, "factor")
		for m := range scaled.Value {
			scaled.Value[m] *= by
		}
		a, b := Of(c, basis), Of(&scaled, basis)
		for cation := range chem.NumCations {
			near(t, cation.String(), b.Apfu[cation], a.Apfu[cation], 1e-12*basis.Oxygens)
		}
	})
}

// Charges balance: the cations' valences sum to twice the oxygens.
func TestChargesBalance(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c, basis := drawOxides(t), drawBasis(t)
		f := Of(c, basis)
		charge, sum := 0.0, 0.0
		for cation, n := range f.Apfu {
			d := chem.Oxides[chem.Cations[cation].Oxide]
			charge += n * 2 * d.Oxygens / d.Cations
			sum += n
		}
		near(t, "sum of charges", charge, 2*f.Oxygens, 1e-12*basis.Oxygens)
		near(t, "sum of cations", f.Sum, sum, 1e-12)
		if basis.Ferric == method.Balanced && f.Sum > basis.Cations+1e-12 {
			t.Errorf("cation sum %v after charge balance, ideal %v", f.Sum, basis.Cations)
		}
		if f.Oxygens > basis.Oxygens+1e-12 {
			t.Errorf("%v oxygens, basis %v", f.Oxygens, basis.Oxygens)
		}
	})
}

// A formula given as apfu on its own oxygens is the formula.
func TestApfuRoundTrip(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c, basis := drawOxides(t), drawBasis(t)
		given := Of(c, method.Basis{Oxygens: 6, Ferric: method.AsGiven})
		n := map[chem.Cation]float64{}
		for cation, v := range given.Apfu {
			n[chem.Cation(cation)] = v
		}
		a, b := Of(c, basis), Of(apfu(6, n), basis)
		for cation := range chem.NumCations {
			near(t, cation.String(), b.Apfu[cation], a.Apfu[cation], 1e-12*basis.Oxygens)
		}
	})
}

var sink Formula

func BenchmarkOf(b *testing.B) {
	c := oxides(map[chem.Oxide]float64{chem.SiO2: 50.73, chem.TiO2: .74, chem.Al2O3: 8.73, chem.Fe2O3: 1.08, chem.FeO: 5.37,
		chem.MnO: .13, chem.MgO: 16.65, chem.CaO: 15.82, chem.Na2O: 1.27})
	for _, basis := range []method.Basis{sixAllFe2, sixBalanced} {
		b.Run(basis.String(), func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				sink = Of(c, basis)
			}
		})
	}
}

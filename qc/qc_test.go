package qc

import (
	"strings"
	"testing"

	"pgregory.net/rapid"

	"tieline/manifests"
	"tieline/thermo/chem"
	"tieline/thermo/formula"
	"tieline/thermo/method"
)

// limits are the manifest's defaults, so that the tests hold what ships.
func limits(t testing.TB) *manifests.Manifest {
	m, problems := manifests.Parse("test", []byte("[compilation]\nid = \"t\"\ntitle = \"t\"\n[[source]]\nid = \"s\"\nfile = \"s.csv\"\n"))
	if problems != nil && problems.Len() > 0 {
		t.Fatal(problems)
	}
	return m
}

// ideal are stoichiometric formulae: of feldspars on 8 O, of pyroxenes on 6.
var ideal = map[chem.Phase]map[chem.Cation]float64{
	chem.Afs: {chem.Si: 3, chem.Al: 1, chem.Na: 0.2, chem.K: 0.8},
	chem.Pl:  {chem.Si: 2.6, chem.Al: 1.4, chem.Na: 0.6, chem.Ca: 0.4},
	chem.Opx: {chem.Si: 2, chem.Mg: 1.4, chem.Fe2: 0.55, chem.Ca: 0.05},
	chem.Cpx: {chem.Si: 2, chem.Mg: 0.9, chem.Fe2: 0.3, chem.Ca: 0.8},
}

// analysis builds what the rules see: every oxide measured, none counted, and
// an ideal formula, for a test to change.
func analysis(phase chem.Phase, change func(*Analysis)) *Analysis {
	c := &chem.Composition{}
	for o := range chem.NumOxides {
		c.State[chem.MeasurandOf(o)] = chem.Measured
	}
	a := &Analysis{Phase: phase, Composition: c, Formula: &formula.Formula{}, Total: 100}
	for cation, n := range ideal[phase] {
		a.Formula.Apfu[cation] = n
	}
	switch phase {
	case chem.Afs, chem.Pl:
		a.Formula.Sum, a.Feldspar = 5, &[3]float64{1, 0, 0}
	case chem.Opx, chem.Cpx:
		a.Formula.Sum, a.Pyroxene = 4, a.Formula
	}
	if change != nil {
		change(a)
	}
	return a
}

func TestAnalysisRules(t *testing.T) {
	m := limits(t)
	unmeasure := func(os ...chem.Oxide) func(*Analysis) {
		return func(a *Analysis) {
			for _, o := range os {
				a.Composition.State[chem.MeasurandOf(o)] = chem.NotAnalysed
			}
		}
	}
	total := func(v float64) func(*Analysis) { return func(a *Analysis) { a.Total = v } }
	fsp := func(v float64) func(*Analysis) { return func(a *Analysis) { a.Formula.Sum = v } }
	px := func(v float64) func(*Analysis) {
		return func(a *Analysis) { a.Pyroxene = &formula.Formula{Apfu: a.Pyroxene.Apfu, Sum: v} }
	}
	cn := func(v float64) func(*Analysis) { return func(a *Analysis) { a.Celsian = v } }
	sum := func(v float64) func(*Analysis) {
		return func(a *Analysis) {
			for _, m := range []chem.Measurand{chem.XAb, chem.XOr, chem.XAn} {
				a.Composition.State[m] = chem.Measured
			}
			a.Composition.Kind, a.EndMemberSum = chem.EndMember, v
			a.Formula.Why = method.NoFormula
		}
	}
	feOT := func(feOT, feO float64) func(*Analysis) {
		return func(a *Analysis) {
			a.Composition.State[chem.FeOT] = chem.Measured
			a.Composition.Value[chem.FeOT] = feOT
			a.Composition.Value[chem.FeO] = feO
		}
	}
	for _, c := range []struct {
		name   string
		phase  chem.Phase
		change func(*Analysis)
		rule   string // "" for no finding
		effect Effect
	}{
		{"nothing wrong", chem.Cpx, nil, "", 0},
		{"total at the lower kept limit", chem.Cpx, total(98), "", 0},
		{"total below it", chem.Cpx, total(97.99), "oxide total", Flagged},
		{"total at the lower flagged limit", chem.Cpx, total(97), "oxide total", Flagged},
		{"total below that", chem.Cpx, total(96.99), "oxide total", SetAside},
		{"total at the upper kept limit", chem.Opx, total(102), "", 0},
		{"total above it", chem.Opx, total(102.01), "oxide total", Flagged},
		{"total beyond the upper flagged limit", chem.Opx, total(102.51), "oxide total", SetAside},
		{"feldspar sum at the limit", chem.Pl, fsp(4.98), "", 0},
		{"feldspar sum below it", chem.Pl, fsp(4.979), "cation sum", Flagged},
		{"feldspar sum beyond", chem.Afs, fsp(5.051), "cation sum", SetAside},
		{"pyroxene sum at the limit", chem.Cpx, px(4.04), "", 0},
		{"pyroxene sum above it", chem.Cpx, px(4.041), "cation sum", Flagged},
		{"pyroxene sum beyond", chem.Opx, px(3.959), "cation sum", SetAside},
		{"celsian at the limit", chem.Afs, cn(0.01), "", 0},
		{"celsian above it", chem.Afs, cn(0.0101), "celsian", Flagged},
		{"celsian beyond", chem.Afs, cn(0.051), "celsian", SetAside},
		{"fractions off by the tolerance", chem.Afs, sum(0.998), "", 0},
		{"fractions off by more", chem.Afs, sum(0.9979), "end-member sum", Flagged},
		{"fractions sum to nothing", chem.Afs, sum(0), "end-member sum", SetAside},
		{"cpx without Na2O", chem.Cpx, unmeasure(chem.Na2O), "major component not measured", Flagged},
		{"opx without Na2O", chem.Opx, unmeasure(chem.Na2O), "minor component not measured", Flagged},
		{"cpx without K2O", chem.Cpx, unmeasure(chem.K2O), "minor component not measured", Flagged},
		{"cpx without Cr2O3", chem.Cpx, unmeasure(chem.Cr2O3), "minor component not measured", Flagged},
		{"feldspar without TiO2", chem.Pl, unmeasure(chem.TiO2), "", 0},
		{"feldspar without BaO", chem.Pl, unmeasure(chem.BaO), "BaO not measured", Noted},
		{"iron counted once", chem.Cpx, feOT(5, 5), "iron listed twice", Noted},
		{"iron total disagrees", chem.Cpx, feOT(5, 4), "iron listed twice", Flagged},
		{"a small negative", chem.Cpx, func(a *Analysis) { a.Composition.Value[chem.K2O] = -0.01 }, "negative amount", Flagged},
		{"glass", "", func(a *Analysis) { a.SetAside = "phase \"glass\" is passed over" }, "passed over", SetAside},
	} {
		t.Run(c.name, func(t *testing.T) {
			got := OfAnalysis(m, analysis(c.phase, c.change))
			if c.rule == "" {
				if len(got) != 0 {
					t.Fatalf("found %+v; want nothing", got)
				}
				return
			}
			if len(got) != 1 || got[0].Rule != c.rule || got[0].Effect != c.effect {
				t.Fatalf("found %+v; want one finding, rule %q, %s", got, c.rule, c.effect)
			}
			if got[0].Detail == "" || (got[0].Limit == "" && c.rule != "passed over") {
				t.Errorf("finding %+v lacks its detail or limit", got[0])
			}
		})
	}
}

func TestIronAnyFormCountsAsMeasured(t *testing.T) {
	m := limits(t)
	a := analysis(chem.Cpx, func(a *Analysis) {
		for _, o := range []chem.Oxide{chem.FeO, chem.Fe2O3} {
			a.Composition.State[chem.MeasurandOf(o)] = chem.Missing
		}
		a.Composition.State[chem.FeOT] = chem.Measured
	})
	if got := OfAnalysis(m, a); len(got) != 0 {
		t.Errorf("a pyroxene with a total of iron only: found %+v; want nothing", got)
	}
}

// Celsian takes the place of K and Si: an A site short of 1 and Al above 1 + Ca
// are its mark where Ba was not analysed.
func TestBariumUnknown(t *testing.T) {
	for _, c := range []struct {
		na, k, ca, al float64
		want          Effect
	}{
		{0.2, 0.74, 0.02, 1.06, Flagged}, // .04 celsian unseen
		{0.2, 0.78, 0.02, 1.02, Noted},
		{0.2, 0.74, 0.02, 1.02, Noted}, // short of alkalis, no excess Al: Na loss, not Ba
	} {
		a := analysis(chem.Afs, func(a *Analysis) {
			a.Composition.State[chem.BaO] = chem.Missing
			a.Formula.Apfu[chem.Na], a.Formula.Apfu[chem.K], a.Formula.Apfu[chem.Ca], a.Formula.Apfu[chem.Al] = c.na, c.k, c.ca, c.al
		})
		if got := bariumUnknown(a); got.Rule != "BaO not measured" || got.Effect != c.want {
			t.Errorf("%+v: found %+v; want BaO not measured, %s", c, got, c.want)
		}
	}
}

func TestPairRules(t *testing.T) {
	n := func(v float64) *float64 { return &v }
	for _, c := range []struct {
		name string
		p    Pair
		rule string
	}{
		{"nothing given", Pair{}, ""},
		{"KD below 1", Pair{KD: n(0.99)}, ""},
		{"KD 1", Pair{KD: n(1)}, "Mg number order"},
		{"one pressure", Pair{PKbar: [2]*float64{n(8), nil}}, ""},
		{"equal pressures", Pair{PKbar: [2]*float64{n(8), n(8)}}, ""},
		{"two pressures", Pair{PKbar: [2]*float64{n(8), n(9)}}, "pressures differ"},
		{"equal published", Pair{PublishedC: [2]*float64{n(800), n(800)}}, ""},
		{"two published", Pair{PublishedC: [2]*float64{n(800), n(801)}}, "published temperatures differ"},
	} {
		got := OfPair(&c.p)
		if (c.rule == "" && len(got) != 0) || (c.rule != "" && (len(got) != 1 || got[0].Rule != c.rule || got[0].Effect != Flagged)) {
			t.Errorf("%s: found %+v; want rule %q", c.name, got, c.rule)
		}
	}
}

func TestEstimateRules(t *testing.T) {
	n := func(v float64) *float64 { return &v }
	plain := &method.Info{}
	mantle := &method.Info{Range: method.Range{Setting: "mantle peridotite"}}
	beside := &method.Info{NeedsBeside: chem.Cpx}
	bound := &method.Bound{Name: "T", Unit: "degC", Min: 900, Max: 1400}
	for _, c := range []struct {
		name string
		e    Estimate
		rule string
	}{
		{"nothing wrong", Estimate{Info: plain}, ""},
		{"out of range", Estimate{Info: plain, OutOf: []*method.Bound{bound}, OutOfValue: []float64{850}}, "outside calibrated range"},
		{"default pressure", Estimate{Info: plain, Assumed: true, PKbar: 8}, "assumed pressure"},
		{"mantle method, no setting", Estimate{Info: mantle}, "setting"},
		{"mantle method, other rocks", Estimate{Info: mantle, Setting: "granulite"}, "setting"},
		{"mantle method in the mantle", Estimate{Info: mantle, Setting: "Mantle peridotite"}, ""},
		{"cpx beside", Estimate{Info: beside, Beside: true}, ""},
		{"no cpx beside", Estimate{Info: beside}, "assemblage"},
		{"An in Afs at the limit", Estimate{Info: plain, Component: "An", AnAfs: n(0.01)}, ""},
		{"An in Afs below", Estimate{Info: plain, Component: "An", AnAfs: n(0.0099)}, "weak component"},
		{"An in Afs below, T from Or", Estimate{Info: plain, Component: "Or", AnAfs: n(0.0099), OrPl: n(0.01)}, ""},
		{"Or in Pl below", Estimate{Info: plain, Component: "Or", OrPl: n(0.0099)}, "weak component"},
		{"An in Pl at the limit", Estimate{Info: plain, Component: "Ab", AnPl: n(0.5)}, ""},
		{"An in Pl above", Estimate{Info: plain, Component: "Ab", AnPl: n(0.501)}, "weak component"},
	} {
		c.e.C = 800
		got := OfEstimate(&c.e)
		if (c.rule == "" && len(got) != 0) || (c.rule != "" && (len(got) != 1 || got[0].Rule != c.rule || got[0].Effect != Flagged)) {
			t.Errorf("%s: found %+v; want rule %q", c.name, got, c.rule)
		}
	}
}

func TestOfCoverage(t *testing.T) {
	if got := OfCoverage(chem.Pl); len(got) != 0 {
		t.Errorf("plagioclase: found %+v; want nothing", got)
	}
	if got := OfCoverage("Grt"); len(got) != 1 || got[0].Effect != Noted {
		t.Errorf("garnet: found %+v; want one note", got)
	}
}

func TestJudgeTakesTheWorst(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		effects := rapid.SliceOf(rapid.IntRange(0, 2)).Draw(t, "effects")
		var findings []Finding
		worst, reasons := Kept, 0
		for _, e := range effects {
			findings = append(findings, Finding{Effect: Effect(e), Detail: "d"})
			worst = max(worst, Verdict(e))
			if e > 0 {
				reasons++
			}
		}
		v, text := Judge(findings)
		if v != worst || strings.Count(text, "d") != reasons {
			t.Fatalf("effects %v: verdict %s with reasons %q; want %s with %d reasons", effects, v, text, worst, reasons)
		}
	})
}

func TestInheritIsNeverBetter(t *testing.T) {
	for own := Kept; own <= SetAsideRow; own++ {
		for from := Kept; from <= SetAsideRow; from++ {
			v, why := Inherit(own, "own", from, "parent")
			if v != max(own, from) {
				t.Errorf("%s from a %s parent is %s", own, from, v)
			}
			if (from != Kept) != strings.Contains(why, "parent") {
				t.Errorf("%s from a %s parent says %q", own, from, why)
			}
		}
	}
}

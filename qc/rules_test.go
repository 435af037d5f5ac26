package qc

import (
	"reflect"
	"slices"
	"strings"
	"testing"

	"tieline/manifests"
	"tieline/thermo/chem"
	"tieline/thermo/formula"
	"tieline/thermo/method"
)

// ruleCase fires a rule, and stays just inside its limit.
type ruleCase struct {
	rule          string
	effect        Effect
	fires, inside func(m *manifests.Manifest) []Finding
}

func one(phase chem.Phase, change func(*Analysis)) func(*manifests.Manifest) []Finding {
	return func(m *manifests.Manifest) []Finding { return OfAnalysis(m, analysis(phase, change)) }
}

// apfuOf sets cations of the formula the rules see.
func apfuOf(n map[chem.Cation]float64) func(*Analysis) {
	return func(a *Analysis) {
		for c, v := range n {
			a.Formula.Apfu[c] = v
		}
	}
}

func oxide(o chem.Oxide, v float64) func(*Analysis) {
	return func(a *Analysis) { a.Composition.Value[chem.MeasurandOf(o)] = v }
}

func gone(o chem.Oxide) func(*Analysis) {
	return func(a *Analysis) { a.Composition.State[chem.MeasurandOf(o)] = chem.NotAnalysed }
}

// given makes the composition one of cations on 6 O.
func given(n map[chem.Cation]float64) func(*Analysis) {
	return func(a *Analysis) {
		*a.Composition = chem.Composition{Kind: chem.Apfu, Oxygens: 6}
		for c, v := range n {
			a.Composition.State[chem.MeasurandOfCation(c)], a.Composition.Value[chem.MeasurandOfCation(c)] = chem.Measured, v
		}
	}
}

func fractions(sum float64) func(*Analysis) {
	return func(a *Analysis) {
		a.Composition.Kind, a.EndMemberSum, a.Formula.Why = chem.EndMember, sum, method.NoFormula
	}
}

func iron(total, feO float64) func(*Analysis) {
	return func(a *Analysis) {
		a.Composition.State[chem.FeOT], a.Composition.Value[chem.FeOT] = chem.Measured, total
		a.Composition.Value[chem.FeO] = feO
	}
}

func pair(p Pair) func(*manifests.Manifest) []Finding {
	return func(*manifests.Manifest) []Finding { return OfPair(&p) }
}

func estimate(e Estimate) func(*manifests.Manifest) []Finding {
	return func(*manifests.Manifest) []Finding {
		if e.Info == nil {
			e.Info = &method.Info{}
		}
		if e.C == 0 {
			e.C = 800
		}
		return OfEstimate(&e)
	}
}

func of(f func(q *manifests.QC) []Finding) func(*manifests.Manifest) []Finding {
	return func(m *manifests.Manifest) []Finding { return f(&m.QC) }
}

func n(v float64) *float64 { return &v }

// reports are a feldspar's Or as printed beside its oxides, which give .8.
func reports(or float64) func(*Analysis) {
	return func(a *Analysis) {
		a.Feldspar = &[3]float64{0.2, 0.8, 0}
		a.Composition.State[chem.XOr], a.Composition.Value[chem.XOr] = chem.Measured, or
	}
}

func fractionsOf(ab, or, an float64) func(*Analysis) {
	return func(a *Analysis) { a.Feldspar = &[3]float64{ab, or, an} }
}

func pyroxeneOf(sum float64, n map[chem.Cation]float64) func(*Analysis) {
	return func(a *Analysis) {
		f := formula.Formula{Apfu: a.Formula.Apfu, Sum: sum}
		for c, v := range n {
			f.Apfu[c] = v
		}
		a.Pyroxene = &f
	}
}

func prints(total float64) func(*Analysis) {
	return func(a *Analysis) {
		a.Composition.Value[chem.SiO2], a.ReportedTotal = 99, &total
	}
}

var mantleOnly = &method.Info{Range: method.Range{Setting: "mantle peridotite"}}

// ruleCases hold each rule of one analysis, pair or estimate to its limit. The
// rules on several analyses stand in survey_test.go, in the same form.
var ruleCases = []ruleCase{
	{"passed over", SetAside, one("", func(a *Analysis) { a.SetAside = "glass" }), one("", nil)},
	{"end-member sum", Flagged, one(chem.Afs, fractions(0.9979)), one(chem.Afs, fractions(0.998))},
	{"end-member sum", SetAside, one(chem.Afs, fractions(1.101)), one(chem.Afs, fractions(1.1))},
	{"negative amount", SetAside, one(chem.Cpx, oxide(chem.K2O, -0.101)), one(chem.Cpx, oxide(chem.K2O, -0.1))},
	{"major component not measured", Flagged, one(chem.Cpx, gone(chem.Na2O)), one(chem.Opx, gone(chem.Na2O))},
	{"minor component not measured", Flagged, one(chem.Opx, gone(chem.K2O)), one(chem.Opx, gone(chem.BaO))},
	{"BaO not measured", Noted, one(chem.Afs, gone(chem.BaO)), one(chem.Afs, gone(chem.SrO))},
	{"iron listed twice", Flagged, one(chem.Cpx, iron(5, 4.95)), one(chem.Cpx, iron(5, 5))},
	{"negative amount", Flagged, one(chem.Cpx, oxide(chem.K2O, -0.01)), one(chem.Cpx, oxide(chem.K2O, 0))},
	{"oxide total", SetAside, one(chem.Cpx, func(a *Analysis) { a.Total = 96.99 }), one(chem.Cpx, func(a *Analysis) { a.Total = 97 })},
	{"cation sum", SetAside, one(chem.Pl, func(a *Analysis) { a.Formula.Sum = 5.051 }), one(chem.Pl, func(a *Analysis) { a.Formula.Sum = 5.05 })},
	{"celsian", SetAside, one(chem.Afs, func(a *Analysis) { a.Celsian = 0.051 }), one(chem.Afs, func(a *Analysis) { a.Celsian = 0.05 })},
	{"reported total", Flagged, one(chem.Cpx, prints(98.69)), one(chem.Cpx, prints(98.7))},
	{"reported end members", Flagged, one(chem.Afs, reports(0.789)), one(chem.Afs, reports(0.79))},
	{"charge", Flagged, one(chem.Cpx, given(map[chem.Cation]float64{chem.Si: 2, chem.Al: 0, chem.Fe2: 0.3, chem.Mg: 0.9, chem.Ca: 0.774, chem.Na: 0})),
		one(chem.Cpx, given(map[chem.Cation]float64{chem.Si: 2, chem.Al: 0, chem.Fe2: 0.3, chem.Mg: 0.9, chem.Ca: 0.775, chem.Na: 0}))},
	{"phase identity", Flagged, one(chem.Opx, pyroxeneOf(4, map[chem.Cation]float64{chem.Ca: 0.201})), one(chem.Opx, pyroxeneOf(4, map[chem.Cation]float64{chem.Ca: 0.2}))},
	{"phase identity", Flagged, one(chem.Cpx, pyroxeneOf(4, map[chem.Cation]float64{chem.Ca: 0.399})), one(chem.Cpx, pyroxeneOf(4, map[chem.Cation]float64{chem.Ca: 0.4}))},
	{"phase identity", Flagged, one(chem.Pl, fractionsOf(0.3, 0.501, 0.199)), one(chem.Pl, fractionsOf(0.3, 0.5, 0.2))},
	{"phase identity", Flagged, one(chem.Afs, fractionsOf(0.3, 0.199, 0.501)), one(chem.Afs, fractionsOf(0.3, 0.2, 0.5))},
	{"phase identity", SetAside, one(chem.Pl, apfuOf(map[chem.Cation]float64{chem.Si: 3.101})), one(chem.Pl, apfuOf(map[chem.Cation]float64{chem.Si: 3.1}))},
	{"phase identity", SetAside, one(chem.Pl, func(a *Analysis) { a.Formula.Sum = 5.201 }), one(chem.Pl, func(a *Analysis) { a.Formula.Sum = 5.2 })},
	{"phase identity", SetAside, one(chem.Opx, pyroxeneOf(4.3, map[chem.Cation]float64{chem.Si: 1.65})), one(chem.Opx, pyroxeneOf(4.299, map[chem.Cation]float64{chem.Si: 1.65}))},
	{"phase identity", SetAside, one(chem.Cpx, pyroxeneOf(3.959, map[chem.Cation]float64{chem.Si: 2.051})), one(chem.Cpx, pyroxeneOf(3.96, map[chem.Cation]float64{chem.Si: 2.051}))},
	{"phase identity", SetAside, one(chem.Cpx, hornblende(0.02, 98.4)), one(chem.Cpx, hornblende(0.02, 98.5))},
	{"contamination", Flagged, one(chem.Pl, oxide(chem.MgO, 0.101)), one(chem.Pl, oxide(chem.MgO, 0.1))},
	{"contamination", Flagged, one(chem.Pl, oxide(chem.FeO, 1.001)), one(chem.Pl, oxide(chem.FeO, 1))},
	{"contamination", Flagged, one(chem.Pl, oxide(chem.Fe2O3, 1.112)), one(chem.Pl, oxide(chem.Fe2O3, 1.111))},
	{"T site", Flagged, one(chem.Pl, apfuOf(map[chem.Cation]float64{chem.Si: 2.621})), one(chem.Pl, apfuOf(map[chem.Cation]float64{chem.Si: 2.62}))},
	{"T site", SetAside, one(chem.Pl, apfuOf(map[chem.Cation]float64{chem.Si: 2.651})), one(chem.Pl, apfuOf(map[chem.Cation]float64{chem.Si: 2.65}))},
	{"A site", Flagged, one(chem.Pl, apfuOf(map[chem.Cation]float64{chem.Na: 0.579})), one(chem.Pl, apfuOf(map[chem.Cation]float64{chem.Na: 0.58}))},
	{"A site", SetAside, one(chem.Pl, apfuOf(map[chem.Cation]float64{chem.Na: 0.549})), one(chem.Pl, apfuOf(map[chem.Cation]float64{chem.Na: 0.55}))},
	{"coupled exchange", Flagged, one(chem.Pl, apfuOf(map[chem.Cation]float64{chem.Al: 1.421})), one(chem.Pl, apfuOf(map[chem.Cation]float64{chem.Al: 1.42}))},
	{"lost alkalis", Flagged, one(chem.Afs, lossOf(0.021)), one(chem.Afs, lossOf(0.02))},
	{"T site short", Flagged, one(chem.Opx, pyroxeneOf(4, map[chem.Cation]float64{chem.Si: 1.979})), one(chem.Opx, pyroxeneOf(4, map[chem.Cation]float64{chem.Si: 1.98}))},
	// 12 (1 - 4/4.02) = .0597 Fe3+ on 4 cations.
	{"Fe3+ above total Fe", Noted, one(chem.Cpx, pyroxeneOf(4.02, map[chem.Cation]float64{chem.Fe2: 0.0549})), one(chem.Cpx, pyroxeneOf(4.02, map[chem.Cation]float64{chem.Fe2: 0.0550}))},
	{"no method", Noted, func(*manifests.Manifest) []Finding { return OfCoverage("Grt") }, func(*manifests.Manifest) []Finding { return OfCoverage(chem.Pl) }},

	{"column in doubt", Flagged, of(func(*manifests.QC) []Finding {
		return columnsInDoubt([]SourceFinding{{"s", "Na2O", Finding{Rule: "swapped", Effect: Flagged}}}, "s")
	}), of(func(*manifests.QC) []Finding {
		return columnsInDoubt([]SourceFinding{{"s", "Na2O", Finding{Rule: "swapped", Effect: Noted}}, {"t", "Na2O", Finding{Effect: Flagged}}}, "s")
	})},
	{"phase in doubt", SetAside, of(func(*manifests.QC) []Finding { return InDoubt("Opx", true) }), of(func(*manifests.QC) []Finding { return InDoubt("Opx", false) })},
	{"sides exchanged", SetAside, of(func(*manifests.QC) []Finding { return PyroxeneSides(0.7, 0.7) }), of(func(*manifests.QC) []Finding { return PyroxeneSides(0.05, 0.051) })},
	{"sides exchanged", SetAside, feldspars([3]float64{0.7, 0.1, 0.2}, [3]float64{0.2, 0.7, 0.1}), feldspars([3]float64{0.2, 0.7, 0.1}, [3]float64{0.7, 0.1, 0.2})},
	{"sides exchanged", SetAside, feldspars([3]float64{0.2, 0.6, 0.2}, [3]float64{0.7, 0.1, 0.2}), feldspars([3]float64{0.2, 0.6, 0.199}, [3]float64{0.7, 0.1, 0.2})},
	{"Mg number order", Flagged, pair(Pair{KD: n(1)}), pair(Pair{KD: n(0.999)})},
	{"textures differ", Flagged, pair(Pair{Texture: [2]string{"core", "matrix"}}), pair(Pair{Texture: [2]string{"core", "core"}})},
	{"textures differ", Flagged, pair(Pair{Texture: [2]string{"core", "rim"}}), pair(Pair{Texture: [2]string{"re-integrated", "core"}})},
	{"pressures differ", Flagged, pair(Pair{PKbar: [2]*float64{n(8), n(8.1)}}), pair(Pair{PKbar: [2]*float64{n(8), n(8)}})},
	{"published temperatures differ", Flagged, pair(Pair{PublishedC: [2]*float64{n(800), n(801)}}), pair(Pair{PublishedC: [2]*float64{n(800), n(800)}})},
	{"Fe-Mg distribution", Flagged, of(func(q *manifests.QC) []Finding { return Distribution(q, 0.499) }), of(func(q *manifests.QC) []Finding { return Distribution(q, 0.5) })},
	{"Fe-Mg distribution", Flagged, of(func(q *manifests.QC) []Finding { return Distribution(q, 0.901) }), of(func(q *manifests.QC) []Finding { return Distribution(q, 0.9) })},
	{"Fe-Mg distribution", Flagged, of(func(q *manifests.QC) []Finding { return Distribution(q, 1.231) }), of(func(q *manifests.QC) []Finding { return Distribution(q, 1.23) })},
	{"I-1 plagioclase", Flagged, feldspars([3]float64{0.2, 0.8, 0}, [3]float64{0.3, 0.049, 0.651}), feldspars([3]float64{0.2, 0.8, 0}, [3]float64{0.3, 0.05, 0.65})},
	{"close to the critical curve", Flagged, feldspars([3]float64{0.5, 0.3, 0.2}, [3]float64{0.599, 0.201, 0.2}), feldspars([3]float64{0.5, 0.3, 0.2}, [3]float64{0.6, 0.2, 0.2})},

	{"no temperature of a rock", SetAside, estimate(Estimate{C: 1800.1}), estimate(Estimate{C: 1800})},
	{"no temperature of a rock", SetAside, estimate(Estimate{C: 199.9}), estimate(Estimate{C: 200})},
	{"outside calibrated range", Flagged, estimate(Estimate{OutOf: []*method.Bound{{Name: "T", Unit: "degC", Min: 900, Max: 1400}}, OutOfValue: []float64{899}}), estimate(Estimate{})},
	{"no pressure", Flagged, estimate(Estimate{NoPressure: true}), estimate(Estimate{})},
	{"below detection", SetAside, estimate(Estimate{Side: "at most", Bound: 788}), estimate(Estimate{})},
	{"assumed pressure", Flagged, estimate(Estimate{Assumed: true, PKbar: 8}), estimate(Estimate{PKbar: 8})},
	{"setting", Flagged, estimate(Estimate{Info: mantleOnly, Setting: "granulite"}), estimate(Estimate{Info: mantleOnly, Setting: "Mantle peridotite"})},
	{"coherency unknown", Flagged, estimate(Estimate{Info: &method.Info{ID: "alkali-feldspar-solvus/x"}}), estimate(Estimate{Info: &method.Info{ID: "alkali-feldspar-solvus/x-coherent"}})},
	{"assemblage", Flagged, estimate(Estimate{Info: &method.Info{NeedsBeside: chem.Cpx}}), estimate(Estimate{Info: &method.Info{NeedsBeside: chem.Cpx}, Beside: true})},
	{"weak component", Flagged, estimate(Estimate{Component: "An", AnAfs: n(0.0099)}), estimate(Estimate{Component: "An", AnAfs: n(0.01)})},
	{"weak component", Flagged, estimate(Estimate{Component: "Or", OrPl: n(0.0099)}), estimate(Estimate{Component: "Or", OrPl: n(0.01)})},
	{"weak component", Flagged, estimate(Estimate{Component: "Ab", AnPl: n(0.501)}), estimate(Estimate{Component: "Ab", AnPl: n(0.5)})},
	{"igneous Fe-Mg distribution", SetAside, of(func(q *manifests.QC) []Finding { return IgneousDistribution(q, 0.949) }), of(func(q *manifests.QC) []Finding { return IgneousDistribution(q, 0.95) })},
	{"concordance", Flagged, of(func(q *manifests.QC) []Finding {
		return Concordance(q, [3]*float64{n(700), n(750), n(791)}, [3]float64{})
	}),
		of(func(q *manifests.QC) []Finding { return Concordance(q, [3]*float64{n(700), nil, n(790)}, [3]float64{}) })},
	// 2 sqrt(30^2 + 40^2) = 100
	{"concordance", Flagged, of(func(q *manifests.QC) []Finding {
		return Concordance(q, [3]*float64{n(700), n(750), n(801)}, [3]float64{30, 90, 40})
	}), of(func(q *manifests.QC) []Finding {
		return Concordance(q, [3]*float64{n(700), n(750), n(800)}, [3]float64{30, 90, 40})
	})},
	// sqrt(30^2 + 40^2) = 50, twice 100
	{"possible resetting", Flagged, of(func(q *manifests.QC) []Finding { return Reset(q, 901, 30, 800, 40) }), of(func(q *manifests.QC) []Finding { return Reset(q, 900, 30, 800, 40) })},
	{"possible resetting", Flagged, of(func(q *manifests.QC) []Finding { return Reset(q, 699, 30, 800, 40) }), of(func(q *manifests.QC) []Finding { return Reset(q, 700, 30, 800, 40) })},
}

func feldspars(afs, pl [3]float64) func(*manifests.Manifest) []Finding {
	return of(func(q *manifests.QC) []Finding { return FeldsparPair(q, afs, pl) })
}

func hornblende(k, total float64) func(*Analysis) {
	return func(a *Analysis) {
		pyroxeneOf(4.02, map[chem.Cation]float64{chem.K: k})(a)
		a.Total = total
	}
}

// lossOf takes sodium from an alkali feldspar and gives 8 O to what is left, so
// far that the A site is short by as much.
func lossOf(short float64) func(*Analysis) {
	return func(a *Analysis) {
		// Na' + K' = (1 - d) s and s = 8 / (8 - d/2), so d = short / (1 - (1 - short)/16)
		d := short / (1 - (1-short)/16)
		a.Formula.Apfu[chem.Na] -= d
		s := 8 / (8 - d/2)
		for c := range a.Formula.Apfu {
			a.Formula.Apfu[c] *= s
		}
	}
}

func fired(found []Finding, rule string) (Finding, bool) {
	i := slices.IndexFunc(found, func(f Finding) bool { return f.Rule == rule })
	if i < 0 {
		return Finding{}, false
	}
	return found[i], true
}

// Every rule fires where it should and stays quiet just inside its limit; a
// rule without such a pair of cases is no rule.
func TestEveryRuleHasItsLimit(t *testing.T) {
	m := limits(t)
	tested := map[string]bool{}
	for i, c := range slices.Concat(ruleCases, surveyCases(t)) {
		tested[c.rule] = true
		f, ok := fired(c.fires(m), c.rule)
		if !ok || f.Effect != c.effect {
			t.Errorf("case %d, %s: fired %v, %+v; want it to fire, %s", i, c.rule, ok, f, c.effect)
		}
		if ok && (f.Detail == "" || f.Limit == "" && c.rule != "passed over") {
			t.Errorf("case %d, %s: %+v lacks its detail or limit", i, c.rule, f)
		}
		if f, ok := fired(c.inside(m), c.rule); ok && f.Effect >= c.effect {
			t.Errorf("case %d, %s: %s just inside its limit: %+v", i, c.rule, f.Effect, f)
		}
	}
	for _, r := range Rules {
		if !tested[r.Name] {
			t.Errorf("rule %q has no pair of cases", r.Name)
		}
		delete(tested, r.Name)
	}
	for rule := range tested {
		t.Errorf("rule %q is tested and stands in no list", rule)
	}
	if len(Rules) < 25 {
		t.Errorf("%d rules, want at least 25", len(Rules))
	}
	t.Logf("%d rules", len(Rules))
}

// A rule's limits are keys of [qc], and every key of [qc] is a rule's.
func TestRulesNameTheirKeys(t *testing.T) {
	keys := map[string]bool{}
	for i := range reflect.TypeFor[manifests.QC]().NumField() {
		keys[reflect.TypeFor[manifests.QC]().Field(i).Tag.Get("toml")] = false
	}
	seen := map[string]bool{}
	for _, r := range Rules {
		if seen[r.Name] || r.Looks == "" || (len(r.Keys) == 0 && (r.Limit == "" || r.Source == "")) {
			t.Errorf("rule %+v stands twice, or does not say what it looks at, its limit or the limit's source", r)
		}
		seen[r.Name] = true
		for _, k := range r.Keys {
			if _, ok := keys[k]; !ok {
				t.Errorf("rule %q names qc.%s, which there is not", r.Name, k)
			}
			keys[k] = true
		}
		if !slices.Contains([]string{"analysis", "source", "pair", "estimate"}, r.On) {
			t.Errorf("rule %q is on %q", r.Name, r.On)
		}
	}
	for k, used := range keys {
		if !used {
			t.Errorf("qc.%s is the limit of no rule", k)
		}
	}
}

// What the coupled exchange suggests, by the composition that was mixed: quartz
// in the spot, celsian unseen, sodium lost.
func TestCoupledExchangeSuggests(t *testing.T) {
	m := limits(t)
	for _, c := range []struct {
		what string
		n    map[chem.Cation]float64
		ba   bool
		want string // of coupled exchange; "" for none
		loss bool
	}{
		// NaAlSi3O8 + .15 SiO2 on 8 O
		{"quartz", map[chem.Cation]float64{chem.Si: 3.036, chem.Al: 0.964, chem.Na: 0.964, chem.K: 0}, true, "quartz", false},
		// .04 Ba not counted, on 8 O
		{"celsian", map[chem.Cation]float64{chem.Si: 2.975, chem.Al: 1.045, chem.Na: 0.2, chem.K: 0.765}, false, "BaO was not measured", false},
		// a tenth of the Na of albite gone, on 8 O
		{"Na loss", map[chem.Cation]float64{chem.Si: 3.019, chem.Al: 1.0063, chem.Na: 0.906, chem.K: 0}, true, "", true},
	} {
		found := OfAnalysis(m, analysis(chem.Afs, func(a *Analysis) {
			apfuOf(c.n)(a)
			if !c.ba {
				gone(chem.BaO)(a)
			}
		}))
		f, ok := fired(found, "coupled exchange")
		if ok != (c.want != "") || !strings.Contains(f.Detail, c.want) {
			t.Errorf("%s: coupled exchange says %q; want %q", c.what, f.Detail, c.want)
		}
		if _, loss := fired(found, "lost alkalis"); loss != c.loss {
			t.Errorf("%s: lost alkalis %v; want %v", c.what, loss, c.loss)
		}
	}
}

// The published anorthoclase of the feldspar reference, section 8: T 4.010, A
// .990, a sum of 5.000: no site rule fires.
func TestPublishedAnorthoclase(t *testing.T) {
	c := oxides(map[chem.Oxide]float64{chem.SiO2: 62.79, chem.Al2O3: 22.12, chem.Fe2O3: .36, chem.FeO: .41, chem.CaO: 3.76, chem.Na2O: 7.35, chem.K2O: 2.98})
	f := formula.Of(c, method.Basis{Oxygens: 8, Cations: 5, Ferric: method.AllFe3})
	a := &Analysis{Phase: chem.Afs, Composition: c, Formula: &f, Total: 99.8}
	for _, f := range OfAnalysis(limits(t), a) {
		if f.Rule != "BaO not measured" {
			t.Errorf("found %+v", f)
		}
	}
}

func oxides(wt map[chem.Oxide]float64) *chem.Composition {
	c := &chem.Composition{}
	for o, v := range wt {
		c.Value[chem.MeasurandOf(o)], c.State[chem.MeasurandOf(o)] = v, chem.Measured
	}
	return c
}

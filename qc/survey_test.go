package qc

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"tieline/manifests"
	"tieline/pipeline/tables"
	"tieline/thermo/chem"
	"tieline/thermo/formula"
	"tieline/thermo/method"
)

// spot is one row of a survey's test.
type spot struct {
	source, sample, label, pair, domain string
	phase                               chem.Phase
	wt                                  map[chem.Oxide]float64
	x, y                                float64
	stage                               bool
}

// fataler is a test or a property.
type fataler interface{ Fatal(args ...any) }

// table makes batches of spots, a batch for each run of one source.
func table(t fataler, spots []spot) *tables.Analyses {
	all := &tables.Analyses{}
	for from := 0; from < len(spots); {
		to := from
		builder := tables.NewBuilder(spots[from].source, chem.OxideWt)
		for ; to < len(spots) && spots[to].source == spots[from].source; to++ {
			s := &spots[to]
			a := tables.Analysis{Line: to + 2, Phase: s.phase, Composition: *oxides(s.wt)}
			a.Text[tables.AnalysisID] = fmt.Sprintf("%s/%s/%s#%d", s.source, s.sample, s.label, to)
			a.Text[tables.Sample], a.Text[tables.Label], a.Text[tables.PairLabel], a.Text[tables.Domain] = s.sample, s.label, s.pair, s.domain
			if s.stage {
				a.Number[tables.SpotXUm], a.Number[tables.SpotYUm] = s.x, s.y
				a.Has[tables.SpotXUm], a.Has[tables.SpotYUm] = true, true
			}
			if err := builder.Append(&a); err != nil {
				t.Fatal(err)
			}
		}
		all.Batches = append(all.Batches, builder.Finish()...)
		from = to
	}
	return all
}

// compiled is a manifest of the sources a, b and c, in that order.
func compiled(t fataler, qc string) *manifests.Manifest {
	text := "[compilation]\nid = \"t\"\ntitle = \"t\"\n"
	for _, id := range []string{"a", "b", "c"} {
		text += fmt.Sprintf("[[source]]\nid = %q\nfile = \"%s.csv\"\n", id, id)
	}
	m, problems := manifests.Parse("test", []byte(text+"[qc]\n"+qc))
	if problems != nil && problems.Len() > 0 {
		t.Fatal(problems)
	}
	return m
}

// Invented analyses: an alkali feldspar, a plagioclase, an orthopyroxene.
var (
	afsWt = map[chem.Oxide]float64{chem.SiO2: 65.05, chem.TiO2: 0, chem.Al2O3: 18.86, chem.MgO: 0, chem.CaO: 0.32, chem.BaO: 0.33, chem.Na2O: 2.84, chem.K2O: 12.50}
	plWt  = map[chem.Oxide]float64{chem.SiO2: 61.29, chem.TiO2: 0, chem.Al2O3: 23.9, chem.MgO: 0, chem.CaO: 5.3, chem.BaO: 0.05, chem.Na2O: 7.83, chem.K2O: 1.38}
	opxWt = map[chem.Oxide]float64{chem.SiO2: 53.86, chem.TiO2: 0.06, chem.Al2O3: 1.26, chem.Cr2O3: 0.02, chem.FeO: 19.24, chem.MnO: 0.30, chem.MgO: 25.09, chem.CaO: 0.41, chem.Na2O: 0.01}
)

func with(wt map[chem.Oxide]float64, change map[chem.Oxide]float64) map[chem.Oxide]float64 {
	out := map[chem.Oxide]float64{}
	for o, v := range wt {
		out[o] = v
	}
	for o, v := range change {
		out[o] = v
	}
	return out
}

func swap(wt map[chem.Oxide]float64) map[chem.Oxide]float64 {
	return with(wt, map[chem.Oxide]float64{chem.Na2O: wt[chem.K2O], chem.K2O: wt[chem.Na2O]})
}

// rows repeats a composition under different samples, each a little off the
// others so that no two are one analysis.
func rows(count int, phase chem.Phase, wt map[chem.Oxide]float64) []spot {
	var out []spot
	for i := range count {
		out = append(out, spot{source: "a", sample: fmt.Sprint("S", i), phase: phase,
			wt: with(wt, map[chem.Oxide]float64{chem.SiO2: wt[chem.SiO2] + 0.02*float64(i%5)})})
	}
	return out
}

// every finding of a survey: on analysis i, or on the sources where i is below 0.
func findings(t fataler, m *manifests.Manifest, spots []spot, i int) []Finding {
	s := Survey(m, table(t, spots))
	if i >= 0 {
		return s.Of(i)
	}
	var out []Finding
	for _, f := range s.Sources {
		out = append(out, f.Finding)
	}
	return out
}

// surveyCases are the rules that look at many analyses, each fired and just inside.
func surveyCases(t *testing.T) []ruleCase {
	look := func(spots []spot, i int) func(*manifests.Manifest) []Finding {
		return func(*manifests.Manifest) []Finding { return findings(t, compiled(t, ""), spots, i) }
	}
	twice := func(change map[chem.Oxide]float64) []spot {
		return []spot{{source: "a", sample: "S", phase: chem.Opx, wt: opxWt}, {source: "b", sample: "S", phase: chem.Opx, wt: with(opxWt, change)}}
	}
	named := func(second float64) []spot {
		return []spot{{source: "a", sample: "S", label: "o1", phase: chem.Opx, wt: opxWt},
			{source: "b", sample: "S", label: "o1", phase: chem.Opx, wt: with(opxWt, map[chem.Oxide]float64{chem.SiO2: 53.3, chem.CaO: second})}}
	}
	ppm := func(cr float64) map[chem.Oxide]float64 { return with(opxWt, map[chem.Oxide]float64{chem.Cr2O3: cr}) }
	metal := func(fe float64) map[chem.Oxide]float64 { return with(opxWt, map[chem.Oxide]float64{chem.FeO: fe}) }
	// TiO2 on, every figure stands one column too far left.
	dropped := with(afsWt, map[chem.Oxide]float64{chem.TiO2: 18.86, chem.Al2O3: 0, chem.MgO: 0.32, chem.CaO: 0.33, chem.BaO: 2.84, chem.Na2O: 12.50, chem.K2O: 0})
	sections := func(x float64) []spot {
		return []spot{{source: "a", sample: "S", domain: "S-A", phase: chem.Pl, wt: plWt, stage: true},
			{source: "a", sample: "S", domain: "S-A", phase: chem.Afs, wt: afsWt, stage: true, x: 100, y: 100},
			{source: "a", sample: "S", domain: "S-B", phase: chem.Afs, wt: swap(afsWt), stage: true, x: x, y: 50}}
	}
	return []ruleCase{
		// Six numbers equal, three not; with five equal it is another analysis.
		{"duplicate", SetAside, look(twice(map[chem.Oxide]float64{chem.Na2O: 0.02, chem.MnO: 0.31, chem.TiO2: 0.05}), 1),
			look(twice(map[chem.Oxide]float64{chem.Na2O: 0.02, chem.MnO: 0.31, chem.TiO2: 0.05, chem.MgO: 25.08}), 1)},
		// .41 against .42, and against .4, which may be .41 rounded
		{"conflict between sources", Flagged, look(named(0.42), 0), look(append(named(0.41)[:1], spot{source: "b", sample: "S", label: "o1", phase: chem.Opx,
			wt: map[chem.Oxide]float64{chem.SiO2: 53.9, chem.CaO: 0.4, chem.FeO: 19.2}}), 0)},
		{"conflict between sources", Flagged, look(named(0.42), 1), look(twice(map[chem.Oxide]float64{chem.SiO2: 53.3}), 1)},
		{"columns shifted", Flagged, look([]spot{{source: "a", sample: "S", phase: chem.Afs, wt: dropped}}, 0), look([]spot{{source: "a", sample: "S", phase: chem.Afs, wt: afsWt}}, 0)},
		{"columns shifted", Flagged, look(rows(10, chem.Afs, dropped), -1), look(rows(9, chem.Afs, dropped), -1)},
		{"Na2O and K2O swapped", Flagged, look(rows(10, chem.Afs, swap(afsWt)), -1), look(rows(9, chem.Afs, swap(afsWt)), -1)},
		{"Na2O and K2O swapped", Noted, look(rows(9, chem.Pl, swap(plWt)), -1), look(rows(10, chem.Pl, plWt), -1)},
		{"FeO given as Fe", Flagged, look(rows(10, chem.Opx, metal(19.24/feOPerFe)), -1), look(rows(9, chem.Opx, metal(19.24/feOPerFe)), -1)},
		{"FeO given as Fe", Noted, look(rows(9, chem.Opx, metal(19.24/feOPerFe)), -1), look(rows(10, chem.Opx, opxWt), -1)},
		{"ppm given as wt%", Flagged, look(rows(10, chem.Opx, ppm(137)), -1), look(rows(9, chem.Opx, ppm(137)), -1)},
		{"ppm given as wt%", Noted, look(rows(9, chem.Opx, ppm(3.1)), -1), look(rows(9, chem.Opx, ppm(3)), -1)},
		{"shared stage origin", Noted, look(sections(100), -1), look(sections(100.1), -1)},
	}
}

// The preferred source's copy is kept, whichever comes first.
func TestDuplicatesAcrossSources(t *testing.T) {
	spots := []spot{
		{source: "a", sample: "S", label: "1", phase: chem.Afs, wt: afsWt},
		{source: "b", sample: "S", label: "x", phase: "Sa", wt: afsWt},
		{source: "b", sample: "s", label: "y", phase: chem.Afs, wt: afsWt}, // another sample, but for case
		{source: "c", sample: "S", label: "z", phase: chem.Pl, wt: afsWt},  // another phase
	}
	for _, c := range []struct {
		qc, kept string
		aside    int
	}{{"", "a/S/1#0", 1}, {"prefer = [\"b\"]\n", "b/S/x#1", 0}, {"prefer = [\"c\", \"b\"]\n", "b/S/x#1", 0}} {
		s := Survey(compiled(t, c.qc), table(t, spots))
		for i := range spots {
			found := s.Of(i)
			if i != c.aside {
				if len(found) != 0 {
					t.Errorf("%q: row %d: %+v; want nothing", c.qc, i, found)
				}
				continue
			}
			if len(found) != 1 || found[0].Effect != SetAside || !strings.Contains(found[0].Detail, c.kept) {
				t.Errorf("%q: row %d: %+v; want it set aside for %s", c.qc, i, found, c.kept)
			}
		}
	}
}

// An analysis that a source lists once more for a second partner is used and
// flagged; zeros alone make no duplicate.
func TestDuplicatesWithinASource(t *testing.T) {
	m := compiled(t, "")
	listed := []spot{{source: "a", sample: "S", pair: "1", phase: chem.Pl, wt: plWt}, {source: "a", sample: "S", pair: "2", phase: chem.Pl, wt: plWt}}
	if f, ok := fired(findings(t, m, listed, 1), "duplicate"); !ok || f.Effect != Flagged {
		t.Errorf("listed for two tie lines: %+v; want it flagged", f)
	}
	listed[1].pair = "1"
	if f, ok := fired(findings(t, m, listed, 1), "duplicate"); !ok || f.Effect != SetAside {
		t.Errorf("listed twice for one tie line: %+v; want it set aside", f)
	}
	quartz := map[chem.Oxide]float64{chem.SiO2: 0, chem.TiO2: 0, chem.Al2O3: 0, chem.Cr2O3: 0, chem.MgO: 0, chem.CaO: 0, chem.Na2O: 0}
	zeros := []spot{{source: "a", sample: "S", phase: "Qz", wt: quartz}, {source: "a", sample: "S", phase: "Qz", wt: quartz}}
	if f, ok := fired(findings(t, m, zeros, 1), "duplicate"); ok {
		t.Errorf("zeros alone: %+v; want no duplicate", f)
	}
}

// Both sides of a conflict name the other and both figures.
func TestConflictNamesBothValues(t *testing.T) {
	spots := []spot{
		{source: "a", sample: "S", label: "p1", phase: chem.Pl, wt: plWt},
		{source: "b", sample: "S", label: "p1", phase: chem.Pl, wt: with(plWt, map[chem.Oxide]float64{chem.Al2O3: 23.51, chem.Na2O: 7.38})},
	}
	s := Survey(compiled(t, ""), table(t, spots))
	for i, want := range [][]string{{"b/S/p1#1", "Na2O 7.83 here and 7.38 there"}, {"a/S/p1#0", "Na2O 7.38 here and 7.83 there"}} {
		f, ok := fired(s.Of(i), "conflict between sources")
		if !ok || f.Effect != Flagged || !strings.Contains(f.Detail, want[0]) || !strings.Contains(f.Detail, want[1]) {
			t.Errorf("row %d: %+v; want %q", i, f, want)
		}
	}
	spots = append(spots, spot{source: "b", sample: "S", label: "p1", phase: chem.Pl, wt: afsWt})
	if f, ok := fired(findings(t, compiled(t, ""), spots, 0), "conflict between sources"); ok {
		t.Errorf("a label that a source uses twice: %+v; want nothing", f)
	}
	rounded := []spot{spots[0], {source: "b", sample: "S", label: "p1", phase: chem.Pl,
		wt: map[chem.Oxide]float64{chem.SiO2: 61.3, chem.Al2O3: 23.9, chem.CaO: 5.3, chem.Na2O: 7.8, chem.K2O: 1.4, chem.BaO: 0.1}}}
	if f, ok := fired(findings(t, compiled(t, ""), rounded, 1), "duplicate"); !ok || f.Effect != SetAside {
		t.Errorf("the same but for rounding: %+v; want a duplicate", f)
	}
}

// A re-integrated feldspar with Na and K swapped sums to 4.984, and to 5.011 the
// other way round: one row decides nothing.
func TestSwappedReintegratedFeldspar(t *testing.T) {
	right := map[chem.Oxide]float64{chem.SiO2: 64.6, chem.Al2O3: 20.6, chem.CaO: 1.9, chem.Na2O: 5.6, chem.K2O: 6.9}
	sum := func(wt map[chem.Oxide]float64) float64 {
		f := formula.Of(oxides(wt), method.Basis{Oxygens: 8, Cations: 5, Ferric: method.AllFe3})
		return f.Sum
	}
	if a, b := sum(right), sum(swap(right)); math.Abs(a-4.984) > 0.001 || math.Abs(b-5.011) > 0.001 {
		t.Fatalf("cation sums %.4f and, swapped, %.4f; want 4.984 and 5.011", a, b)
	}
	for _, c := range []int{1, 40} {
		f, ok := fired(findings(t, compiled(t, ""), rows(c, chem.Afs, right), -1), "Na2O and K2O swapped")
		if !ok || f.Effect != Noted || !strings.Contains(f.Detail, "cannot tell") {
			t.Errorf("%d rows: %+v; want a note that it cannot tell", c, f)
		}
		if f, ok := fired(findings(t, compiled(t, ""), rows(c, chem.Afs, swap(right)), -1), "Na2O and K2O swapped"); ok && f.Effect > Noted {
			t.Errorf("%d rows, swapped: %+v; want no accusation", c, f)
		}
	}
}

// In every direction and from every column on, a shift is found and undone.
func TestShiftsAreFound(t *testing.T) {
	for _, wt := range []map[chem.Oxide]float64{afsWt, plWt} {
		c := oxides(wt)
		u := suspicion{role: chem.Afs}
		for _, m := range inTables {
			if c.State[m] == chem.Measured {
				u.order = append(u.order, m)
			}
		}
		found := 0
		for j := range len(u.order) - 1 {
			for _, right := range []bool{true, false} {
				bad, ok := move(c, u.order[j:], right)
				if !ok {
					continue
				}
				f := u.formula(&bad)
				if u.sound(&limits(t).QC, &bad, &f, true) {
					continue
				}
				sh, ok := u.shiftOf(&limits(t).QC, &bad, &f)
				if !ok || sh.right == right {
					t.Errorf("moved right %v from %s: found %v, %+v", right, u.order[j], ok, sh)
				}
				found++
			}
		}
		if found == 0 {
			t.Error("no shift was tried")
		}
	}
}

// Whatever comes in, every analysis has one verdict, and a duplicate's original
// is never itself set aside as one.
func TestEveryAnalysisHasOneVerdict(t *testing.T) {
	phases := []chem.Phase{chem.Afs, chem.Pl, chem.Opx, chem.Cpx, "Grt"}
	rapid.Check(t, func(t *rapid.T) {
		m := compiled(t, "")
		spots := rapid.SliceOfN(rapid.Custom(func(t *rapid.T) spot {
			s := spot{source: rapid.SampledFrom([]string{"a", "b"}).Draw(t, "source"), sample: rapid.SampledFrom([]string{"S", "s"}).Draw(t, "sample"),
				label: rapid.SampledFrom([]string{"", "1"}).Draw(t, "label"), phase: rapid.SampledFrom(phases).Draw(t, "phase"), wt: map[chem.Oxide]float64{}}
			base := rapid.SampledFrom([]map[chem.Oxide]float64{afsWt, plWt, opxWt}).Draw(t, "base")
			for o := range chem.NumOxides {
				if v, ok := base[o]; ok {
					s.wt[o] = v
				}
			}
			if rapid.Bool().Draw(t, "odd") {
				o := chem.Oxide(rapid.IntRange(0, int(chem.NumOxides)-1).Draw(t, "oxide"))
				s.wt[o] = rapid.Float64Range(-5, 5000).Draw(t, "wt")
			}
			return s
		}), 1, 30).Draw(t, "spots")
		all := table(t, spots)
		survey := Survey(m, all)
		var counts [3]int
		for i := range spots {
			b, row := all.At(i)
			var c chem.Composition
			b.Composition(row, &c)
			a := seen(b.Phase(row), &c)
			found := append(OfAnalysis(m, a), survey.Of(i)...)
			v, reasons := Judge(found)
			counts[v]++
			if (v == Kept) != (reasons == "") {
				t.Fatalf("row %d: %s with reasons %q", i, v, reasons)
			}
			for _, f := range found {
				if f.Value != nil && (math.IsNaN(*f.Value) || math.IsInf(*f.Value, 0)) {
					t.Fatalf("row %d: %+v holds no finite number", i, f)
				}
			}
			if survey.keptFor != nil && survey.keptFor[i] >= 0 && survey.keptFor[survey.keptFor[i]] >= 0 {
				t.Fatalf("row %d repeats row %d, which repeats row %d", i, survey.keptFor[i], survey.keptFor[survey.keptFor[i]])
			}
		}
		if counts[Kept]+counts[FlaggedRow]+counts[SetAsideRow] != len(spots) {
			t.Fatalf("%d analyses in, verdicts %v", len(spots), counts)
		}
	})
}

// seen is what the pipeline hands to the rules of an analysis.
func seen(phase chem.Phase, c *chem.Composition) *Analysis {
	a := &Analysis{Phase: phase, Composition: c, Formula: &formula.Formula{Why: method.NoFormula}}
	a.Total, _ = formula.Total(c)
	switch phase.Role() {
	case chem.Afs, chem.Pl:
		f := formula.Of(c, method.Basis{Oxygens: 8, Cations: 5, Ferric: method.AllFe3})
		a.Formula = &f
		if ab, or, an, cn, why := formula.Feldspar(c); why == method.OK {
			a.Feldspar, a.Celsian = &[3]float64{ab, or, an}, cn
		}
	case chem.Opx, chem.Cpx:
		f := formula.Of(c, method.Basis{Oxygens: 6, Cations: 4, Ferric: method.AllFe2})
		a.Formula, a.Pyroxene = &f, &f
	}
	return a
}

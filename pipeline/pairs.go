package pipeline

import (
	"slices"
	"strconv"
	"strings"
	"unique"

	"tieline/pipeline/lineage"
	"tieline/pipeline/pairing"
	"tieline/pipeline/tables"
	"tieline/qc"
	"tieline/thermo/chem"
	"tieline/thermo/formula"
	"tieline/thermo/method"
)

// pairUp pairs the analyses and gives the findings on those that could have a
// partner and got none.
func (s *state) pairUp() (findings []tables.FindingRow) {
	result := pairing.Pairs(s.all, &s.manifest.Pairing)
	s.pairs = result.Pairs
	for i := range result.Without {
		u := &result.Without[i]
		b, row := s.all.At(int(u.Analysis))
		f := qc.Finding{Rule: "no partner", Effect: qc.Noted, Value: finite(u.Um), Limit: "a partner", Detail: u.Why(s.all)}
		if f.Value != nil {
			f.Limit = strconv.FormatFloat(u.LimitUm, 'f', -1, 64) + " um"
		}
		findings = append(findings, s.findingRows("analysis", b.Text(tables.AnalysisID, row), u.Analysis, []qc.Finding{f})...)
	}
	s.pair = make([]pairState, len(s.pairs))
	s.firstPair = make([]int32, s.all.Len())
	for i := range s.firstPair {
		s.firstPair[i] = -1
	}
	s.recordRoles()
	return findings
}

// makePair fills the pair's state and gives its row and findings.
func (s *state) makePair(i int) (tables.PairRow, []tables.FindingRow) {
	p := s.pairs[i]
	a, ra := s.all.At(int(p.A))
	b, rb := s.all.At(int(p.B))
	for _, x := range []int32{p.A, p.B} {
		if s.firstPair[x] < 0 {
			s.firstPair[x] = int32(i)
		}
	}
	seen := &qc.Pair{KD: feMgDistribution(p.Kind, a, ra, b, rb), Texture: [2]string{a.Text(tables.Texture, ra), b.Text(tables.Texture, rb)}}
	for j, side := range []struct {
		b   *tables.Batch
		row int
	}{{a, ra}, {b, rb}} {
		if v, ok := side.b.Number(tables.PKbar, side.row); ok {
			seen.PKbar[j] = &v
		}
		if v, ok := side.b.Number(tables.PublishedC, side.row); ok {
			seen.PublishedC[j] = &v
		}
	}
	st := &s.pair[i]
	st.pressure = s.rowPressure(a, ra)
	if other := s.rowPressure(b, rb); st.pressure.source != pFromSource && other.source == pFromSource {
		st.pressure = other
	}
	if seen.PublishedAgree() {
		st.published = rowPublished(a, ra)
		if !st.published.given {
			st.published = rowPublished(b, rb)
		}
	}
	findings := slices.Concat(qc.InDoubt(string(a.Phase(ra)), s.doubted[p.A]), qc.InDoubt(string(b.Phase(rb)), s.doubted[p.B]), s.sides(p, a, ra, b, rb, seen.KD), qc.OfPair(seen))
	v, reasons := qc.Judge(findings)
	for _, x := range []int32{p.A, p.B} {
		bx, rx := s.all.At(int(x))
		v, reasons = qc.Inherit(v, reasons, s.verdicts[x], string(bx.Phase(rx))+": "+s.reasons[x])
	}
	st.verdict, st.reasons = v, unique.Make(reasons).Value() // many rows have the same
	kind := pairing.Kinds[p.Kind]
	st.lineage = lineage.New("tieline pair 1").Text(kind.Name).Text(p.Rule.String()).
		Digest(a.Lineage(ra)).Digest(b.Lineage(rb)).Sum()

	row := tables.PairRow{
		PairID: s.pairID(i), PairKind: kind.Name, Source: a.Source, Sample: a.Text(tables.Sample, ra),
		Locality: s.pairText(i, tables.Locality), Unit: s.pairText(i, tables.Unit), Texture: s.pairText(i, tables.Texture),
		PairLabel: s.pairLabel(i), AAnalysisID: a.Text(tables.AnalysisID, ra), APhase: string(a.Phase(ra)),
		BAnalysisID: b.Text(tables.AnalysisID, rb), BPhase: string(b.Phase(rb)), Rule: p.Rule.String(), DistanceUm: finite(pairing.Distance(s.all, p.A, p.B)),
		PSource: st.pressure.source, KdFeMg: seen.KD, Variant: variant,
		Verdict: v.String(), Reasons: reasons, Lineage: st.lineage.String(),
	}
	if st.pressure.given() && st.pressure.source != pFromLine {
		row.PKbar = &st.pressure.kbar
		if st.pressure.sigma > 0 {
			row.PSigmaKbar = &st.pressure.sigma
		}
	}
	if st.published.given {
		row.PublishedTC, row.PublishedKind = &st.published.c, st.published.kind
	}
	return row, s.findingRows("pair", row.PairID, p.A, findings)
}

// sides applies the rules on what the two compositions say of each other.
func (s *state) sides(p pairing.Pair, a *tables.Batch, ra int, b *tables.Batch, rb int, kd *float64) []qc.Finding {
	limits := &s.manifest.QC
	switch pairing.Kinds[p.Kind].A {
	case chem.Afs:
		afs, pl := fractions(a, ra), fractions(b, rb)
		if afs == nil || pl == nil {
			return nil
		}
		return qc.FeldsparPair(limits, *afs, *pl)
	case chem.Opx:
		var out []qc.Finding
		if opx, cpx := pyroxene(a, ra), pyroxene(b, rb); opx != nil && cpx != nil {
			out = qc.PyroxeneSides(opx.Apfu[chem.Ca], cpx.Apfu[chem.Ca])
		}
		if kd != nil {
			out = append(out, qc.Distribution(limits, *kd)...)
		}
		return out
	}
	return nil
}

// fractions gives a feldspar's Ab, Or, An; nil where it has none.
func fractions(b *tables.Batch, row int) *[3]float64 {
	var c chem.Composition
	b.Composition(row, &c)
	ab, or, an, _, why := formula.Feldspar(&c)
	if why != method.OK {
		return nil
	}
	return &[3]float64{ab, or, an}
}

// pyroxene gives a pyroxene's formula on 6 O, all Fe2+; nil where there is none
// or Ca was not looked for.
func pyroxene(b *tables.Batch, row int) *formula.Formula {
	var c chem.Composition
	b.Composition(row, &c)
	f := formula.Of(&c, method.Basis{Oxygens: 6, Cations: 4, Ferric: method.AllFe2})
	if f.Why != method.OK || !formula.Determined(&c, chem.Ca) {
		return nil
	}
	return &f
}

// feMgDistribution is (Fe/Mg)cpx / (Fe/Mg)opx of a pyroxene pair, all iron; nil
// where it can't be told.
func feMgDistribution(kind int, a *tables.Batch, ra int, b *tables.Batch, rb int) *float64 {
	if pairing.Kinds[kind].A != chem.Opx {
		return nil
	}
	ratio := func(x *tables.Batch, row int) float64 {
		var c chem.Composition
		x.Composition(row, &c)
		f := formula.Of(&c, method.Basis{Oxygens: 6, Cations: 4, Ferric: method.AllFe2})
		if f.Why != method.OK || f.Apfu[chem.Mg] <= 0 {
			return 0
		}
		return (f.Apfu[chem.Fe2] + f.Apfu[chem.Fe3]) / f.Apfu[chem.Mg]
	}
	opx, cpx := ratio(a, ra), ratio(b, rb)
	if opx <= 0 || cpx <= 0 {
		return nil
	}
	return finite(cpx / opx)
}

// recordRoles notes which samples hold which phases that a method wants beside
// its own.
func (s *state) recordRoles() {
	s.roleIn = map[sampleRole]bool{}
	wanted := map[chem.Phase]bool{}
	for _, m := range s.methods {
		if m.NeedsBeside != "" {
			wanted[m.NeedsBeside] = true
		}
	}
	for _, b := range s.all.Batches {
		for row := range b.Len() {
			for _, p := range []chem.Phase{b.Phase(row), b.Phase(row).Role()} {
				if wanted[p] {
					s.roleIn[sampleRole{b.Source, b.Text(tables.Sample, row), p}] = true
				}
			}
		}
	}
}

// beside says whether a phase is recorded beside an analysis: an analysis of it
// in the same sample, or its symbol in the assemblage.
func (s *state) beside(i int32, need chem.Phase) bool {
	b, row := s.all.At(int(i))
	if s.roleIn[sampleRole{b.Source, b.Text(tables.Sample, row), need}] {
		return true
	}
	symbols := strings.FieldsFunc(b.Text(tables.Assemblage, row), func(r rune) bool { return strings.ContainsRune(" ,;+-/", r) })
	for _, sym := range symbols {
		if chem.Phase(sym) == need || chem.Phase(sym).Role() == need {
			return true
		}
	}
	return false
}

// pairID names a pair by the label its rows share, or by its two analyses where
// another rule paired them: names that stay when rows come or go elsewhere.
// joinable escapes, as in a URL, what a pair_id joins its parts with, so that no
// two pairs share one.
var joinable = strings.NewReplacer("%", "%25", "/", "%2F", "+", "%2B", "|", "%7C")

func (s *state) pairID(i int) string {
	a, ra := s.all.At(int(s.pairs[i].A))
	name := s.pairLabel(i)
	name = joinable.Replace(name)
	if name == "" {
		b, rb := s.all.At(int(s.pairs[i].B))
		name = joinable.Replace(strings.TrimPrefix(a.Text(tables.AnalysisID, ra), a.Source+"/")) + "+" +
			joinable.Replace(strings.TrimPrefix(b.Text(tables.AnalysisID, rb), b.Source+"/"))
	}
	return a.Source + "/" + joinable.Replace(a.Text(tables.Sample, ra)) + "/" + name + ":" + pairing.Kinds[s.pairs[i].Kind].Name
}

// pairLabel is the label that made a pair, "" where another rule did.
func (s *state) pairLabel(i int) string {
	if s.pairs[i].Rule.String() != pairing.RuleListed {
		return ""
	}
	a, ra := s.all.At(int(s.pairs[i].A))
	return a.Text(tables.PairLabel, ra)
}

// pairText is what the pair's rows say: the common text, the one that is given,
// or both where they differ.
func (s *state) pairText(i int, t tables.Text) string {
	a, ra := s.all.At(int(s.pairs[i].A))
	b, rb := s.all.At(int(s.pairs[i].B))
	ta, tb := a.Text(t, ra), b.Text(t, rb)
	switch {
	case ta == tb || tb == "":
		return ta
	case ta == "":
		return tb
	}
	return ta + " + " + tb
}

// itemText is pairText for a pair, the row's own text for one analysis.
func (s *state) itemText(it item, t tables.Text) string {
	if it.pair >= 0 {
		return s.pairText(int(it.pair), t)
	}
	b, row := s.all.At(int(it.a))
	return b.Text(t, row)
}

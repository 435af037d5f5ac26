package reintegration

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"tieline/manifests"
	"tieline/pipeline/lineage"
	"tieline/pipeline/tables"
	"tieline/qc"
	"tieline/thermo/chem"
	"tieline/thermo/formula"
	"tieline/thermo/method"
)

// Kind is the analysis_kind and the texture of a re-integrated analysis.
const Kind = "re-integrated"

// Rule is the rule its findings carry.
const Rule = "re-integration"

// sumTolerance is how far the area fractions of a grain may lie from 1 and be
// taken as they are (common practice, no source).
const sumTolerance = 0.02

// Result is a compilation with its re-integrated analyses, each after the rows
// of its source. Grains and findings go by the index of an analysis.
type Result struct {
	Analyses *tables.Analyses
	Parts    map[int32][]int32 // of re-integrated analyses
	Findings map[int32][]qc.Finding
}

// Of re-integrates the grains whose parts have area fractions: rows of one
// source that share a sample, a domain and a grain. Where that can't be done
// the parts get a finding with the reason. A manifest that passed its checks
// names a set of volumes.
func Of(all *tables.Analyses, set *manifests.Reintegration) *Result {
	r := &maker{set: set, volumes: volumes[set.Volumes],
		out: Result{Analyses: &tables.Analyses{}, Parts: map[int32][]int32{}, Findings: map[int32][]qc.Finding{}}}
	for from := 0; from < len(all.Batches); {
		to := from + 1
		for to < len(all.Batches) && all.Batches[to].Source == all.Batches[from].Source {
			to++
		}
		r.source(all.Batches[from:to])
		from = to
	}
	return &r.out
}

type maker struct {
	set     *manifests.Reintegration
	volumes Volumes
	out     Result
	next    int32 // index of the next analysis
}

// row is a part: its place in the compilation and in its batch.
type row struct {
	i    int32
	b    *tables.Batch
	at   int
	area float64
}

func (r row) text(t tables.Text) string { return r.b.Text(t, r.at) }

type grain struct{ sample, domain, name string }

// source takes over the batches of one source and adds one of its grains.
func (m *maker) source(batches []*tables.Batch) {
	grains, order, ids := map[grain][]row{}, []grain(nil), map[string]bool{}
	for _, b := range batches {
		for at := range b.Len() {
			one := row{i: m.next, b: b, at: at}
			m.next++
			area, ok := b.Number(tables.AreaFraction, at)
			if id := one.text(tables.AnalysisID); strings.Contains(id, ":"+Kind) {
				ids[id] = true
			}
			if !ok || one.text(tables.SetAside) != "" {
				continue
			}
			one.area = area
			g := grain{one.text(tables.Sample), one.text(tables.Domain), one.text(tables.Grain)}
			if grains[g] == nil {
				order = append(order, g)
			}
			grains[g] = append(grains[g], one)
		}
	}
	m.out.Analyses.Batches = append(m.out.Analyses.Batches, batches...)
	if len(order) == 0 {
		return
	}
	builder := tables.NewBuilder(batches[0].Source, chem.EndMember)
	for _, g := range order {
		m.grain(g.name, grains[g], ids, builder)
	}
	m.out.Analyses.Batches = append(m.out.Analyses.Batches, builder.Finish()...)
}

// grain re-integrates one grain, or says why not.
func (m *maker) grain(name string, rows []row, ids map[string]bool, to *tables.Builder) {
	parts, why := partsOf(name, rows)
	var a *tables.Analysis
	var notes []qc.Finding
	if why == "" {
		a, notes = m.analysis(name, rows, parts, ids)
		if err := to.Append(a); err != nil {
			why = err.Error()
		}
	}
	if why != "" {
		for _, r := range rows {
			m.note(r.i, qc.Finding{Rule: Rule, Effect: qc.Noted, Limit: "parts of one feldspar grain", Detail: why})
		}
		return
	}
	ids[a.Text[tables.AnalysisID]] = true
	for _, f := range notes {
		m.note(m.next, f)
	}
	for _, r := range rows {
		m.out.Parts[m.next] = append(m.out.Parts[m.next], r.i)
	}
	m.next++
}

func (m *maker) note(i int32, f qc.Finding) { m.out.Findings[i] = append(m.out.Findings[i], f) }

// partsOf reads the parts of a grain; why says what stands in the way.
func partsOf(name string, rows []row) (parts []Part, why string) {
	if name == "" {
		return nil, "area fractions without a grain; name the grain its parts belong to"
	}
	if len(rows) < 2 {
		return nil, "the grain has one part with an area fraction; a whole takes two or more"
	}
	sum := 0.0
	for _, r := range rows {
		id := r.text(tables.AnalysisID)
		if role := r.b.Phase(r.at).Role(); role != chem.Afs && role != chem.Pl {
			return nil, fmt.Sprintf("%s of the grain is no feldspar but %s", id, r.b.Phase(r.at))
		}
		var c chem.Composition
		r.b.Composition(r.at, &c)
		ab, or, an, cn, f := formula.Feldspar(&c)
		rest := 1 - cn
		p := Part{X: [4]float64{float64(ab * rest), float64(or * rest), float64(an * rest), cn}, Area: r.area}
		if f != method.OK || !positive(p.X) {
			return nil, "Ab, Or and An of " + id + " are not known, or below zero"
		}
		sum += r.area
		parts = append(parts, p)
	}
	if !(sum > 0) {
		return nil, "the area fractions of the grain are all 0"
	}
	return parts, ""
}

func positive(x [4]float64) bool {
	return !slices.ContainsFunc(x[:], func(v float64) bool { return !(v >= 0) })
}

// analysis makes the re-integrated analysis and what there is to say of it.
func (m *maker) analysis(name string, rows []row, parts []Part, ids map[string]bool) (*tables.Analysis, []qc.Finding) {
	first := rows[0]
	a := &tables.Analysis{Line: first.b.Line(first.at), Column: first.b.Column(first.at), Phase: phaseOf(rows), EndMemberSum: 1}
	x := Bulk(parts, m.volumes)
	a.Composition.Kind = chem.EndMember
	for k, e := range []chem.Measurand{chem.XAb, chem.XOr, chem.XAn, chem.XCn} {
		if e != chem.XCn || celsianKnown(rows) {
			a.Composition.Value[e], a.Composition.State[e] = x[k], chem.Measured
		}
	}
	differ := common(a, rows)
	a.Text[tables.AnalysisID] = freeID(first.b.Source+"/"+name+":"+Kind, ids)
	a.Text[tables.PhaseText] = together(rows, tables.PhaseText)
	a.Text[tables.Texture], a.Text[tables.AnalysisKind] = Kind, Kind
	a.Lineage = m.lineage(rows)
	return a, m.notes(rows, parts, differ)
}

// phaseOf is alkali feldspar for a mesoperthite, whose parts are about equal;
// else what the parts, or the host, are.
func phaseOf(rows []row) chem.Phase {
	var roles, hosts []chem.Phase
	for _, r := range rows {
		role := r.b.Phase(r.at).Role()
		roles = append(roles, role)
		if strings.EqualFold(r.text(tables.Texture), "host") {
			hosts = append(hosts, role)
		}
	}
	for _, list := range [][]chem.Phase{roles, hosts} {
		if one := slices.Compact(list); len(one) == 1 {
			return one[0]
		}
	}
	return chem.Afs
}

// celsianKnown says whether Ba was looked for in every part.
func celsianKnown(rows []row) bool {
	for _, r := range rows {
		var c chem.Composition
		r.b.Composition(r.at, &c)
		if !c.Determined(chem.XCn) && (c.Kind == chem.EndMember || !formula.Determined(&c, chem.Ba)) {
			return false
		}
	}
	return true
}

// What a grain has in common with its parts. It lies nowhere on the stage.
var (
	commonTexts = []tables.Text{tables.Sample, tables.Domain, tables.Grain, tables.Generation, tables.Assemblage, tables.Session,
		tables.Locality, tables.Unit, tables.PairLabel, tables.PublishedKind, tables.PublishedMethod, tables.Latitude, tables.Longitude}
	commonNumbers = []tables.Number{tables.PublishedC, tables.PublishedSigmaC, tables.PublishedPKbar, tables.PKbar, tables.PSigmaKbar}
)

// common gives a what its parts say alike, a part that says nothing aside, and
// names what they do not.
func common(a *tables.Analysis, rows []row) (differ []string) {
	for _, t := range commonTexts {
		alike := true
		for _, r := range rows {
			text := r.text(t)
			alike = alike && (text == "" || a.Text[t] == "" || text == a.Text[t])
			if a.Text[t] == "" {
				a.Text[t] = text
			}
		}
		if !alike {
			a.Text[t] = ""
			differ = append(differ, t.String())
		}
	}
	for _, n := range commonNumbers {
		alike := true
		for _, r := range rows {
			v, ok := r.b.Number(n, r.at)
			alike = alike && (!ok || !a.Has[n] || v == a.Number[n])
			if ok && !a.Has[n] {
				a.Number[n], a.Has[n] = v, true
			}
		}
		if !alike {
			a.Number[n], a.Has[n] = 0, false
			differ = append(differ, n.String())
		}
	}
	return differ
}

// together joins the different texts of the parts.
func together(rows []row, t tables.Text) string {
	var all []string
	for _, r := range rows {
		if text := r.text(t); text != "" && !slices.Contains(all, text) {
			all = append(all, text)
		}
	}
	return strings.Join(all, " + ")
}

// freeID adds #2, #3 ... where grains of two samples have one name.
func freeID(id string, taken map[string]bool) string {
	name := id
	for n := 2; taken[name]; n++ {
		name = id + "#" + strconv.Itoa(n)
	}
	return name
}

// lineage covers the parts, whose own covers their area fractions, and the volumes.
func (m *maker) lineage(rows []row) lineage.Digest {
	e := lineage.New("tieline re-integration 1").Float(m.volumes.Ab).Float(m.volumes.Or).Float(m.volumes.An).List(len(rows))
	for _, r := range rows {
		e.Digest(r.b.Lineage(r.at))
	}
	return e.Sum()
}

// notes are the findings on a re-integrated analysis.
func (m *maker) notes(rows []row, parts []Part, differ []string) []qc.Finding {
	var ids []string
	sum := 0.0
	for i, r := range rows {
		ids = append(ids, r.text(tables.AnalysisID))
		sum += parts[i].Area
	}
	out := []qc.Finding{{Rule: Rule, Effect: qc.Noted, Limit: "volumes " + m.set.Volumes,
		Detail: "put together from " + strings.Join(ids, ", ") + ": the composition before exsolution; alone it gives a minimum temperature"}}
	// The last digit of a sum of decimals is not the source's.
	if math.Abs(sum-1) > sumTolerance+1e-9 {
		out = append(out, qc.Finding{Rule: "area fractions", Effect: qc.Flagged, Value: &sum, Limit: "1 +- 0.02",
			Detail: "the area fractions of its parts add up to " + strconv.FormatFloat(sum, 'g', 4, 64) + "; they were brought to 1"})
	}
	if len(differ) > 0 {
		out = append(out, qc.Finding{Rule: Rule, Effect: qc.Noted, Limit: "parts that say the same",
			Detail: "its parts differ in " + strings.Join(differ, ", ") + "; it has none"})
	}
	return out
}

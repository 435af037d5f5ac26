package qc

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"strings"

	"tieline/manifests"
	"tieline/pipeline/tables"
	"tieline/thermo/chem"
)

// SourceFinding is a finding on a column of a source, or on what it holds of a
// sample, rather than on one row.
type SourceFinding struct {
	Source string
	Column string // the column's quantity, or "sample X"
	Finding
}

// Surveyed is what looking at all analyses together shows. It is read by many
// goroutines.
type Surveyed struct {
	Sources []SourceFinding // in the order of the sources

	all     *tables.Analyses
	keptFor []int32         // per analysis, the one it duplicates, -1 for none; nil without duplicates
	against map[int32]int32 // per analysis, one of another source with the same name and other figures
	shifted map[int32]shift
}

// Survey looks for what no single row shows: duplicates, conflicts between
// sources, columns that are swapped, shifted, or in another unit, and thin
// sections whose stage coordinates lie over one another. Two integers per
// analysis and the findings are all it keeps.
func Survey(m *manifests.Manifest, all *tables.Analyses) *Surveyed {
	s := &Surveyed{all: all, against: map[int32]int32{}, shifted: map[int32]shift{}}
	rank := ranks(m)
	s.duplicates(rank)
	s.conflicts(rank)
	s.columns(m)
	s.stages()
	order := map[string]int{}
	for i := range m.Sources {
		order[m.Sources[i].ID] = i
	}
	slices.SortStableFunc(s.Sources, func(a, b SourceFinding) int { return cmp.Compare(order[a.Source], order[b.Source]) })
	return s
}

// Of gives the findings on analysis i.
func (s *Surveyed) Of(i int) []Finding {
	var out []Finding
	if s.keptFor != nil && s.keptFor[i] >= 0 {
		out = append(out, s.duplicate(i, int(s.keptFor[i])))
	}
	if other, ok := s.against[int32(i)]; ok {
		out = append(out, s.conflict(i, int(other)))
	}
	if sh, ok := s.shifted[int32(i)]; ok {
		out = append(out, sh.finding())
	}
	if len(s.Sources) > 0 {
		b, _ := s.all.At(i)
		out = append(out, columnsInDoubt(s.Sources, b.Source)...)
	}
	return out
}

// columnsInDoubt puts on an analysis what its source's columns are flagged for.
func columnsInDoubt(found []SourceFinding, source string) []Finding {
	var out []Finding
	for _, f := range found {
		if f.Source == source && f.Effect == Flagged {
			out = append(out, Finding{Rule: "column in doubt", Effect: Flagged, Limit: "columns as their headers say",
				Detail: f.Column + " of this source: " + f.Rule})
		}
	}
	return out
}

// ranks orders the sources by preference: those named first, the rest alike, so
// that their order of reading decides.
func ranks(m *manifests.Manifest) map[string]int32 {
	out := map[string]int32{}
	for i := range m.Sources {
		out[m.Sources[i].ID] = int32(len(m.QC.Prefer))
	}
	for i, id := range m.QC.Prefer {
		out[id] = int32(i)
	}
	return out
}

// keyed is an analysis under a hash of what it may share with others.
type keyed struct {
	key   uint64
	rank  int32
	index int32
}

// gather hashes the analyses that are not passed over and have what key asks
// for, and orders them so that those alike stand together, the preferred first.
func (s *Surveyed) gather(rank map[string]int32, key func(b *tables.Batch, row int) (uint64, bool)) []keyed {
	out := make([]keyed, 0, s.all.Len())
	index := int32(0)
	for _, b := range s.all.Batches {
		for row := range b.Len() {
			if b.Text(tables.SetAside, row) == "" {
				if k, ok := key(b, row); ok {
					out = append(out, keyed{k, rank[b.Source], index})
				}
			}
			index++
		}
	}
	slices.SortFunc(out, func(a, b keyed) int {
		return cmp.Or(cmp.Compare(a.key, b.key), cmp.Compare(a.rank, b.rank), cmp.Compare(a.index, b.index))
	})
	return out
}

// runs calls with for each run of two or more of one key.
func runs(of []keyed, with func([]keyed)) {
	for from := 0; from < len(of); {
		to := from + 1
		for to < len(of) && of[to].key == of[from].key {
			to++
		}
		if to-from > 1 {
			with(of[from:to])
		}
		from = to
	}
}

// hash is FNV-1a, 64 bits.
type hash uint64

func newHash() hash { return 14695981039346656037 }

func (h hash) text(s string) hash {
	for i := range len(s) {
		h = (h ^ hash(s[i])) * 1099511628211
	}
	return (h ^ 0xff) * 1099511628211 // ends the text: no byte of UTF-8
}

func (h hash) number(v float64) hash {
	bits := math.Float64bits(v)
	for range 8 {
		h = (h ^ hash(bits&0xff)) * 1099511628211
		bits >>= 8
	}
	return h
}

// mineral is the role, so that sanidine and Afs may be one analysis, else the phase.
func mineral(b *tables.Batch, row int) string {
	p := b.Phase(row)
	if r := p.Role(); r != "" {
		p = r
	}
	return string(p)
}

// look is one analysis as the survey compares it.
type look struct {
	batch       *tables.Batch
	row         int
	composition chem.Composition
}

func (s *Surveyed) look(i int) *look {
	l := &look{}
	l.batch, l.row = s.all.At(i)
	l.batch.Composition(l.row, &l.composition)
	return l
}

func (l *look) id() string { return l.batch.Text(tables.AnalysisID, l.row) }

// sameThing says whether two analyses are of one phase of one sample. Samples
// that differ only in case are different.
func sameThing(a, b *look) bool {
	return mineral(a.batch, a.row) == mineral(b.batch, b.row) && a.batch.Text(tables.Sample, a.row) == b.batch.Text(tables.Sample, b.row)
}

// sixEqual is how many measured quantities make two analyses one: six that are
// equal (common practice, no source).
const sixEqual = 6

// anchors are the quantities every duplicate shares; their values lead to it.
var anchors = [...][3]chem.Measurand{
	chem.OxideWt: {chem.MeasurandOf(chem.SiO2), chem.MeasurandOf(chem.Al2O3), chem.MeasurandOf(chem.CaO)},
	chem.Apfu:    {chem.MeasurandOfCation(chem.Si), chem.MeasurandOfCation(chem.Al), chem.MeasurandOfCation(chem.Ca)},
}

// mostOriginals bounds how many analyses of one phase and sample that agree in
// the anchors and not in the rest each further one is held against.
const mostOriginals = 64

// duplicates marks every analysis that repeats a preferred one.
func (s *Surveyed) duplicates(rank map[string]int32) {
	var c chem.Composition
	found := s.gather(rank, func(b *tables.Batch, row int) (uint64, bool) {
		if b.Kind == chem.EndMember { // four fractions at most
			return 0, false
		}
		b.Composition(row, &c)
		h := newHash().text(mineral(b, row)).text(b.Text(tables.Sample, row))
		for _, m := range anchors[b.Kind] {
			h = h.number(c.Amount(m))
		}
		return uint64(h), true
	})
	runs(found, func(run []keyed) {
		var originals []*look
		var index []int32
		for _, k := range run {
			l := s.look(int(k.index))
			at := slices.IndexFunc(originals, func(o *look) bool { return sameThing(o, l) && repeats(&o.composition, &l.composition) })
			if at >= 0 {
				s.keep(index[at], k.index)
			} else if len(originals) < mostOriginals {
				originals, index = append(originals, l), append(index, k.index)
			}
		}
	})
}

// keep records that analysis i repeats the kept one, and the conflict where a
// figure differs all the same.
func (s *Surveyed) keep(kept, i int32) {
	if s.keptFor == nil {
		s.keptFor = slices.Repeat([]int32{-1}, s.all.Len())
	}
	s.keptFor[i] = kept
	if s.differ(int(kept), int(i)) != "" {
		s.oppose(kept, i)
	}
}

// oppose records a conflict on both sides.
func (s *Surveyed) oppose(a, b int32) {
	if _, ok := s.against[a]; !ok {
		s.against[a] = b
	}
	if _, ok := s.against[b]; !ok {
		s.against[b] = a
	}
}

// repeats says whether two compositions are one: six equal numbers that are not
// zero, or six equal cells of any kind and none that differs. Zeros and
// detection limits alone make no duplicate.
func repeats(a, b *chem.Composition) bool {
	if a.Kind != b.Kind || a.Oxygens != b.Oxygens {
		return false
	}
	numbers, cells, differ := 0, 0, 0
	for m := range chem.NumMeasurands {
		if !a.Determined(m) || !b.Determined(m) {
			continue
		}
		switch {
		case a.State[m] != b.State[m] || a.Value[m] != b.Value[m]:
			differ++
		case a.State[m] == chem.Measured && a.Value[m] != 0:
			numbers, cells = numbers+1, cells+1
		default:
			cells++
		}
	}
	return numbers >= sixEqual || (cells >= sixEqual && differ == 0 && numbers > 0)
}

// duplicate is the finding on analysis i. A source may list an analysis once
// more to give it a second partner: that copy is used, and flagged.
func (s *Surveyed) duplicate(i, kept int) Finding {
	a, k := s.look(i), s.look(kept)
	f := Finding{Rule: "duplicate", Effect: SetAside, Limit: fmt.Sprintf("fewer than %d equal quantities", sixEqual),
		Detail: "the same analysis as " + k.id() + ", which is kept"}
	pa, pk := a.batch.Text(tables.PairLabel, a.row), k.batch.Text(tables.PairLabel, k.row)
	if a.batch.Source == k.batch.Source && pa != pk && pa != "" && pk != "" {
		f.Effect = Flagged
		f.Detail = fmt.Sprintf("the same analysis as %s, listed again for another tie line; both tie lines rest on one spot", k.id())
	}
	return f
}

// conflicts holds analyses of one name, sample and phase from different sources
// against one another. A name that a source uses twice says nothing.
func (s *Surveyed) conflicts(rank map[string]int32) {
	found := s.gather(rank, func(b *tables.Batch, row int) (uint64, bool) {
		label := b.Text(tables.Label, row)
		return uint64(newHash().text(mineral(b, row)).text(b.Text(tables.Sample, row)).text(label)), label != ""
	})
	runs(found, func(run []keyed) {
		times := map[string]int{}
		for _, k := range run {
			b, _ := s.all.At(int(k.index))
			times[b.Source]++
		}
		if len(times) < 2 {
			return
		}
		var first *look
		var kept int32
		for _, k := range run {
			l := s.look(int(k.index))
			switch {
			case times[l.batch.Source] > 1 || s.keptFor != nil && s.keptFor[k.index] >= 0:
			case first == nil:
				first, kept = l, k.index
			case !sameThing(first, l) || first.batch.Text(tables.Label, first.row) != l.batch.Text(tables.Label, l.row):
			case s.differ(int(kept), int(k.index)) != "":
				s.oppose(kept, k.index)
			case common(&first.composition, &l.composition) >= sixEqual:
				s.keep(kept, k.index) // the same but for rounding
			}
		}
	})
}

// common counts what both have as numbers.
func common(a, b *chem.Composition) int {
	n := 0
	for m := range chem.NumMeasurands {
		if a.State[m] == chem.Measured && b.State[m] == chem.Measured {
			n++
		}
	}
	return n
}

// conflict is the finding on analysis i.
func (s *Surveyed) conflict(i, other int) Finding {
	o := s.look(other)
	return Finding{Rule: "conflict between sources", Effect: Flagged, Limit: "equal but for rounding",
		Detail: fmt.Sprintf("%s gives the same analysis other figures: %s", o.id(), s.differ(i, other))}
}

// differ lists what two analyses both give and not alike, "Na2O 3.26 here and
// 3.62 there"; "" where all agree but for rounding.
func (s *Surveyed) differ(i, other int) string {
	a, b := s.look(i), s.look(other)
	if a.composition.Kind != b.composition.Kind || a.composition.Oxygens != b.composition.Oxygens {
		return ""
	}
	half := math.Max(halfStep(&a.composition), halfStep(&b.composition))
	var out []string
	for m := range chem.NumMeasurands {
		x, y := a.composition.Value[m], b.composition.Value[m]
		if a.composition.State[m] == chem.Measured && b.composition.State[m] == chem.Measured && math.Abs(x-y) > half+eps {
			out = append(out, fmt.Sprintf("%s %s here and %s there", m, text(x, 4), text(y, 4)))
		}
	}
	return strings.Join(out, ", ")
}

// halfStep is half of the last decimal a composition is printed with, at most
// four.
func halfStep(c *chem.Composition) float64 {
	half := 0.5
	for range 4 {
		whole := true
		for m := range chem.NumMeasurands {
			if v := c.Value[m] * 0.5 / half; c.State[m] == chem.Measured && math.Abs(v-math.Floor(v+0.5)) > 1e-6 {
				whole = false
				break
			}
		}
		if whole {
			break
		}
		half /= 10
	}
	return half
}

// stages notes samples whose thin sections have stage coordinates that lie over
// one another: no distance may be taken across them.
func (s *Surveyed) stages() {
	var source string
	frames := map[[2]string]*frame{}
	var order [][2]string
	flush := func() {
		s.overlaps(source, order, frames)
		clear(frames)
		order = order[:0]
	}
	for _, b := range s.all.Batches {
		if b.Source != source {
			flush()
			source = b.Source
		}
		for row := range b.Len() {
			x, okX := b.Number(tables.SpotXUm, row)
			y, okY := b.Number(tables.SpotYUm, row)
			domain := b.Text(tables.Domain, row)
			if !okX || !okY || domain == "" {
				continue
			}
			key := [2]string{b.Text(tables.Sample, row), domain}
			if frames[key] == nil {
				frames[key] = &frame{x, x, y, y}
				order = append(order, key)
			}
			frames[key].add(x, y)
		}
	}
	flush()
}

// frame is the rectangle of the stage in which a thin section's spots lie, um.
type frame struct{ x0, x1, y0, y1 float64 }

func (f *frame) add(x, y float64) {
	f.x0, f.x1, f.y0, f.y1 = math.Min(f.x0, x), math.Max(f.x1, x), math.Min(f.y0, y), math.Max(f.y1, y)
}

func (f *frame) over(g *frame) bool {
	return f.x0 <= g.x1 && g.x0 <= f.x1 && f.y0 <= g.y1 && g.y0 <= f.y1
}

// overlaps notes each sample once, with the first two thin sections that do.
func (s *Surveyed) overlaps(source string, order [][2]string, frames map[[2]string]*frame) {
	slices.SortStableFunc(order, func(a, b [2]string) int { return cmp.Compare(a[0], b[0]) })
	for from := 0; from < len(order); {
		to := from
		for to < len(order) && order[to][0] == order[from][0] {
			to++
		}
		if a, b, ok := firstOverlap(order[from:to], frames); ok {
			s.Sources = append(s.Sources, SourceFinding{source, "sample " + order[from][0], Finding{Rule: "shared stage origin", Effect: Noted, Limit: "one thin section",
				Detail: fmt.Sprintf("thin sections %s and %s of sample %s have stage coordinates that lie over one another; no distance is taken across them", a, b, order[from][0])}})
		}
		from = to
	}
}

func firstOverlap(sections [][2]string, frames map[[2]string]*frame) (a, b string, ok bool) {
	for i := range sections {
		for j := range i {
			if frames[sections[i]].over(frames[sections[j]]) {
				return sections[j][1], sections[i][1], true
			}
		}
	}
	return "", "", false
}

package tables

import (
	"fmt"
	"math"
	"slices"
	"sort"
	"sync"

	"github.com/apache/arrow/go/v17/arrow"
	"github.com/apache/arrow/go/v17/arrow/array"

	"tieline/pipeline/lineage"
	"tieline/pipeline/problem"
	"tieline/thermo/chem"
)

// Text names one text a source may give of an analysis.
type Text uint8

// The texts. SetAside is not a cell: it says why ingest sets the row aside (a
// phase the manifest passes over); "" for none.
const (
	AnalysisID Text = iota
	Label
	Sample
	PhaseText
	Texture
	Domain
	Generation
	Assemblage
	AnalysisKind
	Grain
	Locality
	Unit
	PairLabel
	Session
	PublishedKind
	PublishedMethod
	Latitude
	Longitude
	SetAside
	NumTexts
)

var textNames = [NumTexts]string{
	"analysis_id", "label", "sample", "phase_text", "texture", "domain", "generation", "assemblage",
	"analysis_kind", "grain", "locality", "unit", "pair_label", "session", "published_kind",
	"published_method", "latitude", "longitude", "set_aside",
}

func (t Text) String() string { return textNames[t] }

// Number names one number a source may give of an analysis beside its
// composition.
type Number uint8

// The numbers: micrometres, degC, kbar, a count, wt%, a fraction of an area.
const (
	SpotXUm Number = iota
	SpotYUm
	PublishedC
	PublishedSigmaC
	PublishedPKbar
	PKbar
	PSigmaKbar
	NSpots
	ReportedTotal
	AreaFraction
	NumNumbers
)

var numberNames = [NumNumbers]string{
	"spot_x_um", "spot_y_um", "published_t_c", "published_sigma_c", "published_p_kbar",
	"p_kbar", "p_sigma_kbar", "n_spots", "reported_total_wt", "area_fraction",
}

func (n Number) String() string { return numberNames[n] }

// Analysis is one row on its way into a batch; the reader reuses one.
type Analysis struct {
	Line, Column int // in the source, 1-based; Column 0 where the row has one analysis
	Phase        chem.Phase
	Text         [NumTexts]string
	Number       [NumNumbers]float64
	Has          [NumNumbers]bool
	Composition  chem.Composition
	Sigma        [chem.NumMeasurands]float64 // 1-sigma as given by the source, same unit; 0 for none
	EndMemberSum float64                     // before renormalising; 0 where the kind is not EndMember
	Lineage      lineage.Digest
}

// BatchRows is the most rows a batch holds.
const BatchRows = 8192

// Builder gathers the analyses of one source into batches.
type Builder struct {
	source string
	kind   chem.Kind
	done   []*Batch
	rows   []Analysis
	text   int // bytes of text staged
}

// maxText is how many bytes of text close a batch early: Arrow counts them in
// 32 bits, and a source may hold long cells.
const maxText = 64 << 20

// NewBuilder opens a builder for one source, whose compositions are all of one
// kind.
func NewBuilder(source string, kind chem.Kind) *Builder {
	return &Builder{source: source, kind: kind}
}

// Append copies a into the current batch. The error says what no batch can
// hold: a number that is not finite, a value beside a state that has none, apfu
// on other oxygens than the source's, a line past 2147483647.
func (b *Builder) Append(a *Analysis) error {
	if err := b.check(a); err != nil {
		return fmt.Errorf("%s: line %d: %w", problem.Clean(b.source), a.Line, err)
	}
	if len(b.rows) == cap(b.rows) { // doubled: append alone grows by a quarter and copies five times
		b.rows = slices.Grow(b.rows, max(64, len(b.rows)))
	}
	b.rows = append(b.rows, *a)
	for _, t := range a.Text {
		b.text += len(t)
	}
	if len(b.rows) == BatchRows || b.text >= maxText {
		b.flush()
	}
	return nil
}

func (b *Builder) check(a *Analysis) error {
	if a.Composition.Kind != b.kind {
		return fmt.Errorf("a composition in %s among compositions in %s", a.Composition.Kind, b.kind)
	}
	if len(b.rows) > 0 && a.Composition.Oxygens != b.rows[0].Composition.Oxygens {
		return fmt.Errorf("a composition on %v oxygens among compositions on %v", a.Composition.Oxygens, b.rows[0].Composition.Oxygens)
	}
	if a.Line < 0 || a.Line > math.MaxInt32 || a.Column < 0 || a.Column > math.MaxInt32 {
		return fmt.Errorf("column %d: past the 2147483647 lines or columns a source may have", a.Column)
	}
	for n, x := range a.Number {
		if a.Has[n] && !finite(x) {
			return fmt.Errorf("%s is %v, not a finite number", Number(n), x)
		}
	}
	for m := range chem.NumMeasurands {
		if !finite(a.Composition.Value[m]) || !finite(a.Sigma[m]) {
			return fmt.Errorf("%s is %v with sigma %v, not finite numbers", m, a.Composition.Value[m], a.Sigma[m])
		}
		s := a.Composition.State[m]
		if (s == chem.Missing || s == chem.NotAnalysed) && a.Composition.Value[m] != 0 {
			return fmt.Errorf("%s is %s and yet has the value %v", m, s, a.Composition.Value[m])
		}
	}
	if !finite(a.EndMemberSum) {
		return fmt.Errorf("the sum of end members is %v, not a finite number", a.EndMemberSum)
	}
	return nil
}

func finite(x float64) bool { return !math.IsNaN(x) && !math.IsInf(x, 0) }

// Finish gives the batches, in the order of Append.
func (b *Builder) Finish() []*Batch {
	b.flush()
	b.rows = nil
	return b.done
}

// Batch holds up to BatchRows analyses of one source as Arrow columns. It
// never changes once built and may be read by many goroutines. Columns that
// hold nothing are not stored.
type Batch struct {
	Source string
	Kind   chem.Kind

	oxygens      float64 // that apfu are given on
	phase        textColumn
	line         *array.Int32
	column       *array.Int32 // nil: all 0
	text         [NumTexts]textColumn
	number       [NumNumbers]*array.Float64
	measured     []measuredColumn // by measurand
	sigma        [chem.NumMeasurands]*array.Float64
	endMemberSum *array.Float64 // nil: all 0
	lineage      *array.FixedSizeBinary
	record       arrow.Record
}

// measuredColumn is one measurand. Without a state column a value is measured
// and a null is missing.
type measuredColumn struct {
	of    chem.Measurand
	value *array.Float64 // nil: no values, only states
	state *array.Uint8   // nil unless some cell is neither measured nor missing
}

// Len is the number of analyses.
func (b *Batch) Len() int { return b.line.Len() }

// Text gives text t of row i, "" where there is none.
func (b *Batch) Text(t Text, i int) string { return b.text[t].at(i) }

// Number gives number n of row i, and whether there is one.
func (b *Batch) Number(n Number, i int) (float64, bool) {
	c := b.number[n]
	if c == nil || c.IsNull(i) {
		return 0, false
	}
	return c.Value(i), true
}

// Phase gives row i's phase symbol.
func (b *Batch) Phase(i int) chem.Phase { return chem.Phase(b.phase.at(i)) }

// Line gives row i's line in the source, 1-based.
func (b *Batch) Line(i int) int { return int(b.line.Value(i)) }

// Column gives row i's column in the source, 0 where a row is one analysis.
func (b *Batch) Column(i int) int {
	if b.column == nil {
		return 0
	}
	return int(b.column.Value(i))
}

// Composition writes row i's composition over what into holds.
func (b *Batch) Composition(i int, into *chem.Composition) {
	*into = chem.Composition{Kind: b.Kind, Oxygens: b.oxygens}
	for _, c := range b.measured {
		if c.value != nil && c.value.IsValid(i) {
			into.Value[c.of], into.State[c.of] = c.value.Value(i), chem.Measured
		}
		if c.state != nil {
			into.State[c.of] = chem.State(c.state.Value(i))
		}
	}
}

// Sigma gives the source's own 1-sigma of measurand m in row i, 0 for none.
func (b *Batch) Sigma(m chem.Measurand, i int) float64 {
	c := b.sigma[m]
	if c == nil || c.IsNull(i) {
		return 0
	}
	return c.Value(i)
}

// EndMemberSum gives the sum of row i's end members before they were
// renormalised to 1, 0 where the kind is not EndMember.
func (b *Batch) EndMemberSum(i int) float64 {
	if b.endMemberSum == nil {
		return 0
	}
	return b.endMemberSum.Value(i)
}

// Lineage gives row i's digest.
func (b *Batch) Lineage(i int) lineage.Digest { return lineage.Digest(b.lineage.Value(i)) }

// Record gives the columns as one Arrow record: texts and numbers under their
// names, measurands under theirs ("SiO2", "SiO2 sigma", "SiO2 state"). It
// shares the batch's memory.
func (b *Batch) Record() arrow.Record { return b.record }

// Analyses is every analysis of a compilation, in reading order. Batches must
// not change after the first call of Len or At.
type Analyses struct {
	Batches []*Batch

	once   sync.Once
	starts []int // of each batch, and the total last
}

// Len is the number of analyses.
func (a *Analyses) Len() int {
	a.once.Do(a.index)
	return a.starts[len(a.starts)-1]
}

// At gives the batch and the row in it of analysis i, 0 <= i < Len.
func (a *Analyses) At(i int) (b *Batch, row int) {
	a.once.Do(a.index)
	if i < 0 || i >= a.starts[len(a.starts)-1] {
		panic(fmt.Sprintf("tables: analysis %d of %d", i, a.starts[len(a.starts)-1]))
	}
	n := sort.SearchInts(a.starts, i+1) - 1
	return a.Batches[n], i - a.starts[n]
}

func (a *Analyses) index() {
	a.starts = slices.Grow(a.starts, len(a.Batches)+1)
	total := 0
	a.starts = append(a.starts, total)
	for _, b := range a.Batches {
		total += b.Len()
		a.starts = append(a.starts, total)
	}
}

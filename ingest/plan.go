package ingest

import (
	"bytes"
	"cmp"
	"encoding/csv"
	"fmt"
	"maps"
	"slices"
	"strings"

	"tieline/manifests"
	"tieline/pipeline/lineage"
	"tieline/pipeline/problem"
	"tieline/pipeline/tables"
	"tieline/thermo/chem"
)

// plan is how the cells of one source become analyses. The header decides it
// once; the rows follow it.
type plan struct {
	source  *manifests.Source
	kind    chem.Kind
	columns []column // used, in the order of the quantities
	digest  lineage.Digest
	phases  *phaseReader

	constants [tables.NumTexts]string // of every row, from the manifest
	reports   []Column                // of every header that is not empty, in the file's order
	hasSample bool                    // a column or the manifest gives one
	hasPhase  bool
}

// column is one column that is used.
type column struct {
	at       int // cell of the row, from 0
	header   string
	quantity manifests.Quantity
	use      use
	report   int // of plan.reports
}

// use says what becomes of a cell.
type use struct {
	role      role
	text      tables.Text
	number    tables.Number
	scale     scale
	measurand chem.Measurand
}

type role uint8

const (
	textCell role = iota
	phaseCell
	numberCell
	valueCell // of a measurand
	sigmaCell // of a measurand
)

// scale brings a number to the unit of the tables.
type scale uint8

const (
	asGiven scale = iota
	kelvinToCelsius
	gpaToKbar
	mpaToKbar
	barToKbar
)

// uses is what each quantity beside the composition becomes.
var uses = map[manifests.Quantity]use{
	manifests.Sample: {text: tables.Sample}, manifests.Label: {text: tables.Label},
	manifests.PhaseName: {role: phaseCell, text: tables.PhaseText},
	manifests.Texture:   {text: tables.Texture}, manifests.Domain: {text: tables.Domain},
	manifests.Generation: {text: tables.Generation}, manifests.Assemblage: {text: tables.Assemblage},
	manifests.AnalysisKind: {text: tables.AnalysisKind}, manifests.Grain: {text: tables.Grain},
	manifests.Session: {text: tables.Session}, manifests.Locality: {text: tables.Locality},
	manifests.Unit: {text: tables.Unit}, manifests.PairLabel: {text: tables.PairLabel},
	manifests.PublishedKind: {text: tables.PublishedKind}, manifests.PublishedMethod: {text: tables.PublishedMethod},
	manifests.Latitude: {text: tables.Latitude}, manifests.Longitude: {text: tables.Longitude},
	manifests.XUm:             {role: numberCell, number: tables.SpotXUm},
	manifests.YUm:             {role: numberCell, number: tables.SpotYUm},
	manifests.PublishedC:      {role: numberCell, number: tables.PublishedC},
	manifests.PublishedK:      {role: numberCell, number: tables.PublishedC, scale: kelvinToCelsius},
	manifests.PublishedSigmaC: {role: numberCell, number: tables.PublishedSigmaC},
	manifests.PublishedPKbar:  {role: numberCell, number: tables.PublishedPKbar},
	manifests.PKbar:           {role: numberCell, number: tables.PKbar},
	manifests.PGpa:            {role: numberCell, number: tables.PKbar, scale: gpaToKbar},
	manifests.PMpa:            {role: numberCell, number: tables.PKbar, scale: mpaToKbar},
	manifests.PBar:            {role: numberCell, number: tables.PKbar, scale: barToKbar},
	manifests.PSigmaKbar:      {role: numberCell, number: tables.PSigmaKbar},
	manifests.NSpots:          {role: numberCell, number: tables.NSpots},
	manifests.Total:           {role: numberCell, number: tables.ReportedTotal},
	manifests.AreaFraction:    {role: numberCell, number: tables.AreaFraction},
}

func useOf(q manifests.Quantity) use {
	if m, sigma, ok := q.Measurand(); ok {
		if sigma {
			return use{role: sigmaCell, measurand: m}
		}
		return use{role: valueCell, measurand: m}
	}
	return uses[q]
}

// constant is what a manifest may say of every row of a source.
type constant struct {
	key, value string
	quantity   manifests.Quantity
}

func constantsOf(s *manifests.Source) []constant {
	all := []constant{
		{"sample", s.Sample, manifests.Sample}, {"phase", string(s.Phase), manifests.PhaseName},
		{"texture", s.Texture, manifests.Texture}, {"generation", s.Generation, manifests.Generation},
		{"analysis_kind", s.AnalysisKind, manifests.AnalysisKind},
		{"locality", s.Locality, manifests.Locality}, {"unit", s.Unit, manifests.Unit},
		{"published_kind", s.PublishedKind, manifests.PublishedKind},
		{"published_method", s.PublishedMethod, manifests.PublishedMethod},
	}
	return slices.DeleteFunc(all, func(c constant) bool { return c.value == "" })
}

// header is one header cell on its way into a plan.
type header struct {
	at      int
	shown   string // trimmed
	text    string // as headers are compared
	meaning meaning
}

// newPlan reads the header row; start is the text's. fatal says that no row is
// worth reading.
func newPlan(s *manifests.Source, cells []string, line int, start []byte) (p *plan, problems []problem.Problem, fatal bool) {
	p = &plan{source: s, kind: s.Kind(), phases: newPhaseReader(s)}
	h := &headerReader{plan: p, line: line}
	if h.wrongSeparator(cells, start) {
		return p, h.problems, true
	}
	headers := h.read(cells)
	never := func(string, string) bool { return false }
	h.alike("columns", slices.Sorted(maps.Keys(s.Columns)), words, never)
	h.alike("phases", slices.Sorted(maps.Keys(s.Phases)), foldName, func(a, b string) bool {
		return name(a) != name(b) && s.Phases[a] == s.Phases[b]
	})
	h.missingHeaders(headers)
	h.repeated(headers)
	h.use(headers)
	h.foreignUnits(headers)
	h.constants(headers)
	fatal = h.needed(cells)
	p.seal()
	return p, h.problems, fatal
}

type headerReader struct {
	plan     *plan
	line     int
	problems []problem.Problem
}

func (h *headerReader) problem(at *header, p problem.Problem) {
	p.Line = h.line
	if p.Kind == "" {
		p.Kind = "header"
	}
	if at != nil {
		p.Column, p.Name = at.at+1, at.shown
	}
	h.problems = append(h.problems, p)
}

func (h *headerReader) read(cells []string) []header {
	v := vocabularyOf[h.plan.kind]()
	declared := map[string]manifests.Quantity{}
	for _, text := range slices.Sorted(maps.Keys(h.plan.source.Columns)) {
		declared[words(text)] = h.plan.source.Columns[text]
	}
	var out []header
	for i, cell := range cells {
		one := header{at: i, shown: strings.Clone(trim(cell)), text: words(cell)}
		if one.text == "" {
			continue
		}
		if q, ok := declared[one.text]; ok {
			one.meaning = meaning{quantity: q}
		} else {
			one.meaning = v.look(cell)
		}
		out = append(out, one)
	}
	return out
}

// alike refuses texts of the manifest that read as one: two headers, or two
// phases, that differ in spaces, in the width of a letter or, phases, in case. may
// says whether two that read as one may do so.
func (h *headerReader) alike(key string, texts []string, read func(string) string, may func(a, b string) bool) {
	first := map[string]string{}
	for _, text := range texts {
		before, twice := first[read(text)]
		if !twice {
			first[read(text)] = text
			continue
		}
		if may(before, text) {
			continue
		}
		h.problem(nil, problem.Problem{Found: problem.Quote(before) + " and " + problem.Quote(text) + " in the manifest's " + key + ", which read alike",
			Expected: "each text once", Do: "keep one of the two"})
	}
}

// missingHeaders finds headers the manifest maps and the file does not have.
func (h *headerReader) missingHeaders(headers []header) {
	have := map[string]bool{}
	var texts []string
	for _, one := range headers {
		have[one.text] = true
		texts = append(texts, one.shown)
	}
	var missing []string
	for text := range h.plan.source.Columns {
		if !have[words(text)] {
			missing = append(missing, text)
		}
	}
	slices.Sort(missing)
	for i, text := range missing {
		do := "write the header in columns as it stands in the file"
		if i >= problem.PerKind { // only counted
			texts = nil
		}
		if near := manifests.Nearest(text, texts); near != "" {
			do = "did you mean " + problem.Quote(near) + "?"
		}
		h.problem(nil, problem.Problem{Found: "no header " + problem.Quote(text), Expected: "every header the manifest maps in columns", Do: do})
	}
}

// repeated finds the same header twice, unless the manifest ignores it.
func (h *headerReader) repeated(headers []header) {
	first := map[string]*header{}
	for i := range headers {
		one := &headers[i]
		before, twice := first[one.text]
		switch {
		case !twice:
			first[one.text] = one
		case one.meaning.quantity != manifests.Ignored:
			h.problem(one, problem.Problem{Found: fmt.Sprintf("the header %s stands in columns %d and %d", problem.Quote(one.shown), before.at+1, one.at+1),
				Expected: "every header once", Do: `rename one in the file, or map the header to "ignored"`})
		}
	}
}

// use takes every column that means something, the first where two mean the same.
func (h *headerReader) use(headers []header) {
	p := h.plan
	taken := map[use]*header{}
	for i := range headers {
		one := &headers[i]
		q := one.meaning.quantity
		report := Column{Header: one.shown, Quantity: q.String(), Position: one.at + 1, Note: one.meaning.note()}
		p.reports = append(p.reports, report)
		if q == manifests.NoQuantity || q == manifests.Ignored {
			continue
		}
		u := useOf(q)
		key := u
		key.scale = asGiven // kbar and GPa are one pressure
		if before, twice := taken[key]; twice {
			if before.text != one.text {
				h.twice(before, one)
			}
			continue
		}
		taken[key] = one
		p.columns = append(p.columns, column{at: one.at, header: one.shown, quantity: q, use: u, report: len(p.reports) - 1})
	}
	slices.SortFunc(p.columns, func(a, b column) int { return cmp.Compare(a.quantity, b.quantity) })
}

func (h *headerReader) twice(a, b *header) {
	what := a.meaning.quantity.String()
	if a.meaning.quantity != b.meaning.quantity {
		what = fmt.Sprintf("one thing, %s and %s", what, b.meaning.quantity)
	}
	h.problem(b, problem.Problem{Expected: "one column for it", Do: `map the other to "ignored" in columns`,
		Found: fmt.Sprintf("%s in column %d and %s in column %d both give %s", problem.Quote(a.shown), a.at+1, problem.Quote(b.shown), b.at+1, what)})
}

// foreignUnits refuses composition columns in another unit than the source's.
func (h *headerReader) foreignUnits(headers []header) {
	for i := range headers {
		if one := &headers[i]; one.meaning.foreign() {
			h.problem(one, problem.Problem{Kind: "unit", Found: fmt.Sprintf("%s in the unit %s", one.meaning.stem, problem.Quote(one.meaning.unit)),
				Expected: h.plan.kind.String(), Do: `convert the column and name it so, or map it to "ignored" in columns`})
		}
	}
}

// constants takes what the manifest says of every row, unless a column says it too.
func (h *headerReader) constants(headers []header) {
	p := h.plan
	given := map[manifests.Quantity]bool{}
	for _, c := range constantsOf(p.source) {
		given[c.quantity] = true
		i := slices.IndexFunc(p.columns, func(used column) bool { return used.quantity == c.quantity })
		if i < 0 {
			p.constants[useOf(c.quantity).text] = name(c.value)
			if c.quantity == manifests.Texture {
				p.constants[tables.Texture] = textureOf(name(c.value))
			}
			continue
		}
		at := headers[slices.IndexFunc(headers, func(one header) bool { return one.at == p.columns[i].at })]
		h.problem(&at, problem.Problem{Found: fmt.Sprintf("the column gives %s, and so does %s = %s in the manifest", c.quantity, c.key, problem.Quote(c.value)),
			Expected: "one of them", Do: fmt.Sprintf(`remove %s from the manifest, or map the column to "ignored"`, c.key)})
	}
	for _, c := range p.columns {
		given[c.quantity] = true
	}
	p.hasSample, p.hasPhase = given[manifests.Sample], given[manifests.PhaseName]
}

// needed finds what no source can do without. Without a composition there is no
// use in reading rows.
func (h *headerReader) needed(cells []string) (fatal bool) {
	if !slices.ContainsFunc(h.plan.columns, func(c column) bool { return c.use.role == valueCell }) {
		h.noComposition(cells)
		return true
	}
	if !h.plan.hasSample {
		h.problem(nil, problem.Problem{Found: "no column names the sample", Expected: `a header such as "Sample"`,
			Do: "map a column to sample in columns, or set sample for the whole source"})
	}
	if !h.plan.hasPhase {
		h.problem(nil, problem.Problem{Found: "no column names the phase", Expected: `a header such as "Mineral"`,
			Do: "map a column to phase in columns, or set phase for the whole source"})
	}
	return false
}

func (h *headerReader) noComposition(cells []string) {
	p := problem.Problem{Found: "no column is known to hold " + h.plan.kind.String(), Expected: "headers such as " + examples[h.plan.kind],
		Do: "map the headers in columns"}
	if len(cells) == 1 {
		p.Found = "one column only, " + problem.Quote(cells[0])
	}
	if kind, ok := betterKind(cells); ok {
		p.Do = fmt.Sprintf("set composition = %q", kind)
	}
	h.problem(nil, p)
}

// wrongSeparator finds that another separator makes sense of the header where
// this one makes none.
func (h *headerReader) wrongSeparator(cells []string, start []byte) bool {
	if known(h.plan.source, cells) > 0 {
		return false
	}
	do := separatorAdvice(h.plan.source, start)
	if do == "" {
		return false
	}
	p := problem.Problem{Kind: "separator", Found: "no header is known", Expected: "the " + h.plan.source.Separator + " between cells", Do: do}
	if len(cells) == 1 {
		p.Found = "one column only, " + problem.Quote(cells[0])
	}
	h.problem(nil, p)
	return true
}

var examples = [...]string{
	chem.OxideWt: `"SiO2", "Al2O3 (wt%)", "FeO*"`, chem.Apfu: `"Si", "Al apfu", "Fe3+"`, chem.EndMember: `"Ab", "XOr", "An"`,
}

// compositions counts the headers that hold a composition of a kind.
func compositions(kind chem.Kind, headers []string) int {
	v, n := vocabularyOf[kind](), 0
	for _, h := range headers {
		if _, _, ok := v.look(h).quantity.Measurand(); ok {
			n++
		}
	}
	return n
}

// betterKind is the kind of composition most of the headers hold.
func betterKind(headers []string) (best chem.Kind, ok bool) {
	most := 0
	for kind := range chem.EndMember + 1 {
		if n := compositions(kind, headers); n > most {
			most, best, ok = n, kind, true
		}
	}
	return best, ok
}

// known counts the headers that mean something to the vocabulary or the manifest.
func known(s *manifests.Source, headers []string) int {
	v, n := vocabularyOf[s.Kind()](), 0
	declared := map[string]bool{}
	for text := range s.Columns {
		declared[words(text)] = true
	}
	for _, h := range headers {
		if declared[words(h)] || v.look(h).quantity != manifests.NoQuantity {
			n++
		}
	}
	return n
}

// composed counts the headers that hold a composition of the source's kind, by
// the vocabulary or the manifest.
func composed(s *manifests.Source, headers []string) int {
	v, n := vocabularyOf[s.Kind()](), 0
	declared := map[string]manifests.Quantity{}
	for _, text := range slices.Sorted(maps.Keys(s.Columns)) {
		declared[words(text)] = s.Columns[text]
	}
	for _, h := range headers {
		q, ok := declared[words(h)]
		if !ok {
			q = v.look(h).quantity
		}
		if _, _, ok := q.Measurand(); ok {
			n++
		}
	}
	return n
}

// separatorAdvice names the separator that makes of the start of a text a header
// of several columns with the most that are known; "" where none does.
func separatorAdvice(s *manifests.Source, start []byte) string {
	most, advice := 0, ""
	for _, other := range []string{"comma", "tab", "semicolon"} {
		trial := manifests.Source{Separator: other}
		cells := firstRow(start, trial.Comma())
		if n := known(s, cells); other != s.Separator && len(cells) > 1 && n > most {
			most, advice = n, fmt.Sprintf("set separator = %q, which gives %d columns", other, len(cells))
		}
	}
	return advice
}

// firstRow splits the first row of a text that may be cut off.
func firstRow(text []byte, comma rune) []string {
	r := csv.NewReader(bytes.NewReader(text))
	r.Comma, r.LazyQuotes = comma, true
	cells, _ := r.Read()
	return cells
}

// note says why a column is not used though its header looks known.
func (m meaning) note() string {
	switch {
	case m.stem == manifests.NoQuantity:
		return ""
	case m.unit == "":
		return "the header names no unit"
	}
	return "the unit " + problem.Quote(m.unit) + " is not understood"
}

// seal digests the plan: what every row of the source depends on besides its
// own cells.
func (p *plan) seal() {
	constants := constantsOf(p.source)
	e := lineage.New(analysisDomain).Text("plan").Text(p.source.ID).Text(p.source.Decimal).Text(p.kind.String()).Float(p.source.Oxygens)
	e.List(len(constants))
	for _, c := range constants {
		e.Text(c.quantity.String()).Text(c.value)
	}
	e.List(len(p.columns))
	for _, c := range p.columns {
		e.Text(c.quantity.String())
	}
	p.digest = e.Sum()
}

// analysisDomain is the lineage domain of analyses.
const analysisDomain = "tieline analysis 1"

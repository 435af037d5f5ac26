// Package ingest reads the data files of a compilation into analyses: it opens
// them safely, decodes them, maps their columns to quantities and their cells to
// numbers, texts and phases, and reports everything it cannot read at once, each
// with file, line and column. It never guesses.
package ingest

import (
	"errors"
	"fmt"
	"io"
	"os"
	"slices"
	"strings"

	"tieline/manifests"
	"tieline/pipeline/problem"
	"tieline/pipeline/tables"
)

// Source is what was read of one source.
type Source struct {
	ID         string   `json:"id"`
	File       string   `json:"file"`
	SHA256     string   `json:"sha256"` // of the file's bytes, hexadecimal
	Bytes      int64    `json:"bytes"`
	Encoding   string   `json:"encoding"` // as declared, or as a byte order mark says
	Rows       int      `json:"rows"`     // with something in them, below the header
	BlankLines int      `json:"blank_lines"`
	PassedOver int      `json:"passed_over"` // rows the manifest passes over, which are set aside
	Columns    []Column `json:"columns"`     // in the file's order
	// Entries of the manifest's phases and pass_over that no row had: slips, or
	// left from another file.
	Unmatched []string `json:"unmatched,omitempty"`
}

// Column is one column of a source with a header.
type Column struct {
	Header         string  `json:"header"`
	Quantity       string  `json:"quantity"`       // "" where it is unused
	Note           string  `json:"note,omitempty"` // why it is unused, where its header looks known
	Position       int     `json:"position"`       // from 1
	Numbers        int     `json:"numbers"`
	Missing        int     `json:"missing"`
	NotAnalysed    int     `json:"not_analysed"`
	BelowDetection int     `json:"below_detection"`
	Min            float64 `json:"min"` // of the numbers, as given; 0 where there are none
	Max            float64 `json:"max"`
}

// Read reads every source of a manifest, in its order, from files below root.
// The problems of all sources come together, and are never nil; rows with
// problems of their own are not among the analyses. advance may be nil; it is told now and
// then how many rows have been read in all.
func Read(root *os.Root, m *manifests.Manifest, advance func(rows int)) (*tables.Analyses, []Source, *problem.List) {
	all, problems := &tables.Analyses{}, &problem.List{}
	sources := make([]Source, len(m.Sources))
	before := 0
	for i := range m.Sources {
		r := reader{source: &m.Sources[i], out: &sources[i], problems: problems, before: before, advance: advance}
		all.Batches = append(all.Batches, r.file(root)...)
		before += r.out.Rows
	}
	return all, sources, problems
}

// reader reads one source.
type reader struct {
	source   *manifests.Source
	out      *Source
	problems *problem.List
	before   int // rows of the sources before
	advance  func(rows int)
}

func (r *reader) file(root *os.Root) []*tables.Batch {
	r.out.ID, r.out.File, r.out.Encoding = r.source.ID, r.source.File, r.source.Encoding
	f, p := open(root, r.source.File)
	if p != nil {
		r.add(*p)
		return nil
	}
	defer f.Close()
	return r.stream(f)
}

// stream reads a source's bytes in one pass.
func (r *reader) stream(file io.Reader) []*tables.Batch {
	text, p := decode(file, r.source.Encoding)
	if p != nil {
		r.add(*p)
		return nil
	}
	r.out.Encoding = text.encoding
	rows := newRows(text, byte(r.source.Comma()))
	plan := r.header(rows)
	if plan == nil {
		return nil
	}
	to := newGatherer(plan)
	full := func(kind string) bool { return r.problems.Full(r.source.File, kind) }
	whole := r.rows(rows, newAnalyses(plan, full), to)
	batches := to.finish()
	for _, p := range to.problems {
		r.add(p)
	}
	r.out.Columns, r.out.BlankLines = plan.reports, rows.blank
	if whole {
		r.out.Unmatched = plan.phases.unmatched(r.source)
		r.digest(text)
	}
	return batches
}

// header reads the header into a plan, nil where there is none to follow.
func (r *reader) header(rows *rows) *plan {
	cells, p, err := rows.next()
	switch {
	case err == io.EOF:
		r.add(problem.Problem{Kind: "file", Found: "the file holds blank lines only", Expected: "a header and rows"})
		return nil
	case err != nil:
		r.stop(err)
		return nil
	}
	cells, line := slices.Clone(cells), rows.line // reading on writes over them
	if later := r.laterHeader(rows, cells); later != nil {
		r.add(*later)
		return nil
	}
	if p != nil {
		if do := separatorAdvice(r.source, rows.guard.start); cells == nil && do != "" {
			p.Kind, p.Do = "separator", do
		}
		r.add(*p)
		if cells == nil {
			return nil
		}
	}
	plan, problems, fatal := newPlan(r.source, cells, line, rows.guard.start)
	for _, p := range problems {
		r.add(p)
	}
	rows.head(cells)
	r.out.Columns = plan.reports
	if fatal {
		return nil
	}
	return plan
}

// lookedAt is how many rows are looked at for a header that is not the first.
const lookedAt = 10

// laterHeader finds the header below a title, a comment or a line such as
// "sep=;". It reads on where the first row holds no composition, which no row
// below can be read without.
func (r *reader) laterHeader(rows *rows, first []string) *problem.Problem {
	if composed(r.source, first) > 0 {
		return nil
	}
	line, most := rows.line, known(r.source, first)
	var found *problem.Problem
	for range lookedAt {
		cells, _, err := rows.next()
		if err != nil {
			break
		}
		n, do := headerLike(r.source, cells)
		if n > most {
			most = n
			found = &problem.Problem{Line: line, Kind: "header", Found: "no header", Expected: "the header above everything else",
				Do: fmt.Sprintf("line %d looks like the header; remove the lines above it%s", rows.line, do)}
		}
	}
	return found
}

// headerLike counts the known headers of a row that may be a header, split as
// the manifest says or else, which do then says, by another separator.
func headerLike(s *manifests.Source, cells []string) (n int, do string) {
	// One phase named An or Ab makes no header of a row.
	if composed(s, cells) > 1 {
		return known(s, cells), ""
	}
	whole := []byte(strings.Join(cells, string(s.Comma())))
	for _, name := range []string{"comma", "tab", "semicolon"} {
		other := manifests.Source{Separator: name}
		split := firstRow(whole, other.Comma())
		if name != s.Separator && composed(s, split) > 1 {
			return known(s, split), fmt.Sprintf(" and set separator = %q", name)
		}
	}
	return 0, ""
}

// step is how many rows pass between two calls of advance.
const step = 1000

// rows reads every row; whole says that the end was reached.
func (r *reader) rows(rows *rows, a *analyses, to *gatherer) (whole bool) {
	for {
		cells, p, err := rows.next()
		if err != nil {
			r.end(rows, err)
			return err == io.EOF
		}
		r.out.Rows++
		if p == nil {
			r.row(cells, rows, a, to)
		} else {
			r.add(*p)
		}
		if r.advance != nil && r.out.Rows%step == 0 {
			r.advance(r.before + r.out.Rows)
		}
	}
}

func (r *reader) row(cells []string, rows *rows, a *analyses, to *gatherer) {
	for _, p := range rows.nameless(cells) {
		r.add(p)
	}
	one := a.read(cells, rows)
	for _, p := range a.problems {
		r.add(p)
	}
	if one == nil {
		return
	}
	if one.Text[tables.SetAside] != "" {
		r.out.PassedOver++
	}
	to.add(one)
}

func nameOf(columns []Column, position int) string {
	for _, c := range columns {
		if c.Position == position {
			return c.Header
		}
	}
	return ""
}

func (r *reader) end(rows *rows, err error) {
	if err != io.EOF {
		r.stop(err)
		return
	}
	if r.out.Rows == 0 {
		r.add(problem.Problem{Line: rows.end, Kind: "file", Found: "no rows below the header", Expected: "one row for each analysis"})
	}
	if r.advance != nil && r.out.Rows%step != 0 {
		r.advance(r.before + r.out.Rows)
	}
}

func (r *reader) digest(text *decoded) {
	sum, err := text.raw.sum()
	if err != nil {
		r.add(*readFailure(err))
		return
	}
	r.out.SHA256, r.out.Bytes = sum, text.raw.bytes
}

// stop reports the fault that ended the reading of this source.
func (r *reader) stop(err error) {
	var f *fault
	if !errors.As(err, &f) {
		f = &fault{*readFailure(err)}
	}
	r.add(f.Problem)
}

func (r *reader) add(p problem.Problem) {
	p.Source = r.source.File
	if p.Column > 0 && p.Name == "" {
		p.Name = nameOf(r.out.Columns, p.Column)
	}
	r.problems.Add(p)
}

// Cells gives the texts of the row that begins at a line of a source, and of its
// header, as they stand in the file after decoding.
func Cells(root *os.Root, s *manifests.Source, line int) (header, cells []string, err error) {
	f, p := open(root, s.File)
	if p != nil {
		return nil, nil, placed(p, s)
	}
	defer f.Close()
	text, p := decode(f, s.Encoding)
	if p != nil {
		return nil, nil, placed(p, s)
	}
	rows := newRows(text, byte(s.Comma()))
	for first := true; ; first = false {
		row, p, err := rows.next()
		switch {
		case err == io.EOF || err == nil && rows.line > line:
			return nil, nil, fmt.Errorf("%s: no row begins at line %d", problem.Clean(s.File), line)
		case err != nil:
			return nil, nil, fmt.Errorf("%s: %w", problem.Clean(s.File), err)
		case first:
			header = slices.Clone(row)
		case rows.line == line && p != nil:
			return nil, nil, placed(p, s)
		case rows.line == line:
			return header, slices.Clone(row), nil
		}
	}
}

func placed(p *problem.Problem, s *manifests.Source) error {
	one := *p
	one.Source = s.File
	return errors.New(one.String())
}

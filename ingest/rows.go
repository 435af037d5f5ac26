package ingest

import (
	"bufio"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"slices"
	"strings"

	"tieline/pipeline/problem"
)

// rows reads a text's rows one by one. Blank lines, and lines of separators
// alone, are counted and passed over.
type rows struct {
	text   *decoded
	guard  *guard
	csv    *csv.Reader
	header int   // cells of the header, 0 before it is read
	named  int   // cells of the header up to the last that is not empty
	empty  []int // cells of the header that are empty before that, till they are reported

	line  int // where the row last read begins
	end   int // the last line read
	blank int // lines passed over
}

func newRows(text *decoded, sep byte) *rows {
	g := newGuard(text, sep)
	r := csv.NewReader(bufio.NewReaderSize(g, chunk))
	r.Comma = rune(sep)
	r.FieldsPerRecord = -1
	r.ReuseRecord = true
	return &rows{text: text, guard: g, csv: r}
}

// head takes the header's width and its empty cells, which the rows are held to.
func (r *rows) head(cells []string) {
	r.header, r.named = len(cells), 0
	for i, c := range slices.Backward(cells) {
		switch empty := trim(c) == ""; {
		case !empty && r.named == 0:
			r.named = i + 1
		case empty && r.named > 0:
			r.empty = append(r.empty, i)
		}
	}
	slices.Reverse(r.empty)
}

// next gives the next row's cells, which are good until the call after. A
// problem is of this row only and reading may go on; err is io.EOF at the end,
// or a *fault after which nothing can be read.
func (r *rows) next() (cells []string, p *problem.Problem, err error) {
	for {
		cells, err = r.csv.Read()
		var parse *csv.ParseError
		switch {
		case errors.As(err, &parse):
			r.begin(parse.StartLine)
			r.end = parse.Line
			return nil, r.quoteProblem(parse, len(cells)+1), nil
		case err == io.EOF:
			r.blank += max(0, r.guard.lines()-r.end)
			r.end = r.guard.lines()
			return nil, nil, io.EOF
		case err != nil:
			return nil, nil, r.fault(err)
		}
		r.begin(r.lineOf(0))
		r.end = r.lineOf(len(cells)-1) + strings.Count(cells[len(cells)-1], "\n")
		if allBlank(cells) {
			r.blank += r.end - r.line + 1
			continue
		}
		return cells, r.look(cells), nil
	}
}

func (r *rows) begin(line int) {
	r.blank += line - r.end - 1
	r.line = line
}

// lineOf is the line on which cell i of the row last read begins.
func (r *rows) lineOf(i int) int {
	line, _ := r.csv.FieldPos(i)
	return line
}

func (r *rows) fault(err error) error {
	var f *fault
	if errors.As(err, &f) {
		return f
	}
	p := readFailure(err)
	p.Line = r.end + 1
	return &fault{*p}
}

// look finds what is wrong with a row as such.
func (r *rows) look(cells []string) *problem.Problem {
	if r.guard.suspect {
		for i, cell := range cells {
			if undecodable(cell, r.text.exact) {
				return r.undecodable(i, cell)
			}
		}
	}
	if r.header == 0 || len(cells) == r.header || len(cells) >= r.named && len(cells) < r.header {
		return r.unnamed(cells)
	}
	expected := r.header
	if len(cells) < r.named {
		expected = r.named
	}
	return &problem.Problem{Line: r.line, Kind: "ragged row", Found: cellCount(len(cells)),
		Expected: fmt.Sprintf("%d as in the header", expected),
		Do:       "check for a missing separator, or for one inside a cell that is not quoted"}
}

// unnamed finds a value past the last named column: most likely the row is
// shifted.
func (r *rows) unnamed(cells []string) *problem.Problem {
	if r.header == 0 {
		return nil
	}
	for i := r.named; i < len(cells); i++ {
		if trim(cells[i]) != "" {
			return &problem.Problem{Line: r.lineOf(i), Column: i + 1, Kind: "ragged row",
				Found:    problem.Quote(cells[i]) + " in a column without a header",
				Expected: fmt.Sprintf("%d cells", r.named),
				Do:       "check for a separator inside a cell that is not quoted, or name the column"}
		}
	}
	return nil
}

// nameless finds values of a row below an empty cell of the header. Each column
// is reported once: it is the header that is wrong, not the row.
func (r *rows) nameless(cells []string) (problems []problem.Problem) {
	for i := 0; i < len(r.empty); {
		at := r.empty[i]
		if trim(cells[at]) == "" {
			i++
			continue
		}
		r.empty = slices.Delete(r.empty, i, i+1)
		problems = append(problems, problem.Problem{Line: r.lineOf(at), Column: at + 1, Kind: "header",
			Found:    fmt.Sprintf("column %d has values, such as %s, and no header", at+1, problem.Quote(cells[at])),
			Expected: "a header above every value", Do: "name the column or remove it"})
	}
	return problems
}

func (r *rows) undecodable(i int, cell string) *problem.Problem {
	p := &problem.Problem{Line: r.lineOf(i), Column: i + 1, Kind: "encoding"}
	switch {
	case strings.IndexByte(cell, 0) >= 0:
		p.Found, p.Expected = "a NUL byte in "+problem.Quote(cell), "text"
		p.Do = "save the table as CSV with UTF-8 text"
	case r.text.exact:
		p.Found, p.Expected = "bytes that are no UTF-8 in "+problem.Quote(cell), "UTF-8 text"
		p.Do = `declare the file's encoding, say encoding = "windows-1252", or save it as UTF-8`
	default:
		p.Found, p.Expected = "bytes that mean nothing in "+r.text.encoding+" in "+problem.Quote(cell), r.text.encoding+" text"
		p.Do = "declare the encoding the file is in, or save it as UTF-8"
	}
	return p
}

// quoteProblem is a quote where none may be, or one that is never closed.
func (r *rows) quoteProblem(parse *csv.ParseError, field int) *problem.Problem {
	p := &problem.Problem{Line: parse.Line, Column: field, Kind: "quote"}
	switch {
	case r.guard.state == quoted && errors.Is(r.guard.err, io.EOF) && r.csv.InputOffset() == r.guard.bytes:
		p.Line, p.Column = r.guard.openLine, r.guard.field
		p.Found = "a quote that is opened here and never closed"
		p.Do = "close the quote, or remove it"
	case errors.Is(parse.Err, csv.ErrBareQuote):
		p.Found = "a quote inside a cell that does not begin with one"
		p.Expected = "the whole cell in quotes, quotes within it doubled"
		p.Do = "quote the cell, or remove the quote"
	default:
		p.Found = "text after the closing quote of a cell"
		p.Expected = "a separator, or quotes within the cell doubled"
		p.Do = "double the quotes within the cell"
	}
	return p
}

func cellCount(n int) string {
	if n == 1 {
		return "1 cell"
	}
	return fmt.Sprintf("%d cells", n)
}

func allBlank(cells []string) bool {
	for _, c := range cells {
		if trim(c) != "" {
			return false
		}
	}
	return true
}

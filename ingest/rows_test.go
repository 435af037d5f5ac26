package ingest

import (
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"strings"
	"testing"
	"testing/iotest"

	"pgregory.net/rapid"
)

// saidOf is all that reading a text row by row says.
func saidOf(text string, wrap func(io.Reader) io.Reader) (out []string) {
	d, p := decode(wrap(strings.NewReader(text)), "utf-8")
	if p != nil {
		return []string{p.String()}
	}
	r := newRows(d, ',')
	for {
		cells, p, err := r.next()
		switch {
		case err != nil:
			return append(out, fmt.Sprintf("%v, %d blank, %d lines", err, r.blank, r.guard.lines()))
		case p != nil:
			out = append(out, fmt.Sprintf("%d: %s", r.line, p))
		default:
			out = append(out, fmt.Sprintf("%d: %q", r.line, cells))
		}
	}
}

// messy is text made of what matters to a reader of CSV.
var messy = rapid.Custom(func(t *rapid.T) string {
	return strings.Join(rapid.SliceOf(rapid.SampledFrom([]string{"a", "b", ",", ",", "\n", "\n", "\"", "\"\"", "\"a,b\"", ",\"x\"\n", "\r\n", "\r", " ", "é"})).Draw(t, "pieces"), "")
})

// How the bytes come, one by one, in halves or all at once, changes nothing.
func TestRowsDoNotDependOnChunks(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		text := messy.Draw(t, "text")
		want := strings.Join(saidOf(text, func(r io.Reader) io.Reader { return r }), "\n")
		for _, wrap := range []func(io.Reader) io.Reader{iotest.OneByteReader, iotest.HalfReader, iotest.DataErrReader} {
			if got := strings.Join(saidOf(text, wrap), "\n"); got != want {
				t.Fatalf("%q in other pieces reads\n%s\nwant\n%s", text, got, want)
			}
		}
	})
}

// The guard follows the quoting of encoding/csv: whatever the text, with line
// feeds it hands on the same bytes, its lines are those of the text, and where it
// says that a quote is open at the end the CSV reader says so too.
func TestGuardFollowsCSV(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		text := "h\n" + strings.ReplaceAll(messy.Draw(t, "text"), "\r", "")
		g := newGuard(&decoded{Reader: iotest.OneByteReader(strings.NewReader(text)), exact: true}, ',')
		got, err := io.ReadAll(g)
		if err != nil || string(got) != text {
			t.Fatalf("%q comes out as %q, %v", text, got, err)
		}
		if want := strings.Count(text+"x", "\n"); strings.HasSuffix(text, "\n") && g.lines() != want {
			t.Fatalf("%q has %d lines, the guard says %d", text, want, g.lines())
		}
		r := csv.NewReader(strings.NewReader(text))
		r.FieldsPerRecord = -1
		open := false
		for {
			_, err := r.Read()
			if err == io.EOF {
				break
			}
			open = errors.Is(err, csv.ErrQuote) && r.InputOffset() == int64(len(text)) && !strings.HasSuffix(text, "\n")
			var at *csv.ParseError
			if errors.As(err, &at) && g.state == quoted && r.InputOffset() == int64(len(text)) && g.openLine < at.StartLine {
				t.Fatalf("%q: the guard says the open quote is on line %d, before the row of line %d", text, g.openLine, at.StartLine)
			}
		}
		if g.state == quoted && !open && !strings.HasSuffix(text, "\n") {
			t.Fatalf("%q: the guard says a quote is open at the end, encoding/csv does not", text)
		}
	})
}

// A row of every kind of fault is counted, and what is blank is too.
func TestEveryLineIsAccountedFor(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		text := messy.Draw(t, "text")
		d, p := decode(strings.NewReader(text), "utf-8")
		if p != nil {
			return
		}
		r := newRows(d, ',')
		lines := 0
		for {
			_, _, err := r.next()
			if err != nil {
				break
			}
			lines += r.end - r.line + 1
		}
		if lines+r.blank != r.guard.lines() {
			t.Fatalf("%q: %d lines in rows and %d blank make not %d", text, lines, r.blank, r.guard.lines())
		}
	})
}

// Values below an empty header are seen, once for each column, and the rows are
// looked over all the same; an empty column between named ones is nothing.
func TestValuesWithoutHeader(t *testing.T) {
	_, _, problems := readText(t, "", ",Sample,,Mineral, ,SiO2\n,R1,,Pl,7,60\n1,R2,,Pl,8,sixty\n2,R3,,Pl,,61\n")
	same(t, "values without a header", problems.Lines(), []string{
		`t.csv:2:5: column 5 has values, such as "7", and no header; expected a header above every value; name the column or remove it`,
		`t.csv:3:1: column 1 has values, such as "1", and no header; expected a header above every value; name the column or remove it`,
		`t.csv:3:6 (SiO2): "sixty" is no number; expected a number with a decimal point; list the text in not_analysed, below_detection or missing if it means one of these`,
	})
	if all := mustRead(t, "", "Sample,,Mineral,SiO2\nR1,,Pl,60\n"); all.Len() != 1 {
		t.Errorf("an empty column between named ones leaves %d analyses of 1", all.Len())
	}
}

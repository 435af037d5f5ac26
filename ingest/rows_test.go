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

// A header below other lines is pointed at; nothing else is said of the file.
func TestHeaderBelowOtherLines(t *testing.T) {
	const table = "Sample,Mineral,SiO2,CaO\nR1,Pl,60,7\n"
	semicolons := strings.ReplaceAll(table, ",", ";")
	says := "no header; expected the header above everything else; line %d looks like the header; remove the lines above it"
	for _, c := range []struct{ what, keys, text, want string }{
		{"title", `columns = { "Run" = "label" }`, "Table 1. Feldspars\n\n" + table, "t.csv:1: " + fmt.Sprintf(says, 3)},
		{"title with a quote", "", "Table 1. \"Feldspars\" of 1987\n" + table, "t.csv:1: " + fmt.Sprintf(says, 2)},
		{"comments", "", "\n# made by hand\n# Sample, all\n" + table, "t.csv:2: " + fmt.Sprintf(says, 4)},
		{"sep=", `separator = "semicolon"`, "sep=;\n" + semicolons, "t.csv:1: " + fmt.Sprintf(says, 2)},
		{"sep=, undeclared", "", "sep=;\n" + semicolons, "t.csv:1: " + fmt.Sprintf(says, 2) + ` and set separator = "semicolon"`},
		{"mapped headers", `columns = { "silica" = "SiO2", "lime" = "CaO" }`, "Table 1\nSample,Mineral,silica,lime\nR1,Pl,60,7\n", "t.csv:1: " + fmt.Sprintf(says, 2)},
		{"too far below", "", strings.Repeat("Title\n", lookedAt+1) + table,
			`t.csv:1: one column only, "Title"; expected headers such as "SiO2", "Al2O3 (wt%)", "FeO*"; map the headers in columns`},
		{"a phase named as an end member", `composition = "end-member fraction"`, "Sample,Mineral,x\nR1,An,1\n",
			`t.csv:1: no column is known to hold end-member fraction; expected headers such as "Ab", "XOr", "An"; map the headers in columns`},
	} {
		_, _, problems := readText(t, c.keys, c.text)
		same(t, c.what, problems.Lines(), []string{c.want})
	}
}

package problem

import (
	"fmt"
	"slices"
	"strings"
	"testing"
	"unicode"
	"unicode/utf8"

	"pgregory.net/rapid"
)

func TestString(t *testing.T) {
	for _, c := range []struct {
		p    Problem
		want string
	}{
		{Problem{Source: "a.csv", Line: 3, Column: 7, Name: "SiO2", Kind: "number", Found: `"64,6" is no number`, Expected: "digits with a point", Do: `declare decimal = "comma"`},
			`a.csv:3:7 (SiO2): "64,6" is no number; expected digits with a point; declare decimal = "comma"`},
		{Problem{Source: "a.csv", Line: 3, Found: "12 cells", Expected: "14"}, "a.csv:3: 12 cells; expected 14"},
		{Problem{Source: "a.csv", Column: 3, Found: "empty"}, "a.csv: empty"}, // a column without a line is no place
		{Problem{Source: "a\nb.csv", Name: "\x1b[31mSiO2", Found: "x", Do: "mend it"}, `a\u{a}b.csv (\u{1b}[31mSiO2): x; mend it`},
	} {
		if got := c.p.String(); got != c.want {
			t.Errorf("%+v reads\n%s, want\n%s", c.p, got, c.want)
		}
	}
}

func TestQuote(t *testing.T) {
	for in, want := range map[string]string{
		"":                            `""`,
		"K-Fsp rim":                   `"K-Fsp rim"`,
		`5" \ 6`:                      `"5\" \\ 6"`,
		"Fe₂O₃ Å ü 长石":                `"Fe₂O₃ Å ü 长石"`,
		"a\tb\r\nc\x00":               `"a\u{9}b\u{d}\u{a}c\u{0}"`,
		"caf\xe9":                     `"caf\u{fffd}"`,
		"\ufeffSiO2":                  `"\u{feff}SiO2"`,
		"abc\u202exyz":                `"abc\u{202e}xyz"`, // turns the text after it round
		"a\u200bb":                    `"a\u{200b}b"`,     // a space nobody sees
		strings.Repeat("x", 80):       `"` + strings.Repeat("x", 80) + `"`,
		strings.Repeat("é", 81):       `"` + strings.Repeat("é", 80) + `…"`,
		strings.Repeat("\n", 1000000): `"` + strings.Repeat(`\u{a}`, 80) + `…"`,
	} {
		if got := Quote(in); got != want {
			t.Errorf("Quote(%.20q) is\n%s, want\n%s", in, got, want)
		}
	}
	if got := Clean(`a "b" \`); got != `a "b" \` {
		t.Errorf("Clean escapes quotes: %s", got)
	}
}

func FuzzQuote(f *testing.F) {
	for _, s := range []string{"", "SiO2", "\x1b[2J", "\u202e", "\xff\xfe", `\u{a}`, strings.Repeat("x", 200)} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, s string) {
		for _, shown := range []string{Quote(s), Clean(s)} {
			if !utf8.ValidString(shown) {
				t.Errorf("%q is shown as invalid UTF-8 %q", s, shown)
			}
			for _, r := range shown {
				if !unicode.IsGraphic(r) || unicode.Is(unicode.Bidi_Control, r) || r == '\n' {
					t.Errorf("%q is shown with the character %U", s, r)
				}
			}
			if n := utf8.RuneCountInString(shown); n > 80*len(`\u{10ffff}`)+3 {
				t.Errorf("%d characters of %q are shown", n, s)
			}
		}
	})
}

// several makes problems of few sources and kinds, so that caps are reached.
func several(t *rapid.T) []Problem {
	problem := rapid.Custom(func(t *rapid.T) Problem {
		return Problem{
			Source: rapid.SampledFrom([]string{"a.csv", "b.csv"}).Draw(t, "source"),
			Kind:   rapid.SampledFrom([]string{"number", "phase"}).Draw(t, "kind"),
			Line:   rapid.IntRange(0, 3).Draw(t, "line"),
			Column: rapid.IntRange(0, 3).Draw(t, "column"),
			Found:  rapid.SampledFrom([]string{"x", "y"}).Draw(t, "found"),
		}
	})
	return rapid.SliceOfN(problem, 0, 120).Draw(t, "problems")
}

func list(ps []Problem) *List {
	l := &List{}
	for _, p := range ps {
		l.Add(p)
	}
	return l
}

func TestListLosesNoCount(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		ps := several(t)
		l := list(ps)
		if l.Len() != len(ps) {
			t.Fatalf("%d problems added, %d counted", len(ps), l.Len())
		}
		perKind := map[[2]string]int{}
		for _, p := range ps {
			perKind[[2]string{p.Source, p.Kind}]++
		}
		listed := map[[2]string]int{}
		for _, p := range l.Sorted() {
			listed[[2]string{p.Source, p.Kind}]++
		}
		lines := strings.Join(l.Lines(), "\n")
		for k, n := range perKind {
			if listed[k] != min(n, PerKind) {
				t.Fatalf("of %d problems of %v %d are listed", n, k, listed[k])
			}
			more := fmt.Sprintf("%s: %d more of kind %q not listed", k[0], n-PerKind, k[1])
			if strings.Contains(lines, more) != (n > PerKind) {
				t.Fatalf("%d problems of %v, and the lines are\n%s", n, k, lines)
			}
		}
	})
}

func TestFirstProblemsAreTheOnesListed(t *testing.T) {
	l := &List{}
	for i := range 1000 {
		l.Add(Problem{Source: "a.csv", Line: i + 2, Kind: "number", Found: "x"})
	}
	got := l.Lines()
	if len(got) != PerKind+1 || got[0] != "a.csv:2: x" || got[PerKind-1] != "a.csv:21: x" || got[PerKind] != `a.csv: 980 more of kind "number" not listed` {
		t.Errorf("a thousand problems read\n%s", strings.Join(got, "\n"))
	}
}

// TestMergeIsAddingOneAfterTheOther: stages that work in parallel must report
// what one stage alone would.
func TestMergeIsAddingOneAfterTheOther(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		a, b := several(t), several(t)
		merged := list(a)
		merged.Merge(list(b))
		if got, want := merged.Error(), list(append(slices.Clone(a), b...)).Error(); got != want {
			t.Fatalf("merged:\n%s\nadded:\n%s", got, want)
		}
	})
}

func TestSortedByPlace(t *testing.T) {
	l := list([]Problem{
		{Source: "b.csv", Line: 1, Found: "1"},
		{Source: "a.csv", Line: 10, Column: 2, Found: "2"},
		{Source: "a.csv", Line: 10, Column: 1, Kind: "z", Found: "3"},
		{Source: "a.csv", Line: 10, Column: 1, Kind: "y", Found: "5"},
		{Source: "a.csv", Line: 10, Column: 1, Kind: "y", Found: "4"},
		{Source: "a.csv", Line: 9, Found: "6"},
	})
	var got []string
	for _, p := range l.Sorted() {
		got = append(got, p.Found)
	}
	if g := strings.Join(got, ""); g != "645321" {
		t.Errorf("order %s, want 645321: by source, line, column, kind, words", g)
	}
}

func TestErrIsNilForNoProblems(t *testing.T) {
	l := &List{}
	if err := l.Err(); err != nil {
		t.Errorf("no problem is the error %q", err)
	}
	l.Add(Problem{Source: "a.csv", Found: "x"})
	if err := l.Err(); err == nil || err.Error() != "a.csv: x" {
		t.Errorf("one problem is the error %v", err)
	}
}

// Full begins where the next problem of a kind would only be counted.
func TestFull(t *testing.T) {
	var l List
	for i := range PerKind {
		if l.Full("a.csv", "number") {
			t.Fatalf("full with %d problems, want %d", i, PerKind)
		}
		l.Add(Problem{Source: "a.csv", Kind: "number"})
	}
	for k, want := range map[[2]string]bool{{"a.csv", "number"}: true, {"a.csv", "phase"}: false, {"b.csv", "number"}: false} {
		if got := l.Full(k[0], k[1]); got != want {
			t.Errorf("Full(%q, %q) is %v, want %v", k[0], k[1], got, want)
		}
	}
}

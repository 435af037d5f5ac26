// Package problem carries what is wrong with an input to the person at the
// desk: where, what was found, what was expected, what to do. Stages collect
// problems and go on; nobody stops at the first.
package problem

import (
	"cmp"
	"fmt"
	"slices"
	"strings"
	"unicode"
)

// Problem is one thing wrong with an input.
type Problem struct {
	Source   string // the file as the manifest names it, or the manifest itself
	Line     int    // 1-based; 0 where no line applies
	Column   int    // 1-based field (data files) or character (manifest); 0 where none applies
	Name     string // the column's header text, "" where none applies
	Kind     string // what sort of problem, for capping: "number", "phase", "ragged row"
	Found    string // what is there; quote cell text with Quote
	Expected string // what was expected
	Do       string // what to do about it
}

// String is one line: file:line:column (header): found; expected; what to do.
func (p Problem) String() string {
	var b strings.Builder
	b.WriteString(Clean(p.Source))
	if p.Line > 0 {
		fmt.Fprintf(&b, ":%d", p.Line)
		if p.Column > 0 {
			fmt.Fprintf(&b, ":%d", p.Column)
		}
	}
	if p.Name != "" {
		fmt.Fprintf(&b, " (%s)", Clean(p.Name))
	}
	b.WriteString(": " + p.Found)
	if p.Expected != "" {
		b.WriteString("; expected " + p.Expected)
	}
	if p.Do != "" {
		b.WriteString("; " + p.Do)
	}
	return b.String()
}

// PerKind is how many problems of one kind in one source are listed in full.
const PerKind = 20

// List collects problems. The zero value is ready.
type List struct {
	all    []Problem
	counts map[[2]string]int
}

// Add keeps p; past PerKind of a kind in a source it is only counted, so a
// million bad cells do not fill memory. Problems of one source must be added
// in reading order for the first ones to be those kept.
func (l *List) Add(p Problem) {
	if l.counts == nil {
		l.counts = map[[2]string]int{}
	}
	k := [2]string{p.Source, p.Kind}
	l.counts[k]++
	if l.counts[k] <= PerKind {
		l.all = append(l.all, p)
	}
}

// Full says whether a further problem of a kind in a source would only be
// counted, so that it needs no words.
func (l *List) Full(source, kind string) bool {
	return l.counts[[2]string{source, kind}] >= PerKind
}

// Merge adds what other holds, counts included.
func (l *List) Merge(other *List) {
	kept := map[[2]string]int{}
	for _, p := range other.all {
		l.Add(p)
		kept[[2]string{p.Source, p.Kind}]++
	}
	for k, n := range other.counts {
		l.counts[k] += n - kept[k]
	}
}

// Len is the number of problems, listed or not.
func (l *List) Len() int {
	n := 0
	for _, c := range l.counts {
		n += c
	}
	return n
}

// Sorted gives the listed problems by source, line, column, kind.
func (l *List) Sorted() []Problem {
	out := slices.Clone(l.all)
	slices.SortStableFunc(out, func(a, b Problem) int {
		return cmp.Or(cmp.Compare(a.Source, b.Source), cmp.Compare(a.Line, b.Line),
			cmp.Compare(a.Column, b.Column), cmp.Compare(a.Kind, b.Kind), cmp.Compare(a.Found, b.Found))
	})
	return out
}

// Lines gives one line per listed problem, and one per kind for those only counted.
func (l *List) Lines() []string {
	var out []string
	for _, p := range l.Sorted() {
		out = append(out, p.String())
	}
	var more []string
	for k, n := range l.counts {
		if n > PerKind {
			more = append(more, fmt.Sprintf("%s: %d more of kind %q not listed", Clean(k[0]), n-PerKind, k[1]))
		}
	}
	slices.Sort(more)
	return append(out, more...)
}

// Error makes a List an error; Err gives nil where it is empty.
func (l *List) Error() string { return strings.Join(l.Lines(), "\n") }

// Err is nil where there is no problem.
func (l *List) Err() error {
	if l.Len() == 0 {
		return nil
	}
	return l
}

// maxRunes is how much of a cell people are shown.
const maxRunes = 80

// Quote shows cell text safely: quoted, control and bidirectional characters
// escaped, at most 80 runes.
func Quote(s string) string { return `"` + escape(s, true, maxRunes) + `"` }

// Clean is Quote without the quotes, for names in running text.
func Clean(s string) string { return escape(s, false, maxRunes) }

// CleanAll is Clean at full length, for what a manifest says of itself.
func CleanAll(s string) string { return escape(s, false, len(s)) }

func escape(s string, quotes bool, limit int) string {
	var b strings.Builder
	n := 0
	for _, r := range s {
		if n == limit {
			b.WriteString("…")
			break
		}
		n++
		switch {
		case quotes && (r == '"' || r == '\\'):
			b.WriteRune('\\')
			b.WriteRune(r)
		case r == unicode.ReplacementChar || !unicode.IsGraphic(r) || unicode.Is(unicode.Bidi_Control, r):
			fmt.Fprintf(&b, `\u{%x}`, r)
		default:
			b.WriteRune(r)
		}
	}
	return b.String()
}

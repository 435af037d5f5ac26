package manifests

import (
	"slices"
	"strings"
)

// Nearest gives the option that text was probably meant to be, by edit distance
// without regard to case, the first of equals; "" where none is near.
func Nearest(text string, options []string) string {
	// Long texts are no misspelt keys, and the distance costs their product.
	if len(text) > 64 {
		return ""
	}
	best, limit := "", 1+len(text)/3
	for _, o := range options {
		if d := distance(strings.ToLower(text), strings.ToLower(o)); d <= limit {
			best, limit = o, d-1
		}
	}
	return best
}

// distance is the number of characters to insert, delete or replace to make b of a.
func distance(a, b string) int {
	s, t := []rune(a), []rune(b)
	row := make([]int, len(t)+1)
	for j := range row {
		row[j] = j
	}
	for i := range s {
		diagonal := row[0]
		row[0] = i + 1
		for j := range t {
			replaced := diagonal
			if s[i] != t[j] {
				replaced++
			}
			diagonal = row[j+1]
			row[j+1] = min(replaced, row[j]+1, row[j+1]+1)
		}
	}
	return row[len(t)]
}

// quantityNames are the names a column may be mapped to.
func quantityNames() []string {
	var out []string
	for _, q := range Quantities() {
		out = append(out, q.String())
	}
	return out
}

// either joins options for a sentence: a, b or c.
func either(options []string) string {
	quoted := slices.Clone(options)
	if n := len(quoted); n > 1 {
		return strings.Join(quoted[:n-1], ", ") + " or " + quoted[n-1]
	}
	return strings.Join(quoted, "")
}

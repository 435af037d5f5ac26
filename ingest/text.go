package ingest

import (
	"strings"
	"unicode/utf8"

	"golang.org/x/text/unicode/norm"

	"tieline/manifests"
)

// replacement is what decoding leaves of bytes that mean nothing.
const replacement = "\ufffd"

// trim takes spaces off both ends, no-break spaces and invisible characters
// among them: two sample names must not differ by what nobody sees.
func trim(s string) string {
	if s == "" || visibleASCII(s[0]) && visibleASCII(s[len(s)-1]) {
		return s
	}
	return strings.TrimFunc(s, blank)
}

func visibleASCII(c byte) bool { return c > ' ' && c < 0x7f }

// blank is as the manifest's own texts are trimmed.
func blank(r rune) bool { return manifests.Blank(r) }

// name is a text cell as rows are matched by it: trimmed, in Unicode's composed
// form (NFC), its case kept.
func name(cell string) string { return norm.NFC.String(trim(cell)) }

// words is text with every run of spaces made one, in NFKC: subscripts,
// full-width letters and ligatures become plain ones.
func words(s string) string {
	return strings.Join(strings.FieldsFunc(norm.NFKC.String(s), blank), " ")
}

// undecodable says whether a cell holds what is no text: bytes that are no
// UTF-8, NUL, or what a declared encoding does not define.
func undecodable(cell string, exact bool) bool {
	if strings.IndexByte(cell, 0) >= 0 {
		return true
	}
	if exact {
		return !utf8.ValidString(cell)
	}
	return strings.Contains(cell, replacement)
}

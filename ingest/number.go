package ingest

import (
	"math"
	"strconv"
)

// numberFault says why a cell is no number.
type numberFault uint8

const (
	noFault   numberFault = iota
	notNumber             // not in the grammar
	tooLarge              // past the largest float64
	tooSmall              // not zero, and yet below the smallest float64
)

// minus is U+2212, which typeset tables use for a minus.
const minus = "\u2212"

// parseNumber reads a trimmed cell:
//
//	number   = [sign] ( digits [mark [digits]] | mark digits ) [ ("e"|"E") [sign] digits ]
//	sign     = "+" | "-" | U+2212
//	digits   = "0".."9", one or more
//
// with the decimal mark the source declares and nothing else: no thousands
// separators, underscores, hexadecimals, infinities or spaces, several of which
// strconv.ParseFloat takes. What is in the grammar has the value ParseFloat
// gives the same text with "-" and "." for sign and mark; a number too large, or
// so small that it would become 0, is refused.
func parseNumber(cell string, mark byte) (float64, numberFault) {
	digitsOnly, ascii, ok := scanNumber(cell, mark)
	if !ok {
		return 0, notNumber
	}
	var x float64
	var err error
	if ascii && (mark == '.' || digitsOnly) {
		x, err = strconv.ParseFloat(cell, 64)
	} else {
		var room [64]byte
		x, err = strconv.ParseFloat(string(canonical(room[:0], cell, mark)), 64)
	}
	switch {
	case err != nil: // in the grammar, so only the range is left
		return 0, tooLarge
	case x == 0:
		if hasNonZeroMantissa(cell) {
			return 0, tooSmall
		}
		return 0, noFault // -0 is 0
	}
	return x, noFault
}

// scanNumber says whether s is in the grammar, whether it has no decimal mark,
// and whether it has no U+2212.
func scanNumber(s string, mark byte) (digitsOnly, ascii, ok bool) {
	i, ascii := skipSign(s, 0)
	start := i
	i = skipDigits(s, i)
	digits := i - start
	digitsOnly = true
	if i < len(s) && s[i] == mark {
		digitsOnly = false
		start = i + 1
		i = skipDigits(s, start)
		digits += i - start
	}
	if digits == 0 {
		return false, false, false
	}
	if i < len(s) && (s[i] == 'e' || s[i] == 'E') {
		var plain bool
		start, plain = skipSign(s, i+1)
		ascii = ascii && plain
		if i = skipDigits(s, start); i == start {
			return false, false, false
		}
	}
	return digitsOnly, ascii, i == len(s)
}

func skipSign(s string, i int) (next int, ascii bool) {
	switch {
	case i == len(s):
	case s[i] == '+' || s[i] == '-':
		return i + 1, true
	case s[i] == minus[0] && len(s)-i >= len(minus) && s[i:i+len(minus)] == minus:
		return i + len(minus), false
	}
	return i, true
}

func skipDigits(s string, i int) int {
	for i < len(s) && s[i]-'0' <= 9 {
		i++
	}
	return i
}

// canonical appends cell with "-" for U+2212 and "." for the mark. cell is in
// the grammar.
func canonical(to []byte, cell string, mark byte) []byte {
	for i := 0; i < len(cell); i++ {
		switch {
		case cell[i] == mark:
			to = append(to, '.')
		case cell[i] == minus[0]:
			to = append(to, '-')
			i += len(minus) - 1
		default:
			to = append(to, cell[i])
		}
	}
	return to
}

func hasNonZeroMantissa(cell string) bool {
	for i := 0; i < len(cell) && cell[i] != 'e' && cell[i] != 'E'; i++ {
		if cell[i] >= '1' && cell[i] <= '9' {
			return true
		}
	}
	return false
}

// whole says whether x is a whole number of at least 1.
func whole(x float64) bool { return x >= 1 && x == math.Floor(x) }

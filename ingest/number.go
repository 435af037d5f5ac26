package ingest

import (
	"math"
	"strconv"
)

// cellFault says why a number cell cannot be read.
type cellFault uint8

const (
	readable     cellFault = iota
	wordy                  // not in the grammar of numbers
	overflow               // past the largest float64
	underflow              // not zero, and yet below the smallest float64
	limitUnread            // "<" and no limit after it
	limitRefused           // "<" where a limit means nothing
	negative               // where nothing is below zero
	tooCold                // below absolute zero
	notFraction            // where only a share of the whole makes sense
	notCount               // where only a count makes sense
	farAmount              // no composition holds so much
	farPressure            // no rock comes from so deep
	tooHot                 // no rock is so hot
	farNumber              // nothing here is so large
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
func parseNumber(cell string, mark byte) (float64, cellFault) {
	n, ok := scanNumber(cell, mark)
	if !ok {
		return 0, wordy
	}
	if n.digits <= exactDigits && !n.exponent {
		x := float64(n.mantissa) / powers[n.decimals]
		if n.negative && x != 0 {
			return -x, readable
		}
		return x, readable
	}
	var room [64]byte
	x, err := strconv.ParseFloat(string(canonical(room[:0], cell, mark)), 64)
	switch {
	case err != nil: // in the grammar, so only the range is left
		return 0, overflow
	case x != 0:
		return x, readable
	case nonZero(cell):
		return 0, underflow
	}
	return 0, readable // -0 is 0
}

// exactDigits is how many digits, the decimals among them, a number may have for
// its digits and its power of ten to be exact in float64; one division of exact
// numbers rounds as ParseFloat does (Clinger 1990, Proc PLDI, 92-101).
const exactDigits = 15

var powers = [exactDigits + 1]float64{1, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15}

// scanned is a number in the grammar. mantissa is good up to exactDigits.
type scanned struct {
	negative, exponent bool
	digits, decimals   int
	mantissa           uint64
}

func scanNumber(s string, mark byte) (n scanned, ok bool) {
	i := skipSign(s, 0)
	n.negative = i > 0 && s[0] != '+'
	i = n.take(s, i)
	if i < len(s) && s[i] == mark {
		whole := n.digits
		i = n.take(s, i+1)
		n.decimals = n.digits - whole
	}
	if n.digits == 0 {
		return n, false
	}
	if i < len(s) && (s[i] == 'e' || s[i] == 'E') {
		n.exponent = true
		start := skipSign(s, i+1)
		for i = start; i < len(s) && s[i]-'0' <= 9; i++ {
		}
		if i == start {
			return n, false
		}
	}
	return n, i == len(s)
}

// take adds the digits from i on.
func (n *scanned) take(s string, i int) int {
	start := i
	for ; i < len(s) && s[i]-'0' <= 9; i++ {
		n.mantissa = n.mantissa*10 + uint64(s[i]-'0')
	}
	n.digits += i - start
	return i
}

func skipSign(s string, i int) int {
	switch {
	case i == len(s):
	case s[i] == '+' || s[i] == '-':
		return i + 1
	case s[i] == minus[0] && len(s)-i >= len(minus) && s[i:i+len(minus)] == minus:
		return i + len(minus)
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

// nonZero says whether the digits before an exponent are not all 0.
func nonZero(cell string) bool {
	for i := 0; i < len(cell) && cell[i] != 'e' && cell[i] != 'E'; i++ {
		if cell[i] >= '1' && cell[i] <= '9' {
			return true
		}
	}
	return false
}

// whole says whether x is a whole number of at least 1.
func whole(x float64) bool { return x >= 1 && x == math.Floor(x) }

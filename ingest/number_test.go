package ingest

import (
	"math"
	"strconv"
	"strings"
	"testing"
)

func TestParseNumber(t *testing.T) {
	for _, c := range []struct {
		cell string
		mark byte
		want float64
	}{
		{"0", '.', 0}, {"12", '.', 12}, {"12.3", '.', 12.3}, {"+12.3", '.', 12.3}, {"-0.04", '.', -0.04},
		{"\u22120.04", '.', -0.04}, {".5", '.', 0.5}, {"5.", '.', 5}, {"-.5", '.', -0.5},
		{"1e3", '.', 1000}, {"1.5E-3", '.', 0.0015}, {"1.5e\u22123", '.', 0.0015}, {"1e+2", '.', 100},
		{"12,3", ',', 12.3}, {"\u221212,3", ',', -12.3}, {",5", ',', 0.5}, {"5,", ',', 5}, {"12", ',', 12},
		{"1,5e\u22123", ',', 0.0015}, {"00012.30", '.', 12.3}, {"0e999", '.', 0},
		{strings.Repeat("9", 100) + ",5", ',', 1e100},
	} {
		got, fault := parseNumber(c.cell, c.mark)
		if fault != readable || got != c.want {
			t.Errorf("parseNumber(%q, %q) = %v, fault %d; want %v", c.cell, c.mark, got, fault, c.want)
		}
	}
}

func TestParseNumberRefuses(t *testing.T) {
	for _, c := range []struct {
		cell string
		mark byte
		want cellFault
	}{
		{"", '.', wordy}, {".", '.', wordy}, {"-", '.', wordy}, {"+.", '.', wordy}, {"e5", '.', wordy},
		{"1e", '.', wordy}, {"1e+", '.', wordy}, {"1_000", '.', wordy}, {"0x1p-2", '.', wordy},
		{"0x10", '.', wordy}, {"inf", '.', wordy}, {"+Inf", '.', wordy}, {"Infinity", '.', wordy},
		{"nan", '.', wordy}, {"NaN", '.', wordy}, {"1 000", '.', wordy}, {"1,000", '.', wordy},
		{"1.000,5", ',', wordy}, {"1.5", ',', wordy}, {"12,3", '.', wordy}, {"1.2.3", '.', wordy},
		{" 1", '.', wordy}, {"1 ", '.', wordy}, {"--1", '.', wordy}, {"1-", '.', wordy},
		{"\u20131", '.', wordy}, {"1\u00b2", '.', wordy}, {"\u0661", '.', wordy}, {"\uff11", '.', wordy},
		{"1'000", '.', wordy}, {"1.5*", '.', wordy}, {"1e5.0", '.', wordy}, {"\xe2\x88", '.', wordy},
		{"1e309", '.', overflow}, {"-1e309", '.', overflow}, {"1e-400", '.', underflow}, {"0,1e-400", ',', underflow},
	} {
		if got, fault := parseNumber(c.cell, c.mark); fault != c.want || got != 0 {
			t.Errorf("parseNumber(%q, %q) = %v, fault %d; want fault %d", c.cell, c.mark, got, fault, c.want)
		}
	}
}

// FuzzNumber holds the grammar against strconv.ParseFloat: whatever is accepted
// has the value of its canonical text, and what ParseFloat alone would take
// (underscores, hexadecimals, infinities, NaN) is refused.
func FuzzNumber(f *testing.F) {
	for _, s := range []string{"12.3", "12,3", "-0", "\u22121,5e\u22123", ".5", "5.", "1_000", "0x1p-2", "inf", "nan", "1e999", "1e-999", "", "e", "−", "1−2"} {
		f.Add(s, true)
		f.Add(s, false)
	}
	f.Fuzz(func(t *testing.T, cell string, comma bool) {
		mark, other := byte('.'), byte(',')
		if comma {
			mark, other = ',', '.'
		}
		got, fault := parseNumber(cell, mark)
		text := strings.ReplaceAll(strings.ReplaceAll(cell, minus, "-"), string(mark), ".")
		want, err := strconv.ParseFloat(text, 64)
		plain := strings.Trim(cell, "+-0123456789eE"+minus+string(mark)) == "" && strings.IndexByte(cell, other) < 0
		switch {
		case fault == readable && (err != nil || got != want || math.Signbit(got) && got == 0):
			t.Errorf("parseNumber(%q, %q) = %v, ParseFloat(%q) = %v, %v", cell, mark, got, text, want, err)
		case fault == readable && !plain:
			t.Errorf("parseNumber(%q, %q) = %v, and the cell has characters no number has", cell, mark, got)
		case fault == overflow && (err == nil || !math.IsInf(want, 0)):
			t.Errorf("parseNumber(%q, %q) says too large, ParseFloat(%q) = %v, %v", cell, mark, text, want, err)
		case fault == underflow && (err != nil || want != 0):
			t.Errorf("parseNumber(%q, %q) says too small, ParseFloat(%q) = %v, %v", cell, mark, text, want, err)
		case fault == wordy && err == nil && plain:
			t.Errorf("parseNumber(%q, %q) refuses what ParseFloat reads as %v", cell, mark, want)
		}
	})
}

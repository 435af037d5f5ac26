package ingest

import (
	"fmt"
	"math"
	"strings"

	"tieline/manifests"
	"tieline/pipeline/problem"
	"tieline/pipeline/tables"
	"tieline/thermo/chem"
)

// cells reads the cells of one source.
type cells struct {
	mark    byte // decimal
	markers map[string]chem.State
	first   [256]bool // bytes a marker may begin with
	longest int       // marker, bytes
}

func newCells(s *manifests.Source) *cells {
	c := &cells{mark: '.', markers: map[string]chem.State{}}
	if s.Decimal == "comma" {
		c.mark = ','
	}
	for _, list := range []struct {
		texts []string
		state chem.State
	}{{s.Missing, chem.Missing}, {s.NotAnalysed, chem.NotAnalysed}, {s.BelowDetection, chem.BelowDetection}} {
		for _, text := range list.texts {
			c.marker(strings.ToLower(trim(text)), list.state)
		}
	}
	for b := 0x80; b <= 0xff; b++ { // a letter may shrink to ASCII when made small
		c.first[b] = true
	}
	return c
}

func (c *cells) marker(text string, state chem.State) {
	if text == "" { // an empty cell is missing in every source
		return
	}
	c.markers[text] = state
	c.longest = max(c.longest, len(text))
	c.first[text[0]] = true
	c.first[strings.ToUpper(text[:1])[0]] = true
}

// marked says what a cell says in words: missing, not analysed, below detection.
func (c *cells) marked(cell string) (chem.State, bool) {
	if cell == "" {
		return chem.Missing, true
	}
	// A few letters are longer when small, none more than twice.
	if !c.first[cell[0]] || len(cell) > 2*c.longest {
		return 0, false
	}
	state, ok := c.markers[strings.ToLower(cell)]
	return state, ok
}

// reading is what a number cell says. fault is why it says nothing.
type reading struct {
	value float64 // or the detection limit, 0 where none is stated
	given float64 // before it was brought to another unit
	state chem.State
	fault cellFault
}

// number reads a trimmed cell of the composition. Below zero is read as it
// stands: a background above the peak makes small negative amounts, and whether
// to use them is not for the reader to say.
func (c *cells) number(cell string) reading {
	return bounded(c.read(cell), mostAmount, farAmount)
}

// Numbers beyond these, either way where they may be negative, are slips: a
// wrong unit, a decimal mark that was lost, a code for missing. Sums and ratios
// of what is within them stay finite.
const (
	mostAmount = 1e6 // wt%, apfu or fraction, 1-sigmas too
	mostKbar   = 500
	mostC      = 3000
	mostNumber = 1e9 // coordinates and all else, in its own unit
)

// bounded refuses a number, or a limit, that is out of all reason.
func bounded(r reading, most float64, fault cellFault) reading {
	if math.Abs(r.value) > most {
		return reading{fault: fault}
	}
	return r
}

// read reads a number of any size.
func (c *cells) read(cell string) reading {
	if state, ok := c.marked(cell); ok {
		return reading{state: state}
	}
	if cell[0] == '<' {
		limit, fault := parseNumber(trim(cell[1:]), c.mark)
		if fault != readable || limit < 0 {
			return reading{fault: limitUnread}
		}
		return reading{value: limit, state: chem.BelowDetection}
	}
	x, fault := parseNumber(cell, c.mark)
	if fault != readable {
		return reading{fault: fault}
	}
	return reading{value: x, given: x, state: chem.Measured}
}

// sigma reads a 1-sigma. A word for not analysed or below detection says that
// there is none.
func (c *cells) sigma(cell string) reading {
	return bounded(check(c.measured(cell), 0, negative), mostAmount, farAmount)
}

// measured reads a number that has no detection limit.
func (c *cells) measured(cell string) reading {
	r := c.read(cell)
	if cell != "" && cell[0] == '<' && r.state == chem.BelowDetection {
		if _, word := c.marked(cell); !word {
			return reading{fault: limitRefused}
		}
	}
	return r
}

// plain reads a number beside the composition, in the unit of the tables.
func (c *cells) plain(cell string, u *use) reading {
	r := c.measured(cell)
	r.value = u.scale.apply(r.value)
	switch u.number {
	case tables.PublishedC:
		return bounded(check(r, float64(-chem.ZeroCelsius), tooCold), mostC, tooHot)
	case tables.PublishedPKbar, tables.PKbar:
		return bounded(check(r, 0, negative), mostKbar, farPressure)
	case tables.PublishedSigmaC, tables.PSigmaKbar:
		return bounded(check(r, 0, negative), mostNumber, farNumber)
	case tables.AreaFraction:
		if r.state == chem.Measured && !(r.value >= 0 && r.value <= 1) {
			return reading{fault: notFraction}
		}
	case tables.NSpots:
		if r.state == chem.Measured && !whole(r.value) {
			return reading{fault: notCount}
		}
	}
	return bounded(r, mostNumber, farNumber)
}

// check refuses a number below the least that makes sense.
func check(r reading, least float64, fault cellFault) reading {
	if r.state == chem.Measured && r.value < least {
		return reading{fault: fault}
	}
	return r
}

func (s scale) apply(x float64) float64 {
	switch s {
	case kelvinToCelsius:
		return float64(chem.Kelvin(x).Celsius())
	case gpaToKbar:
		return float64(x * 10)
	case mpaToKbar:
		return x / 100
	case barToKbar:
		return x / 1000
	}
	return x
}

// problem says what is wrong with a cell of a quantity and what to do about it.
func (c *cells) problem(cell string, fault cellFault, q manifests.Quantity) problem.Problem {
	p := problem.Problem{Kind: "number", Found: problem.Quote(cell), Expected: "a number with a decimal " + c.markName()}
	switch fault {
	case wordy:
		p.Found += " is no number"
		p.Do = c.advice(cell)
	case overflow:
		p.Found += " is too large"
		p.Expected = "a number below 1.8e308"
	case underflow:
		p.Found += " is too small to tell from 0"
		p.Expected = "a number, or 0"
	case limitUnread:
		p.Found += " has no limit after the <"
		p.Expected = "a limit such as <0" + string(c.mark) + "02"
	case limitRefused:
		p.Found += " is a limit"
		p.Do = "leave the cell empty if there is no number"
	case negative:
		p.Found += " is below zero"
		p.Expected = "a number of 0 or more"
	case tooCold:
		p.Found += " is below absolute zero"
		p.Expected = "a temperature"
		p.Do = "list the text in missing if it means that there is none"
	case notFraction:
		p.Found += " is no fraction"
		p.Expected = "a number from 0 to 1"
	case notCount:
		p.Found += " is no count"
		p.Expected = "a whole number of 1 or more"
	case farAmount, farPressure, tooHot, farNumber:
		p.Found += " is out of all reason"
		p.Expected, p.Do = reason(fault, q)
	}
	return p
}

// reason gives the range of what a far number should have been, and what to do.
func reason(fault cellFault, q manifests.Quantity) (expected, do string) {
	const orElse = "correct the cell, or list the text in missing if it means that there is none"
	switch fault {
	case farPressure:
		return fmt.Sprintf("a pressure from 0 to %d kbar", mostKbar), pressureAdvice[q] + orElse
	case tooHot:
		return fmt.Sprintf("a temperature up to %d degC", mostC), "check the unit, " + orElse
	case farAmount:
		return "a number from -1e6 to 1e6", orElse
	}
	return "a number from -1e9 to 1e9", orElse
}

// pressureAdvice asks for the smaller units a pressure may be written in.
var pressureAdvice = map[manifests.Quantity]string{
	manifests.PublishedPKbar: "is the unit MPa or bar? convert the column to kbar; else ",
	manifests.PKbar:          "is the unit MPa or bar? map the column to p_mpa or p_bar; else ",
	manifests.PGpa:           "is the unit kbar, MPa or bar? map the column to p_kbar, p_mpa or p_bar; else ",
	manifests.PMpa:           "is the unit bar? map the column to p_bar; else ",
}

func (c *cells) markName() string {
	if c.mark == ',' {
		return "comma"
	}
	return "point"
}

// advice guesses why a cell is no number.
func (c *cells) advice(cell string) string {
	other, name := byte(','), "comma"
	if c.mark == ',' {
		other, name = '.', "point"
	}
	_, asOther := parseNumber(cell, other)
	_, together := parseNumber(strings.Map(func(r rune) rune {
		if blank(r) || r == rune(other) || r == '\'' || r == '\u2019' {
			return -1
		}
		return r
	}, cell), c.mark)
	switch {
	case asOther == readable:
		return fmt.Sprintf("set decimal = %q if this source writes its decimals so", name)
	case together == readable:
		return "write numbers without thousands separators or spaces"
	case !strings.ContainsAny(cell, "0123456789"):
		return "list the text in not_analysed, below_detection or missing if it means one of these"
	}
	return "correct the cell"
}

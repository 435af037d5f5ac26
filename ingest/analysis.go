package ingest

import (
	"strings"

	"tieline/manifests"
	"tieline/pipeline/lineage"
	"tieline/pipeline/problem"
	"tieline/pipeline/tables"
	"tieline/thermo/chem"
)

// analyses makes the rows of one source into analyses. Every column that is
// used writes its place of the one analysis anew, so nothing of the row before
// is left.
type analyses struct {
	plan  *plan
	cells *cells
	one   tables.Analysis
	enc   *lineage.Encoder

	problems []problem.Problem      // of the row last read
	full     func(kind string) bool // whether problems of a kind are only counted, and need no words
}

func newAnalyses(p *plan, full func(kind string) bool) *analyses {
	a := &analyses{plan: p, full: full, cells: newCells(p.source), enc: lineage.New(analysisDomain)}
	a.one.Text = p.constants
	a.one.Phase = p.source.Phase
	a.one.Composition.Kind = p.kind
	a.one.Composition.Oxygens = p.source.Oxygens
	return a
}

// read makes row into an analysis, which is good until the call after and has no
// id yet. It is nil where the row has problems.
func (a *analyses) read(row []string, r *rows) *tables.Analysis {
	a.problems = a.problems[:0]
	one := &a.one
	one.Line = r.line
	one.Text[tables.SetAside] = ""
	a.enc.Reset(analysisDomain).Digest(a.plan.digest).List(len(a.plan.columns))
	for i := range a.plan.columns {
		c := &a.plan.columns[i]
		before := len(a.problems)
		a.cell(c, trim(row[c.at]))
		for j := before; j < len(a.problems); j++ {
			p := &a.problems[j]
			p.Line, p.Column, p.Name = r.lineOf(c.at), c.at+1, c.header
		}
	}
	a.sampleGiven(row, r)
	if len(a.problems) > 0 {
		return nil
	}
	if one.Composition.Kind == chem.EndMember {
		renormalise(one)
	}
	one.Lineage = a.enc.Sum()
	return one
}

func (a *analyses) cell(c *column, cell string) {
	switch c.use.role {
	case textCell:
		a.text(c, cell)
	case phaseCell:
		a.phase(cell)
	case numberCell:
		r := a.accept(c, cell, a.cells.plain(cell, &c.use))
		a.one.Has[c.use.number] = r.state == chem.Measured
		a.one.Number[c.use.number] = measuredOr0(r)
	case valueCell:
		r := a.accept(c, cell, a.cells.number(cell))
		a.one.Composition.State[c.use.measurand] = r.state
		a.one.Composition.Value[c.use.measurand] = r.value
	case sigmaCell:
		r := a.accept(c, cell, a.cells.sigma(cell))
		a.one.Sigma[c.use.measurand] = measuredOr0(r)
	}
}

func measuredOr0(r reading) float64 {
	if r.state == chem.Measured {
		return r.value
	}
	return 0
}

// text reads a text cell. Words for missing and not analysed leave it empty: two
// rows without a pair label are no pair.
func (a *analyses) text(c *column, cell string) {
	text := a.cells.text(cell)
	if text == "" && cell != "" {
		a.enc.List(2).Text(cell).Null()
	} else {
		a.enc.Text(cell)
	}
	if c.quantity == manifests.PublishedKind {
		text = strings.ToLower(text)
		switch text {
		case "", "experiment", "thermometer", "estimate":
		default:
			a.problems = append(a.problems, problem.Problem{Kind: "published kind", Found: problem.Quote(cell), Expected: "experiment, thermometer or estimate"})
		}
	}
	if c.quantity == manifests.Texture {
		text = textureOf(text)
	}
	a.one.Text[c.use.text] = text
	if text == "" {
		a.plan.reports[c.report].Missing++
	}
}

func (c *cells) text(cell string) string {
	if state, ok := c.marked(cell); ok && state != chem.BelowDetection {
		return ""
	}
	return name(cell)
}

func (a *analyses) phase(cell string) {
	text := a.cells.text(cell)
	r := phaseReading{}
	if text != "" {
		r = a.plan.phases.of(text)
	}
	switch {
	case text == "":
		a.problems = append(a.problems, problem.Problem{Kind: "phase", Found: "no phase", Expected: "an IMA symbol or a mineral name", Do: "fill in the cell"})
	case !r.known && a.full("phase"):
		a.problems = append(a.problems, problem.Problem{Kind: "phase"})
	case !r.known:
		a.problems = append(a.problems, a.plan.phases.unknown(text))
	}
	a.one.Phase = r.phase
	a.one.Text[tables.PhaseText] = text
	a.one.Text[tables.SetAside] = r.setAside
	a.enc.List(3).Text(cell).Text(string(r.phase)).Text(r.setAside)
}

// accept counts what a number cell says, encodes it, and reports what it does
// not say. In a row that is passed over an unreadable cell counts as missing.
func (a *analyses) accept(c *column, cell string, r reading) reading {
	if r.fault != readable {
		if a.one.Text[tables.SetAside] == "" {
			p := problem.Problem{Kind: "number"}
			if !a.full(p.Kind) {
				p = a.cells.problem(cell, r.fault, c.quantity)
			}
			a.problems = append(a.problems, p)
		}
		r = reading{}
	}
	report := &a.plan.reports[c.report]
	if r.state == chem.Measured {
		a.enc.Text(cell)
		report.number(r.given)
		return r
	}
	a.enc.List(2).Text(cell).Text(r.state.String())
	switch r.state {
	case chem.Missing:
		report.Missing++
	case chem.NotAnalysed:
		report.NotAnalysed++
	case chem.BelowDetection:
		report.BelowDetection++
	}
	return r
}

// sampleGiven reports a row whose sample cell is empty. A row that is passed
// over needs none.
func (a *analyses) sampleGiven(row []string, r *rows) {
	if !a.plan.hasSample || a.one.Text[tables.Sample] != "" || a.one.Text[tables.SetAside] != "" {
		return
	}
	p := problem.Problem{Kind: "sample", Found: "no sample name", Expected: "the name of the rock or run", Do: "fill in the cell"}
	for _, c := range a.plan.columns {
		if c.quantity == manifests.Sample {
			p.Line, p.Column, p.Name = r.lineOf(c.at), c.at+1, c.header
			if cell := trim(row[c.at]); cell != "" {
				p.Found = problem.Quote(cell) + " is no sample name"
			}
		}
	}
	a.problems = append(a.problems, p)
}

// renormalise brings end-member fractions to the sum 1, limits and 1-sigmas
// with them, and keeps the sum they had. Where Ab, Or or An was not given the
// rest says nothing of the whole and stays as it is, as it does where the
// fractions cancel to next to nothing; Cn may be absent.
func renormalise(a *tables.Analysis) {
	c := &a.Composition
	sum := 0.0
	for m := chem.XAb; m <= chem.XCn; m++ {
		sum += c.Amount(m)
	}
	a.EndMemberSum = sum
	if sum < leastSum || !c.Determined(chem.XAb) || !c.Determined(chem.XOr) || !c.Determined(chem.XAn) {
		return
	}
	for m := chem.XAb; m <= chem.XCn; m++ {
		c.Value[m] /= sum
		a.Sigma[m] /= sum
	}
}

// leastSum keeps a fraction that is divided by the sum finite.
const leastSum = 1e-6

func (c *Column) number(x float64) {
	if c.Numbers == 0 || x < c.Min {
		c.Min = x
	}
	if c.Numbers == 0 || x > c.Max {
		c.Max = x
	}
	c.Numbers++
}

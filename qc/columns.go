package qc

import (
	"fmt"
	"math"

	"tieline/manifests"
	"tieline/pipeline/tables"
	"tieline/thermo/chem"
	"tieline/thermo/formula"
	"tieline/thermo/method"
)

// Limits of the tests on columns (common practice, no source). A column is
// wrong only where four rows of five say so.
const (
	mostRows     = 1000 // rows of one mineral of a source that a test of a whole column reads
	sumGain      = 0.01 // apfu by which a repair must bring the cation sums closer to ideal, on the average
	totalGain    = 0.5  // wt% by which it must bring the totals closer to 100
	ppmAbove     = 3    // wt% of a trace oxide from which ppm are thought of
	ironAbove    = 2    // wt% of iron below which FeO and Fe cannot be told apart
	fourOfFive   = 0.8
	feOPerFe     = 1.28649 // weight of FeO that holds one weight of Fe
	totalInPlace = 90      // a cell of so much is a total, not an oxide
)

// traces are the oxides that laboratories also report in ppm.
var traces = []chem.Oxide{chem.TiO2, chem.Cr2O3, chem.V2O3, chem.MnO, chem.NiO, chem.ZnO, chem.SrO, chem.BaO, chem.P2O5, chem.F, chem.Cl}

// inTables is the order of columns in most published tables; iron in whichever
// form stands in one place.
var inTables = []chem.Measurand{chem.MeasurandOf(chem.SiO2), chem.MeasurandOf(chem.TiO2), chem.MeasurandOf(chem.Al2O3), chem.MeasurandOf(chem.Cr2O3),
	chem.MeasurandOf(chem.V2O3), chem.MeasurandOf(chem.Fe2O3), chem.Fe2O3T, chem.MeasurandOf(chem.FeO), chem.FeOT, chem.MeasurandOf(chem.MnO),
	chem.MeasurandOf(chem.NiO), chem.MeasurandOf(chem.ZnO), chem.MeasurandOf(chem.MgO), chem.MeasurandOf(chem.CaO), chem.MeasurandOf(chem.SrO),
	chem.MeasurandOf(chem.BaO), chem.MeasurandOf(chem.Na2O), chem.MeasurandOf(chem.K2O), chem.MeasurandOf(chem.P2O5)}

// column gathers what the rows of one mineral of one source say of a repair.
type column struct {
	rows   int     // that can say anything
	better int     // that the repair brings closer
	sum    float64 // gain in |cation sum - ideal|, summed
	total  float64 // gain in |total - 100|, summed
}

func (c *column) most() bool {
	return c.rows > 0 && float64(c.better) >= float64(fourOfFive*float64(c.rows))
}

func (c *column) mean() (sum, total float64) {
	return c.sum / float64(c.rows), c.total / float64(c.rows)
}

// suspicion is the tests of one mineral of one source.
type suspicion struct {
	source string
	role   chem.Phase
	read   int
	swap   column
	iron   column
	ironAs chem.Measurand
	ppm    [chem.NumOxides]column
	shift  column
	first  shift
	order  []chem.Measurand // columns the batch has, as tables have them
}

// columns tests the columns of every source of oxides, mineral by mineral.
func (s *Surveyed) columns(m *manifests.Manifest) {
	var open []*suspicion
	source, index := "", int32(0)
	for _, b := range s.all.Batches {
		if b.Source != source {
			s.conclude(&m.QC, open)
			open, source = nil, b.Source
		}
		if b.Kind == chem.OxideWt {
			open = s.batch(&m.QC, b, index, open)
		}
		index += int32(b.Len())
	}
	s.conclude(&m.QC, open)
}

func (s *Surveyed) batch(limits *manifests.QC, b *tables.Batch, index int32, open []*suspicion) []*suspicion {
	order := present(b)
	var c chem.Composition
	for row := range b.Len() {
		role := b.Phase(row).Role()
		if role == "" || b.Text(tables.SetAside, row) != "" {
			continue
		}
		var u *suspicion
		for _, o := range open {
			if o.role == role {
				u = o
			}
		}
		if u == nil {
			u = &suspicion{source: b.Source, role: role}
			open = append(open, u)
		}
		u.order = order
		b.Composition(row, &c)
		if sh, ok := u.row(limits, &c); ok {
			s.shifted[index+int32(row)] = sh
		}
	}
	return open
}

// present lists the columns of a batch that hold a number, as tables have them.
func present(b *tables.Batch) []chem.Measurand {
	var has [chem.NumMeasurands]bool
	var c chem.Composition
	for row := range b.Len() {
		b.Composition(row, &c)
		for m := range chem.NumMeasurands {
			has[m] = has[m] || c.State[m] == chem.Measured
		}
	}
	var out []chem.Measurand
	for _, m := range inTables {
		if has[m] {
			out = append(out, m)
		}
	}
	return out
}

// row adds one analysis to the tests, and gives the shift that would mend it.
func (u *suspicion) row(limits *manifests.QC, c *chem.Composition) (shift, bool) {
	f := u.formula(c)
	if f.Why != method.OK {
		return shift{}, false
	}
	if u.read++; u.read <= mostRows {
		u.swapped(c, &f)
		u.metal(c, &f)
		u.ppmOf(limits, c)
	}
	u.shift.rows++
	sh, ok := u.shiftOf(limits, c, &f)
	if ok {
		if u.shift.better++; u.shift.better == 1 {
			u.first = sh
		}
	}
	return sh, ok
}

func (u *suspicion) feldspar() bool { return u.role == chem.Afs || u.role == chem.Pl }

func (u *suspicion) ideal() float64 {
	if u.feldspar() {
		return 5
	}
	return 4
}

func (u *suspicion) formula(c *chem.Composition) formula.Formula {
	if u.feldspar() {
		return formula.Of(c, method.Basis{Oxygens: 8, Cations: 5, Ferric: method.AllFe3})
	}
	return formula.Of(c, method.Basis{Oxygens: 6, Cations: 4, Ferric: method.AllFe2})
}

// gain is by how much the second formula's cation sum lies closer to ideal.
func (u *suspicion) gain(was, now *formula.Formula) float64 {
	return math.Abs(was.Sum-u.ideal()) - math.Abs(now.Sum-u.ideal())
}

// swapped tries Na2O and K2O the other way round.
func (u *suspicion) swapped(c *chem.Composition, f *formula.Formula) {
	na, k := chem.MeasurandOf(chem.Na2O), chem.MeasurandOf(chem.K2O)
	if !u.feldspar() || c.State[na] != chem.Measured || c.State[k] != chem.Measured || c.Value[na] == c.Value[k] {
		return
	}
	if _, ok := sitesOf(&Analysis{Composition: c, Formula: f}); !ok {
		return
	}
	other := *c
	other.Value[na], other.Value[k] = c.Value[k], c.Value[na]
	now := u.formula(&other)
	g := u.gain(f, &now)
	u.swap.rows++
	u.swap.sum += g
	if g > 0 {
		u.swap.better++
	}
}

// metal tries the iron of a pyroxene as Fe instead of FeO.
func (u *suspicion) metal(c *chem.Composition, f *formula.Formula) {
	m := chem.FeOT
	if c.State[m] != chem.Measured {
		m = chem.MeasurandOf(chem.FeO)
	}
	if u.feldspar() || c.Amount(m) < ironAbove || c.Amount(chem.MeasurandOf(chem.Fe2O3)) != 0 {
		return
	}
	was, ok := formula.Total(c)
	if !ok {
		return
	}
	other := *c
	other.Value[m] = float64(c.Value[m] * feOPerFe)
	total, _ := formula.Total(&other)
	now := u.formula(&other)
	sum, wt := u.gain(f, &now), math.Abs(was-100)-math.Abs(total-100)
	u.ironAs = m
	u.iron.rows++
	u.iron.sum += sum
	u.iron.total += wt
	if sum > 0 && wt > 0 {
		u.iron.better++
	}
}

// ppmOf looks for traces whose figures, as wt%, are what makes a total too high.
func (u *suspicion) ppmOf(limits *manifests.QC, c *chem.Composition) {
	var suspects []chem.Oxide
	other := *c
	for _, o := range traces {
		m := chem.MeasurandOf(o)
		if c.State[m] != chem.Measured {
			continue
		}
		u.ppm[o].rows++
		if c.Value[m] > ppmAbove {
			suspects = append(suspects, o)
			other.Value[m] = c.Value[m] / 10000
		}
	}
	total, ok := formula.Total(c)
	if now, _ := formula.Total(&other); !ok || total <= limits.TotalsFlaggedWt[1] || now < limits.TotalsFlaggedWt[0] || now > limits.TotalsFlaggedWt[1] {
		return
	}
	for _, o := range suspects {
		u.ppm[o].better++
	}
}

// conclude turns the tests of a source's minerals into findings.
func (s *Surveyed) conclude(limits *manifests.QC, open []*suspicion) {
	for _, u := range open {
		s.concludeSwap(limits, u)
		s.concludeIron(limits, u)
		for _, o := range traces {
			s.concludePPM(limits, u, o)
		}
		s.concludeShift(limits, u)
	}
}

func (s *Surveyed) add(u *suspicion, column string, f Finding) {
	f.Detail = string(u.role) + ": " + f.Detail
	s.Sources = append(s.Sources, SourceFinding{u.source, column, f})
}

func (s *Surveyed) concludeSwap(limits *manifests.QC, u *suspicion) {
	if !u.swap.most() {
		return
	}
	gain, _ := u.swap.mean()
	f := Finding{Rule: "Na2O and K2O swapped", Effect: Flagged, Value: number(gain), Limit: text(sumGain, 3) + " apfu, " + enough(limits),
		Detail: fmt.Sprintf("Na2O and K2O look swapped: the other way round brings the cation sums of %d of %d rows closer to 5, by %s on the average", u.swap.better, u.swap.rows, text(gain, 3))}
	if few(limits, u.swap.rows) || gain <= sumGain+eps {
		f.Effect = Noted
		f.Detail = fmt.Sprintf("whether Na2O and K2O are swapped, tieline cannot tell: the other way round brings the cation sums of %d of %d rows closer to 5, by %s on the average; compare a published formula",
			u.swap.better, u.swap.rows, text(gain, 3))
	}
	s.add(u, chem.Na2O.String(), f)
}

func (s *Surveyed) concludeIron(limits *manifests.QC, u *suspicion) {
	if !u.iron.most() {
		return
	}
	sum, total := u.iron.mean()
	if total <= totalGain+eps || sum <= sumGain+eps {
		return
	}
	f := Finding{Rule: "FeO given as Fe", Effect: Flagged, Value: number(total), Limit: text(totalGain, 2) + " wt%, " + enough(limits),
		Detail: fmt.Sprintf("%s looks like the metal: as Fe it brings totals closer to 100 by %s wt%% and cation sums closer to 4 by %s, in %d of %d rows",
			u.ironAs, text(total, 2), text(sum, 3), u.iron.better, u.iron.rows)}
	if few(limits, u.iron.rows) {
		f.Effect = Noted
		f.Detail = fmt.Sprintf("whether %s is the metal, tieline cannot tell from %d rows: as Fe it brings totals closer to 100 by %s wt%%", u.ironAs, u.iron.rows, text(total, 2))
	}
	s.add(u, u.ironAs.String(), f)
}

func (s *Surveyed) concludePPM(limits *manifests.QC, u *suspicion, o chem.Oxide) {
	p := &u.ppm[o]
	if p.better == 0 || !p.most() {
		return
	}
	f := Finding{Rule: "ppm given as wt%", Effect: Flagged, Value: number(float64(p.better)), Limit: text(ppmAbove, 1) + " wt%, " + enough(limits),
		Detail: fmt.Sprintf("%s looks like ppm: as wt%% it pushes the totals of %d of %d rows beyond %s", o, p.better, p.rows, text(limits.TotalsFlaggedWt[1], 2))}
	if few(limits, p.rows) {
		f.Effect = Noted
		f.Detail = fmt.Sprintf("whether %s is in ppm, tieline cannot tell from %d rows; as wt%% it pushes their totals beyond %s", o, p.rows, text(limits.TotalsFlaggedWt[1], 2))
	}
	s.add(u, o.String(), f)
}

func (s *Surveyed) concludeShift(limits *manifests.QC, u *suspicion) {
	if u.shift.better == 0 || !u.shift.most() || few(limits, u.shift.rows) {
		return
	}
	s.add(u, u.first.from.String(), Finding{Rule: "columns shifted", Effect: Flagged, Value: number(float64(u.shift.better)), Limit: enough(limits),
		Detail: fmt.Sprintf("the figures of %d of %d rows fit one column further %s, from %s on", u.shift.better, u.shift.rows, u.first.way(), u.first.from)})
}

func few(limits *manifests.QC, rows int) bool { return uint64(rows) < limits.ColumnRows }

func enough(limits *manifests.QC) string { return fmt.Sprintf("%d rows", limits.ColumnRows) }

// shift is what would mend a row: its cells from a column on belong one column
// further right or left.
type shift struct {
	from     chem.Measurand
	right    bool
	was, now float64 // cation sums
}

func (s shift) way() string {
	if s.right {
		return "right"
	}
	return "left"
}

func (s shift) finding() Finding {
	return Finding{Rule: "columns shifted", Effect: Flagged, Value: number(s.was), Limit: "a cation sum that fits",
		Detail: fmt.Sprintf("the figures from %s on fit one column further %s: the cation sum would be %s, not %s", s.from, s.way(), text(s.now, 3), text(s.was, 3))}
}

// shiftOf tries every shift by one column on a row that is no such mineral as it
// stands, and gives the first that makes it one.
func (u *suspicion) shiftOf(limits *manifests.QC, c *chem.Composition, f *formula.Formula) (shift, bool) {
	if u.sound(limits, c, f, true) {
		return shift{}, false
	}
	for j := range len(u.order) - 1 {
		for _, right := range []bool{true, false} {
			moved, ok := move(c, u.order[j:], right)
			if !ok {
				continue
			}
			if now := u.formula(&moved); now.Why == method.OK && u.sound(limits, &moved, &now, false) {
				return shift{u.order[j], right, f.Sum, now.Sum}, true
			}
		}
	}
	return shift{}, false
}

// sound says whether a formula is one of the mineral: flagged limits as it
// stands, kept limits and a total once it has been moved.
func (u *suspicion) sound(limits *manifests.QC, c *chem.Composition, f *formula.Formula, asItStands bool) bool {
	low, high := limits.PyroxeneSumKept[0], limits.PyroxeneSumKept[1]
	siLow, siHigh := 1.7, 2.03
	if asItStands {
		low, high = limits.PyroxeneSumFlagged[0], limits.PyroxeneSumFlagged[1]
	}
	if u.feldspar() {
		off := limits.FeldsparSumKept
		if asItStands {
			off = limits.FeldsparSumFlagged
		}
		low, high, siLow, siHigh = 5-off, 5+off, 1.95, 3.05
	}
	si := f.Apfu[chem.Si]
	if f.Sum < low-eps || f.Sum > high+eps || si < siLow || si > siHigh {
		return false
	}
	if asItStands {
		return true
	}
	total, ok := formula.Total(c)
	return u.plain(c, f) && ok && total >= limits.TotalsFlaggedWt[0]-eps && total <= limits.TotalsFlaggedWt[1]+eps
}

// plain says whether a moved row is an ordinary one of its mineral, so that a
// shift isn't found where a bad row happens to add up.
func (u *suspicion) plain(c *chem.Composition, f *formula.Formula) bool {
	p := &f.Apfu
	if u.feldspar() {
		s, ok := sitesOf(&Analysis{Composition: c, Formula: f})
		return ok && math.Abs(s.a-1) <= 0.05 && math.Abs(s.excess) <= 0.05 && p[chem.Ba]+p[chem.Sr]+p[chem.Mg] <= 0.1
	}
	return p[chem.Ca] <= 1.05 && p[chem.Mg]+p[chem.Fe2] >= 0.5 && p[chem.Ti]+p[chem.Cr]+p[chem.Mn]+p[chem.Ni]+p[chem.K] <= 0.2
}

// move puts the cells of the columns one further right, leaving the first empty,
// or one further left over a first that is empty or zero. Nothing but a total
// may fall off the end.
func move(c *chem.Composition, order []chem.Measurand, right bool) (chem.Composition, bool) {
	out := *c
	first, last := order[0], order[len(order)-1]
	if right {
		if v := c.Amount(last); v != 0 && v < totalInPlace {
			return out, false
		}
		for i := len(order) - 1; i > 0; i-- {
			out.Value[order[i]], out.State[order[i]] = c.Value[order[i-1]], c.State[order[i-1]]
		}
		out.Value[first], out.State[first] = 0, chem.Missing
		return out, true
	}
	if c.Amount(first) != 0 {
		return out, false
	}
	for i := range len(order) - 1 {
		out.Value[order[i]], out.State[order[i]] = c.Value[order[i+1]], c.State[order[i+1]]
	}
	out.Value[last], out.State[last] = 0, chem.Missing
	return out, true
}

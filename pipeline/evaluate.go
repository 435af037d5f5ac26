package pipeline

import (
	"math"
	"slices"
	"strings"

	"tieline/pipeline/discrepancy"
	"tieline/pipeline/lineage"
	"tieline/pipeline/pairing"
	"tieline/pipeline/tables"
	"tieline/qc"
	"tieline/thermo/chem"
	"tieline/thermo/formula"
	"tieline/thermo/method"
)

// blockRows is how many analyses one block of the formula stage holds, and
// itemRows how many pairs or analyses one of the evaluation: each of these gives
// a row per method and component, and several blocks wait for the writer.
const (
	blockRows = 1024
	itemRows  = 256
)

// roomBar is the pressure a method without a stated one is tried at; the
// number stands only where it hardly depends on pressure.
const roomBar chem.Bar = 1

// pressureStep is half the span of the dT/dP difference quotient.
const pressureStep chem.Bar = 100

// needsPressureAbove is the dT/dP, degC/kbar, above which no pressure means no number.
const needsPressureAbove = 1.0

// The status of an estimate.
const (
	statusNumber   = "number"
	statusNoNumber = "no number"
	statusAtMost   = "at most"  // bound_c is an upper bound
	statusAtLeast  = "at least" // bound_c is a lower bound
)

// item is one thing a temperature is taken from: a pair, or one analysis.
type item struct {
	a, b int32 // indices of analyses; b is -1 for a single one
	pair int32 // index of the pair, -1 for a single analysis
}

// kind is all items of one pair kind with the methods that read them.
type kind struct {
	name    string
	roles   []chem.Phase
	items   []item
	methods []*method.Method
	leaves  []*method.Quantity
	lanes   []discrepancy.Lane // one per method and component, then as-published by kind; T filled by the evaluation

	fe3Basis []string // per lane of a method
	// outside marks, per lane and item, a number that stays out of the samples
	// table: set aside, or out of range in composition.
	outside [][]bool
	inRange []int64 // per lane of a method
}

// publishedKinds are what a published temperature may be; each has a lane of
// its own, since an experiment and an author's estimate are not one method.
var publishedKinds = []string{"experiment", "thermometer", "estimate", ""}

// laneCount is the number of lanes of methods, as-published not counted.
func (k *kind) laneCount() int { return len(k.lanes) - len(publishedKinds) }

// kinds sorts pairs and single analyses by what methods read: first the kinds
// of pair, then the single phases in the order of the methods.
func (s *state) kinds() []*kind {
	var out []*kind
	for i, pk := range pairing.Kinds {
		k := &kind{name: pk.Name, roles: []chem.Phase{pk.A, pk.B}}
		for p := range s.pairs {
			if s.pairs[p].Kind == i {
				k.items = append(k.items, item{s.pairs[p].A, s.pairs[p].B, int32(p)})
			}
		}
		out = append(out, k)
	}
	for _, m := range s.methods {
		if len(m.Phases) != 1 || slices.ContainsFunc(out, func(k *kind) bool { return reads(m, k.roles) }) {
			continue
		}
		name, _, _ := strings.Cut(m.ID, "/")
		k := &kind{name: name, roles: m.Phases}
		for i := range s.all.Len() {
			b, row := s.all.At(i)
			if b.Phase(row).Role() == m.Phases[0] && b.Text(tables.SetAside, row) == "" {
				k.items = append(k.items, item{int32(i), -1, -1})
			}
		}
		out = append(out, k)
	}
	for _, k := range out {
		k.prepare(s.methods)
	}
	return out
}

// reads says whether a method reads exactly these roles, in whichever order.
func reads(m *method.Method, roles []chem.Phase) bool {
	return len(m.Phases) == len(roles) && !slices.ContainsFunc(m.Phases, func(p chem.Phase) bool { return !slices.Contains(roles, p) })
}

// prepare finds the kind's methods, lanes and leaves.
func (k *kind) prepare(methods []*method.Method) {
	var needs []*method.Quantity
	for _, m := range methods {
		if !reads(m, k.roles) {
			continue
		}
		k.methods = append(k.methods, m)
		needs = append(needs, m.Needs...)
		for _, b := range m.Range.Bounds {
			if b.Quantity != nil {
				needs = append(needs, b.Quantity)
			}
		}
		for _, c := range m.Components {
			k.lanes = append(k.lanes, discrepancy.Lane{Method: m.ID, Component: c, Variant: m.Variant, Info: &m.Info, Own: true})
			k.fe3Basis = append(k.fe3Basis, m.IronConvention())
		}
	}
	for _, p := range publishedKinds {
		k.lanes = append(k.lanes, discrepancy.Lane{Method: discrepancy.AsPublished, PublishedKind: p})
	}
	for i := range k.lanes {
		k.lanes[i].T = slices.Repeat([]float64{math.NaN()}, len(k.items))
		k.outside = append(k.outside, make([]bool, len(k.items)))
	}
	k.inRange = make([]int64, k.laneCount())
	k.leaves = method.Leaves(needs)
}

// evaluator is one worker's scratch memory for one kind.
type evaluator struct {
	s     *state
	k     *kind
	block *method.Block
	at    [3][]method.Lane // at P, P - step, P + step, for one method
	sides [2]side
	p     []pressure
	from  int // the block's first item
	base  []chem.Bar

	alone *method.Block // one row, for bounds
}

// side is one analysis of an item, ready to fill leaves from.
type side struct {
	composition chem.Composition
	reader      formula.Reader
}

func (d *side) load(b *tables.Batch, row int) {
	b.Composition(row, &d.composition)
	d.reader.Reset(&d.composition)
}

// result is what one block of the evaluation leaves.
type result struct {
	rows     []tables.EstimateRow
	findings []tables.FindingRow
	counts   verdicts
	inRange  []int64 // per lane of a method
}

// verdicts counts rows by verdict.
type verdicts [3]int64

func (v *verdicts) add(w verdicts) {
	for i := range v {
		v[i] += w[i]
	}
}

func (s *state) newEvaluator(k *kind) *evaluator {
	return &evaluator{s: s, k: k, block: method.NewBlock(0), alone: method.NewBlock(1)}
}

// evaluate works out items [from, to) of the kind: estimates, findings, and the
// lanes' temperatures for the discrepancies.
func (e *evaluator) evaluate(from, to int) result {
	r := result{inRange: make([]int64, e.k.laneCount())}
	e.from = from
	e.fill(from, to)
	lane := 0
	estimates := make([][]estimate, e.k.laneCount())
	for _, m := range e.k.methods {
		for c, est := range e.method(m, to-from) {
			estimates[lane+c] = est
			for i := range est {
				if est[i].why == method.NonPositiveLog {
					e.bound(m, c, from+i, &est[i])
				}
			}
		}
		lane += len(m.Components)
	}
	for i := range to - from {
		e.together(estimates, i)
		for l := range estimates {
			e.emit(&r, from+i, l, &estimates[l][i])
		}
		e.emitPublished(&r, from+i)
	}
	return r
}

// fill sets the block's leaves and pressures.
func (e *evaluator) fill(from, to int) {
	n := to - from
	e.block.Reset(n)
	values := make([][]float64, len(e.k.leaves))
	reasons := make([][]method.Reason, len(e.k.leaves))
	for i, q := range e.k.leaves {
		values[i], reasons[i] = e.block.Set(q)
	}
	e.p = e.p[:0]
	for i := range n {
		it := e.k.items[from+i]
		e.loadSides(it)
		for j, q := range e.k.leaves {
			values[j][i], reasons[j][i] = e.sideOf(q).reader.Leaf(q.Leaf)
		}
		p := e.s.itemPressure(it)
		e.p = append(e.p, p)
		e.block.P[i] = roomBar
		if p.given() {
			e.block.P[i] = chem.Kbar(p.kbar).Bar()
		}
	}
}

// itemPressure is the pair's pressure; for one analysis its own row's, else that
// of the first pair it is in.
func (s *state) itemPressure(it item) pressure {
	if it.pair >= 0 {
		return s.pair[it.pair].pressure
	}
	b, row := s.all.At(int(it.a))
	if p := s.rowPressure(b, row); p.source == pFromSource || s.firstPair[it.a] < 0 {
		return p
	}
	return s.pair[s.firstPair[it.a]].pressure
}

// estimate is one temperature before it becomes a row.
type estimate struct {
	c, dTdP    float64 // degC, degC/kbar; meaningful where why is OK
	kbar       float64 // the pressure it was taken at; meaningful where one is given
	why        method.Reason
	outOf      []*method.Bound
	outOfValue []float64
	status     string       // statusAtMost or statusAtLeast where there is a bound, else ""
	bound      float64      // degC
	found      []qc.Finding // by rules that look at several estimates of the item
}

// method evaluates m at P and at P -+ 100 bar, and gives per component the
// block's estimates. Where pressure follows a line in T, each component finds
// its own.
func (e *evaluator) method(m *method.Method, n int) [][]estimate {
	for i := range e.at {
		e.at[i] = method.NewLanes(m, n)
	}
	out := make([][]estimate, len(m.Components))
	onLine := slices.ContainsFunc(e.p, func(p pressure) bool { return p.source == pFromLine })
	if !onLine {
		e.around(m)
	}
	for c := range out {
		if onLine {
			e.followLine(m, c)
			e.around(m)
		}
		out[c] = make([]estimate, n)
		for i := range n {
			out[c][i] = e.estimate(m, c, i)
		}
	}
	return out
}

// around evaluates m at the block's pressures and either side of them, and puts
// the pressures back to the bit: taking steps off again would leave rounding
// behind for the methods that follow.
func (e *evaluator) around(m *method.Method) {
	e.base = append(e.base[:0], e.block.P...)
	for i, step := range []chem.Bar{0, -pressureStep, pressureStep} {
		for j, p := range e.base {
			e.block.P[j] = p + step
		}
		m.Evaluate(e.block, e.at[i])
	}
	copy(e.block.P, e.base)
}

// lineRounds and lineTolerance end the search for the pressure on a line. Most
// methods are straight lines in pressure, where two secant steps arrive.
const (
	lineRounds             = 60
	lineTolerance chem.Bar = 1e-6
)

// followLine puts each row that lies on the manifest's line P(T) at the
// pressure where component c of m meets the line: the root of line(T(P)) - P by
// the secant method. A row that does not arrive keeps the last pressure tried,
// and estimate finds it off the line.
func (e *evaluator) followLine(m *method.Method, c int) {
	line := &e.s.manifest.Pressure
	n := len(e.p)
	lastP, lastG := make([]chem.Bar, n), make([]chem.Bar, n)
	for i, p := range e.p {
		if p.source == pFromLine {
			e.block.P[i] = chem.Kbar(line.LineAt(lineStartC)).Bar()
		}
	}
	for round := range lineRounds {
		m.Evaluate(e.block, e.at[0])
		moved := false
		for i, p := range e.p {
			if p.source != pFromLine || e.at[0][c].Why[i] != method.OK {
				continue
			}
			at := e.block.P[i]
			g := chem.Kbar(line.LineAt(float64(e.at[0][c].T[i].Celsius()))).Bar() - at
			if g <= lineTolerance && g >= -lineTolerance {
				continue
			}
			step := g
			if round > 0 && g != lastG[i] {
				step = chem.Bar(float64(-g * (at - lastP[i]) / (g - lastG[i])))
			}
			lastP[i], lastG[i] = at, g
			e.block.P[i] = at + step
			moved = true
		}
		if !moved {
			return
		}
	}
}

// lineStartC is where the search starts, degC.
const lineStartC = 800

func (e *evaluator) estimate(m *method.Method, c, i int) estimate {
	at, below, above := &e.at[0][c], &e.at[1][c], &e.at[2][c]
	est := estimate{why: at.Why[i], c: float64(at.T[i].Celsius()), kbar: e.p[i].kbar}
	if e.p[i].source == pFromLine {
		est.kbar = float64(e.block.P[i].Kbar())
	}
	if est.why == method.OK && (math.IsNaN(est.c) || math.IsInf(est.c, 0)) {
		est.why = method.NotFinite
	}
	if e.p[i].source == pFromLine && est.why == method.OK {
		if off := est.kbar - e.s.manifest.Pressure.LineAt(est.c); !(math.Abs(off) < 1e-6) || est.kbar < 0 {
			est.why = method.OffTheLine
		}
	}
	if est.why != method.OK {
		return est
	}
	est.dTdP = math.NaN()
	if below.Why[i] == method.OK && above.Why[i] == method.OK {
		est.dTdP = float64(above.T[i]-below.T[i]) / float64((2 * pressureStep).Kbar())
	}
	if !e.p[i].given() && !(math.Abs(est.dTdP) <= needsPressureAbove) {
		est.why = method.NeedsPressure
		return est
	}
	if e.tooUncertain(m, c, i) {
		est.why = method.TooUncertain
		return est
	}
	e.bounds(m, i, &est)
	return est
}

// tooUncertain says whether the source gives a 1-sigma by which a component the
// temperature hangs on is not known.
func (e *evaluator) tooUncertain(m *method.Method, c, i int) bool {
	for _, p := range m.Precise {
		if p.Component != m.Components[c] {
			continue
		}
		it := e.k.items[e.from+i]
		analysis := it.a
		if e.sideOf(p.Leaf) == &e.sides[1] {
			analysis = it.b
		}
		b, row := e.s.all.At(int(analysis))
		for _, x := range formula.Measurands(b.Kind, p.Leaf.Leaf) {
			sigma := b.Sigma(x, row)
			if sigma <= 0 {
				continue // the source gives none
			}
			var composition chem.Composition
			b.Composition(row, &composition)
			if v := composition.Amount(x); v > 0 && sigma/v > p.MaxRelative {
				return true
			}
		}
	}
	return false
}

// bounds lists what the estimate is outside of. Without a pressure that bound
// is not asked.
func (e *evaluator) bounds(m *method.Method, i int, est *estimate) {
	for j := range m.Range.Bounds {
		b := &m.Range.Bounds[j]
		v := est.c
		switch {
		case b.Quantity != nil:
			if e.block.Why(b.Quantity)[i] != method.OK {
				continue
			}
			v = e.block.Of(b.Quantity)[i]
		case b.Name == "P":
			if !e.p[i].given() {
				continue
			}
			v = est.kbar
		}
		if v < b.Min || v > b.Max {
			est.outOf = append(est.outOf, b)
			est.outOfValue = append(est.outOfValue, v)
		}
	}
}

// emit makes the estimate's row and findings, and fills its lane.
func (e *evaluator) emit(r *result, i, lane int, est *estimate) {
	l := &e.k.lanes[lane]
	it := e.k.items[i]
	p := e.s.itemPressure(it)
	if p.given() {
		p.kbar = est.kbar
	}
	row := e.s.estimateRow(e.k, it, l, p)
	row.Fe3Basis = e.k.fe3Basis[lane]
	row.Standing = string(l.Info.Standing)
	row.Lineage = e.s.estimateLineage(it, e.s.digests[l.Info], l.Component, p).String()
	from, why := e.s.parentVerdict(it)
	if est.why != method.OK {
		row.Status, row.Reason = statusNoNumber, est.why.String()
		if est.status != "" {
			row.Status, row.BoundC = est.status, &est.bound
			findings := qc.OfBound(e.s.qcEstimate(e.k, it, l, est, p))
			_, row.Reason = qc.Judge(findings)
			r.findings = append(r.findings, e.s.findingRows("estimate", row.EstimateID, it.a, findings)...)
		}
		row.Verdict = qc.SetAsideRow.String()
		r.counts[qc.SetAsideRow]++
		r.rows = append(r.rows, row)
		return
	}
	row.TC, row.DTDP = &est.c, finite(est.dTdP)
	if sigma := sigmaOf(e.k, lane); sigma > 0 {
		row.SigmaCalC = &sigma
	}
	in := len(est.outOf) == 0
	row.InRange, row.OutOfRange = &in, boundNames(est.outOf)
	findings := append(qc.OfEstimate(e.s.qcEstimate(e.k, it, l, est, p)), est.found...)
	own, reasons := qc.Judge(findings)
	v, reasons := qc.Inherit(own, reasons, from, why)
	row.Status, row.Reason, row.Verdict = statusNumber, reasons, v.String()
	r.counts[v]++
	r.rows = append(r.rows, row)
	r.findings = append(r.findings, e.s.findingRows("estimate", row.EstimateID, it.a, findings)...)
	if v != qc.SetAsideRow {
		l.T[i] = est.c
		if in {
			r.inRange[lane]++
		}
	}
	e.k.outside[lane][i] = v == qc.SetAsideRow || slices.ContainsFunc(est.outOf, func(b *method.Bound) bool { return b.Composition }) ||
		slices.ContainsFunc(findings, func(f qc.Finding) bool { return f.Rule == qc.Assemblage })
}

// emitPublished makes the row of the published temperature, if there is one.
func (e *evaluator) emitPublished(r *result, i int) {
	it := e.k.items[i]
	pub := e.s.itemPublished(it)
	if !pub.given {
		return
	}
	p := e.s.itemPressure(it)
	if p.source == pFromLine {
		p.kbar = e.s.manifest.Pressure.LineAt(pub.c)
	}
	lane := e.k.laneCount() + max(0, slices.Index(publishedKinds, pub.kind))
	row := e.s.estimateRow(e.k, it, &e.k.lanes[lane], p)
	row.TC, row.PublishedKind, row.Status = &pub.c, pub.kind, statusNumber
	v, why := e.s.parentVerdict(it)
	row.Verdict, row.Reason = v.String(), why
	row.Lineage = e.s.estimateLineage(it, lineage.Digest{}, discrepancy.AsPublished, p).String()
	r.counts[v]++
	r.rows = append(r.rows, row)
	if v != qc.SetAsideRow {
		e.k.lanes[lane].T[i] = pub.c
	}
	e.k.outside[lane][i] = v == qc.SetAsideRow
}

func (s *state) itemPublished(it item) published {
	if it.pair >= 0 {
		return s.pair[it.pair].published
	}
	b, row := s.all.At(int(it.a))
	if p := rowPublished(b, row); p.given || s.firstPair[it.a] < 0 {
		return p
	}
	return s.pair[s.firstPair[it.a]].published
}

// parentVerdict is the verdict an estimate can't be better than.
func (s *state) parentVerdict(it item) (qc.Verdict, string) {
	if it.pair >= 0 {
		return s.pair[it.pair].verdict, s.pair[it.pair].reasons
	}
	if s.doubted[it.a] {
		return qc.SetAsideRow, s.reasons[it.a]
	}
	return s.verdicts[it.a], s.reasons[it.a]
}

func (s *state) estimateLineage(it item, digest lineage.Digest, component string, p pressure) lineage.Digest {
	e := lineage.New("tieline estimate 1")
	if it.pair >= 0 {
		e.Digest(s.pair[it.pair].lineage)
	} else {
		b, row := s.all.At(int(it.a))
		e.Digest(b.Lineage(row))
	}
	e.Digest(digest).Text(component).Text(p.source)
	switch {
	case p.source == pFromLine:
		e.Float(*s.manifest.Pressure.LineKbarAt0C).Float(*s.manifest.Pressure.LineKbarPerC)
	case p.given():
		e.Float(p.kbar)
	}
	return e.Sum()
}

func boundNames(bounds []*method.Bound) string {
	var names []string
	for _, b := range bounds {
		names = append(names, b.Name)
	}
	return strings.Join(names, ", ")
}

func finite(v float64) *float64 {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return nil
	}
	return &v
}

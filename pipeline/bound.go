package pipeline

import (
	"math"

	"tieline/thermo/chem"
	"tieline/thermo/formula"
	"tieline/thermo/method"
)

// bound turns "no number, a logarithm of what is below detection" into a
// one-sided bound where the source states the detection limit: the temperature
// at the limit, and on which side of it smaller amounts lie. It tries the
// components below detection one at a time and stops at the first that helps;
// where two would have to be raised together there is no bound.
func (e *evaluator) bound(m *method.Method, c, i int, est *estimate) {
	it := e.k.items[i]
	e.loadSides(it)
	for _, q := range method.Leaves(m.Needs) {
		d := e.sideOf(q)
		for _, x := range formula.Measurands(d.composition.Kind, q.Leaf) {
			if d.composition.State[x] != chem.BelowDetection || d.composition.Value[x] <= 0 {
				continue
			}
			limit := d.composition.Value[x]
			status, at := e.boundAt(m, c, it, d, x, limit)
			d.composition.State[x], d.composition.Value[x] = chem.BelowDetection, limit
			d.reader.Reset(&d.composition)
			if status != "" {
				est.bound, est.status = at, status
				return
			}
		}
	}
}

// smaller are the shares of the limit that show on which side smaller amounts
// lie: all of them, for some equations turn.
var smaller = []float64{0.5, 0.1, 0.01, 0.001}

// boundAt gives the temperature at the limit and on which side of it smaller
// amounts lie; status is "" where there is no number, where they lie on both
// sides, or where no pressure is given and the temperature depends on it.
func (e *evaluator) boundAt(m *method.Method, c int, it item, d *side, x chem.Measurand, limit float64) (status string, at float64) {
	p := e.s.itemPressure(it)
	if p.source == pFromLine {
		return "", 0
	}
	bar := roomBar
	if p.given() {
		bar = chem.Kbar(p.kbar).Bar()
	}
	at, ok := e.with(m, c, d, x, limit, bar)
	if !ok {
		return "", 0
	}
	if !p.given() {
		above, ok := e.with(m, c, d, x, limit, bar+2*pressureStep)
		if !ok || math.Abs(above-at) > needsPressureAbove*float64((2*pressureStep).Kbar()) {
			return "", 0
		}
	}
	for _, share := range smaller {
		below, ok := e.with(m, c, d, x, float64(limit*share), bar)
		if !ok {
			continue
		}
		side := statusAtLeast
		if below < at {
			side = statusAtMost
		}
		if status != "" && side != status {
			return "", 0
		}
		status = side
	}
	return status, at
}

// with evaluates one component for one item with an amount put in for what is
// below detection, degC.
func (e *evaluator) with(m *method.Method, c int, d *side, x chem.Measurand, amount float64, bar chem.Bar) (float64, bool) {
	d.composition.State[x], d.composition.Value[x] = chem.Measured, amount
	d.reader.Reset(&d.composition)
	e.alone.Reset(1)
	for _, q := range e.k.leaves {
		v, why := e.alone.Set(q)
		v[0], why[0] = e.sideOf(q).reader.Leaf(q.Leaf)
	}
	e.alone.P[0] = bar
	lanes := method.NewLanes(m, 1)
	m.Evaluate(e.alone, lanes)
	return float64(lanes[c].T[0].Celsius()), lanes[c].Why[0] == method.OK
}

// loadSides reads an item's analyses.
func (e *evaluator) loadSides(it item) {
	b, row := e.s.all.At(int(it.a))
	e.sides[0].load(b, row)
	if it.b >= 0 {
		b, row = e.s.all.At(int(it.b))
		e.sides[1].load(b, row)
	}
}

// sideOf is the analysis a leaf is read off.
func (e *evaluator) sideOf(q *method.Quantity) *side {
	if q.Leaf.Phase != e.k.roles[0] {
		return &e.sides[1]
	}
	return &e.sides[0]
}

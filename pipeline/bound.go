package pipeline

import (
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
			at, ok := e.with(m, c, it, d, x, limit)
			below, ok2 := e.with(m, c, it, d, x, limit/2)
			d.composition.State[x], d.composition.Value[x] = chem.BelowDetection, limit
			d.reader.Reset(&d.composition)
			if !ok || !ok2 {
				continue
			}
			est.bound, est.status = at, statusAtLeast
			if below < at {
				est.status = statusAtMost
			}
			return
		}
	}
}

// with evaluates one component for one item with an amount put in for what is
// below detection, degC.
func (e *evaluator) with(m *method.Method, c int, it item, d *side, x chem.Measurand, amount float64) (float64, bool) {
	d.composition.State[x], d.composition.Value[x] = chem.Measured, amount
	d.reader.Reset(&d.composition)
	e.alone.Reset(1)
	for _, q := range e.k.leaves {
		v, why := e.alone.Set(q)
		v[0], why[0] = e.sideOf(q).reader.Leaf(q.Leaf)
	}
	e.alone.P[0] = roomBar
	if p := e.s.itemPressure(it); p.source == pFromLine {
		return 0, false
	} else if p.given() {
		e.alone.P[0] = chem.Kbar(p.kbar).Bar()
	}
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

package method

import "tieline/thermo/chem"

// Block holds the quantities of N pairs (or of N draws of one pair); a trace
// uses N = 1. Pressure is no Quantity, so changing P refills no logarithm.
//
// A Block is used by one goroutine. Reset keeps its memory.
type Block struct {
	N int
	P []chem.Bar

	cols  map[*Quantity]*column
	order []*Quantity // of cols, by first use
}

type column struct {
	q      []float64
	why    []Reason
	filled bool
	// some says whether any row has a reason, once seen is true: most columns
	// have none, and nothing to join.
	some, seen bool
}

// NewBlock makes a block of n rows with no quantity set and P zero.
func NewBlock(n int) *Block {
	b := &Block{cols: map[*Quantity]*column{}}
	b.Reset(n)
	return b
}

// Reset empties the block and gives it n rows.
func (b *Block) Reset(n int) {
	b.N = n
	if cap(b.P) < n {
		b.P = make([]chem.Bar, n)
	}
	b.P = b.P[:n]
	clear(b.P)
	for _, c := range b.cols {
		c.filled, c.seen = false, false
	}
}

func (b *Block) column(q *Quantity) *column {
	c := b.cols[q]
	if c == nil {
		c = &column{}
		b.cols[q] = c
		b.order = append(b.order, q)
	}
	if cap(c.q) < b.N {
		c.q, c.why = make([]float64, b.N), make([]Reason, b.N)
	}
	c.q, c.why = c.q[:b.N], c.why[:b.N]
	return c
}

// Set gives the block's column of a leaf for the caller to fill, values and
// reasons of N rows, reasons cleared, before anything is read that needs it.
func (b *Block) Set(q *Quantity) (values []float64, why []Reason) {
	c := b.column(q)
	c.filled, c.seen = true, false
	clear(c.why)
	return c.q, c.why
}

// Of gives the quantity's N values, filling it and what it needs on first use.
// It panics for a leaf that was not Set: the evaluator sets every leaf that a
// method's Needs reach.
func (b *Block) Of(q *Quantity) []float64 { return b.fill(q).q }

// Why gives the quantity's N reasons.
func (b *Block) Why(q *Quantity) []Reason { return b.fill(q).why }

func (b *Block) fill(q *Quantity) *column {
	c := b.column(q)
	if c.filled {
		return c
	}
	if q.Fill == nil {
		panic("method: leaf " + q.Name + " was not set")
	}
	clear(c.why)
	for _, n := range q.Needs {
		b.join(c.why, n)
	}
	q.Fill(b, c.q, c.why)
	c.filled = true
	return c
}

// join is Join with the reasons of q.
func (b *Block) join(why []Reason, q *Quantity) {
	c := b.fill(q)
	if !c.seen {
		var all Reason
		for _, w := range c.why {
			all |= w
		}
		c.some, c.seen = all != OK, true
	}
	if c.some {
		Join(why, c.why)
	}
}

// Filled gives the quantities that were set or filled since the last Reset, in
// the order they were first asked for.
func (b *Block) Filled() []*Quantity {
	var out []*Quantity
	for _, q := range b.order {
		if b.cols[q].filled {
			out = append(out, q)
		}
	}
	return out
}

// Join keeps the first reason of each row.
func Join(why, other []Reason) {
	for i, w := range other {
		if why[i] == OK {
			why[i] = w
		}
	}
}

// Leaves gives every leaf that qs reach, each once, in order of first reach.
func Leaves(qs []*Quantity) []*Quantity {
	var out []*Quantity
	seen := map[*Quantity]bool{}
	var walk func(*Quantity)
	walk = func(q *Quantity) {
		if seen[q] {
			return
		}
		seen[q] = true
		if q.Fill == nil {
			out = append(out, q)
		}
		for _, n := range q.Needs {
			walk(n)
		}
	}
	for _, q := range qs {
		walk(q)
	}
	return out
}

// NewLanes makes the lanes a method writes for n rows.
func NewLanes(m *Method, n int) []Lane {
	lanes := make([]Lane, len(m.Components))
	for i := range lanes {
		lanes[i] = Lane{T: make([]chem.Kelvin, n), Why: make([]Reason, n)}
		for range m.Extras {
			lanes[i].Extra = append(lanes[i].Extra, make([]float64, n))
		}
	}
	return lanes
}

// Evaluate runs m on the block: lanes start with the first reason among
// m.Needs, then Eval writes numbers and its own reasons. Rows with a reason
// hold nothing of meaning in T.
func (m *Method) Evaluate(b *Block, lanes []Lane) {
	for i := range lanes {
		why := lanes[i].Why[:b.N]
		clear(why)
		for _, q := range m.Needs {
			b.join(why, q)
		}
	}
	m.Eval(b, lanes)
}

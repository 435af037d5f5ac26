package method

import (
	"math"
	"slices"
	"testing"

	"tieline/thermo/chem"
)

func leaf(name string) *Quantity { return &Quantity{Name: name, Leaf: &Leaf{Phase: chem.Pl}} }

// sum counts how often it was filled.
func sum(name string, fills *int, needs ...*Quantity) *Quantity {
	return &Quantity{Name: name, Needs: needs, Fill: func(b *Block, q []float64, why []Reason) {
		*fills++
		for i := range q {
			q[i] = 0
			for _, n := range needs {
				q[i] += b.Of(n)[i]
			}
			if why[i] == OK && q[i] < 0 {
				why[i] = NotFinite
			}
		}
	}}
}

func TestQuantityIsFilledOncePerBlock(t *testing.T) {
	var fills int
	a, b := leaf("a"), leaf("b")
	s := sum("s", &fills, a, b)
	blk := NewBlock(2)
	set := func(q *Quantity, v ...float64) {
		values, _ := blk.Set(q)
		copy(values, v)
	}
	set(a, 1, 2)
	set(b, 10, 20)
	for range 3 {
		if got := blk.Of(s); !slices.Equal(got, []float64{11, 22}) {
			t.Errorf("sum is %v", got)
		}
	}
	if fills != 1 {
		t.Errorf("filled %d times in one block", fills)
	}
	blk.Reset(1)
	set(a, 5)
	set(b, 6)
	if got := blk.Of(s); !slices.Equal(got, []float64{11}) || fills != 2 {
		t.Errorf("after Reset: %v, filled %d times", got, fills)
	}
}

func TestReasonsFollowNeeds(t *testing.T) {
	var fills int
	a, b := leaf("a"), leaf("b")
	s := sum("s", &fills, a, b)
	top := sum("top", &fills, s)
	blk := NewBlock(4)
	values, why := blk.Set(a)
	copy(values, []float64{1, 1, -5, 1})
	why[1] = NotMeasured
	_, why = blk.Set(b)
	why[1], why[3] = NoFormula, NoFormula
	if got, want := blk.Why(top), []Reason{OK, NotMeasured, NotFinite, NoFormula}; !slices.Equal(got, want) {
		t.Errorf("reasons %v, want %v: the first of a row stays", got, want)
	}
	// Set again clears.
	blk.Reset(4)
	blk.Set(a)
	if _, why = blk.Set(b); slices.Max(why) != OK {
		t.Errorf("reasons outlive Reset: %v", why)
	}
}

func TestUnsetLeafPanics(t *testing.T) {
	defer func() {
		if recover() == nil {
			t.Error("a leaf that was not set gave numbers")
		}
	}()
	NewBlock(1).Of(leaf("a"))
}

func TestLeaves(t *testing.T) {
	var fills int
	a, b, c := leaf("a"), leaf("b"), leaf("c")
	s := sum("s", &fills, b, a)
	if got := Leaves([]*Quantity{a, sum("top", &fills, s, c)}); !slices.Equal(got, []*Quantity{a, b, c}) {
		t.Errorf("leaves in another order, or twice: %v", got)
	}
}

func TestEvaluateStartsLanesWithNeedsReasons(t *testing.T) {
	a := leaf("a")
	m := &Method{Info: Info{Components: []string{"x", "y"}, Extras: []string{"sigma"}, Needs: []*Quantity{a}},
		Eval: func(b *Block, lanes []Lane) { lanes[1].Why[0] = NegativeT }}
	blk := NewBlock(2)
	_, why := blk.Set(a)
	why[1] = NotMeasured
	lanes := NewLanes(m, 2)
	for range 2 { // lanes are reused: nothing of the first turn stays
		m.Evaluate(blk, lanes)
	}
	if !slices.Equal(lanes[0].Why, []Reason{OK, NotMeasured}) || !slices.Equal(lanes[1].Why, []Reason{NegativeT, NotMeasured}) {
		t.Errorf("reasons %v and %v", lanes[0].Why, lanes[1].Why)
	}
	if len(lanes[0].Extra) != 1 || len(lanes[0].Extra[0]) != 2 {
		t.Errorf("extras %v, want one of two rows", lanes[0].Extra)
	}
}

func TestReasonFor(t *testing.T) {
	inf := chem.Kelvin(math.Inf(1))
	for temperature, want := range map[chem.Kelvin]Reason{1e-9: OK, 1000: OK, 0: NegativeT, -1: NegativeT, inf: NotFinite, -inf: NotFinite} {
		if got := ReasonFor(temperature); got != want {
			t.Errorf("%v K: %q, want %q", temperature, got, want)
		}
	}
	if got := ReasonFor(inf - inf); got != NotFinite {
		t.Errorf("NaN: %q", got)
	}
}

// Every reason but OK has words of its own.
func TestReasonTexts(t *testing.T) {
	seen := map[string]bool{}
	for r := range numReasons {
		if (r.String() == "") != (r == OK) || seen[r.String()] {
			t.Errorf("reason %d says %q", r, r)
		}
		seen[r.String()] = true
	}
}

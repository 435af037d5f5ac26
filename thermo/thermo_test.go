package thermo

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"tieline/thermo/chem"
	"tieline/thermo/method"
)

// Every method says who, what, where and how sure.
func TestMethodsIntroduceThemselves(t *testing.T) {
	ids, named := map[string]bool{}, map[string]bool{}
	var twins []string
	for i, m := range Methods() {
		name := m.ID + " " + m.Variant
		if named[name] {
			t.Errorf("two methods are called %q", name)
		}
		ids[m.ID], named[name] = true, true
		if m.Variant != "" {
			twins = append(twins, name)
		}
		switch before := Methods()[max(i-1, 0)]; {
		case m.Variant == "" && ByID(m.ID) != m:
			t.Errorf("ByID(%q) is another method", m.ID)
		case m.Variant != "" && (before.ID != m.ID || before.Basis == m.Basis || before.Variant != ""):
			t.Errorf("the twin %q does not stand after the method on its own basis", name)
		}
	}
	for _, m := range Methods() {
		for what, given := range map[string]bool{
			"equation": m.Equation != "", "reference": m.Ref != "", "what closes": m.Closes != "", "needs": len(m.Needs) > 0,
			"source of the range": m.Range.Source != "", "bounds": len(m.Range.Bounds) > 0, "origin of sigma": m.Sigma.Origin != "",
			"one sigma per component, or none": len(m.Sigma.C) == len(m.Components) || len(m.Sigma.C) == 0, "constants": m.Const != nil,
			"one or two phases": len(m.Phases) == 1 || len(m.Phases) == 2, "basis": m.Basis.Oxygens > 0,
			"standing": m.Standing == standings[m.ID],
		} {
			if !given {
				t.Errorf("%s lacks: %s", m.ID, what)
			}
		}
		for _, s := range m.Sigma.C {
			if !(s > 0) {
				t.Errorf("%s has a sigma of %v", m.ID, s)
			}
		}
		for _, b := range m.Range.Bounds {
			if b.Min >= b.Max || (b.Quantity == nil) != (b.Name == "T" || b.Name == "P") {
				t.Errorf("%s has the bound %+v", m.ID, b)
			}
		}
		for _, id := range append(slices.Clone(m.Shares), m.DerivedFrom...) {
			if !ids[id] || id == m.ID {
				t.Errorf("%s is related to %q, which is no other method", m.ID, id)
			}
		}
		for _, id := range m.Shares {
			if other := ByID(id); other != nil && !slices.Contains(append(slices.Clone(other.Shares), other.DerivedFrom...), m.ID) {
				t.Errorf("%s shares with %s, not the other way round", m.ID, id)
			}
		}
	}
	if want := []string{"two-pyroxene/wells-1977 all Fe2+", "two-pyroxene/wood-banno-1973 all Fe2+",
		"two-pyroxene/kretz-1982-fe-mg all Fe2+", "clinopyroxene/kretz-1982-ca all Fe2+"}; !slices.Equal(twins, want) {
		t.Errorf("twins are %q, want %q", twins, want)
	}
	for id := range standings {
		if !ids[id] {
			t.Errorf("%s is not listed", id)
		}
	}
	if ByID("two-feldspar/nobody-1900") != nil {
		t.Error("an id of no method has a method")
	}
}

// standings are how sure the project is of each method's coefficients.
var standings = map[string]method.Standing{
	"two-feldspar/elkins-grove-1990":                         method.Confirmed,
	"two-feldspar/fuhrman-lindsley-1988":                     method.Confirmed,
	"two-feldspar/benisek-2004-al-avoidance":                 method.Recalled,
	"two-feldspar/holland-powell-2003":                       method.Consistent,
	"two-feldspar/haselton-1983":                             method.Consistent,
	"two-feldspar/stormer-1975":                              method.Consistent,
	"two-feldspar/powell-powell-1977":                        method.Recalled,
	"two-feldspar/whitney-stormer-1977":                      method.Consistent,
	"two-feldspar/putirka-2008-27b":                          method.Consistent,
	"alkali-feldspar-solvus/thompson-waldbaum-1969":          method.Confirmed,
	"alkali-feldspar-solvus/thompson-waldbaum-1969-coherent": method.Consistent,
	"alkali-feldspar-solvus/haselton-1983":                   method.Consistent,
	"alkali-feldspar-solvus/thompson-hovis-1979":             method.Consistent,
	"alkali-feldspar-solvus/hovis-1991":                      method.Recalled,
	"alkali-feldspar-solvus/bachinski-mueller-1971":          method.Consistent,
	"alkali-feldspar-solvus/heuser-2024":                     method.Consistent,
	"two-pyroxene/brey-koehler-1990":                         method.Confirmed,
	"two-pyroxene/brey-koehler-1990-na":                      method.Recalled,
	"two-pyroxene/taylor-1998":                               method.Confirmed,
	"two-pyroxene/wells-1977":                                method.Consistent,
	"two-pyroxene/wood-banno-1973":                           method.Recalled,
	"two-pyroxene/kretz-1982-fe-mg":                          method.Recalled,
	"two-pyroxene/bertrand-mercier-1985":                     method.Recalled,
	"two-pyroxene/putirka-2008-36":                           method.Consistent,
	"two-pyroxene/putirka-2008-37":                           method.Consistent,
	"two-pyroxene/lindsley-grover-davidson-1981":             method.Consistent,
	"orthopyroxene/brey-koehler-1990-ca":                     method.Confirmed,
	"orthopyroxene/nimis-gruetter-2010":                      method.Confirmed,
	"orthopyroxene/witt-eickschen-seck-1991":                 method.Recalled,
	"clinopyroxene/kretz-1982-ca":                            method.Consistent,
	"clinopyroxene/nimis-taylor-2000":                        method.Consistent,
}

// Uses reach no leaf the evaluator would not set for Needs, bounds neither, and
// names are unique, so that a trace and a digest can tell quantities apart.
func TestQuantities(t *testing.T) {
	named := map[string]*method.Quantity{}
	var walk func(q *method.Quantity)
	walk = func(q *method.Quantity) {
		if other := named[q.Name]; other != nil && other != q {
			t.Errorf("two quantities are called %q", q.Name)
		}
		named[q.Name] = q
		if (q.Fill == nil) != (q.Leaf != nil) || (q.Leaf != nil) != (len(q.Needs) == 0) {
			t.Errorf("%q is neither a leaf nor filled from others", q.Name)
		}
		if q.Unit == "" {
			t.Errorf("%q has no unit", q.Name)
		}
		for _, n := range q.Needs {
			walk(n)
		}
	}
	for _, m := range Methods() {
		needed := method.Leaves(m.Needs)
		all := slices.Clone(m.Uses)
		for _, b := range m.Range.Bounds {
			if b.Quantity != nil {
				all = append(all, b.Quantity)
			}
		}
		for _, l := range method.Leaves(all) {
			if !slices.Contains(needed, l) {
				t.Errorf("%s uses %q, which its needs do not reach", m.ID, l.Name)
			}
		}
		for _, q := range append(all, m.Needs...) {
			walk(q)
		}
		for _, l := range needed {
			if !slices.Contains(m.Phases, l.Leaf.Phase) {
				t.Errorf("%s needs %q of a phase that is none of %v", m.ID, l.Name, m.Phases)
			}
			if len(l.Leaf.Cations) > 0 && l.Leaf.Basis != m.Basis {
				t.Errorf("%s is on %v and needs %q on %v", m.ID, m.Basis, l.Name, l.Leaf.Basis)
			}
		}
	}
}

// random fills n rows of leaves over somewhat more than their probe span; some
// rows lack a component or hold none of it.
func random(ms []*method.Method, n int, seed uint64, within bool) (p []chem.Bar, values map[*method.Quantity][]float64, why map[*method.Quantity][]method.Reason) {
	r := rand.New(rand.NewPCG(seed, 1))
	values, why = map[*method.Quantity][]float64{}, map[*method.Quantity][]method.Reason{}
	for range n {
		p = append(p, chem.Bar(500+19500*r.Float64()))
	}
	var needs []*method.Quantity
	for _, m := range ms {
		needs = append(needs, m.Needs...)
	}
	for _, l := range method.Leaves(needs) {
		span := l.Leaf.Probe[1] - l.Leaf.Probe[0]
		v, w := make([]float64, n), make([]method.Reason, n)
		for i := range v {
			v[i] = l.Leaf.Probe[0] + r.Float64()*span
			if within {
				continue
			}
			switch r.IntN(12) {
			case 0:
				v[i] = 0
			case 1:
				v[i] = l.Leaf.Probe[1] + 2*span*r.Float64()
			case 2:
				w[i] = method.NotMeasured
			}
		}
		values[l], why[l] = v, w
	}
	return p, values, why
}

// run evaluates rows from to to as one block.
func run(m *method.Method, from, to int, p []chem.Bar, values map[*method.Quantity][]float64, why map[*method.Quantity][]method.Reason) []method.Lane {
	b := method.NewBlock(to - from)
	copy(b.P, p[from:to])
	for l, v := range values {
		q, w := b.Set(l)
		copy(q, v[from:to])
		copy(w, why[l][from:to])
	}
	lanes := method.NewLanes(m, b.N)
	m.Evaluate(b, lanes)
	return lanes
}

// A row gives the same bits and the same reason in a block of any size.
func TestBlocksEqualRows(t *testing.T) {
	const n = 500
	for _, m := range Methods() {
		p, values, why := random([]*method.Method{m}, n, 7, false)
		whole := run(m, 0, n, p, values, why)
		reasons := map[method.Reason]int{}
		for _, size := range []int{1, 7, 64} {
			for from := 0; from < n; from += size {
				part := run(m, from, min(from+size, n), p, values, why)
				for c := range part {
					for i, got := range part[c].T {
						want, reason := whole[c].T[from+i], whole[c].Why[from+i]
						if part[c].Why[i] != reason || reason == method.OK && math.Float64bits(float64(got)) != math.Float64bits(float64(want)) {
							t.Fatalf("%s component %d row %d in blocks of %d: %v K %q, in one block %v K %q",
								m.ID, c, from+i, size, got, part[c].Why[i], want, reason)
						}
						reasons[reason]++
					}
				}
			}
		}
		if reasons[method.OK] == 0 || reasons[method.NotMeasured] == 0 {
			t.Errorf("%s: the rows tried give %v", m.ID, reasons)
		}
	}
}

// Over the span a method's digest tries, most rows have a number, and all that
// have one are finite and above absolute zero.
func TestProbeGivesNumbers(t *testing.T) {
	const n = 2000
	for _, m := range Methods() {
		p, values, why := random([]*method.Method{m}, n, 11, true)
		for c, lane := range run(m, 0, n, p, values, why) {
			numbers := 0
			for i, reason := range lane.Why {
				if reason != method.OK {
					continue
				}
				numbers++
				if k := float64(lane.T[i]); !(k > 0) || math.IsInf(k, 0) {
					t.Errorf("%s component %d gives %v K without a reason", m.ID, c, k)
				}
			}
			if numbers < n*3/4 {
				t.Errorf("%s component %d: %d of %d probe rows have a number", m.ID, c, numbers, n)
			}
		}
	}
}

// No temperature leaves a method without a reason unless it is one, whatever
// the rows hold.
func TestNumbersAreTemperatures(t *testing.T) {
	for _, m := range Methods() {
		p, values, why := random([]*method.Method{m}, 5000, 13, false)
		for c, lane := range run(m, 0, 5000, p, values, why) {
			for i, reason := range lane.Why {
				if k := float64(lane.T[i]); reason == method.OK && (!(k > 0) || math.IsInf(k, 0)) {
					t.Errorf("%s component %d gives %v K without a reason", m.ID, c, k)
				}
			}
		}
	}
}

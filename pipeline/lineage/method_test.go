package lineage

import (
	"math"
	"strings"
	"testing"

	"tieline/thermo/chem"
	"tieline/thermo/method"
)

// constants of a made-up method, of every kind that may occur.
type constants struct {
	Enthalpy chem.Kelvin
	W        [2]float64
	More     []float64
	Name     string
	Terms    int
	Switch   bool
	hidden   float64
}

// madeUp is T = Enthalpy*x + y*W[0] + P/1000, no number where x is below 0.1.
func madeUp(c constants) *method.Method {
	basis := method.Basis{Oxygens: 8, Cations: 5, Ferric: method.AllFe3}
	x := &method.Quantity{Name: "x", Leaf: &method.Leaf{Phase: chem.Pl, Basis: basis, EndMember: chem.XAn, Probe: [2]float64{0, 0.9}}}
	y := &method.Quantity{Name: "y", Leaf: &method.Leaf{Phase: chem.Afs, Basis: basis, EndMember: chem.XOr, Probe: [2]float64{0.1, 0.8}}}
	sum := &method.Quantity{Name: "sum", Needs: []*method.Quantity{x, y}, Fill: func(b *method.Block, q []float64, why []method.Reason) {
		for i, v := range b.Of(x) {
			q[i] = float64(float64(c.Enthalpy)*v) + float64(c.W[0]*b.Of(y)[i])
			if v < 0.1 {
				why[i] = method.NonPositiveLog
			}
		}
	}}
	return &method.Method{
		Info: method.Info{ID: "made-up/one", Components: []string{"An", "Or"}, Extras: []string{"p"}, Needs: []*method.Quantity{sum},
			Basis: basis, Range: method.Range{Bounds: []method.Bound{{Name: "T", Min: 500, Max: math.Inf(1)}}}},
		Const: c,
		Eval: func(b *method.Block, lanes []method.Lane) {
			for i, v := range b.Of(sum) {
				for k := range lanes {
					lanes[k].T[i] = chem.Kelvin(v + float64(b.P[i])/1000 + float64(k))
					lanes[k].Extra[0][i] = v
				}
			}
		},
	}
}

func base() constants {
	return constants{Enthalpy: 700, W: [2]float64{300, 5}, More: []float64{1, 2}, Name: "n", Terms: 3, hidden: 4}
}

func TestGoldenMethodDigest(t *testing.T) {
	const want = "172c1ccb594dc60d838b2c8bd9703d5d"
	if got := Method(madeUp(base())).String(); got != want {
		t.Errorf("digest of the made-up method is %s, was %s: every estimate would get another lineage", got, want)
	}
}

func TestMethodDigestSeesEveryChange(t *testing.T) {
	original := Method(madeUp(base()))
	seen := map[Digest]string{original: "the original"}
	check := func(what string, m *method.Method) {
		d := Method(m)
		if other, same := seen[d]; same {
			t.Errorf("%s has the digest of %s", what, other)
		}
		seen[d] = what
	}
	for what, change := range map[string]func(*constants){
		"a float in the last bit":    func(c *constants) { c.Enthalpy = chem.Kelvin(math.Nextafter(700, 701)) },
		"an array's element":         func(c *constants) { c.W[1] = 6 },
		"a slice's element":          func(c *constants) { c.More[1] = 3 },
		"a slice's length":           func(c *constants) { c.More = c.More[:1] },
		"a text":                     func(c *constants) { c.Name = "m" },
		"a whole number":             func(c *constants) { c.Terms = 4 },
		"a switch":                   func(c *constants) { c.Switch = true },
		"a field that is unexported": func(c *constants) { c.hidden = 5 },
	} {
		c := base()
		change(&c)
		check(what, madeUp(c))
	}
	for what, change := range map[string]func(*method.Method){
		"the id":                    func(m *method.Method) { m.ID = "made-up/two" },
		"the variant":               func(m *method.Method) { m.Variant = "all Fe2+" },
		"a component's name":        func(m *method.Method) { m.Components[1] = "Ab" },
		"a component less":          func(m *method.Method) { m.Components = m.Components[:1] },
		"the iron convention":       func(m *method.Method) { m.Basis.Ferric = method.AllFe2 },
		"the oxygens":               func(m *method.Method) { m.Basis.Oxygens = 6 },
		"a name in Needs":           func(m *method.Method) { m.Needs[0].Name = "total" },
		"a bound":                   func(m *method.Method) { m.Range.Bounds[0].Min = 600 },
		"the setting":               func(m *method.Method) { m.Range.Setting = "mantle peridotite" },
		"a constant's name":         func(m *method.Method) { m.Const = struct{ Other float64 }{700} },
		"no constants":              func(m *method.Method) { m.Const = nil },
		"one bit of one output":     spoil(func(l []method.Lane) { flip(&l[1].T[63]) }),
		"one bit of one extra":      spoil(func(l []method.Lane) { l[0].Extra[0][62] = math.Nextafter(l[0].Extra[0][62], 9e9) }),
		"a number that became none": spoil(func(l []method.Lane) { l[0].Why[61] = method.NegativeT }),
		"a number that became NaN":  spoil(func(l []method.Lane) { l[0].T[61] = chem.Kelvin(math.NaN()) }),
	} {
		m := madeUp(base())
		change(m)
		check(what, m)
	}
	if again := Method(madeUp(base())); again != original {
		t.Errorf("the same method digests as %s and %s", original, again)
	}
}

func spoil(after func([]method.Lane)) func(*method.Method) {
	return func(m *method.Method) {
		eval := m.Eval
		m.Eval = func(b *method.Block, lanes []method.Lane) {
			eval(b, lanes)
			after(lanes)
		}
	}
}

func flip(t *chem.Kelvin) {
	*t = chem.Kelvin(math.Float64frombits(math.Float64bits(float64(*t)) ^ 1))
}

// TestOutputWithReasonIsNotDigested: what a lane holds beside a reason is
// leftover memory and must not reach the digest.
func TestOutputWithReasonIsNotDigested(t *testing.T) {
	m := madeUp(base())
	spoil(func(l []method.Lane) {
		for i, w := range l[0].Why {
			if w != method.OK {
				l[0].T[i] = chem.Kelvin(i)
			}
		}
	})(m)
	if a, b := Method(m), Method(madeUp(base())); a != b {
		t.Errorf("leftovers beside a reason change the digest, %s to %s", b, a)
	}
}

func TestProbeCoversItsSpans(t *testing.T) {
	m := madeUp(base())
	b := probe(m)
	check := func(what string, lo, hi, least, most float64) {
		span := hi - lo
		if least < lo || most > hi || least > lo+span/20 || most < hi-span/20 {
			t.Errorf("%s runs over %g to %g, want nearly all of %g to %g", what, least, most, lo, hi)
		}
	}
	for _, q := range method.Leaves(m.Needs) {
		least, most := math.Inf(1), math.Inf(-1)
		for _, x := range b.Of(q) {
			least, most = min(least, x), max(most, x)
		}
		check(q.Name, q.Leaf.Probe[0], q.Leaf.Probe[1], least, most)
	}
	least, most := math.Inf(1), math.Inf(-1)
	for _, p := range b.P {
		least, most = min(least, float64(p)), max(most, float64(p))
	}
	check("P", 500, 20000, least, most)
}

func TestConstantThatCannotBeDigestedPanics(t *testing.T) {
	m := madeUp(base())
	m.Const = struct{ Table map[string]float64 }{}
	defer func() {
		if r, _ := recover().(string); !strings.Contains(r, "made-up/one") || !strings.Contains(r, "map[string]float64") {
			t.Errorf("panic says %q, want the method and the type", r)
		}
	}()
	Method(m)
}

func BenchmarkMethodDigest(b *testing.B) {
	m := madeUp(base())
	for b.Loop() {
		Method(m)
	}
}

package lineage

import (
	"fmt"
	"math"
	"reflect"

	"tieline/thermo/chem"
	"tieline/thermo/method"
)

// probeRows is how many made-up pairs a method's outputs are digested over.
const probeRows = 64

// Method digests what a method is: its id and variant, components, formula basis, the names
// of what it needs, its calibrated range, its constants, and its outputs on a
// fixed probe, bit by bit. So an equation cannot change, on purpose or by
// accident, without every estimate it made getting another lineage; no version
// is kept by hand.
//
// Const may be made of numbers, strings, bools, structs, arrays, slices and
// pointers; anything else panics, for it could not be digested the same twice.
func Method(m *method.Method) Digest {
	e := New("tieline method 1")
	e.Text(m.ID)
	if m.Variant != "" {
		e.Text("variant").Text(m.Variant)
	}
	e.List(len(m.Components))
	for _, c := range m.Components {
		e.Text(c)
	}
	e.Float(m.Basis.Oxygens).Float(m.Basis.Cations).Text(m.Basis.String())
	e.List(len(m.Needs))
	for _, q := range m.Needs {
		e.Text(q.Name)
	}
	e.Text(m.Range.Setting).List(len(m.Range.Bounds))
	for _, b := range m.Range.Bounds {
		e.Text(b.Name)
		number(e, b.Min)
		number(e, b.Max)
	}
	constant(e, m.ID, reflect.ValueOf(m.Const))
	outputs(e, m)
	return e.Sum()
}

// constant walks v in declaration order, names and values.
func constant(e *Encoder, id string, v reflect.Value) {
	switch v.Kind() {
	case reflect.Invalid:
		e.Null()
	case reflect.Pointer, reflect.Interface:
		constant(e, id, v.Elem())
	case reflect.Struct:
		e.List(v.NumField())
		for i := range v.NumField() {
			e.Text(v.Type().Field(i).Name)
			constant(e, id, v.Field(i))
		}
	case reflect.Array, reflect.Slice:
		e.List(v.Len())
		for i := range v.Len() {
			constant(e, id, v.Index(i))
		}
	case reflect.Float64, reflect.Float32:
		e.Float(v.Float())
	case reflect.Int, reflect.Int8, reflect.Int16, reflect.Int32, reflect.Int64:
		e.Int(v.Int())
	case reflect.Uint, reflect.Uint8, reflect.Uint16, reflect.Uint32, reflect.Uint64:
		e.Int(int64(v.Uint()))
	case reflect.String:
		e.Text(v.String())
	case reflect.Bool:
		e.Int(map[bool]int64{true: 1}[v.Bool()])
	default:
		panic(fmt.Sprintf("lineage: method %s: a constant of type %s cannot be digested", id, v.Type()))
	}
}

// outputs evaluates m on the probe and adds every number or reason.
func outputs(e *Encoder, m *method.Method) {
	b := probe(m)
	lanes := method.NewLanes(m, b.N)
	m.Evaluate(b, lanes)
	e.List(len(lanes) * b.N)
	for _, l := range lanes {
		for i := range b.N {
			e.Int(int64(l.Why[i]))
			if l.Why[i] != method.OK {
				continue
			}
			number(e, float64(l.T[i]))
			for _, x := range l.Extra {
				number(e, x[i])
			}
		}
	}
}

func number(e *Encoder, x float64) {
	if math.IsNaN(x) {
		e.Null() // the run gives "no finite value" here; a digest must still exist
		return
	}
	e.Float(x)
}

// probe is the made-up block a method's outputs are digested over: every leaf
// the method's needs reach, spread over its probe span, and pressure from 0.5
// to 20 kbar.
func probe(m *method.Method) *method.Block {
	b := method.NewBlock(probeRows)
	leaves := method.Leaves(m.Needs)
	for k, leaf := range leaves {
		if leaf.Leaf == nil {
			panic(fmt.Sprintf("lineage: method %s: %s is filled from nothing", m.ID, leaf.Name))
		}
		q, _ := b.Set(leaf)
		for i := range q {
			q[i] = spread(i, k, leaf.Leaf.Probe[0], leaf.Leaf.Probe[1])
		}
	}
	for i := range b.P {
		b.P[i] = chem.Bar(spread(i, len(leaves), 500, 20000))
	}
	return b
}

// spread is row i of the k-th sequence over lo to hi: an additive recurrence
// with the golden ratio, in whole numbers modulo 2^64 so that it has no
// rounding, the k-th started k times sqrt(2) further on.
func spread(i, k int, lo, hi float64) float64 {
	const golden, root2 = 0x9e3779b97f4a7c15, 0x6a09e667f3bcc908 // fractions of (sqrt(5)-1)/2 and sqrt(2)
	u := float64((uint64(i+1)*golden+uint64(k)*root2)>>11) / (1 << 53)
	return lo + float64(u*(hi-lo))
}

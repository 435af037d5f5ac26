// Package pairing decides which analyses coexist: the ends of tie lines.
package pairing

import (
	"fmt"
	"strings"

	"tieline/pipeline/tables"
	"tieline/thermo/chem"
)

// Kind is one kind of pair: two roles, the first the a side.
type Kind struct {
	Name string
	A, B chem.Phase
}

// Kinds are the kinds of pair there are, in the order tables list them.
var Kinds = []Kind{
	{"two-feldspar", chem.Afs, chem.Pl},
	{"two-pyroxene", chem.Opx, chem.Cpx},
}

// RuleListed names the rule of pairs that a source lists by a shared label.
const RuleListed = "listed"

// Pair is two analyses by their index in the compilation.
type Pair struct {
	Kind int // index into Kinds
	A, B int32
}

// Unpaired is an analysis that carries a pair label and got no partner by it.
type Unpaired struct {
	Analysis int32
	Why      string
}

// Listed pairs analyses that share a pair label in one sample of one source.
// A label with one analysis of each role makes one pair; with two of a role it
// says nothing of which belong together, and makes none. Pairs come by kind,
// then in the order of their labels' first rows.
func Listed(all *tables.Analyses) (pairs []Pair, without []Unpaired) {
	labels := gather(all)
	for k, kind := range Kinds {
		for _, g := range labels {
			a, b := g.of(kind.A), g.of(kind.B)
			if len(a) == 1 && len(b) == 1 {
				pairs = append(pairs, Pair{Kind: k, A: a[0], B: b[0]})
				continue
			}
			without = append(without, g.unpaired(kind, a, b)...)
		}
	}
	return pairs, without
}

// group is the analyses that share a label.
type group struct {
	label string
	rows  []int32
	roles []chem.Phase
}

func (g *group) of(role chem.Phase) []int32 {
	var out []int32
	for i, r := range g.roles {
		if r == role {
			out = append(out, g.rows[i])
		}
	}
	return out
}

func (g *group) unpaired(kind Kind, a, b []int32) []Unpaired {
	if len(a) == 0 && len(b) == 0 {
		return nil
	}
	why := fmt.Sprintf("pair label %q names %d %s and %d %s; a pair is one of each", g.label, len(a), kind.A, len(b), kind.B)
	var out []Unpaired
	for _, i := range append(a, b...) {
		out = append(out, Unpaired{i, why})
	}
	return out
}

func gather(all *tables.Analyses) []*group {
	var order []*group
	i := int32(0)
	var index map[string]*group
	source := ""
	for _, b := range all.Batches {
		if index == nil || b.Source != source {
			index, source = map[string]*group{}, b.Source
		}
		for r := range b.Len() {
			label := b.Text(tables.PairLabel, r)
			if label != "" {
				key := b.Text(tables.Sample, r) + "\x00" + label
				g := index[key]
				if g == nil {
					g = &group{label: strings.Clone(label)}
					index[key] = g
					order = append(order, g)
				}
				g.rows = append(g.rows, i)
				g.roles = append(g.roles, b.Phase(r).Role())
			}
			i++
		}
	}
	return order
}

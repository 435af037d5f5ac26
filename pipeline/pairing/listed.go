package pairing

import (
	"tieline/pipeline/tables"
	"tieline/thermo/chem"
	"tieline/thermo/formula"
	"tieline/thermo/method"
)

// listed pairs analyses that share a pair label in one sample of one source. A
// label with one analysis of each role makes one pair; with two of a role it
// says nothing of which belong together, and makes none. Nor does it where the
// two name different domains or generations, or one is a host or lamella and the
// other a whole grain.
func (p *pairer) listed() {
	labels := p.labels()
	var rows []int32
	for kind := range Kinds {
		for _, first := range labels.first {
			rows = rows[:0]
			for i := first; i >= 0; i = labels.next[i] {
				rows = append(rows, i)
			}
			p.label(kind, rows)
		}
	}
}

// labels are the analyses that share a label, as chains: a million analyses
// have half a million labels, too many for a slice each.
type labels struct {
	first, last []int32 // by label, in the order of their first rows
	next        []int32 // by analysis; -1 at the end
}

type labelKey struct{ sample, label string }

func (p *pairer) labels() *labels {
	l := &labels{next: make([]int32, len(p.members))}
	var index map[labelKey]int32
	source, i := "", int32(-1)
	for _, b := range p.all.Batches {
		if index == nil || b.Source != source {
			index, source = map[labelKey]int32{}, b.Source
		}
		for row := range b.Len() {
			i++
			l.next[i] = -1
			label := b.Text(tables.PairLabel, row)
			if label == "" {
				continue
			}
			key := labelKey{b.Text(tables.Sample, row), label}
			at, ok := index[key]
			if !ok {
				index[key] = int32(len(l.first))
				l.first, l.last = append(l.first, i), append(l.last, i)
				continue
			}
			l.next[l.last[at]] = i
			l.last[at] = i
		}
	}
	return l
}

// label pairs what one label says of one kind.
func (p *pairer) label(kind int, rows []int32) {
	var sides [2][]int32
	n := 0
	for _, i := range rows {
		if k, side, ok := p.members[i].kind(); ok && k == kind && p.members[i].free() {
			sides[side] = append(sides[side], i)
			n++
		}
	}
	if n == 0 {
		return
	}
	a, b, f := p.ends(kind, &sides)
	if f.cause == fine {
		p.pair(kind, a, b, listed)
		return
	}
	for _, side := range sides {
		for _, i := range side {
			f.of = i
			p.faults = append(p.faults, f)
		}
	}
}

// ends gives the two ends a label names, or why it names none.
func (p *pairer) ends(kind int, sides *[2][]int32) (a, b int32, f fault) {
	f.a, f.b = int32(len(sides[0])), int32(len(sides[1]))
	if kind == solvus {
		if a, b, f = p.solvusEnds(sides[0]); f.cause != fine {
			return a, b, f
		}
	} else if f.a != 1 || f.b != 1 {
		f.cause = labelCount
		return 0, 0, f
	} else {
		a, b = sides[0][0], sides[1][0]
	}
	switch {
	case p.differ(a, b, tables.Domain):
		f.cause = labelDomains
	case p.differ(a, b, tables.Generation):
		f.cause = labelGenerations
	case (p.members[a]|p.members[b])&(exsolved|integrated) == exsolved|integrated:
		f.cause = labelPooled
	}
	return a, b, f
}

// differ says whether both analyses give a text and not the same.
func (p *pairer) differ(a, b int32, t tables.Text) bool {
	ba, ra := p.all.At(int(a))
	bb, rb := p.all.At(int(b))
	ta, tb := ba.Text(t, ra), bb.Text(t, rb)
	return ta != "" && tb != "" && ta != tb
}

// solvusEnds gives the Na side and the K side of an exsolved grain: a host and
// a lamella, or two lamellae. The one with less Or/(Or+Ab) is the Na side
// whatever its source calls it; the one that stands first where they are equal.
func (p *pairer) solvusEnds(rows []int32) (na, k int32, f fault) {
	hosts := int32(0)
	for _, i := range rows {
		if p.members[i]&host != 0 {
			hosts++
		}
	}
	f.a, f.b = hosts, int32(len(rows))-hosts
	if len(rows) != 2 || hosts == 2 {
		f.cause = labelSolvus
		return 0, 0, f
	}
	first, ok1 := p.orthoclase(rows[0])
	second, ok2 := p.orthoclase(rows[1])
	if !ok1 || !ok2 {
		f.cause = labelNoOr
		return 0, 0, f
	}
	if second < first {
		return rows[1], rows[0], f
	}
	return rows[0], rows[1], f
}

// orthoclase is Or/(Or+Ab) of a feldspar.
func (p *pairer) orthoclase(i int32) (x float64, ok bool) {
	b, row := p.all.At(int(i))
	var c chem.Composition
	b.Composition(row, &c)
	ab, or, _, _, why := formula.Feldspar(&c)
	if why != method.OK || !(ab+or > 0) {
		return 0, false
	}
	return or / (ab + or), true
}

package pairing

import (
	"cmp"
	"math"
	"slices"
)

// point is an analysis on the stage, um.
type point struct {
	x, y float64
	i    int32
}

// tree finds nearest points: a k-d tree whose nodes also know the least index
// below them. Of points equally near it finds the one that stands first, and
// does not have to look at all of a thousand spots that share one place.
type tree struct {
	points []point
	nodes  []node
}

type node struct {
	minX, maxX, minY, maxY float64
	least                  int32 // index of an analysis
	from, to               int32 // of points
	left, right            int32 // of nodes; 0 for none
}

// leafPoints is how many points a node keeps together.
const leafPoints = 8

// newTree sorts points into a tree and keeps them. There must be one.
func newTree(points []point) *tree {
	t := &tree{points: points}
	t.build(0, int32(len(points)))
	return t
}

func (t *tree) build(from, to int32) int32 {
	at := int32(len(t.nodes))
	n := node{minX: math.Inf(1), maxX: math.Inf(-1), minY: math.Inf(1), maxY: math.Inf(-1), least: math.MaxInt32, from: from, to: to}
	for _, q := range t.points[from:to] {
		n.minX, n.maxX = min(n.minX, q.x), max(n.maxX, q.x)
		n.minY, n.maxY = min(n.minY, q.y), max(n.maxY, q.y)
		n.least = min(n.least, q.i)
	}
	t.nodes = append(t.nodes, n)
	if to-from > leafPoints {
		along := func(a, b point) int { return cmp.Or(cmp.Compare(a.x, b.x), cmp.Compare(a.i, b.i)) }
		if n.maxY-n.minY > n.maxX-n.minX {
			along = func(a, b point) int { return cmp.Or(cmp.Compare(a.y, b.y), cmp.Compare(a.i, b.i)) }
		}
		slices.SortFunc(t.points[from:to], along)
		middle := (from + to) / 2
		left := t.build(from, middle)
		right := t.build(middle, to)
		t.nodes[at].left, t.nodes[at].right = left, right
	}
	return at
}

// found is the best point so far.
type found struct {
	at point
	d2 float64
}

// beats says whether a point at d2 with index i is nearer, or as near and first.
func (f *found) beats(d2 float64, i int32) bool { return d2 < f.d2 || (d2 == f.d2 && i < f.at.i) }

// nearest gives the point nearest to q and its distance, um; of several the one
// that stands first.
func (t *tree) nearest(q point) (at point, um float64) {
	best := found{point{i: math.MaxInt32}, math.Inf(1)}
	t.search(0, q, &best)
	return best.at, math.Sqrt(best.d2)
}

func (t *tree) search(at int32, q point, best *found) {
	n := &t.nodes[at]
	if n.left == 0 {
		for _, c := range t.points[n.from:n.to] {
			if d2 := squared(c.x-q.x, c.y-q.y); best.beats(d2, c.i) {
				best.at, best.d2 = c, d2
			}
		}
		return
	}
	first, second := n.left, n.right
	d1, d2 := t.nodes[first].away(q), t.nodes[second].away(q)
	if d2 < d1 || (d2 == d1 && t.nodes[second].least < t.nodes[first].least) {
		first, second, d1, d2 = second, first, d2, d1
	}
	for _, c := range [2]struct {
		at int32
		d2 float64
	}{{first, d1}, {second, d2}} {
		if best.beats(c.d2, t.nodes[c.at].least) {
			t.search(c.at, q, best)
		}
	}
}

// away is the least squared distance from q to a place within the node's bounds.
func (n *node) away(q point) float64 {
	return squared(max(n.minX-q.x, q.x-n.maxX, 0), max(n.minY-q.y, q.y-n.maxY, 0))
}

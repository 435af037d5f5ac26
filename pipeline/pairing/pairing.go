// Package pairing decides which analyses coexist: the ends of tie lines.
//
// Every analysis belongs to at most one kind of pair: a pyroxene to
// two-pyroxene; a feldspar to two-feldspar, or, where it is a host or lamella of
// an exsolved grain, to alkali-feldspar-solvus. A host or lamella lost what its
// grain exsolved, so it never stands for the grain beside another feldspar.
package pairing

import (
	"cmp"
	"math"
	"slices"
	"strings"

	"tieline/manifests"
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
	{"alkali-feldspar-solvus", chem.NaFsp, chem.KFsp},
}

// The places of Kinds.
const (
	twoFeldspar = iota
	twoPyroxene
	solvus
)

// The rules, as manifests and the pairs table name them.
const (
	RuleListed       = "listed"
	RuleTouchingRims = "touching rims"
	RuleNearest      = "nearest"
	RuleMeans        = "means"
	RuleCombinations = "all combinations"
)

// Pair is two analyses by their index in the compilation.
type Pair struct {
	Kind int // index into Kinds
	A, B int32
	Rule Rule
}

// Rule is the place of a rule in the order of the constants.
type Rule uint8

var ruleNames = [...]string{RuleListed, RuleTouchingRims, RuleNearest, RuleMeans, RuleCombinations}

func (r Rule) String() string { return ruleNames[r] }

const (
	listed Rule = iota
	touchingRims
	nearest
	means
	combinations
)

// Result is the pairs of a compilation, by kind, then by rule as they were
// tried, then in the order of the labels' first rows or of the a sides; and the
// analyses that could have a partner and got none, in order.
type Result struct {
	Pairs   []Pair
	Without []Unpaired
}

// Pairs pairs analyses by the rules a manifest asks for. The analyses of a
// source must stand together.
func Pairs(all *tables.Analyses, set *manifests.Pairing) *Result {
	p := &pairer{all: all, set: set, members: membersOf(all)}
	for _, name := range set.Rules {
		switch r := Rule(slices.Index(ruleNames[:], name)); r {
		case listed:
			p.listed()
		default:
			p.neighbours(r)
		}
	}
	slices.SortStableFunc(p.pairs, func(a, b Pair) int { return cmp.Compare(a.Kind, b.Kind) })
	return &Result{Pairs: p.pairs, Without: p.without()}
}

// pairer is a compilation on its way through the rules.
type pairer struct {
	all     *tables.Analyses
	set     *manifests.Pairing
	members []member // per analysis
	spaces  *spaces  // nil until a rule or a reason asks for them
	pairs   []Pair
	faults  []fault // of labels
}

// member says in one byte what an analysis can be in a pair.
type member uint8

const (
	memberOpx member = 1 + iota
	memberCpx
	memberAfs
	memberPl
	memberRole = 7 // mask of these

	exsolved   member = 8  // a host or lamella
	integrated member = 16 // of a whole grain: re-integrated, bulk
	host       member = 32 // of the two that are exsolved
	used       member = 128
)

// kind is the kind of pair m can be in, and its side there: 0 for a, 1 for b.
// For the two sides of a solvus pair the compositions decide, so side is 0.
func (m member) kind() (kind, side int, ok bool) {
	switch role := m & memberRole; {
	case role == 0:
		return 0, 0, false
	case role <= memberCpx:
		return twoPyroxene, int(role - memberOpx), true
	case m&exsolved != 0:
		return solvus, 0, true
	default:
		return twoFeldspar, int(role - memberAfs), true
	}
}

// free says whether m can still be paired.
func (m member) free() bool { return m&memberRole != 0 && m&used == 0 }

func membersOf(all *tables.Analyses) []member {
	out := make([]member, 0, all.Len())
	for _, b := range all.Batches {
		for row := range b.Len() {
			out = append(out, memberOf(b, row))
		}
	}
	return out
}

func memberOf(b *tables.Batch, row int) member {
	var m member
	switch b.Phase(row).Role() {
	case chem.Opx:
		m = memberOpx
	case chem.Cpx:
		m = memberCpx
	case chem.Afs:
		m = memberAfs
	case chem.Pl:
		m = memberPl
	}
	if m == 0 || b.Text(tables.SetAside, row) != "" {
		return 0
	}
	texture, kind := b.Text(tables.Texture, row), b.Text(tables.AnalysisKind, row)
	switch {
	case strings.EqualFold(kind, "re-integrated") || strings.EqualFold(kind, "bulk"):
		m |= integrated
	case strings.EqualFold(texture, "host"):
		m |= exsolved | host
	case strings.EqualFold(texture, "lamella") || strings.EqualFold(texture, "lamellae"):
		m |= exsolved
	default:
		if _, part := b.Number(tables.AreaFraction, row); part { // of an exsolved grain, whatever its texture is called
			m |= exsolved
		}
	}
	return m
}

func (p *pairer) pair(kind int, a, b int32, r Rule) {
	p.pairs = append(p.pairs, Pair{kind, a, b, r})
	p.members[a] |= used
	p.members[b] |= used
}

// asks says whether the manifest names a rule.
func (p *pairer) asks(r Rule) bool { return slices.Contains(p.set.Rules, r.String()) }

// spot is the stage coordinates of an analysis, um; ok is false without both.
func spot(all *tables.Analyses, i int32) (x, y float64, ok bool) {
	b, row := all.At(int(i))
	x, okX := b.Number(tables.SpotXUm, row)
	y, okY := b.Number(tables.SpotYUm, row)
	return x, y, okX && okY
}

// Distance is how far two analyses of one sample of one source lie apart on the
// stage, um; NaN where either has no coordinates or they name different domains.
// Whoever lists two analyses without a domain as a pair says that they share one.
func Distance(all *tables.Analyses, a, b int32) float64 {
	ba, ra := all.At(int(a))
	bb, rb := all.At(int(b))
	ax, ay, okA := spot(all, a)
	bx, by, okB := spot(all, b)
	if !okA || !okB || ba.Text(tables.Domain, ra) != bb.Text(tables.Domain, rb) {
		return math.NaN()
	}
	return math.Sqrt(squared(ax-bx, ay-by))
}

// squared is dx^2 + dy^2, rounded alike everywhere.
func squared(dx, dy float64) float64 { return float64(dx*dx) + float64(dy*dy) }

package pairing

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"tieline/pipeline/problem"
	"tieline/pipeline/tables"
)

// Unpaired is an analysis that could have a partner and got none: it carries a
// pair label or coordinates, or its sample holds what it could be paired with.
type Unpaired struct {
	Analysis int32
	Um       float64 // distance to the nearest that could be its partner; NaN where none was looked for
	LimitUm  float64 // how far away it might have been

	label, place fault
	kind, side   int
}

// fault is why one way of pairing gave an analysis no partner.
type fault struct {
	of    int32
	cause cause
	a, b  int32 // what a label names of either side
	um    float64
	limit float64
}

type cause uint8

const (
	fine             cause = iota
	labelCount             // not one of each
	labelSolvus            // not a host and a lamella, or two lamellae
	labelNoOr              // Or/(Or+Ab) is not known
	labelDomains           // two domains
	labelGenerations       // two generations
	labelPooled            // a host or lamella with a whole grain
	noPlace                // no coordinates
	noDomain               // no domain, where its sample has some
	noPartner              // none in the domain
	noneAlike              // none of its texture and generation in the domain
	tooFar                 //
	taken                  // its nearest is in another pair
	outdone                // its nearest has a nearer neighbour
	notAsked               // no rule looks at the stage here
	tooMany                // all combinations would be too many
	aloneSolvus            // a host or lamella without a label
)

// without gives the analyses that could have a partner and got none, in order.
func (p *pairer) without() []Unpaired {
	if !slices.ContainsFunc(p.members, member.free) {
		return nil
	}
	s := p.spacesOf()
	slices.SortFunc(p.faults, func(a, b fault) int { return cmp.Compare(a.of, b.of) })
	var out []Unpaired
	for i := range s.all {
		out = p.left(out, s, &s.all[i])
	}
	slices.SortFunc(out, func(a, b Unpaired) int { return cmp.Compare(a.Analysis, b.Analysis) })
	return out
}

// labelFault is why an analysis' label made no pair; none where it has no label.
func (p *pairer) labelFault(i int32) fault {
	at, ok := slices.BinarySearchFunc(p.faults, i, func(f fault, i int32) int { return cmp.Compare(f.of, i) })
	if !ok {
		return fault{}
	}
	return p.faults[at]
}

// worthSaying says whether an analysis without a partner was meant to have one.
// Where nothing says so, it has a place for a reason only if its sample holds
// what it could be paired with.
func worthSaying(u *Unpaired, sample seen) bool {
	switch u.place.cause {
	case noPlace, noDomain, notAsked, aloneSolvus:
		if u.label.cause != fine {
			u.place.cause = fine
			return true
		}
		return sample.partner(u.kind, u.side)
	}
	return true
}

// left adds the free analyses of a space.
func (p *pairer) left(out []Unpaired, s *spaces, in *space) []Unpaired {
	var trees [2]*tree
	for side, rows := range in.rows {
		for _, i := range rows {
			if !p.members[i].free() {
				continue
			}
			u := Unpaired{Analysis: i, Um: math.NaN(), kind: int(in.kind), side: side, label: p.labelFault(i)}
			u.place = p.why(s, in, i, side, &trees)
			if u.place.um >= 0 && u.place.limit > 0 {
				u.Um, u.LimitUm = u.place.um, u.place.limit
			}
			if worthSaying(&u, s.samples[s.domains[in.domain].sample].seen) {
				out = append(out, u)
			}
		}
	}
	return out
}

// why says what stood in the way of a free analysis in its space. trees are of
// the space's sides, made when they are first asked for.
func (p *pairer) why(s *spaces, in *space, i int32, side int, trees *[2]*tree) fault {
	f := fault{of: i, um: -1, limit: p.reach(in)}
	x, y, placed := spot(p.all, i)
	switch {
	case in.kind == solvus:
		f.cause = aloneSolvus
		return f
	case in.tooMany:
		f.cause = tooMany
		return f
	case f.limit < 0:
		f.cause = notAsked
		return f
	case !placed:
		f.cause = noPlace
		return f
	case !s.frame(in.domain):
		f.cause = noDomain
		return f
	}
	if trees[1-side] == nil {
		if others := p.spots(in.rows[1-side], func(member) bool { return true }); len(others) > 0 {
			trees[1-side] = newTree(others)
		} else {
			f.cause = noneAlike
			if !s.domains[in.domain].seen.partner(int(in.kind), side) {
				f.cause = noPartner
			}
			return f
		}
	}
	var near point
	near, f.um = trees[1-side].nearest(point{x, y, i})
	switch {
	case f.um > f.limit:
		f.cause = tooFar
	case p.members[near.i].free():
		f.cause = outdone
	default:
		f.cause = taken
	}
	return f
}

// reach is how far apart the rules let analyses of a space lie; below 0 where no
// rule looks at the stage.
func (p *pairer) reach(in *space) float64 {
	um := -1.0
	if p.asks(nearest) {
		um = p.limitUm(nearest)
	}
	if p.asks(touchingRims) && in.rim {
		um = max(um, p.limitUm(touchingRims))
	}
	return um
}

// Why says in words why the analysis got no partner.
func (u *Unpaired) Why(all *tables.Analyses) string {
	b, row := all.At(int(u.Analysis))
	label := u.labelWhy(b.Text(tables.PairLabel, row))
	place := u.placeWhy()
	if label != "" && place != "" {
		return label + "; " + place
	}
	return label + place
}

func (u *Unpaired) labelWhy(label string) string {
	k, f, says := &Kinds[u.kind], &u.label, "pair label "+problem.Quote(label)+" "
	switch f.cause {
	case labelCount:
		says += fmt.Sprintf("names %d %s and %d %s; a pair is one of each", f.a, k.A, f.b, k.B)
		if u.kind == twoFeldspar {
			says += ", hosts and lamellae not counted"
		}
	case labelSolvus:
		says += fmt.Sprintf("names %d feldspar hosts and %d lamellae; a pair is a host and a lamella, or two lamellae", f.a, f.b)
	case labelNoOr:
		says += "names a feldspar whose Or/(Or+Ab) is not known, so which is the Na side is not known either"
	case labelDomains:
		says += "joins two domains; a pair lies in one"
	case labelGenerations:
		says += "joins two generations; a pair is of one"
	case labelPooled:
		says += "joins a host or lamella with the analysis of a whole grain"
	default:
		return ""
	}
	return says
}

func (u *Unpaired) placeWhy() string {
	other := string(Kinds[u.kind].A)
	if u.side == 0 {
		other = string(Kinds[u.kind].B)
	}
	switch u.place.cause {
	case noPlace:
		return fmt.Sprintf("its sample holds %s, but what belongs together is not said; give a pair label or coordinates", other)
	case noDomain:
		return "it names no domain and other rows of its sample do, so its coordinates lie nowhere; name its thin section"
	case noPartner:
		return "no " + other + " in this domain"
	case noneAlike:
		return "no " + other + " with coordinates, of its texture and generation, in this domain"
	case tooFar:
		return fmt.Sprintf("nearest %s is %s um away", other, um(u.place.um))
	case taken:
		return fmt.Sprintf("nearest %s, %s um away, is in another pair", other, um(u.place.um))
	case outdone:
		return fmt.Sprintf("nearest %s, %s um away, has a nearer neighbour", other, um(u.place.um))
	case notAsked:
		return fmt.Sprintf("its sample holds %s, and no rule that was asked for pairs them; give a pair label", other)
	case tooMany:
		return fmt.Sprintf("all combinations here are more than %d pairs", maxCombinations)
	case aloneSolvus:
		return "a host or lamella is paired with what exsolved beside it, by a pair label; the whole grain has to be re-integrated before it is paired with another feldspar"
	}
	return ""
}

// um writes a distance to the tenth of a micrometre.
func um(x float64) string {
	if x >= 1e6 {
		return strconv.FormatFloat(x, 'g', 4, 64)
	}
	return strings.TrimSuffix(strconv.FormatFloat(x, 'f', 1, 64), ".0")
}

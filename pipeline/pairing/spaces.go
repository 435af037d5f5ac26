package pairing

import (
	"cmp"
	"slices"
	"strings"

	"tieline/pipeline/tables"
)

// space is where the rules beside listed look for partners: one sample of one
// source, one domain, generation and texture, whole grains apart from spots. The
// rows are in order, and of all analyses, used or free.
type space struct {
	domain  int32 // of spaces.domains
	kind    uint8
	rim     bool
	tooMany bool // all combinations would be more than maxCombinations
	rows    [2][]int32
}

// domain is one thin section of a sample, or the sample itself where no row of
// it names one.
type domain struct {
	sample int32 // of spaces.samples
	named  bool
	seen   seen
}

// sample is one sample of one source.
type sample struct {
	domains bool // some row names one
	seen    seen
}

// seen has a bit for each side of each kind that is there; the second bit of
// solvus is for a second analysis.
type seen uint8

func (s *seen) add(kind, side int) {
	bit := seen(1) << (2*kind + side)
	if kind == solvus && *s&bit != 0 {
		bit <<= 1
	}
	*s |= bit
}

// partner says whether there is an analysis that one of this kind and side could
// be paired with.
func (s seen) partner(kind, side int) bool { return s&(1<<(2*kind+1-side)) != 0 }

// spaces are all spaces of a compilation, in the order of their first rows.
type spaces struct {
	samples []sample
	domains []domain
	all     []space
}

// frame says whether the coordinates in a domain are in one frame: the origins
// of two thin sections have nothing to do with each other, so a row that names
// none lies nowhere once another row of its sample names one.
func (s *spaces) frame(d int32) bool {
	return s.domains[d].named || !s.samples[s.domains[d].sample].domains
}

// spacesOf sorts every analysis of a role into its space.
func (p *pairer) spacesOf() *spaces {
	if p.spaces == nil {
		p.spaces = &spaces{}
		i := 0
		for from := 0; from < len(p.all.Batches); {
			to := from + 1
			for to < len(p.all.Batches) && p.all.Batches[to].Source == p.all.Batches[from].Source {
				to++
			}
			i = p.source(p.all.Batches[from:to], i)
			from = to
		}
	}
	return p.spaces
}

type domainKey struct {
	sample int32
	domain string
}

type spaceKey struct {
	domain              int32
	generation, texture string
	member              member // kind, and whether of a whole grain
}

// source sorts the analyses of one source, the first of which is i, and gives
// the first of the next.
func (p *pairer) source(batches []*tables.Batch, i int) int {
	s := p.spaces
	samples, domains, all := map[string]int32{}, map[domainKey]int32{}, map[spaceKey]int32{}
	for _, b := range batches {
		for row := range b.Len() {
			m := p.members[i]
			i++
			name, in := b.Text(tables.Sample, row), b.Text(tables.Domain, row)
			kind, side, ok := m.kind()
			if !ok && in == "" {
				continue
			}
			sm := place(samples, name, &s.samples, sample{})
			s.samples[sm].domains = s.samples[sm].domains || in != ""
			if !ok {
				continue
			}
			d := place(domains, domainKey{sm, in}, &s.domains, domain{sample: sm, named: in != ""})
			s.samples[sm].seen.add(kind, side)
			s.domains[d].seen.add(kind, side)
			texture := strings.ToLower(b.Text(tables.Texture, row))
			key := spaceKey{d, b.Text(tables.Generation, row), texture, m&integrated | member(kind)}
			at := place(all, key, &s.all, space{domain: d, kind: uint8(kind), rim: texture == "rim" || texture == "rims"})
			s.all[at].rows[side] = append(s.all[at].rows[side], int32(i-1))
		}
	}
	return i
}

// place gives the place of a key in a list, at its end where the key is new.
func place[K comparable, V any](of map[K]int32, key K, list *[]V, v V) int32 {
	at, ok := of[key]
	if !ok {
		at = int32(len(*list))
		of[key] = at
		*list = append(*list, v)
	}
	return at
}

// maxCombinations is the most pairs that all combinations makes in one space:
// a thousand by a thousand analyses are no tie lines any more.
const maxCombinations = 1_000_000

// neighbours pairs within spaces by one of the rules beside listed.
func (p *pairer) neighbours(r Rule) {
	if !slices.ContainsFunc(p.members, member.free) {
		return
	}
	s, before := p.spacesOf(), len(p.pairs)
	for i := range s.all {
		in := &s.all[i]
		switch {
		case in.kind == solvus:
		case r == means:
			p.means(in)
		case r == combinations:
			p.combinations(in)
		case s.frame(in.domain) && (r == nearest || in.rim):
			p.mutual(in, r)
		}
	}
	slices.SortFunc(p.pairs[before:], func(a, b Pair) int { return cmp.Or(cmp.Compare(a.A, b.A), cmp.Compare(a.B, b.B)) })
}

// limitUm is how far apart a rule lets two analyses lie.
func (p *pairer) limitUm(r Rule) float64 {
	if r == touchingRims {
		return p.set.TouchingUm
	}
	return p.set.NearestUm
}

// mutual pairs two free analyses of a space that are each other's nearest and
// not farther apart than the rule's limit.
func (p *pairer) mutual(in *space, r Rule) {
	var spots [2][]point
	for side := range spots {
		spots[side] = p.spots(in.rows[side], member.free)
	}
	if len(spots[0]) == 0 || len(spots[1]) == 0 {
		return
	}
	a, b := newTree(slices.Clone(spots[0])), newTree(spots[1])
	for _, from := range spots[0] {
		to, um := b.nearest(from)
		if back, _ := a.nearest(to); back.i == from.i && um <= p.limitUm(r) {
			p.pair(int(in.kind), from.i, to.i, r)
		}
	}
}

// spots gives the stage coordinates of those of the rows that have any.
func (p *pairer) spots(rows []int32, want func(member) bool) []point {
	var out []point
	for _, i := range rows {
		if !want(p.members[i]) {
			continue
		}
		if x, y, ok := spot(p.all, i); ok {
			out = append(out, point{x, y, i})
		}
	}
	return out
}

// means pairs the one mean of either role in a space.
func (p *pairer) means(in *space) {
	var ends [2]int32
	for side, rows := range in.rows {
		n := 0
		for _, i := range rows {
			if p.isMean(i) {
				ends[side] = i
				n++
			}
		}
		if n != 1 || !p.members[ends[side]].free() {
			return
		}
	}
	p.pair(int(in.kind), ends[0], ends[1], means)
}

func (p *pairer) isMean(i int32) bool {
	b, row := p.all.At(int(i))
	kind := strings.ToLower(b.Text(tables.AnalysisKind, row))
	return kind == "mean" || strings.HasPrefix(kind, "mean of ")
}

// combinations pairs every free analysis of one side with every one of the other.
func (p *pairer) combinations(in *space) {
	var ends [2][]int32
	for side, rows := range in.rows {
		for _, i := range rows {
			if p.members[i].free() {
				ends[side] = append(ends[side], i)
			}
		}
	}
	if in.tooMany = len(ends[0])*len(ends[1]) > maxCombinations; in.tooMany {
		return
	}
	for _, a := range ends[0] {
		for _, b := range ends[1] {
			p.pair(int(in.kind), a, b, combinations)
		}
	}
}

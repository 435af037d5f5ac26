package ingest

import (
	"strconv"

	"tieline/pipeline/lineage"
	"tieline/pipeline/problem"
	"tieline/pipeline/tables"
)

// gatherer names the analyses of one source and builds their batches, beside the
// goroutine that reads them: either takes about half the time.
type gatherer struct {
	names   *names
	builder *tables.Builder
	full    chan []tables.Analysis
	empty   chan []tables.Analysis
	filling []tables.Analysis
	done    chan struct{}

	problems []problem.Problem // of rows no batch can hold; good after finish
}

// handed is how many analyses are handed over at a time, slabs how many such
// lots there are: one filling, one waiting, one being gathered.
const (
	handed = 128
	slabs  = 3
)

func newGatherer(p *plan) *gatherer {
	g := &gatherer{names: newNames(p.source.ID), builder: tables.NewBuilder(p.source.ID, p.kind),
		full: make(chan []tables.Analysis, 1), empty: make(chan []tables.Analysis, slabs), done: make(chan struct{})}
	for range slabs {
		g.empty <- make([]tables.Analysis, 0, handed)
	}
	g.filling = <-g.empty
	go g.gather()
	return g
}

// add takes a copy of an analysis.
func (g *gatherer) add(one *tables.Analysis) {
	g.filling = append(g.filling, *one)
	if len(g.filling) == handed {
		g.full <- g.filling
		g.filling = <-g.empty
	}
}

// finish gives the batches once all are built.
func (g *gatherer) finish() []*tables.Batch {
	g.full <- g.filling
	close(g.full)
	<-g.done
	return g.builder.Finish()
}

func (g *gatherer) gather() {
	defer close(g.done)
	for rows := range g.full {
		for i := range rows {
			one := &rows[i]
			g.names.identify(one)
			if err := g.builder.Append(one); err != nil {
				g.problems = append(g.problems, problem.Problem{Line: one.Line, Kind: "row", Found: err.Error()})
			}
		}
		g.empty <- rows[:0]
	}
}

// names gives analyses their ids and tells apart the lineages of rows that are
// alike.
type names struct {
	source string
	of     map[string]int32 // id to taken
	taken  []taken
	alike  map[lineage.Digest]int64 // rows, of ids that several rows have
	enc    *lineage.Encoder
}

// taken is an id in use.
type taken struct {
	rows  int            // whose id it is before "#2" is added
	first lineage.Digest // of the first of them
}

func newNames(source string) *names {
	return &names{source: source, of: map[string]int32{}, alike: map[lineage.Digest]int64{}, enc: lineage.New(analysisDomain)}
}

// identify gives a row its id: the source's label, else sample and phase; the
// second row of an id gets "#2", and a label that looks like an id so made is
// stepped over. Rows that are alike get the ordinal into their lineage; they can
// only be rows of one id, as their labels, samples and phases are alike too.
func (n *names) identify(one *tables.Analysis) {
	id := n.base(one)
	i, again := n.of[id]
	if !again {
		n.take(id, taken{1, one.Lineage})
		one.Text[tables.AnalysisID] = id
		return
	}
	if n.taken[i].rows == 1 {
		n.alike[n.taken[i].first]++
	}
	for again {
		n.taken[i].rows++
		one.Text[tables.AnalysisID] = id + "#" + strconv.Itoa(n.taken[i].rows)
		_, again = n.of[one.Text[tables.AnalysisID]]
	}
	n.take(one.Text[tables.AnalysisID], taken{rows: 1})
	n.alike[one.Lineage]++
	if k := n.alike[one.Lineage]; k > 1 {
		one.Lineage = n.enc.Reset(analysisDomain).Digest(one.Lineage).Int(k).Sum()
	}
}

func (n *names) base(one *tables.Analysis) string {
	t := &one.Text
	if t[tables.Label] != "" {
		return n.source + "/" + t[tables.Label]
	}
	phase := string(one.Phase)
	if phase == "" {
		phase = t[tables.PhaseText]
	}
	return n.source + "/" + t[tables.Sample] + ":" + phase
}

func (n *names) take(id string, t taken) {
	n.of[id] = int32(len(n.taken))
	n.taken = append(n.taken, t)
}

package thermo

import (
	"fmt"
	"math"
	"sync"
	"testing"

	"tieline/thermo/chem"
	"tieline/thermo/method"
)

// Methods per estimate: alone in a block, and as the same equation plainly.
func BenchmarkMethods(b *testing.B) {
	for _, m := range Methods() {
		p, values, why := random([]*method.Method{m}, blockRows, 19, true)
		rows, equation := plainRows(p, values), plainly(m)
		estimates := float64(blockRows * len(m.Components))
		name := m.ID
		if m.Variant != "" {
			name += " " + m.Variant
		}
		b.Run(name+"/block", func(b *testing.B) {
			evaluateBlocks(b, []*method.Method{m}, []probeBlock{{p, values, why}}, 1, estimates)
		})
		b.Run(name+"/plain", func(b *testing.B) {
			for b.Loop() {
				for i := range rows {
					sink += equation(&rows[i])[0]
				}
			}
			perEstimate(b, estimates)
		})
	}
}

// A million pairs of each kind through every method, in blocks and plainly, on
// one core and on two. What several methods read is filled once in a block.
func BenchmarkMillion(b *testing.B) {
	const distinct = 16 // blocks, gone through again and again
	ms := Methods()
	components := 0
	for _, m := range ms {
		components += len(m.Components)
	}
	blocks := 1_000_000 / blockRows
	estimates := float64(blocks * blockRows * components)
	var data []probeBlock
	var rows [][]plainRow
	for i := range distinct {
		p, values, why := random(ms, blockRows, uint64(23+i), true)
		data = append(data, probeBlock{p, values, why})
		rows = append(rows, plainRows(p, values))
	}
	for _, cores := range []int{1, 2} {
		name := fmt.Sprintf("%d methods, %d components, %d cores/", len(ms), components, cores)
		b.Run(name+"block", func(b *testing.B) {
			share(cores, func(core int) { evaluateShare(b, ms, data, blocks/cores) })
			perEstimate(b, estimates)
		})
		b.Run(name+"plain", func(b *testing.B) {
			share(cores, func(core int) {
				sum := 0.0
				var equations []equation
				for _, m := range ms {
					equations = append(equations, plainly(m))
				}
				for range b.N {
					for i := range blocks / cores {
						of := rows[i%distinct]
						for _, f := range equations {
							for j := range of {
								sum += f(&of[j])[0]
							}
						}
					}
				}
				sinks[core] = sum
			})
			perEstimate(b, estimates)
		})
	}
}

// sinks keep the compiler from dropping what is computed, a place per core.
var sinks [2]float64

// share runs f on so many goroutines and waits.
func share(cores int, f func(core int)) {
	var wg sync.WaitGroup
	for core := range cores {
		wg.Go(func() { f(core) })
	}
	wg.Wait()
}

const blockRows = 1024

var sink float64

// probeBlock is what one block is filled from.
type probeBlock struct {
	p      []chem.Bar
	values map[*method.Quantity][]float64
	why    map[*method.Quantity][]method.Reason
}

// evaluateBlocks fills and evaluates so many blocks per turn.
func evaluateBlocks(b *testing.B, ms []*method.Method, data []probeBlock, blocks int, estimates float64) {
	b.ReportAllocs()
	evaluateShare(b, ms, data, blocks)
	perEstimate(b, estimates)
}

// evaluateShare does one core's blocks b.N times.
func evaluateShare(b *testing.B, ms []*method.Method, data []probeBlock, blocks int) {
	block := method.NewBlock(blockRows)
	var lanes [][]method.Lane
	var needs []*method.Quantity
	for _, m := range ms {
		lanes = append(lanes, method.NewLanes(m, blockRows))
		needs = append(needs, m.Needs...)
	}
	leaves := method.Leaves(needs)
	for range b.N {
		for i := range blocks {
			d := &data[i%len(data)]
			block.Reset(blockRows)
			copy(block.P, d.p)
			for _, l := range leaves {
				q, w := block.Set(l)
				copy(q, d.values[l])
				copy(w, d.why[l])
			}
			for j, m := range ms {
				m.Evaluate(block, lanes[j])
			}
		}
	}
}

func perEstimate(b *testing.B, estimates float64) {
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/estimates, "ns/estimate")
}

// A second, plain implementation of every method agrees with the blocks.
func TestPlainEquationsAgree(t *testing.T) {
	const n = 500
	for _, m := range Methods() {
		p, values, why := random([]*method.Method{m}, n, 17, true)
		rows, equation := plainRows(p, values), plainly(m)
		lanes := run(m, 0, n, p, values, why)
		for i := range n {
			want := equation(&rows[i])
			for c, lane := range lanes {
				got := float64(lane.T[i])
				if lane.Why[i] == method.OK && !(math.Abs(got-want[c]) <= 1e-9*want[c]) {
					t.Errorf("%s %s component %d row %d: %v K, plainly %v", m.ID, m.Variant, c, i, got, want[c])
				}
			}
		}
	}
}

// Every leaf of a method has a place of its own in the plain rows.
func TestPlainRowsHoldEveryLeaf(t *testing.T) {
	for _, m := range Methods() {
		taken := map[*float64]string{}
		var r plainRow
		for _, l := range method.Leaves(m.Needs) {
			at := r.of(l)
			if taken[at] != "" {
				t.Errorf("%s reads %q and %q as one", m.ID, taken[at], l.Name)
			}
			taken[at] = l.Name
		}
	}
}

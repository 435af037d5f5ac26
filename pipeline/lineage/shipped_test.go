package lineage

import (
	"testing"

	"tieline/thermo"
	"tieline/thermo/method"
)

// TestProbeReachesEveryShippedMethod: a digest over rows without a number would
// see no change of the equation. A quarter of the probe's rows is enough to
// catch one bit, and what made-up minerals allow.
func TestProbeReachesEveryShippedMethod(t *testing.T) {
	seen := map[Digest]string{}
	for _, m := range thermo.Methods() {
		b := probe(m)
		lanes := method.NewLanes(m, b.N)
		m.Evaluate(b, lanes)
		for k, l := range lanes {
			numbers := 0
			for _, w := range l.Why {
				if w == method.OK {
					numbers++
				}
			}
			t.Logf("%s %s: %d numbers of %d", m.ID, m.Components[k], numbers, b.N)
			if numbers < probeRows/4 {
				t.Errorf("%s %s gives a number in %d of the probe's %d rows: widen or narrow its leaves' Probe spans", m.ID, m.Components[k], numbers, b.N)
			}
		}
		d := Method(m)
		if other, same := seen[d]; same {
			t.Errorf("%s and %s have one digest", m.ID, other)
		}
		seen[d] = m.ID
	}
}

package thermo

import (
	"math"
	"testing"

	"tieline/thermo/chem"
	"tieline/thermo/feldspar"
	"tieline/thermo/method"
	"tieline/thermo/mixing"
	"tieline/thermo/pyroxene"
)

// The equations once more, row by row with math.Log and sums the compiler may
// fuse: what a block's speed and numbers are held against.

// plainTwoFeldspar gives T_Ab, T_Or, T_An in K.
func plainTwoFeldspar(k *feldspar.Constants, afs, pl [3]float64, p float64) (t [3]float64) {
	pairs := [6][3]int{{0, 1, 2}, {1, 0, 2}, {0, 2, 1}, {2, 0, 1}, {1, 2, 0}, {2, 1, 0}}
	w := func(m *mixing.Margules) [6]float64 {
		return [6]float64{m.AbOr, m.OrAb, m.AbAn, m.AnAb, m.OrAn, m.AnOr}
	}
	h, s, v := w(&k.Excess.H), w(&k.Excess.S), w(&k.Excess.V)
	var dh, ds, dv [3]float64
	for phase, x := range [2][3]float64{pl, afs} {
		sign := 1 - 2*float64(phase)
		for m, ij := range pairs {
			xi, xj, xk := x[ij[0]], x[ij[1]], x[ij[2]]
			f := xi * xj * (xj + xk/2)
			var g [3]float64
			g[ij[0]] = sign * (xj*xj + xj*xk/2 - 2*f)
			g[ij[1]] = sign * (2*xi*xj + xi*xk/2 - 2*f)
			g[ij[2]] = sign * (xi*xj/2 - 2*f)
			for c := range g {
				dh[c] += h[m] * g[c]
				ds[c] += s[m] * g[c]
				dv[c] += v[m] * g[c]
			}
		}
		for c := range t {
			g := sign * (x[(c+1)%3]*x[(c+2)%3] - 2*x[0]*x[1]*x[2])
			dh[c] += k.Excess.H.AbOrAn * g
			ds[c] += k.Excess.S.AbOrAn * g
			dv[c] += k.Excess.V.AbOrAn * g
		}
	}
	ideal := func(x [3]float64) [3]float64 {
		if k.Ideal == mixing.Molecular {
			return x
		}
		an := x[2]
		return [3]float64{x[0] * (1 - an*an), x[1] * (1 - an*an), an * (1 + an) * (1 + an) / 4}
	}
	a, b := ideal(pl), ideal(afs)
	for c := range t {
		t[c] = (dh[c] + p*dv[c]) / (ds[c] - k.R*math.Log(a[c]/b[c]))
	}
	return t
}

func plainBKN(caC, naC, feC, mgC, caO, naO, feO, mgO, kbar float64) float64 {
	ln := math.Log((1 - caC/(1-naC)) / (1 - caO/(1-naO)))
	return (23664 + (24.9+126.3*feC/(feC+mgC))*kbar) / (13.38 + ln*ln + 11.59*feO/(feO+mgO))
}

func plainCaInOpx(ca, kbar float64) float64 { return (6425 + 26.4*kbar) / (1.843 - math.Log(ca)) }

func plainNimisGruetter(ca, kbar float64) float64 {
	t := plainCaInOpx(ca, kbar) - 273.15
	return -628.7 + 2.0690*t - 4.530e-4*t*t + 273.15
}

// plain runs row i of leaves, in the order of method.Leaves, through the plain equations.
func plain(m *method.Method, leaves [][]float64, p []chem.Bar, i int) [3]float64 {
	l := func(j int) float64 { return leaves[j][i] }
	kbar := float64(p[i]) / 1000
	switch m {
	case feldspar.ElkinsGrove1990, feldspar.FuhrmanLindsley1988:
		return plainTwoFeldspar(m.Const.(*feldspar.Constants),
			[3]float64{l(0), l(1), l(2)}, [3]float64{l(3), l(4), l(5)}, float64(p[i]))
	case pyroxene.BreyKoehler1990: // Ca, Na Cpx, Ca, Na Opx, Fe, Mg Cpx, Fe, Mg Opx
		return [3]float64{plainBKN(l(0), l(1), l(4), l(5), l(2), l(3), l(6), l(7), kbar)}
	case pyroxene.BreyKoehler1990Ca:
		return [3]float64{plainCaInOpx(l(0), kbar)}
	default:
		return [3]float64{plainNimisGruetter(l(0), kbar)}
	}
}

// A second, plain implementation of every method agrees with the blocks.
func TestPlainEquationsAgree(t *testing.T) {
	const n = 500
	for _, m := range Methods() {
		p, values, why := random(m, n, 17, true)
		var leaves [][]float64
		for _, q := range method.Leaves(m.Needs) {
			leaves = append(leaves, values[q])
		}
		lanes := run(m, 0, n, p, values, why)
		for i := range n {
			want := plain(m, leaves, p, i)
			for c, lane := range lanes {
				if got := float64(lane.T[i]); lane.Why[i] == method.OK && !(math.Abs(got-want[c]) <= 1e-9*want[c]) {
					t.Errorf("%s component %d row %d: %v K, plainly %v", m.ID, c, i, got, want[c])
				}
			}
		}
	}
}

const blockRows = 1024

// Methods per estimate: alone in a block, and as the same equation plainly.
func BenchmarkMethods(b *testing.B) {
	for _, m := range Methods() {
		p, values, why := random(m, blockRows, 19, true)
		var leaves [][]float64
		for _, q := range method.Leaves(m.Needs) {
			leaves = append(leaves, values[q])
		}
		estimates := float64(blockRows * len(m.Components))
		b.Run(m.ID+"/block", func(b *testing.B) { evaluateBlocks(b, []*method.Method{m}, p, values, why, estimates) })
		b.Run(m.ID+"/plain", func(b *testing.B) {
			for b.Loop() {
				for i := range blockRows {
					sink += plain(m, leaves, p, i)[0]
				}
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/estimates, "ns/estimate")
		})
	}
}

// Both feldspar models on the same pairs: terms and logarithms are filled once.
func BenchmarkTwoFeldsparsTogether(b *testing.B) {
	both := []*method.Method{feldspar.ElkinsGrove1990, feldspar.FuhrmanLindsley1988}
	p, values, why := random(both[0], blockRows, 19, true)
	evaluateBlocks(b, both, p, values, why, blockRows*6)
}

var sink float64

func evaluateBlocks(b *testing.B, ms []*method.Method, p []chem.Bar, values map[*method.Quantity][]float64,
	why map[*method.Quantity][]method.Reason, estimates float64) {
	block := method.NewBlock(blockRows)
	var lanes [][]method.Lane
	for _, m := range ms {
		lanes = append(lanes, method.NewLanes(m, blockRows))
	}
	b.ReportAllocs()
	for b.Loop() {
		block.Reset(blockRows)
		copy(block.P, p)
		for l, v := range values {
			q, w := block.Set(l)
			copy(q, v)
			copy(w, why[l])
		}
		for i, m := range ms {
			m.Evaluate(block, lanes[i])
		}
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/estimates, "ns/estimate")
}

package discrepancy

import (
	"fmt"
	"math"
	"slices"
	"testing"

	"gonum.org/v1/gonum/stat"
	"pgregory.net/rapid"

	"tieline/pipeline/tables"
	"tieline/thermo/method"
)

// Bland JM, Altman DG (1986) Lancet 327:307-310, table 1: peak expiratory flow
// of 17 subjects, l/min, first measurement with either meter.
var (
	largeMeter = []float64{494, 395, 516, 434, 476, 557, 413, 442, 650, 433, 417, 656, 267, 478, 178, 423, 427}
	miniMeter  = []float64{512, 430, 520, 428, 500, 600, 364, 380, 658, 445, 432, 626, 260, 477, 259, 350, 451}
)

func TestBlandAltman(t *testing.T) {
	var d []float64
	for i := range largeMeter {
		d = append(d, largeMeter[i]-miniMeter[i])
	}
	s := Describe(d)
	// The paper prints -2.1 and 38.8, and limits with 2 SD: -79.7 and 75.5 from
	// the rounded figures (-79.65 and 75.41 from the data). Ours are with 1.96 SD.
	for _, c := range []struct {
		what      string
		got, want float64
		within    float64
	}{
		{"mean", s.Mean, -2.1, 0.05},
		{"SD", s.SD, 38.8, 0.05},
		{"mean - 2 SD", s.Mean - 2*s.SD, -79.65, 0.005},
		{"mean + 2 SD", s.Mean + 2*s.SD, 75.41, 0.005},
		{"lower limit of agreement", (s.LoALow - s.Mean) / s.SD, -1.96, 1e-12},
		{"upper limit of agreement", (s.LoAUp - s.Mean) / s.SD, 1.96, 1e-12},
	} {
		if math.Abs(c.got-c.want) > c.within {
			t.Errorf("%s is %.4f, published %.4f: off by %.4f", c.what, c.got, c.want, c.got-c.want)
		}
	}
}

// gonum's stat package is the oracle: it sums in another order, so agreement is
// to rounding.
func TestDescribeAgainstGonum(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		d := rapid.SliceOfN(rapid.Float64Range(-500, 500), 1, 60).Draw(t, "d")
		before := slices.Clone(d)
		s := Describe(d)
		if !slices.Equal(d, before) {
			t.Fatal("Describe changed its input")
		}
		near := func(what string, got, want float64) {
			if math.Abs(got-want) > 1e-9*(1+math.Abs(want)) {
				t.Fatalf("%s of %v is %g, gonum says %g", what, d, got, want)
			}
		}
		near("mean", s.Mean, stat.Mean(d, nil))
		near("median", s.Median, median(d))
		abs, dev := []float64{}, []float64{}
		for _, v := range d {
			abs = append(abs, math.Abs(v))
			dev = append(dev, math.Abs(v-median(d)))
		}
		near("median absolute difference", s.MedianAbs, median(abs))
		near("MAD", s.MAD, median(dev))
		if len(d) == 1 {
			if !math.IsNaN(s.SD) || !math.IsNaN(s.LoALow) {
				t.Fatalf("one difference has SD %g and limits %g; want none", s.SD, s.LoALow)
			}
			return
		}
		near("SD", s.SD, stat.StdDev(d, nil))
	})
}

// median by definition: the mean of the middle one or two.
func median(v []float64) float64 {
	s := slices.Sorted(slices.Values(v))
	return (s[(len(s)-1)/2] + s[len(s)/2]) / 2
}

func TestCompare(t *testing.T) {
	nan := math.NaN()
	base := &method.Info{ID: "base"}
	child := &method.Info{ID: "child", DerivedFrom: []string{"base"}}
	rows := &Rows{PairKind: "k", Variant: "v",
		Lanes: []Lane{
			{Method: "base", Component: "Ab", Info: base, Own: true, T: []float64{10, 20, nan, 40}},
			{Method: "child", Info: child, Own: true, T: []float64{11, 22, 33, 44}},
			{Method: "single", Info: &method.Info{ID: "single"}, T: []float64{1, 2, 3, nan}},
			{Method: AsPublished, T: []float64{9, 18, 27, nan}},
		},
		Sample: []string{"s1", "s1", "s2", "s3"}, Source: []string{"x", "y", "y", "y"}}
	got := Compare(rows, []Grouping{{By: "all", Group: []string{"all", "all", "all", "all"}}, {By: "unit", Group: []string{"", "B", "A", "B"}}})
	var lines []string
	for _, r := range got {
		lines = append(lines, line(r))
	}
	want := []string{
		"all=all base Ab - single: n 2 samples 1 sources 2 mean 13.5",
		"all=all base Ab - as-published: n 2 samples 1 sources 2 mean 1.5",
		"all=all child - single: n 3 samples 2 sources 2 mean 20",
		"all=all child - as-published: n 3 samples 2 sources 2 mean 4",
		"unit=A child - single: n 1 samples 1 sources 1 mean 30",
		"unit=A child - as-published: n 1 samples 1 sources 1 mean 6",
		"unit=B base Ab - single: n 1 samples 1 sources 1 mean 18",
		"unit=B base Ab - as-published: n 1 samples 1 sources 1 mean 2",
		"unit=B child - single: n 1 samples 1 sources 1 mean 20",
		"unit=B child - as-published: n 1 samples 1 sources 1 mean 4",
	}
	if !slices.Equal(lines, want) {
		t.Errorf("comparisons:\n%q\nwant\n%q\n(derived methods, and two lanes seen through the pair, are not compared)", lines, want)
	}
}

// Two methods made from one third are no two witnesses either; the components of
// one method are still compared.
func TestSiblingsAreNotCompared(t *testing.T) {
	one := &method.Info{ID: "one", DerivedFrom: []string{"parent"}}
	other := &method.Info{ID: "other", DerivedFrom: []string{"parent"}}
	rows := &Rows{PairKind: "k", Variant: "v",
		Lanes: []Lane{
			{Method: "one", Component: "Ab", Info: one, Own: true, T: []float64{1}},
			{Method: "one", Component: "Or", Info: one, Own: true, T: []float64{3}},
			{Method: "other", Info: other, Own: true, T: []float64{7}},
		},
		Sample: []string{"s"}, Source: []string{"x"}}
	got := Compare(rows, []Grouping{{By: "all", Group: []string{"all"}}})
	if len(got) != 1 || got[0].MethodA != "one" || got[0].MethodB != "one" {
		t.Errorf("%d comparisons, %+v; want Ab minus Or of one method and nothing else", len(got), got)
	}
}

func line(r tables.DiscrepancyRow) string {
	a := r.MethodA
	if r.ComponentA != "" {
		a += " " + r.ComponentA
	}
	return fmt.Sprintf("%s=%s %s - %s: n %d samples %d sources %d mean %g", r.GroupBy, r.Group, a, r.MethodB, r.N, r.NSamples, r.NSources, *r.MeanDiffC)
}

func TestThrough(t *testing.T) {
	l := Lane{T: []float64{5, 6}, Own: true}
	got := l.Through([]int{1, -1, 0})
	if got.T[0] != 6 || !math.IsNaN(got.T[1]) || got.T[2] != 5 || got.Own {
		t.Errorf("lane through rows 1, none, 0 is %v, own %v; want 6, NaN, 5, not own", got.T, got.Own)
	}
}

// A variant is compared within itself and with methods that have no such
// variant; what needs no variant is not said again.
func TestCompareVariant(t *testing.T) {
	lane := func(m, v string, x float64) Lane {
		return Lane{Method: m, Variant: v, Info: &method.Info{ID: m}, Own: true, T: []float64{x}}
	}
	rows := &Rows{PairKind: "k", Variant: "all Fe2+", Of: "all Fe2+", Sample: []string{"s"}, Source: []string{"x"},
		Lanes: []Lane{lane("wells", "", 1), lane("wells", "all Fe2+", 2), lane("bkn", "", 4), lane("other", "", 8), {Method: AsPublished, T: []float64{16}}}}
	var lines []string
	for _, r := range Compare(rows, []Grouping{{By: "all", Group: []string{"all"}}}) {
		lines = append(lines, line(r))
	}
	want := []string{
		"all=all wells - bkn: n 1 samples 1 sources 1 mean -2",
		"all=all wells - other: n 1 samples 1 sources 1 mean -6",
		"all=all wells - as-published: n 1 samples 1 sources 1 mean -14",
	}
	if !slices.Equal(lines, want) {
		t.Errorf("comparisons\n%q\nwant\n%q", lines, want)
	}
}

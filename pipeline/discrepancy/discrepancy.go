package discrepancy

import (
	"cmp"
	"math"
	"slices"

	"tieline/pipeline/tables"
	"tieline/thermo/method"
)

// AsPublished is the method name under which published temperatures take part.
const AsPublished = "as-published"

// Lane is one column of temperatures: a method's component over all rows of a
// pair kind, or the published temperatures.
type Lane struct {
	Method    string
	Component string
	Variant   string       // "" for a method on its own basis
	Info      *method.Info // nil for AsPublished
	// PublishedKind is what the temperatures of AsPublished are: experiment,
	// thermometer, estimate, or "" where the source does not say.
	PublishedKind string
	Own           bool      // the lane's method reads the rows themselves, not one member of a pair
	T             []float64 // degC per row; NaN where there is no number or the estimate is set aside
}

// Through gives the lane as seen from other rows: row i takes this lane's row
// rows[i], and no number where that is -1.
func (l Lane) Through(rows []int) Lane {
	t := make([]float64, len(rows))
	for i, r := range rows {
		t[i] = math.NaN()
		if r >= 0 {
			t[i] = l.T[r]
		}
	}
	l.T, l.Own = t, false
	return l
}

// Grouping is one way to split the rows.
type Grouping struct {
	By    string   // "all", or a column: unit, locality, ...
	Group []string // per row; "" rows belong to no group
}

// Rows is one pair kind ready to compare: lanes in the order of the methods,
// AsPublished last.
type Rows struct {
	PairKind string
	Variant  string // as the table names it
	// Of is the lanes' Variant that is compared, "" for methods on their own
	// basis. A variant's lanes are compared with each other and with those of
	// methods that have no such variant.
	Of     string
	Lanes  []Lane
	Sample []string // per row
	Source []string // per row
}

// Compare gives the statistics of every two lanes in every group. Two lanes are
// left out where one method is a function of the other, where neither reads the
// rows themselves (they are compared under their own kind), and where they
// share no row.
func Compare(r *Rows, groupings []Grouping) []tables.DiscrepancyRow {
	var out []tables.DiscrepancyRow
	lanes := r.chosen()
	for _, g := range groupings {
		for _, name := range groups(g.Group) {
			rows := members(g.Group, name)
			for i := range lanes {
				for j := i + 1; j < len(lanes); j++ {
					if row, ok := r.compare(lanes[i], lanes[j], rows); ok {
						row.GroupBy, row.Group = g.By, name
						out = append(out, row)
					}
				}
			}
		}
	}
	return out
}

// chosen gives the lanes of the variant, and those of methods that lack it.
func (r *Rows) chosen() []*Lane {
	has := map[string]bool{}
	for i := range r.Lanes {
		if l := &r.Lanes[i]; l.Variant == r.Of {
			has[l.Method] = true
		}
	}
	var out []*Lane
	for i := range r.Lanes {
		if l := &r.Lanes[i]; l.Variant == r.Of || (l.Variant == "" && !has[l.Method]) {
			out = append(out, l)
		}
	}
	return out
}

func (r *Rows) compare(a, b *Lane, rows []int32) (tables.DiscrepancyRow, bool) {
	if derived(a, b) || a.Info == nil || !(a.Own || b.Own) || (r.Of != "" && a.Variant != r.Of && b.Variant != r.Of) {
		return tables.DiscrepancyRow{}, false
	}
	var d []float64
	samples, sources := map[string]bool{}, map[string]bool{}
	for _, i := range rows {
		if ta, tb := a.T[i], b.T[i]; !math.IsNaN(ta) && !math.IsNaN(tb) {
			d = append(d, ta-tb)
			samples[r.Sample[i]] = true
			sources[r.Source[i]] = true
		}
	}
	if len(d) == 0 {
		return tables.DiscrepancyRow{}, false
	}
	s := Describe(d)
	return tables.DiscrepancyRow{
		PairKind: r.PairKind, Variant: r.Variant,
		MethodA: a.Method, ComponentA: a.Component, MethodB: b.Method, ComponentB: b.Component,
		PublishedKind: b.PublishedKind, ClosesA: closes(a), ClosesB: closes(b), Shared: shared(a, b),
		N: int64(s.N), NSamples: int64(len(samples)), NSources: int64(len(sources)),
		MeanDiffC: ptr(s.Mean), MedianDiffC: ptr(s.Median), MedianAbsDiffC: ptr(s.MedianAbs),
		SDC: ptr(s.SD), MADC: ptr(s.MAD), LoALowC: ptr(s.LoALow), LoAHighC: ptr(s.LoAUp),
	}, true
}

// derived says whether one method is a function of the other, or both of a third.
func closes(l *Lane) string {
	if l.Info == nil {
		return ""
	}
	return l.Info.Closes
}

// shared says whether either method names the other as sharing data or
// constants; a method shares them with itself.
func shared(a, b *Lane) bool {
	if a.Info == nil || b.Info == nil {
		return false
	}
	return a.Method == b.Method || slices.Contains(a.Info.Shares, b.Method) || slices.Contains(b.Info.Shares, a.Method)
}

func derived(a, b *Lane) bool {
	if a.Info == nil || b.Info == nil || a.Method == b.Method {
		return false
	}
	return slices.Contains(a.Info.DerivedFrom, b.Method) || slices.Contains(b.Info.DerivedFrom, a.Method) ||
		slices.ContainsFunc(a.Info.DerivedFrom, func(id string) bool { return slices.Contains(b.Info.DerivedFrom, id) })
}

// groups lists the names that occur, sorted.
func groups(of []string) []string {
	seen := map[string]bool{}
	var out []string
	for _, g := range of {
		if g != "" && !seen[g] {
			seen[g] = true
			out = append(out, g)
		}
	}
	slices.SortFunc(out, cmp.Compare[string])
	return out
}

func members(of []string, name string) []int32 {
	var out []int32
	for i, g := range of {
		if g == name {
			out = append(out, int32(i))
		}
	}
	return out
}

func ptr(v float64) *float64 {
	if math.IsNaN(v) {
		return nil
	}
	return &v
}

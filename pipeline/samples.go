package pipeline

import (
	"cmp"
	"errors"
	"math"
	"slices"

	"tieline/pipeline/discrepancy"
	"tieline/pipeline/tables"
)

// The levels of the samples table.
const (
	levelSample = "sample"
	levelUnit   = "unit"
)

// sampleKey is what temperatures are gathered by: never across units or textures.
type sampleKey struct{ sample, unit, texture string }

// gathered is the items of a kind that share a key, in reading order.
type gathered struct {
	key      sampleKey
	locality string
	items    []int32
}

// samples writes medians per sample, unit and texture, then per unit and
// texture as medians of those, and gives the latter. Estimates that are set
// aside or out of range in composition or assemblage stay out and are counted;
// methods and components are never averaged. Rows go lane by lane: a large
// compilation has millions.
func (s *state) samples(kinds []*kind, write func([]tables.SampleRow) error) ([]tables.SampleRow, error) {
	var units []tables.SampleRow
	for _, k := range kinds {
		groups := s.gather(k)
		for l := range k.lanes {
			rows, sources := s.sampleRows(k, l, groups)
			ofUnits := unitRows(rows, sources)
			if err := errors.Join(write(rows), write(ofUnits)); err != nil {
				return nil, err
			}
			units = append(units, ofUnits...)
		}
	}
	return units, nil
}

func (s *state) gather(k *kind) []*gathered {
	at := map[sampleKey]*gathered{}
	var out []*gathered
	for i, it := range k.items {
		b, r := s.all.At(int(it.a))
		key := sampleKey{b.Text(tables.Sample, r), s.itemText(it, tables.Unit), s.itemText(it, tables.Texture)}
		g := at[key]
		if g == nil {
			g = &gathered{key: key, locality: s.itemText(it, tables.Locality)}
			at[key] = g
			out = append(out, g)
		}
		g.items = append(g.items, int32(i))
	}
	slices.SortFunc(out, func(a, b *gathered) int {
		return cmp.Or(cmp.Compare(a.key.sample, b.key.sample), cmp.Compare(a.key.unit, b.key.unit), cmp.Compare(a.key.texture, b.key.texture))
	})
	return out
}

// sampleRows gives a lane's rows per sample, unit and texture, and the sources
// of each; a group without a number that counts gives none unless estimates were
// left out of it.
func (s *state) sampleRows(k *kind, lane int, groups []*gathered) (rows []tables.SampleRow, sources [][]string) {
	l := &k.lanes[lane]
	var t []float64
	for _, g := range groups {
		t = t[:0]
		left := int64(0)
		var from []string
		for _, i := range g.items {
			switch {
			case k.outside[lane][i]:
				left++
			case !math.IsNaN(l.T[i]):
				t = append(t, l.T[i])
				if b, _ := s.all.At(int(k.items[i].a)); !slices.Contains(from, b.Source) {
					from = append(from, b.Source)
				}
			}
		}
		if len(t) == 0 && left == 0 {
			continue
		}
		row := sampleRow(k, l, t)
		row.Level, row.Sample, row.Texture, row.Unit, row.Locality = levelSample, g.key.sample, g.key.texture, g.key.unit, g.locality
		row.NSources, row.NLeftOut = int64(len(from)), left
		if len(t) > 0 {
			row.NSamples = 1
		}
		rows, sources = append(rows, row), append(sources, from)
	}
	return rows, sources
}

func sampleRow(k *kind, l *discrepancy.Lane, t []float64) tables.SampleRow {
	row := tables.SampleRow{PairKind: k.name, Variant: variantName(l.Variant), Method: l.Method, Component: l.Component, PublishedKind: l.PublishedKind, N: int64(len(t))}
	if l.Info != nil {
		row.Closes, row.Standing = l.Info.Closes, string(l.Info.Standing)
	}
	if len(t) > 0 {
		st := discrepancy.Describe(t)
		low, high := slices.Min(t), slices.Max(t)
		row.MedianC, row.MADC, row.LowestC, row.HighestC = finite(st.Median), finite(st.MAD), &low, &high
	}
	return row
}

// unitRows gathers one lane's sample rows by unit and texture: the median of
// the samples' medians, so that a sample with many pairs counts once.
func unitRows(rows []tables.SampleRow, sources [][]string) []tables.SampleRow {
	type key struct{ unit, texture string }
	at := map[key][]int{}
	var order []key
	for i := range rows {
		k := key{rows[i].Unit, rows[i].Texture}
		if rows[i].Unit == "" {
			continue
		}
		if at[k] == nil {
			order = append(order, k)
		}
		at[k] = append(at[k], i)
	}
	slices.SortFunc(order, func(a, b key) int { return cmp.Or(cmp.Compare(a.unit, b.unit), cmp.Compare(a.texture, b.texture)) })
	var out []tables.SampleRow
	for _, k := range order {
		out = append(out, unitRow(rows, sources, at[k]))
	}
	return out
}

func unitRow(rows []tables.SampleRow, sources [][]string, members []int) tables.SampleRow {
	row := rows[members[0]]
	row.Level, row.Sample, row.Locality = levelUnit, "", ""
	row.N, row.NSamples, row.NSources, row.NLeftOut = 0, 0, 0, 0
	row.MedianC, row.MADC, row.LowestC, row.HighestC = nil, nil, nil, nil
	var medians []float64
	from := map[string]bool{}
	for _, i := range members {
		for _, source := range sources[i] {
			from[source] = true
		}
		row.NLeftOut += rows[i].NLeftOut
		row.N += rows[i].N
		if rows[i].MedianC != nil {
			medians = append(medians, *rows[i].MedianC)
		}
	}
	row.NSamples, row.NSources = int64(len(medians)), int64(len(from))
	if len(medians) > 0 {
		st := discrepancy.Describe(medians)
		low, high := slices.Min(medians), slices.Max(medians)
		row.MedianC, row.MADC, row.LowestC, row.HighestC = finite(st.Median), finite(st.MAD), &low, &high
	}
	return row
}

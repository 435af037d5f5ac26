package pairing

import (
	"fmt"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"tieline/pipeline/tables"
	"tieline/thermo/chem"
)

// build makes analyses from "phase sample label" words, one batch per source.
func build(t interface{ Fatal(...any) }, sources ...[]string) *tables.Analyses {
	all := &tables.Analyses{}
	for i, rows := range sources {
		b := tables.NewBuilder(fmt.Sprintf("source%d", i), chem.OxideWt)
		for line, r := range rows {
			f := append(strings.Split(r, " "), "", "")
			a := &tables.Analysis{Line: line + 2, Phase: chem.Phase(f[0])}
			a.Text[tables.AnalysisID] = fmt.Sprintf("source%d/%d", i, line)
			a.Text[tables.Sample], a.Text[tables.PairLabel] = f[1], f[2]
			a.Composition.Kind = chem.OxideWt
			if err := b.Append(a); err != nil {
				t.Fatal(err)
			}
		}
		all.Batches = append(all.Batches, b.Finish()...)
	}
	return all
}

func TestListed(t *testing.T) {
	for _, c := range []struct {
		name    string
		sources [][]string
		pairs   string // kind:a-b
		without []int32
	}{
		{"one pair", [][]string{{"Opx s 1", "Cpx s 1"}}, "1:0-1", nil},
		{"order of rows does not matter", [][]string{{"Cpx s 1", "Opx s 1"}}, "1:1-0", nil},
		{"roles, not symbols", [][]string{{"Sa s 1", "Olg s 1", "En s 2", "Di s 2"}}, "0:0-1 1:2-3", nil},
		{"one label, two kinds", [][]string{{"Opx s 1", "Afs s 1", "Cpx s 1", "Pl s 1"}}, "0:1-3 1:0-2", nil},
		{"same label in another sample", [][]string{{"Opx s 1", "Cpx t 1"}}, "", []int32{0, 1}},
		{"same label in another source", [][]string{{"Opx s 1"}, {"Cpx s 1"}}, "", []int32{0, 1}},
		{"samples differ by case", [][]string{{"Opx L1 1", "Cpx l1 1"}}, "", []int32{0, 1}},
		{"two of a role say nothing", [][]string{{"Opx s 1", "Cpx s 1", "Cpx s 1"}}, "", []int32{0, 1, 2}},
		{"no label", [][]string{{"Opx s", "Cpx s"}}, "", nil},
		{"no partner", [][]string{{"Opx s 1"}}, "", []int32{0}},
		{"a phase of no pair", [][]string{{"Grt s 1", "Opx s 1", "Cpx s 1"}}, "1:1-2", nil},
	} {
		pairs, without := Listed(build(t, c.sources...))
		var got []string
		for _, p := range pairs {
			got = append(got, fmt.Sprintf("%d:%d-%d", p.Kind, p.A, p.B))
		}
		var left []int32
		for _, u := range without {
			left = append(left, u.Analysis)
		}
		if strings.Join(got, " ") != c.pairs || !slices.Equal(left, c.without) {
			t.Errorf("%s: pairs %q, without partner %v; want %q, %v", c.name, got, left, c.pairs, c.without)
		}
	}
}

// Every pair is one analysis of each role with one label in one sample of one
// source, and every labelled analysis of a role is in a pair or reported.
func TestListedAccountsForEveryLabel(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		row := rapid.Custom(func(t *rapid.T) string {
			return rapid.SampledFrom([]string{"Opx", "Cpx", "Afs", "Pl", "Grt"}).Draw(t, "phase") + " " +
				rapid.SampledFrom([]string{"a", "b"}).Draw(t, "sample") + " " + rapid.SampledFrom([]string{"", "1", "2"}).Draw(t, "label")
		})
		all := build(t, rapid.SliceOfN(row, 1, 12).Draw(t, "first"), rapid.SliceOfN(row, 1, 12).Draw(t, "second"))
		pairs, without := Listed(all)
		seen := map[int32]int{}
		for _, p := range pairs {
			a, ra := all.At(int(p.A))
			b, rb := all.At(int(p.B))
			if a.Source != b.Source || a.Text(tables.Sample, ra) != b.Text(tables.Sample, rb) || a.Text(tables.PairLabel, ra) != b.Text(tables.PairLabel, rb) ||
				a.Phase(ra).Role() != Kinds[p.Kind].A || b.Phase(rb).Role() != Kinds[p.Kind].B {
				t.Fatalf("pair %+v joins what does not belong together", p)
			}
			seen[p.A]++
			seen[p.B]++
		}
		for _, u := range without {
			seen[u.Analysis]++
		}
		for i := range all.Len() {
			b, r := all.At(i)
			want := 0
			if b.Text(tables.PairLabel, r) != "" && b.Phase(r).Role() != "" {
				want = 1
			}
			if seen[int32(i)] != want {
				t.Fatalf("analysis %d (%s %q) is accounted for %d times, want %d", i, b.Phase(r), b.Text(tables.PairLabel, r), seen[int32(i)], want)
			}
		}
	})
}

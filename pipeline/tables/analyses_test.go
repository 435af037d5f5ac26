package tables

import (
	"encoding/csv"
	"fmt"
	"io"
	"math"
	"runtime"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"tieline/pipeline/lineage"
	"tieline/thermo/chem"
)

// drawAnalysis makes any analysis a reader may append.
func drawAnalysis(t *rapid.T, kind chem.Kind) Analysis {
	finite := rapid.Float64Range(-1e12, 1e12)
	a := Analysis{
		Line:   rapid.IntRange(0, math.MaxInt32).Draw(t, "line"),
		Column: rapid.SampledFrom([]int{0, 0, 1, 7, math.MaxInt32}).Draw(t, "column"),
		Phase:  rapid.SampledFrom([]chem.Phase{"", chem.Afs, chem.Pl, chem.Opx}).Draw(t, "phase"),
	}
	texts := rapid.OneOf(rapid.Just(""), rapid.Just("rim"), rapid.String())
	for i := range a.Text {
		if rapid.Bool().Draw(t, "text") {
			a.Text[i] = texts.Draw(t, Text(i).String())
		}
	}
	for i := range a.Number {
		if a.Has[i] = rapid.Bool().Draw(t, "has"); a.Has[i] {
			a.Number[i] = finite.Draw(t, Number(i).String())
		}
	}
	a.Composition.Kind = kind
	for m := range chem.NumMeasurands {
		s := chem.State(rapid.SampledFrom([]int{0, 0, 0, 1, 1, 2, 3}).Draw(t, "state"))
		a.Composition.State[m] = s
		if s == chem.Measured || s == chem.BelowDetection {
			a.Composition.Value[m] = rapid.OneOf(rapid.Just(0.0), finite).Draw(t, m.String())
		}
		if s == chem.Measured && rapid.Bool().Draw(t, "with sigma") {
			a.Sigma[m] = finite.Draw(t, "sigma")
		}
	}
	if kind == chem.EndMember {
		a.EndMemberSum = finite.Draw(t, "end-member sum")
	}
	copy(a.Lineage[:], rapid.SliceOfN(rapid.Byte(), 16, 16).Draw(t, "lineage"))
	return a
}

// back reads row i of a batch into an Analysis.
func back(b *Batch, i int) Analysis {
	a := Analysis{Line: b.Line(i), Column: b.Column(i), Phase: b.Phase(i), EndMemberSum: b.EndMemberSum(i), Lineage: b.Lineage(i)}
	for t := range a.Text {
		a.Text[t] = b.Text(Text(t), i)
	}
	for n := range a.Number {
		a.Number[n], a.Has[n] = b.Number(Number(n), i)
	}
	a.Composition.Value[chem.XAn] = 1e300 // Composition must write over all of it
	b.Composition(i, &a.Composition)
	for m := range chem.NumMeasurands {
		a.Sigma[m] = b.Sigma(m, i)
	}
	return a
}

func TestBatchesGiveBackWhatWasAppended(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		kind := chem.Kind(rapid.IntRange(0, 2).Draw(t, "kind"))
		b := NewBuilder("here", kind)
		oxygens := rapid.SampledFrom([]float64{0, 6, 8}).Draw(t, "oxygens")
		var in []Analysis
		for range rapid.IntRange(0, 6).Draw(t, "rows") {
			a := drawAnalysis(t, kind)
			a.Composition.Oxygens = oxygens
			for range rapid.SampledFrom([]int{1, 1, 1, 5}).Draw(t, "times") { // repeated texts take the coded form
				in = append(in, a)
				if err := b.Append(&a); err != nil {
					t.Fatalf("append refused a good row: %v", err)
				}
			}
		}
		all := &Analyses{Batches: b.Finish()}
		if all.Len() != len(in) {
			t.Fatalf("%d rows in, %d out", len(in), all.Len())
		}
		for i, want := range in {
			batch, row := all.At(i)
			if got := back(batch, row); got != want {
				t.Fatalf("row %d changed:\n got %+v\nwant %+v", i, got, want)
			}
			if batch.Source != "here" || batch.Kind != kind {
				t.Fatalf("batch of %q, %v", batch.Source, batch.Kind)
			}
		}
	})
}

// typical is a feldspar analysis of twelve oxides and eight texts, as a
// journal's supplement has them.
func typical(i int) Analysis {
	a := Analysis{Line: i + 2, Phase: chem.Pl}
	a.Text[AnalysisID] = fmt.Sprintf("ashgrove-2026/AG%d-%d", i/40, i)
	a.Text[Label] = fmt.Sprintf("AG%d-%d", i/40, i)
	a.Text[Sample] = fmt.Sprintf("AG-%d", i/40)
	a.Text[PhaseText] = "plagioclase"
	a.Text[Texture] = "rim"
	a.Text[Grain] = fmt.Sprintf("g%d", i%7)
	a.Text[Unit] = "Ashgrove gneiss"
	a.Text[PairLabel] = fmt.Sprintf("p%d", i/2)
	for k, o := range []chem.Oxide{chem.SiO2, chem.TiO2, chem.Al2O3, chem.Cr2O3, chem.FeO, chem.MnO, chem.MgO, chem.CaO, chem.BaO, chem.Na2O, chem.K2O, chem.P2O5} {
		a.Composition.State[o] = chem.Measured
		a.Composition.Value[o] = float64(k) + float64(i%97)/100
	}
	a.Lineage = lineage.New("t").Int(int64(i)).Sum()
	return a
}

func TestTypicalAnalysisTakesUnder500Bytes(t *testing.T) {
	const n = 3 * BatchRows
	var before, after runtime.MemStats
	runtime.GC()
	runtime.ReadMemStats(&before)
	b := NewBuilder("ashgrove-2026", chem.OxideWt)
	for i := range n {
		a := typical(i)
		if err := b.Append(&a); err != nil {
			t.Fatal(err)
		}
	}
	all := &Analyses{Batches: b.Finish()}
	runtime.GC()
	runtime.ReadMemStats(&after)
	per := float64(after.HeapAlloc-before.HeapAlloc) / n
	t.Logf("%.0f B per analysis", per)
	if per > 500 {
		t.Errorf("a typical analysis takes %.0f B, over the 500 that let a million fit beside the rest", per)
	}
	if got := all.Batches[2].Text(Sample, 0); got != "AG-409" {
		t.Errorf("sample of row %d is %q", 2*BatchRows, got)
	}
}

func TestEmptyColumnsAreNotStored(t *testing.T) {
	b := NewBuilder("s", chem.OxideWt)
	a := typical(0)
	a.Composition.State[chem.TiO2] = chem.NotAnalysed
	a.Composition.Value[chem.TiO2] = 0
	if err := b.Append(&a); err != nil {
		t.Fatal(err)
	}
	var names []string
	rec := b.Finish()[0].Record()
	for _, f := range rec.Schema().Fields() {
		names = append(names, f.Name)
	}
	want := "analysis_id label sample phase_text texture grain unit pair_label phase line SiO2 TiO2 state Al2O3 Cr2O3 FeO MnO MgO CaO BaO Na2O K2O P2O5 lineage"
	if got := strings.Join(names, " "); got != want {
		t.Errorf("columns stored:\n got %s\nwant %s", got, want)
	}
}

func TestAppendRefusesWhatNoBatchCanHold(t *testing.T) {
	for want, spoil := range map[string]func(*Analysis){
		"SiO2 is NaN":                     func(a *Analysis) { a.Composition.Value[chem.SiO2] = math.NaN() },
		"CaO is 7 with sigma +Inf":        func(a *Analysis) { a.Sigma[chem.CaO] = math.Inf(1) },
		"p_kbar is NaN":                   func(a *Analysis) { a.Number[PKbar], a.Has[PKbar] = math.NaN(), true },
		"K2O is not analysed and yet has": func(a *Analysis) { a.Composition.State[chem.K2O] = chem.NotAnalysed },
		"past the 2147483647 lines":       func(a *Analysis) { a.Line = math.MaxInt32 + 1 },
		"a composition in apfu among":     func(a *Analysis) { a.Composition.Kind = chem.Apfu },
		"sum of end members is -Inf":      func(a *Analysis) { a.EndMemberSum = math.Inf(-1) },
		`bad\u{1b}name: line`:             func(a *Analysis) { a.EndMemberSum = math.NaN() },
	} {
		a := typical(0)
		spoil(&a)
		err := NewBuilder("bad\x1bname", chem.OxideWt).Append(&a)
		if err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("error is %v, want one with %q", err, want)
		}
	}
}

func TestAppendRefusesOtherOxygens(t *testing.T) {
	b, a := NewBuilder("here", chem.Apfu), Analysis{Line: 2, Phase: chem.Cpx}
	a.Composition.Kind, a.Composition.Oxygens = chem.Apfu, 6
	if err := b.Append(&a); err != nil {
		t.Fatal(err)
	}
	a.Composition.Oxygens = 8
	if err := b.Append(&a); err == nil || !strings.Contains(err.Error(), "on 8 oxygens among compositions on 6") {
		t.Errorf("apfu on 8 oxygens among apfu on 6: error is %v", err)
	}
}

func TestNegativeZeroBecomesZero(t *testing.T) {
	b := NewBuilder("s", chem.OxideWt)
	a := typical(0)
	a.Composition.Value[chem.SiO2] = math.Copysign(0, -1)
	if err := b.Append(&a); err != nil {
		t.Fatal(err)
	}
	var c chem.Composition
	b.Finish()[0].Composition(0, &c)
	if math.Signbit(c.Value[chem.SiO2]) || c.State[chem.SiO2] != chem.Measured {
		t.Errorf("-0 came back as %v, %v", c.Value[chem.SiO2], c.State[chem.SiO2])
	}
}

func TestAtFindsEveryRowAcrossBatches(t *testing.T) {
	all := &Analyses{}
	want := 0
	for _, n := range []int{3, BatchRows + 5, 1} {
		b := NewBuilder(fmt.Sprint(n), chem.OxideWt)
		for range n {
			a := typical(want)
			a.Line = want
			want++
			if err := b.Append(&a); err != nil {
				t.Fatal(err)
			}
		}
		all.Batches = append(all.Batches, b.Finish()...)
	}
	if all.Len() != want || len(all.Batches) != 4 {
		t.Fatalf("%d rows in %d batches, want %d in 4", all.Len(), len(all.Batches), want)
	}
	for i := range want {
		if b, row := all.At(i); b.Line(row) != i {
			t.Fatalf("analysis %d is said to be the one of line %d", i, b.Line(row))
		}
	}
	if (&Analyses{}).Len() != 0 {
		t.Error("no batches, yet some analyses")
	}
}

func TestLongCellsCloseABatchEarly(t *testing.T) {
	b := NewBuilder("s", chem.OxideWt)
	long := strings.Repeat("x", maxText/2)
	for range 5 {
		a := typical(0)
		a.Text[Locality] = long
		if err := b.Append(&a); err != nil {
			t.Fatal(err)
		}
	}
	if got := len(b.Finish()); got != 3 {
		t.Errorf("five cells of %d bytes make %d batches, want 3", len(long), got)
	}
}

func BenchmarkAppendAnalyses(b *testing.B) {
	rows := make([]Analysis, 4096)
	for i := range rows {
		rows[i] = typical(i)
	}
	b.Run("builder", func(b *testing.B) {
		out := NewBuilder("s", chem.OxideWt)
		for i := 0; b.Loop(); i++ {
			if err := out.Append(&rows[i%len(rows)]); err != nil {
				b.Fatal(err)
			}
			if i%(20*BatchRows) == 0 {
				out.Finish()
				out = NewBuilder("s", chem.OxideWt)
			}
		}
	})
	b.Run("baseline csv", func(b *testing.B) {
		w := csv.NewWriter(io.Discard)
		cells := make([]string, 0, 30)
		for i := 0; b.Loop(); i++ {
			a := &rows[i%len(rows)]
			cells = append(cells[:0], a.Text[:]...)
			for o := range chem.NumOxides {
				cells = append(cells, fmt.Sprint(a.Composition.Value[o]))
			}
			w.Write(cells)
		}
	})
}

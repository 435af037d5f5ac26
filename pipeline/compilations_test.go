package pipeline

import (
	"bytes"
	"fmt"
	"maps"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"tieline/pipeline/tables"
)

// shipped are the compilations that ship, by the folder below manifests.
var shipped = []string{"demo", "elkins-grove-1990", "cms-brackets"}

func manifestOf(name string) string { return filepath.Join("..", "manifests", name) }

// runTo works a compilation out into a fresh folder and gives that folder.
func runTo(t *testing.T, path string, opt Options) (string, *Result) {
	t.Helper()
	opt.Out = filepath.Join(t.TempDir(), "result")
	r, err := Run(path, opt)
	if err != nil {
		t.Fatalf("run %s: %v", path, err)
	}
	return opt.Out, r
}

func readTable[T any](t *testing.T, dir, table string) []T {
	t.Helper()
	rows, err := tables.Read[T](filepath.Join(dir, "tables", table+".parquet"))
	if err != nil {
		t.Fatal(err)
	}
	return rows
}

// against finds the statistics of a method's component minus as-published over all rows.
func against(t *testing.T, rows []tables.DiscrepancyRow, kind, method, component string) tables.DiscrepancyRow {
	t.Helper()
	for _, r := range rows {
		if r.GroupBy == "all" && r.PairKind == kind && r.MethodA == method && r.ComponentA == component && r.MethodB == "as-published" {
			return r
		}
	}
	t.Fatalf("no row of %s %s minus as-published", method, component)
	return tables.DiscrepancyRow{}
}

// Elkins LT, Grove TL (1990) Am Mineral 75:544-559, Table 5: T of 20 runs. The
// statistics are what an independent implementation of both models gave on the
// same table; EG90 was fitted to these runs, FL88 was not.
func TestElkinsGroveExperiments(t *testing.T) {
	dir, _ := runTo(t, manifestOf("elkins-grove-1990"), Options{})
	rows := readTable[tables.DiscrepancyRow](t, dir, "discrepancies")
	for _, c := range []struct {
		method, component string
		n                 int64
		median, medianAbs float64
	}{
		{"two-feldspar/elkins-grove-1990", "Ab", 20, -5.05, 20.78},
		{"two-feldspar/elkins-grove-1990", "Or", 20, -4.92, 8.82},
		{"two-feldspar/elkins-grove-1990", "An", 20, 0.65, 16.87},
		{"two-feldspar/fuhrman-lindsley-1988", "Ab", 17, 4.36, 21.57},
		{"two-feldspar/fuhrman-lindsley-1988", "Or", 20, -26.52, 33.93},
		{"two-feldspar/fuhrman-lindsley-1988", "An", 20, 2.84, 27.91},
	} {
		r := against(t, rows, "two-feldspar", c.method, c.component)
		t.Logf("%s %s: n %d, median %+.2f, median absolute %.2f degC", c.method, c.component, r.N, *r.MedianDiffC, *r.MedianAbsDiffC)
		if r.N != c.n || math.Abs(*r.MedianDiffC-c.median) > 0.1 || math.Abs(*r.MedianAbsDiffC-c.medianAbs) > 0.1 {
			t.Errorf("%s T_%s minus run T: n %d, median %+.2f, median absolute %.2f; expected %d, %+.2f, %.2f within 0.1 degC",
				c.method, c.component, r.N, *r.MedianDiffC, *r.MedianAbsDiffC, c.n, c.median, c.medianAbs)
		}
	}
	undefined := 0
	for _, e := range readTable[tables.EstimateRow](t, dir, "estimates") {
		if e.TC == nil {
			undefined++
			if e.Status != statusNoNumber || !strings.Contains(e.Reason, "5 J/mol/K") || e.Component != "Ab" {
				t.Errorf("%s has no number, status %q, reason %q; expected one about |D| < 5 J/mol/K", e.EstimateID, e.Status, e.Reason)
			}
		}
	}
	if undefined != 3 {
		t.Errorf("%d estimates without a number; the three runs L3, O1, P2 have |D| < 5 J/mol/K with FL88", undefined)
	}
}

// Carlson WD, Lindsley DH (1988) Am Mineral 73:242-252: 40 reversed brackets on
// the join Mg2Si2O6-CaMgSi2O6; midpoints are ours. The mean and SD are what an
// independent implementation of Brey & Koehler (1990) gave on them.
func TestCMSBrackets(t *testing.T) {
	dir, _ := runTo(t, manifestOf("cms-brackets"), Options{})
	r := against(t, readTable[tables.DiscrepancyRow](t, dir, "discrepancies"), "two-pyroxene", "two-pyroxene/brey-koehler-1990", "")
	t.Logf("BKN minus run T: n %d, mean %+.2f, SD %.2f degC", r.N, *r.MeanDiffC, *r.SDC)
	if r.N != 40 || math.Abs(*r.MeanDiffC-8.4) > 0.3 || math.Abs(*r.SDC-30.7) > 0.3 {
		t.Errorf("BKN minus run T: n %d, mean %+.2f, SD %.2f; expected 40, +8.4, 30.7 within 0.3", r.N, *r.MeanDiffC, *r.SDC)
	}
}

// In = kept + flagged + set aside, in the record and in the tables.
func TestCountsAddUp(t *testing.T) {
	for _, name := range shipped {
		dir, r := runTo(t, manifestOf(name), Options{})
		rows := 0
		for _, s := range r.Record.Sources {
			rows += s.Rows
		}
		got := map[string]map[string]int64{"analyses": {}, "pairs": {}, "estimates": {}}
		for _, a := range readTable[tables.AnalysisRow](t, dir, "analyses") {
			got["analyses"][a.Verdict]++
			if strings.HasPrefix(a.AnalysisID, a.Source+"/"+a.Grain+":re-integrated") {
				rows++ // beside those read
			}
		}
		for _, p := range readTable[tables.PairRow](t, dir, "pairs") {
			got["pairs"][p.Verdict]++
		}
		for _, e := range readTable[tables.EstimateRow](t, dir, "estimates") {
			got["estimates"][e.Verdict]++
		}
		for _, c := range r.Record.Counts {
			g := got[c.Rows]
			if c.In != c.Kept+c.Flagged+c.SetAside || g["kept"] != c.Kept || g["flagged"] != c.Flagged || g["set aside"] != c.SetAside || len(g) > 3 {
				t.Errorf("%s, %s: record says %+v, the table holds %v", name, c.Rows, c, g)
			}
			if c.Rows == "analyses" && c.In != int64(rows) {
				t.Errorf("%s: %d rows read, %d analyses", name, rows, c.In)
			}
		}
	}
}

// The number of workers and a second run change no byte but run.log's.
func TestSameBytes(t *testing.T) {
	for _, name := range shipped {
		first, _ := runTo(t, manifestOf(name), Options{Workers: 1})
		again, _ := runTo(t, manifestOf(name), Options{Workers: 7})
		for _, file := range []string{"record.json", "tables/analyses.parquet", "tables/pairs.parquet", "tables/estimates.parquet", "tables/discrepancies.parquet", "tables/qc.parquet"} {
			a, err1 := os.ReadFile(filepath.Join(first, file))
			b, err2 := os.ReadFile(filepath.Join(again, file))
			if err1 != nil || err2 != nil || !bytes.Equal(a, b) {
				t.Errorf("%s: %s differs between 1 worker and 7 (%v, %v)", name, file, err1, err2)
			}
		}
	}
}

// lineages gives every row's lineage by its id, and which analyses a row rests on.
func lineages(t *testing.T, dir string) (of map[string]string, rests map[string][]string) {
	of, rests = map[string]string{}, map[string][]string{}
	for _, a := range readTable[tables.AnalysisRow](t, dir, "analyses") {
		of[a.AnalysisID], rests[a.AnalysisID] = a.Lineage, []string{a.AnalysisID}
	}
	for _, p := range readTable[tables.PairRow](t, dir, "pairs") {
		of[p.PairID], rests[p.PairID] = p.Lineage, []string{p.AAnalysisID, p.BAnalysisID}
	}
	for _, e := range readTable[tables.EstimateRow](t, dir, "estimates") {
		of[e.EstimateID], rests[e.EstimateID] = e.Lineage, rests[e.PairID]
		if e.PairID == "" {
			rests[e.EstimateID] = []string{e.AnalysisID}
		}
	}
	return of, rests
}

// Changing one digit of one cell changes the lineage of exactly the rows that
// depend on it; so does every mapped cell of a row, one after the other.
func TestOneDigitChangesExactlyItsRows(t *testing.T) {
	dir := t.TempDir()
	if err := os.CopyFS(dir, os.DirFS(manifestOf("elkins-grove-1990"))); err != nil {
		t.Fatal(err)
	}
	before, _ := runTo(t, dir, Options{})
	was, rests := lineages(t, before)
	file, text := dataFile(t, dir)
	lines := strings.Split(text, "\n")
	const target = 8 // the ninth line of the file, an analysis
	changed := analysisOnLine(t, before, target+1)
	for i, digit := range lines[target] {
		if digit < '0' || digit > '9' || (i > 0 && lines[target][i-1] >= 'A') {
			continue // digits of the run's name make it another sample
		}
		mutant := slices.Clone(lines)
		mutant[target] = lines[target][:i] + string('0'+(digit-'0'+1)%10) + lines[target][i+1:]
		if err := os.WriteFile(file, []byte(strings.Join(mutant, "\n")), 0o666); err != nil {
			t.Fatal(err)
		}
		now := tryLineages(t, dir)
		if now == nil {
			continue // the changed digit broke a pair label: another table altogether
		}
		for id := range was {
			moved, should := was[id] != now[id], slices.Contains(rests[id], changed)
			if moved != should {
				t.Fatalf("line %d %q -> %q: lineage of %s moved: %v; it rests on %v, so expected %v",
					target+1, lines[target], mutant[target], id, moved, rests[id], should)
			}
		}
	}
}

func dataFile(t *testing.T, dir string) (file, text string) {
	t.Helper()
	files, err := filepath.Glob(filepath.Join(dir, "*.csv"))
	if err != nil || len(files) != 1 {
		t.Fatalf("data files %v, %v; expected one", files, err)
	}
	b, err := os.ReadFile(files[0])
	if err != nil {
		t.Fatal(err)
	}
	return files[0], string(b)
}

func analysisOnLine(t *testing.T, dir string, line int) string {
	for _, a := range readTable[tables.AnalysisRow](t, dir, "analyses") {
		if a.SourceLine == int64(line) {
			return a.AnalysisID
		}
	}
	t.Fatalf("no analysis on line %d", line)
	return ""
}

// tryLineages gives the lineages of a changed compilation, nil where its rows
// have other ids.
func tryLineages(t *testing.T, dir string) map[string]string {
	out, _ := runTo(t, dir, Options{})
	now, _ := lineages(t, out)
	return now
}

// Every number of the estimates table can be traced to the same bits.
func TestTraceGivesTheTablesNumbers(t *testing.T) {
	for _, name := range shipped {
		dir, _ := runTo(t, manifestOf(name), Options{})
		rows := readTable[tables.EstimateRow](t, dir, "estimates")
		for i := 0; i < len(rows); i += max(1, len(rows)/25) {
			trace, err := TraceEstimate(manifestOf(name), rows[i].EstimateID, dir)
			if err != nil {
				t.Fatalf("%s: trace %s: %v", name, rows[i].EstimateID, err)
			}
			if !trace.SameAsRun {
				t.Errorf("%s: trace of %s gives T %v, lineage %s; the table has %v, %s",
					name, rows[i].EstimateID, show(trace.TC), trace.Lineage, show(rows[i].TC), rows[i].Lineage)
			}
			for _, a := range trace.Analyses {
				if a.Line < 2 || len(a.Cells) == 0 {
					t.Errorf("%s: trace of %s names no cells of %s", name, rows[i].EstimateID, a.ID)
				}
			}
		}
	}
}

func show(v *float64) string {
	if v == nil {
		return "none"
	}
	return fmt.Sprint(*v)
}

func TestEstimateIDsAreUnique(t *testing.T) {
	for _, name := range shipped {
		dir, _ := runTo(t, manifestOf(name), Options{})
		seen := map[string]int{}
		for _, e := range readTable[tables.EstimateRow](t, dir, "estimates") {
			seen[e.EstimateID]++
		}
		for _, id := range slices.Sorted(maps.Keys(seen)) {
			if seen[id] > 1 {
				t.Errorf("%s: %d estimates are called %s", name, seen[id], id)
			}
		}
	}
}

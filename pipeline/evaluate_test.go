package pipeline

import (
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"tieline/pipeline/discrepancy"
	"tieline/pipeline/tables"
)

// compile writes a compilation of one source and works it out.
func compile(t *testing.T, settings, csv string) string {
	t.Helper()
	dir := t.TempDir()
	manifest := "[compilation]\nid = \"t\"\ntitle = \"t\"\n[[source]]\nid = \"s\"\nfile = \"s.csv\"\n" + settings
	for name, text := range map[string]string{"compilation.toml": manifest, "s.csv": csv} {
		if err := os.WriteFile(filepath.Join(dir, name), []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	out, _ := runTo(t, dir, Options{})
	return out
}

// estimateOf finds the one row of a method and component whose item holds a sample.
func estimateOf(t *testing.T, dir, sample, method, component string) tables.EstimateRow {
	t.Helper()
	for _, e := range readTable[tables.EstimateRow](t, dir, "estimates") {
		if e.Sample == sample && e.Method == method && e.Component == component && e.Variant == variant {
			return e
		}
	}
	t.Fatalf("no estimate of %s %s for sample %s", method, component, sample)
	return tables.EstimateRow{}
}

// pyroxenes are the regression pairs K, E, G of pyroxene.md section 5, invented-
// typical compositions: their numbers lock the chain from oxides on.
const pyroxenes = `sample,phase,pair,SiO2,TiO2,Al2O3,Cr2O3,FeO,MnO,MgO,CaO,Na2O,P (kbar)
K,cpx,1,52.30,0.40,2.30,0.30,7.80,0.20,18.00,18.40,0.24,5
K,opx,1,54.70,0.20,1.40,0.20,12.30,0.25,28.40,2.20,0.03,
E,cpx,1,52.60,0.45,5.30,0.85,2.55,0.08,15.40,20.80,1.50,
E,opx,1,55.50,0.10,3.60,0.32,6.35,0.15,33.00,0.62,0.08,13
G,cpx,1,54.90,0.12,2.60,1.60,2.15,0.07,16.60,19.80,2.00,38
G,opx,1,57.80,0.04,0.75,0.25,4.70,0.11,35.80,0.36,0.10,38
`

func TestPyroxenePairsThroughThePipeline(t *testing.T) {
	dir := compile(t, "", pyroxenes)
	for sample, want := range map[string][4]float64{ // KD, BKN, Ca-in-opx, NG10
		"K": {1.0005, 1116.3, 1246.2, 1246.2},
		"E": {0.8605, 935.9, 932.2, 906.4},
		"G": {0.9865, 1039.1, 930.9, 904.7},
	} {
		for _, p := range readTable[tables.PairRow](t, dir, "pairs") {
			if p.Sample == sample && math.Abs(*p.KdFeMg-want[0]) > 0.0002 {
				t.Errorf("%s: (Fe/Mg)cpx / (Fe/Mg)opx %.4f, expected %.4f", sample, *p.KdFeMg, want[0])
			}
		}
		for i, m := range []string{"two-pyroxene/brey-koehler-1990", "orthopyroxene/brey-koehler-1990-ca", "orthopyroxene/nimis-gruetter-2010"} {
			// The pressure stands on one row of the pair only; both methods use it.
			if e := estimateOf(t, dir, sample, m, ""); e.TC == nil || math.Abs(*e.TC-want[i+1]) > 0.1 {
				t.Errorf("%s: %s gives %v, expected %.1f degC", sample, m, show(e.TC), want[i+1])
			}
		}
	}
}

// feldspar.md section 5: median dT/dP over the 20 runs, degC/kbar.
func TestPressureDependence(t *testing.T) {
	dir, _ := runTo(t, manifestOf("elkins-grove-1990"), Options{})
	got := map[string][]float64{}
	for _, e := range readTable[tables.EstimateRow](t, dir, "estimates") {
		if e.DTDP != nil {
			got[e.Method+" "+e.Component] = append(got[e.Method+" "+e.Component], *e.DTDP)
		}
	}
	for lane, want := range map[string]float64{
		"two-feldspar/elkins-grove-1990 Ab": 14.3, "two-feldspar/elkins-grove-1990 Or": 0.6, "two-feldspar/elkins-grove-1990 An": -13.9,
		"two-feldspar/fuhrman-lindsley-1988 Ab": 14.7, "two-feldspar/fuhrman-lindsley-1988 Or": 1.7, "two-feldspar/fuhrman-lindsley-1988 An": -11.7,
	} {
		if m := discrepancy.Median(got[lane]); math.Abs(m-want) > 0.1 {
			t.Errorf("%s: median dT/dP %.2f of %d, expected %.1f degC/kbar", lane, m, len(got[lane]), want)
		}
	}
}

// EG90 was calibrated at 650-900 degC, 1-3 kbar, An .005-.045 in alkali feldspar
// and .05-.86 in plagioclase: the span of its 20 runs.
func TestOutOfRangeNamesTheVariables(t *testing.T) {
	dir, _ := runTo(t, manifestOf("elkins-grove-1990"), Options{})
	outside := 0
	for _, e := range readTable[tables.EstimateRow](t, dir, "estimates") {
		if e.Method != "two-feldspar/elkins-grove-1990" || e.TC == nil {
			continue
		}
		var want []string
		if *e.TC < 650 || *e.TC > 900 {
			want = append(want, "T")
			outside++
		}
		if got := strings.Join(want, ", "); e.OutOfRange != got || *e.InRange != (got == "") {
			t.Errorf("%s: T %.1f degC, in_range %v, out_of_range %q; expected %q", e.EstimateID, *e.TC, *e.InRange, e.OutOfRange, got)
		}
	}
	if outside == 0 {
		t.Error("no estimate is out of range; the test shows nothing")
	}
	far := compile(t, "composition = \"end-member fraction\"\n", "sample,phase,pair,Ab,Or,An,P (kbar)\n"+
		"a,Afs,1,.3,.697,.003,0.9\na,Pl,1,.1,.03,.87,0.9\nb,Afs,1,.3,.65,.05,3.1\nb,Pl,1,.9,.06,.04,3.1\n")
	for _, sample := range []string{"a", "b"} {
		e := estimateOf(t, far, sample, "two-feldspar/elkins-grove-1990", "Or")
		for _, v := range []string{"P", "An in Afs", "An in Pl"} {
			if !slices.Contains(strings.Split(e.OutOfRange, ", "), v) {
				t.Errorf("%s: out_of_range %q lacks %q", e.EstimateID, e.OutOfRange, v)
			}
		}
	}
}

const feldspars = `sample,phase,pair,Ab,Or,An
a,Afs,1,.276,.715,.009
a,Pl,1,.732,.053,.215
`

func TestPressure(t *testing.T) {
	const fractions = "composition = \"end-member fraction\"\n"
	eg := "two-feldspar/elkins-grove-1990"
	// None: T_Ab moves 14 degC/kbar and needs one, T_Or hardly moves and has a number.
	// (run K1 of Elkins & Grove 1990)
	none := compile(t, fractions, "sample,phase,pair,Ab,Or,An\na,Afs,1,.282,.7,.018\na,Pl,1,.635,.095,.27\n")
	ab, or := estimateOf(t, none, "a", eg, "Ab"), estimateOf(t, none, "a", eg, "Or")
	if ab.Status != statusNoNumber || !strings.Contains(ab.Reason, "needs pressure") || ab.PKbar != nil || ab.PSource != pFromNowhere {
		t.Errorf("T_Ab without a pressure: status %q, reason %q, P %v from %q; expected no number, needs pressure", ab.Status, ab.Reason, show(ab.PKbar), ab.PSource)
	}
	if or.TC == nil || or.PKbar != nil {
		t.Errorf("T_Or without a pressure: %v at P %v; expected a number at no stated P", show(or.TC), show(or.PKbar))
	}
	// The manifest's default is used and flagged.
	assumed := estimateOf(t, compile(t, fractions+"[pressure]\ndefault_kbar = 2\n", feldspars), "a", eg, "Ab")
	if assumed.TC == nil || math.Abs(*assumed.TC-677.9) > 0.1 || assumed.PSource != pFromManifest || assumed.Verdict != "flagged" || !strings.Contains(assumed.Reason, "assumed pressure") {
		t.Errorf("at the default 2 kbar: T %v, source %q, %s: %q; expected 677.9 (run G2), manifest default, flagged as assumed", show(assumed.TC), assumed.PSource, assumed.Verdict, assumed.Reason)
	}
	// A line P(T) meets the method: the same T as at that pressure given outright.
	onLine := estimateOf(t, compile(t, fractions+"[pressure]\nline_kbar_at_0c = -4\nline_kbar_per_c = 0.01\n", feldspars), "a", eg, "Ab")
	if onLine.TC == nil || math.Abs(*onLine.PKbar-(-4+0.01**onLine.TC)) > 1e-6 {
		t.Fatalf("on the line: T %v at P %v; expected P = -4 + 0.01 T", show(onLine.TC), show(onLine.PKbar))
	}
	stated := strings.NewReplacer(",An\n", ",An,P (kbar)\n", ".009\n", fmt.Sprintf(".009,%v\n", *onLine.PKbar), ".215\n", ".215,\n").Replace(feldspars)
	same := estimateOf(t, compile(t, fractions, stated), "a", eg, "Ab")
	if math.Abs(*same.TC-*onLine.TC) > 1e-6 {
		t.Errorf("on the line %v degC at %v kbar; with that pressure stated %v", *onLine.TC, *onLine.PKbar, *same.TC)
	}
}

// A pressure that is no round number of bars stays what the source printed, and
// a method's temperature does not hang on which others are worked out.
func TestPressureKeepsItsBits(t *testing.T) {
	const kbar = 0.0012345678901234567
	csv := strings.NewReplacer(",An\n", ",An,P (kbar)\n", ".009\n", ".009,0.0012345678901234567\n", ".215\n", ".215,\n").Replace(feldspars)
	all := compile(t, "composition = \"end-member fraction\"\n", csv)
	one := compile(t, "composition = \"end-member fraction\"\n[methods]\nuse = [\"two-feldspar/putirka-2008-27b\"]\n", csv)
	a, b := estimateOf(t, all, "a", "two-feldspar/putirka-2008-27b", ""), estimateOf(t, one, "a", "two-feldspar/putirka-2008-27b", "")
	if *a.PKbar != kbar || *b.PKbar != kbar {
		t.Errorf("p_kbar %v and %v; the source printed %v", *a.PKbar, *b.PKbar, kbar)
	}
	if *a.TC != *b.TC || *a.DTDP != *b.DTDP || a.Lineage != b.Lineage {
		t.Errorf("27b among all methods gives %v, dT/dP %v, %s; alone %v, %v, %s", *a.TC, *a.DTDP, a.Lineage, *b.TC, *b.DTDP, b.Lineage)
	}
}

// What is below detection where a logarithm is taken gives a bound: the
// temperature at the limit, never at half of it.
func TestBelowDetectionGivesABound(t *testing.T) {
	with := func(ca string) tables.EstimateRow {
		csv := "sample,phase,pair,SiO2,TiO2,Al2O3,Cr2O3,FeO,MnO,MgO,CaO,Na2O,P (kbar)\n" +
			"E,cpx,1,52.60,0.45,5.30,0.85,2.55,0.08,15.40,20.80,1.50,13\nE,opx,1,55.50,0.10,3.60,0.32,6.35,0.15,33.00," + ca + ",0.08,13\n"
		return estimateOf(t, compile(t, "", csv), "E", "orthopyroxene/brey-koehler-1990-ca", "")
	}
	bound, at, unlimited := with("<0.05"), with("0.05"), with("b.d.l.")
	if bound.Status != statusAtMost || bound.TC != nil || bound.BoundC == nil || math.Abs(*bound.BoundC-*at.TC) > 1e-9 || bound.Verdict != "set aside" {
		t.Errorf("CaO <0.05: status %q, T %v, bound %v, %s; expected at most %v, set aside", bound.Status, show(bound.TC), show(bound.BoundC), bound.Verdict, show(at.TC))
	}
	if unlimited.Status != statusNoNumber || unlimited.BoundC != nil {
		t.Errorf("CaO below a limit nobody states: status %q, bound %v; expected no number", unlimited.Status, show(unlimited.BoundC))
	}
}

// defaults.md: T_An is withheld where the source gives a sigma with sigma/An > .3.
func TestUncertainAnGivesNoTAn(t *testing.T) {
	for sigma, want := range map[string]string{".002": statusNumber, ".003": statusNoNumber} {
		csv := "sample,phase,pair,Ab,Or,An,sAn,P (kbar)\na,Afs,1,.276,.715,.009," + sigma + ",2\na,Pl,1,.732,.053,.215,,2\n"
		dir := compile(t, "composition = \"end-member fraction\"\ncolumns = { sAn = \"An sigma\" }\n", csv)
		if e := estimateOf(t, dir, "a", "two-feldspar/elkins-grove-1990", "An"); e.Status != want {
			t.Errorf("An .009 +- %s: T_An is %q (%s); expected %q", sigma, e.Status, e.Reason, want)
		}
		if e := estimateOf(t, dir, "a", "two-feldspar/elkins-grove-1990", "Or"); e.Status != statusNumber {
			t.Errorf("An .009 +- %s: T_Or is %q; expected a number", sigma, e.Status)
		}
	}
}

func TestCelsianIsFlaggedThroughThePipeline(t *testing.T) {
	dir := compile(t, "", "sample,phase,SiO2,Al2O3,CaO,BaO,Na2O,K2O\na,Afs,63.4,19.6,0.2,1.5,3.0,12.0\n")
	for _, a := range readTable[tables.AnalysisRow](t, dir, "analyses") {
		if a.Cn == nil || math.Abs(*a.Cn-0.027) > 0.002 || a.Verdict != "flagged" || !strings.Contains(a.Reasons, "celsian") {
			t.Errorf("1.5 wt%% BaO: celsian %v, %s: %q; expected about .027, flagged as celsian", show(a.Cn), a.Verdict, a.Reasons)
		}
	}
}

// A not-measured component gives no number; the pair's other methods keep theirs.
func TestNotMeasuredIsNotZero(t *testing.T) {
	dir := compile(t, "", strings.ReplaceAll(pyroxenes, ",1.50,\n", ",n.a.,\n"))
	bkn, ca := estimateOf(t, dir, "E", "two-pyroxene/brey-koehler-1990", ""), estimateOf(t, dir, "E", "orthopyroxene/brey-koehler-1990-ca", "")
	if bkn.Status != statusNoNumber || !strings.Contains(bkn.Reason, "not measured") {
		t.Errorf("cpx Na2O n.a.: BKN is %q (%s); expected no number, not measured", bkn.Status, bkn.Reason)
	}
	if ca.Status != statusNumber {
		t.Errorf("cpx Na2O n.a.: Ca-in-opx is %q (%s); expected a number", ca.Status, ca.Reason)
	}
}

// The samples table: medians per sample and texture, then per unit of those;
// what is set aside or out of range in composition is left out and counted.
func TestSamples(t *testing.T) {
	row := func(sample, pair, texture string, ca float64) string {
		return fmt.Sprintf("%s,opx,%s,%s,55.50,0.10,3.60,0.32,6.35,0.15,33.00,%.2f,0.08,13,U,Opx Cpx\n", sample, pair, texture, ca)
	}
	csv := "sample,phase,label,texture,SiO2,TiO2,Al2O3,Cr2O3,FeO,MnO,MgO,CaO,Na2O,P (kbar),unit,assemblage\n" +
		row("a", "1", "core", .5) + row("a", "2", "core", .6) + row("a", "3", "core", .8) + row("a", "4", "rim", .3) + row("b", "5", "core", .7) +
		row("b", "6", "core", 9) + // no orthopyroxene
		strings.Replace(strings.Replace(row("b", "7", "core", .9), "Opx Cpx", "Opx", 1), ",U,", ",V,", 1) // a minimum, and another unit's sample "b"
	dir := compile(t, "", csv)
	at := func(ca float64) float64 {
		for _, e := range readTable[tables.EstimateRow](t, dir, "estimates") {
			if e.Method == "orthopyroxene/brey-koehler-1990-ca" && strings.HasPrefix(e.AnalysisID, "s/"+map[float64]string{.6: "2", .3: "4", .7: "5"}[ca]) {
				return *e.TC
			}
		}
		return math.NaN()
	}
	want := map[string][4]float64{ // n, n_samples, left out, median
		"sample a core": {3, 1, 0, at(.6)}, "sample a rim": {1, 1, 0, at(.3)}, "sample b core": {1, 1, 1, at(.7)},
		"unit V core": {0, 0, 1, math.NaN()},
		"unit U core": {4, 2, 1, (at(.6) + at(.7)) / 2}, "unit U rim": {1, 1, 0, at(.3)},
	}
	seen := 0
	for _, r := range readTable[tables.SampleRow](t, dir, "samples") {
		if r.Method != "orthopyroxene/brey-koehler-1990-ca" {
			continue
		}
		key := r.Level + " " + r.Sample + " " + r.Texture
		if r.Unit == "V" && r.Level == levelSample {
			continue // its unit row says the same
		}
		if r.Level == levelUnit {
			key = r.Level + " " + r.Unit + " " + r.Texture
		}
		seen++
		w, ok := want[key]
		if ok && r.MedianC == nil && math.IsNaN(w[3]) && r.N == 0 && float64(r.NLeftOut) == w[2] && r.NSources == 0 {
			continue
		}
		if !ok || r.MedianC == nil || r.NSources != 1 || float64(r.N) != w[0] || float64(r.NSamples) != w[1] || float64(r.NLeftOut) != w[2] || math.Abs(*r.MedianC-w[3]) > 1e-9 {
			t.Errorf("%s: n %d, samples %d, left out %d, median %v; expected %v", key, r.N, r.NSamples, r.NLeftOut, show(r.MedianC), w)
		}
	}
	if seen != len(want) {
		t.Errorf("%d rows of Ca-in-opx, expected %d", seen, len(want))
	}
}

// Without a pressure a bound of a method that needs one would be a bound on
// nothing.
func TestNoBoundWithoutPressure(t *testing.T) {
	dir := compile(t, "", "sample,phase,SiO2,TiO2,Al2O3,Cr2O3,FeO,MnO,MgO,CaO,Na2O\nE,opx,55.50,0.10,3.60,0.32,6.35,0.15,33.00,<0.05,0.08\n")
	if e := estimateOf(t, dir, "E", "orthopyroxene/brey-koehler-1990-ca", ""); e.Status != statusNoNumber || e.BoundC != nil {
		t.Errorf("CaO <0.05 and no pressure: %q, bound %v; expected no number", e.Status, show(e.BoundC))
	}
}

// Trap 2 for methods with ferric iron from charge balance: a major cation that
// was not measured leaves no cation sum to take it from.
func TestChargeBalanceNeedsEveryMajor(t *testing.T) {
	dir := compile(t, "", strings.ReplaceAll(pyroxenes, ",1.50,\n", ",n.a.,\n"))
	for _, m := range []string{"clinopyroxene/kretz-1982-ca", "two-pyroxene/wells-1977"} {
		if e := estimateOf(t, dir, "E", m, ""); e.Status != statusNoNumber || !strings.Contains(e.Reason, "not measured") {
			t.Errorf("cpx Na2O n.a.: %s is %q (%s); expected no number, not measured", m, e.Status, e.Reason)
		}
	}
}

// A pair whose Fe-Mg exchange went on after Ca had stopped is flagged on both.
func TestResettingIsFlagged(t *testing.T) {
	use := "[methods]\nuse = [\"two-pyroxene/wells-1977\", \"two-pyroxene/kretz-1982-fe-mg\"]\n"
	flagged := func(csv string) (n int) {
		for _, f := range readTable[tables.FindingRow](t, compile(t, use, csv), "qc") {
			if f.Rule == "possible resetting" {
				n++
			}
		}
		return n
	}
	// Pair A of pyroxene.md section 4: Wells 872, Kretz Fe-Mg 737, within 2 x 70.
	header := "sample,phase,pair,SiO2,TiO2,Al2O3,Cr2O3,FeO,MnO,MgO,CaO,Na2O,P (kbar)\n"
	a := "A,cpx,1,51.9,0.2,1.95,0.05,9.2,0.25,13.3,21.8,0.45,7\nA,opx,1,51.6,0.08,1.1,0.03,25.3,0.6,20.6,0.55,0.02,7\n"
	if n := flagged(header + a); n != 0 {
		t.Errorf("pair A, Wells 872 and Fe-Mg 737: %d findings; expected none within 140 degC", n)
	}
	// Pair D: Wells 819, Kretz Fe-Mg 539, beyond it; on both iron bases or one.
	d := "D,cpx,1,54.6,0.08,1.7,0.75,1.75,0.06,16.7,22.2,1.3,25\nD,opx,1,57.7,0.03,0.6,0.12,5.6,0.12,35.4,0.2,0.02,25\n"
	if n := flagged(header + d); n < 2 {
		t.Errorf("pair D, Wells 819 and Fe-Mg 539: %d findings; expected one on each", n)
	}
}

// Two pairs whose parts would join to one name keep ids of their own.
func TestPairIDsDoNotCollide(t *testing.T) {
	dir := compile(t, "composition = \"end-member fraction\"\n", "sample,pair,phase,Ab,Or,An\n"+
		"S1,a/1,Afs,.3,.68,.02\nS1,a/1,Pl,.7,.06,.24\nS1/a,1,Afs,.3,.68,.02\nS1/a,1,Pl,.7,.06,.24\n")
	ids := map[string]bool{}
	for _, p := range readTable[tables.PairRow](t, dir, "pairs") {
		ids[p.PairID] = true
	}
	if len(ids) != 2 {
		t.Errorf("pair ids %v; expected two", ids)
	}
}

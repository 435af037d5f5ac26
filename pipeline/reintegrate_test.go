package pipeline

import (
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"tieline/pipeline/tables"
)

// perthites is a compilation of exsolved feldspars: grain M beside a plagioclase
// of the same label, grain N whose K lamellae have a total no rule lets pass.
func perthites(t *testing.T) string {
	t.Helper()
	dir := t.TempDir()
	for name, text := range map[string]string{
		"compilation.toml": "[compilation]\nid = \"perthites\"\ntitle = \"Perthites\"\n[pressure]\ndefault_kbar = 5\n" +
			"[[source]]\nid = \"one\"\nfile = \"one.csv\"\ncomposition = \"end-member fraction\"\n" +
			"[[source]]\nid = \"two\"\nfile = \"two.csv\"\n",
		"one.csv": "Sample,Mineral,Texture,Grain,Pair,Area fraction,Ab,Or,An\n" +
			"s,Pl,lamella,M,1,0.55,0.78,0.05,0.17\n" +
			"s,Kfs,lamella,M,1,0.45,0.10,0.89,0.01\n" +
			"s,Pl,matrix,,1,,0.65,0.07,0.28\n",
		"two.csv": "Sample,Mineral,Texture,Grain,Pair,Area fraction,SiO2,Al2O3,CaO,Na2O,K2O\n" +
			"s,Pl,lamella,N,1,0.55,64.0,22.5,3.5,8.8,0.9\n" +
			"s,Kfs,host,N,1,0.45,62.0,17.5,0.2,1.1,14.3\n",
	} {
		if err := os.WriteFile(filepath.Join(dir, name), []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	return dir
}

func TestReintegratedFeldsparIsPaired(t *testing.T) {
	path := perthites(t)
	dir, r := runTo(t, path, Options{})
	of := map[string]tables.AnalysisRow{}
	var ids []string
	for _, a := range readTable[tables.AnalysisRow](t, dir, "analyses") {
		of[a.AnalysisID] = a
		ids = append(ids, a.AnalysisID)
	}
	if want := []string{"one/s:Pl", "one/s:Kfs", "one/s:Pl#2", "one/M:re-integrated", "two/s:Pl", "two/s:Kfs", "two/N:re-integrated"}; !slices.Equal(ids, want) {
		t.Fatalf("analyses %q, want %q", ids, want)
	}
	m := of["one/M:re-integrated"]
	if m.Ab == nil || math.Abs(*m.Ab-.48553) > .000005 || math.Abs(*m.Or-.41376) > .000005 || math.Abs(*m.An-.10071) > .000005 ||
		m.AnalysisKind != "re-integrated" || m.Texture != "re-integrated" || m.CompositionKind != "end-member fraction" || m.SourceLine != 2 || m.Verdict == "set aside" {
		t.Errorf("grain M: %+v", m)
	}
	// The K lamellae total 95.1 wt%: set aside, and the grain with them.
	if n := of["two/N:re-integrated"]; n.Verdict != "set aside" || !strings.Contains(n.Reasons, "two/s:Kfs") || of["two/s:Kfs"].Verdict != "set aside" {
		t.Errorf("grain N is %s because of %q, its K lamellae are %s", n.Verdict, n.Reasons, of["two/s:Kfs"].Verdict)
	}
	var pairs []string
	for _, p := range readTable[tables.PairRow](t, dir, "pairs") {
		pairs = append(pairs, p.PairID+" "+p.AAnalysisID+" "+p.BAnalysisID+" "+p.Rule)
	}
	if want := []string{"one/s/1:two-feldspar one/M:re-integrated one/s:Pl#2 listed", "one/s/1:alkali-feldspar-solvus one/s:Pl one/s:Kfs listed",
		"two/s/1:alkali-feldspar-solvus two/s:Pl two/s:Kfs listed"}; !slices.Equal(pairs, want) {
		t.Errorf("pairs\n%q\nwant\n%q", pairs, want)
	}
	if !slices.ContainsFunc(r.Summary.Cautions, func(c string) bool { return strings.Contains(c, "re-integrated feldspar") }) {
		t.Errorf("cautions do not say what a re-integrated feldspar is: %q", r.Summary.Cautions)
	}
	for _, s := range r.Summary.Sources {
		if s.Rows != s.Kept+s.Flagged+s.SetAside || s.Reintegrated != 1 {
			t.Errorf("source %s: %+v; its rows must add up, with one grain beside them", s.ID, s)
		}
	}
}

// A trace of a re-integrated feldspar shows the cells of every part.
func TestTraceShowsParts(t *testing.T) {
	path := perthites(t)
	dir, _ := runTo(t, path, Options{})
	trace, err := TraceEstimate(path, "one/s/1:two-feldspar|two-feldspar/elkins-grove-1990|Or", dir)
	if err != nil {
		t.Fatal(err)
	}
	var got []string
	for _, a := range trace.Analyses {
		part, _, _ := strings.Cut(a.PartOf, ",")
		got = append(got, a.ID+" of "+part)
		if len(a.Cells) != 9 || a.Line < 2 {
			t.Errorf("%s: line %d, %d cells; want its row of 9", a.ID, a.Line, len(a.Cells))
		}
	}
	if want := []string{"one/s:Pl of one/M:re-integrated", "one/s:Kfs of one/M:re-integrated", "one/s:Pl#2 of "}; !slices.Equal(got, want) {
		t.Errorf("traced %q, want %q", got, want)
	}
	if !trace.SameAsRun || !strings.Contains(trace.Text(), "part of one/M:re-integrated, re-integrated with volumes high, lineage ") {
		t.Errorf("same as run: %v; text\n%s", trace.SameAsRun, trace.Text())
	}
}

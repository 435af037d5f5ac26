package ingest

import (
	"bytes"
	"math"
	"os"
	"strings"
	"testing"

	"tieline/manifests"
	"tieline/pipeline/problem"
	"tieline/pipeline/tables"
)

// FuzzRead reads arbitrary bytes as a source in every way a manifest can ask
// for. Nothing panics or hangs, every row is an analysis or has a problem, every
// problem has its place, and no number of an analysis is anything but finite.
func FuzzRead(f *testing.F) {
	for _, dir := range []string{"testdata/hostile", "testdata/good"} {
		entries, err := os.ReadDir(dir)
		if err != nil {
			f.Fatal(err)
		}
		for _, e := range entries {
			text, err := os.ReadFile(dir + "/" + e.Name())
			if err != nil {
				f.Fatal(err)
			}
			f.Add(text, uint8(0))
			f.Add(text, uint8(1+2*3+3*3*2))
		}
	}
	f.Add([]byte("Ab,Or,An\n0.2,-0.1999999999999999,1e-308\n1e308,-1e308,1e-300\n"), uint8(2))
	f.Fuzz(func(t *testing.T, text []byte, how uint8) {
		m := anyManifest(how)
		all, source, problems := readStream(m, bytes.NewReader(text))
		if problems.Len() == 0 && all.Len() != source.Rows {
			t.Errorf("%d rows gave %d analyses and no problem", source.Rows, all.Len())
		}
		if all.Len() > source.Rows {
			t.Errorf("%d rows gave %d analyses", source.Rows, all.Len())
		}
		if problems.Len() == 0 && (source.Rows == 0 || source.SHA256 == "" || source.Bytes != int64(len(text))) {
			t.Errorf("no problem, and yet the source reports %d rows, %d bytes of %d, digest %q", source.Rows, source.Bytes, len(text), source.SHA256)
		}
		for _, p := range problems.Sorted() {
			checkProblem(t, p)
		}
		checkAnalyses(t, all, problems.Len() == 0)
	})
}

// anyManifest makes a manifest of a number: separator, decimal mark, composition, constants.
func anyManifest(how uint8) *manifests.Manifest {
	pick := func(options ...string) string {
		n := int(how) % len(options)
		how /= uint8(len(options))
		return options[n]
	}
	s := manifests.Source{ID: "s1", File: "t.csv", NotAnalysed: []string{"n.a.", "-"}, BelowDetection: []string{"<dl"}, Missing: []string{"-9999"}, Oxygens: 6}
	s.Composition = pick("oxide wt%", "apfu", "end-member fraction")
	s.Separator = pick("comma", "semicolon", "tab")
	s.Decimal = pick("point", "comma")
	s.Encoding = pick("utf-8", "windows-1252", "utf-16le")
	if pick("columns", "constants") == "constants" {
		s.Sample, s.Phase = "R1", "Pl"
	}
	return &manifests.Manifest{Sources: []manifests.Source{s}}
}

func checkProblem(t *testing.T, p problem.Problem) {
	t.Helper()
	if p.Source == "" || p.Kind == "" || p.Found == "" || p.Line < 0 || p.Column < 0 || p.Column > 0 && p.Line == 0 {
		t.Errorf("a problem without its place or words: %+v", p)
	}
	if strings.ContainsFunc(p.String(), func(r rune) bool { return r < ' ' || r == 0x7f || r == 0x202e }) {
		t.Errorf("a problem that hands control characters to a terminal: %q", p.String())
	}
}

func checkAnalyses(t *testing.T, all *tables.Analyses, clean bool) {
	t.Helper()
	ids := map[string]bool{}
	for i := range all.Len() {
		b, row := all.At(i)
		id := b.Text(tables.AnalysisID, row)
		if id == "" || ids[id] {
			t.Errorf("analysis %d has the id %q, none or another's", i, id)
		}
		ids[id] = true
		if clean && b.Text(tables.SetAside, row) == "" && (!b.Phase(row).Known() || b.Text(tables.Sample, row) == "") {
			t.Errorf("analysis %q has the phase %q and the sample %q", id, b.Phase(row), b.Text(tables.Sample, row))
		}
		for n := range tables.NumNumbers {
			if x, ok := b.Number(n, row); ok && (math.IsNaN(x) || math.IsInf(x, 0)) {
				t.Errorf("analysis %q: %s is %v", id, n, x)
			}
		}
	}
}

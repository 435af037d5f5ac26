package ingest

import (
	"fmt"
	"io"
	"os"
	"strings"
	"testing"

	"tieline/manifests"
	"tieline/pipeline/problem"
	"tieline/pipeline/tables"
	"tieline/thermo/chem"
)

// manifestOf parses a manifest of sources, each given by its keys.
func manifestOf(t testing.TB, sources ...string) *manifests.Manifest {
	t.Helper()
	text := "[compilation]\nid = \"test\"\ntitle = \"Test\"\n"
	for i, s := range sources {
		text += fmt.Sprintf("[[source]]\nid = \"s%d\"\n%s\n", i+1, s)
	}
	m, problems := manifests.Parse("compilation.toml", []byte(text))
	if problems != nil {
		t.Fatalf("the manifest of this test: %v", problems)
	}
	return m
}

func rootOf(t testing.TB, dir string) *os.Root {
	t.Helper()
	root, err := os.OpenRoot(dir)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { root.Close() })
	return root
}

// readText reads one source whose file holds text.
func readText(t testing.TB, keys, text string) (*tables.Analyses, Source, *problem.List) {
	t.Helper()
	dir := t.TempDir()
	if err := os.WriteFile(dir+"/t.csv", []byte(text), 0o600); err != nil {
		t.Fatal(err)
	}
	all, sources, problems := Read(rootOf(t, dir), manifestOf(t, "file = \"t.csv\"\n"+keys), nil)
	return all, sources[0], problems
}

// mustRead is readText where nothing may be wrong.
func mustRead(t testing.TB, keys, text string) *tables.Analyses {
	t.Helper()
	all, _, problems := readText(t, keys, text)
	if problems.Len() > 0 {
		t.Fatalf("problems where there are none:\n%v", problems)
	}
	return all
}

// dump writes what analyses hold, one line each, line numbers left out.
func dump(all *tables.Analyses) []string {
	var out []string
	for i := range all.Len() {
		b, row := all.At(i)
		parts := []string{b.Text(tables.AnalysisID, row), "phase=" + string(b.Phase(row))}
		for t := tables.Label; t < tables.NumTexts; t++ {
			if s := b.Text(t, row); s != "" {
				parts = append(parts, t.String()+"="+s)
			}
		}
		for n := range tables.NumNumbers {
			if x, ok := b.Number(n, row); ok {
				parts = append(parts, fmt.Sprintf("%s=%v", n, x))
			}
		}
		parts = append(parts, dumpComposition(b, row)...)
		out = append(out, strings.Join(parts, " "))
	}
	return out
}

func dumpComposition(b *tables.Batch, row int) (parts []string) {
	var c chem.Composition
	b.Composition(row, &c)
	for m := range chem.NumMeasurands {
		switch c.State[m] {
		case chem.Measured:
			parts = append(parts, fmt.Sprintf("%s=%v", m, c.Value[m]))
		case chem.NotAnalysed:
			parts = append(parts, fmt.Sprintf("%s not analysed", m))
		case chem.BelowDetection:
			parts = append(parts, fmt.Sprintf("%s<%v", m, c.Value[m]))
		}
		if s := b.Sigma(m, row); s != 0 {
			parts = append(parts, fmt.Sprintf("%s sigma=%v", m, s))
		}
	}
	if s := b.EndMemberSum(row); s != 0 {
		parts = append(parts, fmt.Sprintf("sum=%v", s))
	}
	return parts
}

func same(t *testing.T, what string, got, want []string) {
	t.Helper()
	for i := range max(len(got), len(want)) {
		g, w := "(nothing)", "(nothing)"
		if i < len(got) {
			g = got[i]
		}
		if i < len(want) {
			w = want[i]
		}
		if g != w {
			t.Errorf("%s, line %d:\n got %s\nwant %s", what, i+1, g, w)
		}
	}
}

func write(t testing.TB, path, text string) {
	t.Helper()
	if err := os.WriteFile(path, []byte(text), 0o600); err != nil {
		t.Fatal(err)
	}
}

// readStream is Read for one source whose bytes come from a reader.
func readStream(m *manifests.Manifest, from io.Reader) (*tables.Analyses, Source, *problem.List) {
	var out Source
	problems := &problem.List{}
	r := reader{source: &m.Sources[0], out: &out, problems: problems}
	out.ID, out.File = r.source.ID, r.source.File
	return &tables.Analyses{Batches: r.stream(from)}, out, problems
}

package pipeline

import (
	"go/parser"
	"go/token"
	"io/fs"
	"path"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"
)

// layers lists the packages from the bottom up; a package imports only from
// layers below its own. DEVELOPERS.md says why.
var layers = [][]string{
	{"thermo/chem", "thermo/detmath"},
	{"thermo/method"},
	{"thermo/formula", "thermo/mixing"},
	{"thermo/feldspar", "thermo/pyroxene"},
	{"thermo"},
	{"pipeline/problem", "pipeline/lineage"},
	{"pipeline/tables"},
	{"manifests"},
	{"ingest", "qc"},
	{"pipeline/folder", "pipeline/pairing", "pipeline/reintegration", "pipeline/discrepancy", "pipeline/report"},
	{"pipeline"},
	{"cmd/tieline"},
}

// alone lists, per tree, what its packages may not import from the standard
// library: thermo is pure, no input or output, no logging, no clock.
var alone = map[string][]string{
	"thermo": {"os", "io", "net", "log", "time", "math/rand", "math/rand/v2", "bufio"},
}

func TestImportsPointOneWay(t *testing.T) {
	layer := map[string]int{}
	for i, l := range layers {
		for _, p := range l {
			layer[p] = i
		}
	}
	seen := map[string]bool{}
	for pkg, imports := range packages(t) {
		seen[pkg] = true
		own, ok := layer[pkg]
		if !ok {
			t.Errorf("package %s is in no layer; add it to layers in this test and to DEVELOPERS.md", pkg)
			continue
		}
		for _, i := range imports {
			below, ours := strings.CutPrefix(i, "tieline/")
			if ours && (layer[below] >= own || !slices.Contains(slices.Concat(layers...), below)) {
				t.Errorf("%s (layer %d) imports %s (layer %d); imports point down only", pkg, own, below, layer[below])
			}
			for tree, banned := range alone {
				if strings.HasPrefix(pkg+"/", tree+"/") && slices.Contains(banned, i) {
					t.Errorf("%s imports %s; %s is pure", pkg, i, tree)
				}
			}
		}
	}
	for p := range layer {
		if !seen[p] {
			t.Errorf("layer %d names package %s, which does not exist", layer[p], p)
		}
	}
}

// packages gives the imports of every package's non-test files, by its path in
// the module.
func packages(t *testing.T) map[string][]string {
	t.Helper()
	out := map[string][]string{}
	root := ".."
	err := filepath.WalkDir(root, func(file string, d fs.DirEntry, err error) error {
		if err != nil {
			return err
		}
		if name := d.Name(); d.IsDir() && file != root && (strings.HasPrefix(name, ".") || name == "testdata" || name == "out") {
			return filepath.SkipDir
		}
		if d.IsDir() || !strings.HasSuffix(file, ".go") || strings.HasSuffix(file, "_test.go") {
			return nil
		}
		f, err := parser.ParseFile(token.NewFileSet(), file, nil, parser.ImportsOnly)
		if err != nil {
			return err
		}
		rel, err := filepath.Rel(root, filepath.Dir(file))
		if err != nil {
			return err
		}
		pkg := path.Clean(filepath.ToSlash(rel))
		out[pkg] = append(out[pkg], []string{}...)
		for _, i := range f.Imports {
			p, err := strconv.Unquote(i.Path.Value)
			if err != nil {
				return err
			}
			out[pkg] = append(out[pkg], p)
		}
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	return out
}

package manifests

import (
	"encoding/csv"
	"fmt"
	"io"
	"maps"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"

	"golang.org/x/text/encoding"
	"golang.org/x/text/encoding/charmap"
	"golang.org/x/text/encoding/unicode"
	"golang.org/x/text/transform"

	"tieline/thermo/chem"
)

// shipped loads a compilation that ships.
func shipped(t *testing.T, folder string) (*Manifest, *os.Root) {
	t.Helper()
	m, root, err := Load(folder)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { root.Close() })
	return m, root
}

// rowsOf reads a source's rows as maps of header to cell.
func rowsOf(t *testing.T, root *os.Root, s *Source) []map[string]string {
	t.Helper()
	f, err := root.Open(s.File)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	charset := encoding.Encoding(unicode.UTF8)
	if s.Encoding == "windows-1252" {
		charset = charmap.Windows1252
	}
	r := csv.NewReader(transform.NewReader(f, unicode.BOMOverride(charset.NewDecoder())))
	r.Comma = s.Comma()
	header, err := r.Read()
	if err != nil {
		t.Fatal(err)
	}
	for text := range s.Columns {
		if !slices.Contains(header, text) {
			t.Errorf("%s: the manifest maps %q, which is no header", s.File, text)
		}
	}
	var out []map[string]string
	for {
		cells, err := r.Read()
		if err == io.EOF {
			return out
		}
		if err != nil {
			t.Fatal(err)
		}
		row := map[string]string{}
		for i, c := range cells {
			if s.Decimal == "comma" {
				c = strings.ReplaceAll(c, ",", ".")
			}
			row[header[i]] = c
		}
		out = append(out, row)
	}
}

func number(t *testing.T, row map[string]string, header string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(row[header], 64)
	if err != nil {
		t.Fatalf("%s: %v", header, err)
	}
	return v
}

func median(v []float64) float64 {
	slices.Sort(v)
	return (v[(len(v)-1)/2] + v[len(v)/2]) / 2
}

func near(t *testing.T, what string, got, want, within float64) {
	t.Helper()
	if math.Abs(got-want) > within {
		t.Errorf("%s: %g, want %g within %g", what, got, want, within)
	}
}

func TestWhatShipsIsThere(t *testing.T) {
	for folder, rows := range map[string][]int{"demo": {60, 42, 56, 58, 24, 26, 22, 12}, "elkins-grove-1990": {40}, "cms-brackets": {80}} {
		m, root := shipped(t, folder)
		if m.Compilation.ID != folder {
			t.Errorf("%s: the compilation calls itself %s", folder, m.Compilation.ID)
		}
		if len(m.Sources) != len(rows) {
			t.Fatalf("%s: %d sources, want %d", folder, len(m.Sources), len(rows))
		}
		for i := range m.Sources {
			if n := len(rowsOf(t, root, &m.Sources[i])); n != rows[i] {
				t.Errorf("%s: %s has %d rows, want %d", folder, m.Sources[i].File, n, rows[i])
			}
		}
	}
	folders, err := filepath.Glob("*/" + FileName)
	if err != nil || len(folders) != 3 {
		t.Errorf("%d compilations ship, 3 are tested: %v", len(folders), err)
	}
}

// Medians and run names were taken from Table 5 of Elkins & Grove (1990), not from the file.
func TestElkinsGrove(t *testing.T) {
	m, root := shipped(t, "elkins-grove-1990")
	byPhase := map[string][]map[string]string{}
	runs := map[string]int{}
	for _, row := range rowsOf(t, root, &m.Sources[0]) {
		byPhase[row["phase"]] = append(byPhase[row["phase"]], row)
		runs[row["run"]]++
		sum := number(t, row, "Ab") + number(t, row, "Or") + number(t, row, "An")
		near(t, fmt.Sprintf("%s %s Ab + Or + An", row["run"], row["phase"]), sum, 1, .002+1e-12)
		if row["run"] == "E2" && row["phase"] == "Pl" {
			near(t, "E2 plagioclase sum, .999 as printed", sum, .999, 1e-12)
		}
	}
	if len(runs) != 20 || len(byPhase["Afs"]) != 20 || len(byPhase["Pl"]) != 20 {
		t.Errorf("%d runs, %d Afs, %d Pl, want 20 each", len(runs), len(byPhase["Afs"]), len(byPhase["Pl"]))
	}
	if runs["L1"] != 2 || runs["l1"] != 2 {
		t.Error("runs L1 and l1 are not kept apart")
	}
	for _, c := range []struct {
		phase, header string
		median        float64
	}{
		{"Afs", "T (degC)", 800}, {"Afs", "P (bar)", 2000}, {"Afs", "Ab", .273}, {"Afs", "Or", .7135}, {"Afs", "An", .0165},
		{"Pl", "T (degC)", 800}, {"Pl", "Ab", .681}, {"Pl", "Or", .0655}, {"Pl", "An", .2455},
	} {
		var v []float64
		for _, row := range byPhase[c.phase] {
			v = append(v, number(t, row, c.header))
		}
		near(t, c.phase+" "+c.header+", median", median(v), c.median, 1e-9)
	}
}

// The midpoint of a bracket is Ca per 6 oxygens, and Mg the rest of 2.
func TestBrackets(t *testing.T) {
	m, root := shipped(t, "cms-brackets")
	if s := m.Sources[0]; s.Kind() != chem.Apfu || s.Oxygens != 6 {
		t.Errorf("composition %s on %g oxygens, want apfu on 6", s.Composition, s.Oxygens)
	}
	phases, runs := map[string]int{}, map[string]string{}
	limb := map[string][]float64{}
	for _, row := range rowsOf(t, root, &m.Sources[0]) {
		what := "run " + row["run"] + " " + row["phase"]
		phases[row["phase"]]++
		conditions := row["T (degC)"] + " " + row["P (kbar)"] + " " + row["experimenters"]
		if before, ok := runs[row["run"]]; ok && before != conditions {
			t.Errorf("%s: %s, and %s for the other pyroxene", what, conditions, before)
		}
		runs[row["run"]] = conditions
		low, high, ca := number(t, row, "X_Di minimum"), number(t, row, "X_Di maximum"), number(t, row, "Ca")
		if low > high {
			t.Errorf("%s: bracket from %g to %g", what, low, high)
		}
		near(t, what+" Ca, the midpoint", ca, (low+high)/2, 1e-12)
		near(t, what+" Ca + Mg", ca+number(t, row, "Mg"), 2, 1e-12)
		near(t, what+" Si", number(t, row, "Si"), 2, 0)
		for _, absent := range []string{"Ti", "Al", "Cr", "Fe", "Mn", "Na", "K"} {
			near(t, what+" "+absent, number(t, row, absent), 0, 0)
		}
		limb[row["phase"]] = append(limb[row["phase"]], ca)
	}
	if len(runs) != 40 || phases["Opx"] != 40 || phases["Cpx"] != 40 {
		t.Errorf("%d runs, %d Opx, %d Cpx, want 40 each", len(runs), phases["Opx"], phases["Cpx"])
	}
	// Medians of the midpoints, worked out from the table of Carlson & Lindsley (1988).
	near(t, "Opx Ca, median", median(limb["Opx"]), .0365, 1e-9)
	near(t, "Cpx Ca, median", median(limb["Cpx"]), .864, 1e-9)
	if got := slices.Max(limb["Opx"]); got > .12 {
		t.Errorf("an orthopyroxene with %g Ca per 6 O: the limbs are mixed up", got)
	}
	if got := slices.Min(limb["Cpx"]); got < .5 {
		t.Errorf("a clinopyroxene with %g Ca per 6 O: the limbs are mixed up", got)
	}
}

// planted is a cell of the demo that holds a flaw, or that one rests on.
type planted struct {
	source, id   string            // id as the manifest's comment lists it
	row          map[string]string // header to cell: which row
	header, want string
}

// The demo's flaws are planted: a run must find one of each, so they must stay,
// and the manifest's comment must list them.
func TestDemoFlaws(t *testing.T) {
	m, root := shipped(t, "demo")
	rows := map[string][]map[string]string{}
	for i := range m.Sources {
		rows[m.Sources[i].ID] = rowsOf(t, root, &m.Sources[i])
	}
	text, err := os.ReadFile(filepath.Join("demo", FileName))
	if err != nil {
		t.Fatal(err)
	}
	spot := func(header, text string) map[string]string { return map[string]string{header: text} }
	for _, p := range []planted{
		{"maskelow-2024", "PG-25-o2", spot("Spot", "PG-25-o2"), "Mineral", "orthopyroxene"},
		{"maskelow-2024", "PG-25-o5", spot("Spot", "PG-25-o5"), "CaO wt.%", "<0.30"},
		{"maskelow-2024", "PG-11-c4", spot("Spot", "PG-11-c4"), "Sum", "96.80"},
		{"maskelow-2024", "PG-17-o1", spot("Spot", "PG-17-o1"), "MnO wt.%", ""},
		{"ovarr-2021", "HP-05-o1", spot("Analysis", "HP-05-o1"), "Total", "97.60"},
		{"ovarr-2021", "HP-21-o6", spot("Pair", "f"), "Analysis", "HP-21-o6"},
		{"ovarr-2021", "HP-21-g1", spot("Mineral", "glass"), "Analysis", "HP-21-g1"},
		{"idrane-2025", "QG-9-k3", spot("Spot", "QG-9-k3"), "CaO", "<0.20"},
		{"idrane-2025", "QG-4/4", spot("Spot", "QG-4-k4"), "Position", "core"},
		{"idrane-2025", "QG-4/4", spot("Spot", "QG-4-p4"), "Position", "matrix"},
		{"idrane-2025", "PF-04-*", spot("Spot", "PF-04-k1"), "BaO", "n.a."},
		{"corrane-2026", "PG-11A-o3c", map[string]string{"Section": "PG-11A", "X (µm)": "0", "Y (µm)": "0"}, "Spot", "PG-11A-o3c"},
		{"corrane-2026", "PG-11B-c3c", map[string]string{"Section": "PG-11B", "X (µm)": "4", "Y (µm)": "-3"}, "Spot", "PG-11B-c3c"},
		{"brathen-1987", "PG-31:Aug#2", map[string]string{"Specimen": "PG-31", "Min.": "augite", "Zone": "rim"}, "P", "0.8"},
	} {
		one := find(t, rows[p.source], p.row)
		if one[p.header] != p.want {
			t.Errorf("%s %v: %s is %q, want %q", p.source, p.row, p.header, one[p.header], p.want)
		}
		if !listed(string(text), p.source, p.id) {
			t.Errorf("the manifest's comment does not list %s/%s", p.source, p.id)
		}
	}
	copies(t, rows["maskelow-2024"], rows["corrane-2026"])
}

// listed says whether a comment names an analysis: a line that begins with the
// source holds the id's end.
func listed(text, source, id string) bool {
	for line := range strings.Lines(text) {
		if strings.HasPrefix(line, "#") && strings.Contains(line, source) && strings.Contains(line, id) {
			return true
		}
	}
	return false
}

// find gives the one row that holds these cells.
func find(t *testing.T, rows []map[string]string, cells map[string]string) map[string]string {
	t.Helper()
	var found []map[string]string
	for _, row := range rows {
		if !slices.ContainsFunc(slices.Collect(maps.Keys(cells)), func(h string) bool { return row[h] != cells[h] }) {
			found = append(found, row)
		}
	}
	if len(found) != 1 {
		t.Fatalf("%d rows hold %v, want 1", len(found), cells)
	}
	return found[0]
}

// copies holds what corrane-2026 took over from maskelow-2024 to the original:
// equal but for one digit of one CaO.
func copies(t *testing.T, from, to []map[string]string) {
	t.Helper()
	for spot, want := range map[string]int{"PG-03-o1": 0, "PG-03-c1": 0, "PG-22-o1": 0, "PG-22-c1": 1} {
		a, b := find(t, from, map[string]string{"Spot": spot}), find(t, to, map[string]string{"Spot": spot})
		var differ []string
		for _, oxide := range []string{"SiO2", "TiO2", "Al2O3", "Cr2O3", "MnO", "MgO", "CaO", "Na2O"} {
			if a[oxide+" wt.%"] != b[oxide+"(wt%)"] {
				differ = append(differ, oxide)
			}
		}
		if len(differ) != want || want == 1 && differ[0] != "CaO" {
			t.Errorf("%s: the copy differs in %v, want %d oxides", spot, differ, want)
		}
	}
}

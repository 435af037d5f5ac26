package manifests

import (
	"encoding/csv"
	"fmt"
	"io"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"

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
	r := csv.NewReader(f)
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
	for folder, rows := range map[string][]int{"demo": {30, 30}, "elkins-grove-1990": {40}, "cms-brackets": {80}} {
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

// The demo's flaws are planted: a run must find one of each, so they must stay.
func TestDemoFlaws(t *testing.T) {
	m, root := shipped(t, "demo")
	totals, glass, noMnO := map[string]int{}, 0, 0
	partners := map[string]int{}
	for _, row := range rowsOf(t, root, &m.Sources[0]) {
		totals[row["Sum"]]++
		if row["Mineral"] == "glass" {
			glass++
			continue
		}
		if row["MnO wt.%"] == "" {
			noMnO++
		}
		partners[row["Sample no."]+" "+row["Pr"]]++
	}
	alone := 0
	for _, n := range partners {
		if n == 1 {
			alone++
		}
	}
	for what, got := range map[string][2]int{
		"total 96.80": {totals["96.80"], 1}, "total 97.60": {totals["97.60"], 1}, "glass": {glass, 1},
		"rows without MnO": {noMnO, 4}, "analyses without partner": {alone, 1}, "pairs": {len(partners) - alone, 14},
	} {
		if got[0] != got[1] {
			t.Errorf("pyroxenes, %s: %d, want %d", what, got[0], got[1])
		}
	}
	barium, below, noPressure := 0, 0, map[string]bool{}
	for _, row := range rowsOf(t, root, &m.Sources[1]) {
		if row["BaO"] == "n.a." {
			barium++
		}
		if row["Fe2O3(tot)"] == "<0.02" {
			below++
		}
		if row["P / kbar"] == "" {
			noPressure[row["Unit"]] = true
		}
	}
	if barium != 8 || below == 0 || len(noPressure) != 1 || !noPressure["Oskeldor Syenite"] {
		t.Errorf("feldspars: BaO n.a. in %d rows, want 8; Fe2O3 below detection in %d, want some; no pressure in %v, want the Oskeldor Syenite alone", barium, below, noPressure)
	}
}

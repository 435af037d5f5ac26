package main

import (
	"bytes"
	"encoding/json"
	"errors"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"
)

// planted is added to the real repository through -overlay, as a file of an
// existing digested package and as a new package. The comment at the end of a
// line is what the gates must say there; every other line must pass.
const planted = `package PACKAGE

import (
	"maps"
	"math"
	m "math"
	"math/rand/v2" // math/rand/v2
	"slices"
	"time"
)

func PlantedFused(a, b, c float64) float64 {
	return a*b + c // FMADDD VFMADD231SD
}

func PlantedDifference(a, b, c float64) float64 {
	return c - a*b // FMSUBD
}

func PlantedSingle(a, b, c float32) float32 {
	return a*b + c // FMADDS VFMADD231SS
}

func PlantedAccumulation(a, b []float64) (sum float64) {
	for i := range a {
		sum += a[i] * b[i] // FMADDD
	}
	return sum
}

func PlantedRounded(a, b, c float64) float64 {
	return float64(a*b) + c
}

func PlantedNames(x float64) float64 {
	y := math.Log(x)       // math.Log
	y += m.Exp(x)          // math.Exp
	f := math.Pow          // math.Pow
	y += rand.NormFloat64()
	if time.Now().IsZero() { // time.Now
		return f(x, y)
	}
	return math.Sqrt(x) + math.Floor(y)
}

func PlantedOrder(of map[string]int) []string {
	keys := slices.Sorted(maps.Keys(of))
	for k := range maps.Keys(of) { // maps.Keys
		keys = append(keys, k)
	}
	for k := range of { // range
		keys = append(keys, k)
	}
	return keys
}

func PlantedShadow(x float64) float64 {
	math := struct{ Log func(float64) float64 }{func(x float64) float64 { return x }}
	return math.Log(x)
}
`

// exempt is planted in cmd/tieline, where nothing is digested.
const exempt = `package main

import "math"

func plantedExempt(a, b, c float64) float64 { return a*b + math.Log(c) }

var _ = plantedExempt
`

// TestPlanted runs the gates' own command line on the repository with faults
// planted in it, and compares the whole of what is said about those files.
func TestPlanted(t *testing.T) {
	root, err := filepath.Abs("../..")
	if err != nil {
		t.Fatal(err)
	}
	files := map[string]string{
		"thermo/planted.go":           strings.Replace(planted, "PACKAGE", "thermo", 1),
		"pipeline/planted/planted.go": strings.Replace(planted, "PACKAGE", "planted", 1),
		"cmd/tieline/planted.go":      exempt,
	}
	output, code := runGates(t, root, writeOverlay(t, root, files))
	if code != 1 {
		t.Errorf("exit code %d, want 1", code)
	}
	for _, name := range []string{"thermo/planted.go", "pipeline/planted/planted.go", "cmd/tieline/planted.go"} {
		want := []string{}
		if name != "cmd/tieline/planted.go" {
			want = wanted(files[name])
		}
		if got := reported(t, output, name); !slices.Equal(got, want) {
			t.Errorf("%s:\n got %s\nwant %s", name, strings.Join(got, "\n     "), strings.Join(want, "\n     "))
		}
	}
	if t.Failed() {
		t.Logf("the gates said:\n%s", output)
	}
}

// wanted reads the comments of the planted text: "16 FMADDD", in order.
func wanted(text string) []string {
	var all []string
	for i, line := range strings.Split(text, "\n") {
		_, comment, _ := strings.Cut(line, " // ")
		words := strings.Fields(comment)
		slices.Sort(words)
		for _, w := range words {
			all = append(all, place(i+1, w))
		}
	}
	return all
}

// reported gives the same form of what the gates said of one file.
func reported(t *testing.T, output, name string) []string {
	all := []string{}
	for line := range strings.Lines(output) {
		rest, ok := strings.CutPrefix(line, name+":")
		if !ok {
			continue
		}
		number, what, ok := strings.Cut(rest, ": ")
		if !ok {
			t.Fatalf("no line number in %q", line)
		}
		word, _, _ := strings.Cut(what, " ")
		all = append(all, number+" "+strings.TrimSuffix(word, ":"))
	}
	return all
}

func writeOverlay(t *testing.T, root string, files map[string]string) string {
	dir := t.TempDir()
	replace := map[string]string{}
	for name, text := range files {
		real := filepath.Join(dir, strings.ReplaceAll(name, "/", "_")+".txt")
		if err := os.WriteFile(real, []byte(text), 0o600); err != nil {
			t.Fatal(err)
		}
		replace[filepath.Join(root, filepath.FromSlash(name))] = real
	}
	text, err := json.Marshal(map[string]any{"Replace": replace})
	if err != nil {
		t.Fatal(err)
	}
	overlay := filepath.Join(dir, "overlay.json")
	if err := os.WriteFile(overlay, text, 0o600); err != nil {
		t.Fatal(err)
	}
	return overlay
}

func runGates(t *testing.T, root, overlay string) (output string, code int) {
	cmd := exec.Command("go", "run", "./.ci/gates", "-overlay", overlay)
	cmd.Dir = root
	var out, errs bytes.Buffer
	cmd.Stdout, cmd.Stderr = &out, &errs
	err := cmd.Run()
	var exit *exec.ExitError
	if err != nil && !errors.As(err, &exit) {
		t.Fatal(err)
	}
	if out.Len() == 0 {
		t.Fatalf("the gates printed nothing: %v\n%s", err, errs.String())
	}
	return out.String(), cmd.ProcessState.ExitCode()
}

func place(line int, word string) string { return strconv.Itoa(line) + " " + word }

package main

import (
	"os"
	"path/filepath"
	"testing"

	"tieline/thermo/chem"
)

func TestSamePairsEveryTime(t *testing.T) {
	var texts [2][]byte
	for i := range texts {
		file, err := writeCompilation(t.TempDir(), 200)
		if err != nil {
			t.Fatal(err)
		}
		if texts[i], err = os.ReadFile(file); err != nil {
			t.Fatal(err)
		}
	}
	if string(texts[0]) != string(texts[1]) {
		t.Error("two files from one seed differ")
	}
}

// TestPyroxenes: what was drawn is a pyroxene, 4 cations on 6 oxygens within
// the errors put on the oxides, with nothing below zero and a usual total.
func TestPyroxenes(t *testing.T) {
	d := draws(seed)
	for i := range 20000 {
		opx, cpx := drawPair(&d)
		for phase, wt := range map[string][chem.NumOxides]float64{"Opx": opx, "Cpx": cpx} {
			total, oxygens, cations := 0.0, 0.0, 0.0
			for _, o := range oxides {
				data := chem.Oxides[o]
				if wt[o] < 0 {
					t.Fatalf("pair %d %s: %s is %g wt%%", i, phase, data.Name, wt[o])
				}
				total += wt[o]
				oxygens += wt[o] / data.Mass * data.Oxygens
				cations += wt[o] / data.Mass * data.Cations
			}
			if sum := cations / oxygens * 6; sum < 3.985 || sum > 4.015 || total < 98.5 || total > 101.5 {
				t.Fatalf("pair %d %s: %g cations on 6 oxygens, total %g wt%%", i, phase, sum, total)
			}
		}
	}
}

func TestReadPlainlyCountsNumbers(t *testing.T) {
	file, err := writeCompilation(t.TempDir(), 50)
	if err != nil {
		t.Fatal(err)
	}
	if _, cells, err := readPlainly(file); err != nil || cells != 100*10 {
		t.Errorf("%d numbers, error %v; want 1000: ten in each of 100 analyses", cells, err)
	}
}

// TestMeasure: a program that takes memory is seen to take it.
func TestMeasure(t *testing.T) {
	wall, peak, err := measure("head", "-c", "0", filepath.Join("synthetic_test.go"))
	if err != nil || wall <= 0 || peak <= 0 || peak > 0.2 {
		t.Errorf("head of nothing: %v, %g GiB, error %v", wall, peak, err)
	}
	_, large, err := measure("sh", "-c", "head -c 200000000 /dev/zero | tail -c 190000000 > /dev/null; exit 0")
	if err != nil || large <= peak {
		t.Errorf("a shell whose child keeps 190 MB: %g GiB, head alone %g GiB, error %v", large, peak, err)
	}
}

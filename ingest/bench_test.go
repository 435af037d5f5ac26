package ingest

import (
	"bytes"
	"encoding/csv"
	"fmt"
	"io"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strconv"
	"syscall"
	"testing"
	"time"

	"tieline/manifests"
)

// synthetic is a table of invented analyses, 20 columns of which 13 are numbers.
func synthetic(rows int) []byte {
	r := rand.New(rand.NewPCG(1, 2))
	var b bytes.Buffer
	b.WriteString("Sample,Analysis,Mineral,Texture,Pair,Unit,Locality,SiO2,TiO2,Al2O3,Cr2O3,FeO*,MnO,MgO,CaO,Na2O,K2O,Total,P kbar,T (C)\n")
	phases := []string{"Opx", "Cpx", "Pl", "Kfs"}
	for i := range rows {
		fmt.Fprintf(&b, "S-%04d,A%06d,%s,core,p%d,Upper unit,Long ridge", i/40, i, phases[i%4], i/2)
		for range 11 {
			fmt.Fprintf(&b, ",%.2f", 50*r.Float64())
		}
		fmt.Fprintf(&b, ",%.1f,%d\n", 5+5*r.Float64(), 700+r.IntN(300))
	}
	return b.Bytes()
}

// cpuTime is what this process has used, which other processes do not lengthen.
func cpuTime(b *testing.B) time.Duration {
	var u syscall.Rusage
	if err := syscall.Getrusage(syscall.RUSAGE_SELF, &u); err != nil {
		b.Fatal(err)
	}
	return time.Duration(u.Utime.Nano() + u.Stime.Nano())
}

// BenchmarkRead reads 100000 rows of 20 columns; BenchmarkBaseline reads the
// same file with encoding/csv and strconv.ParseFloat alone.
func BenchmarkRead(b *testing.B) {
	text := synthetic(100000)
	dir := b.TempDir()
	if err := os.WriteFile(filepath.Join(dir, "t.csv"), text, 0o600); err != nil {
		b.Fatal(err)
	}
	root, err := os.OpenRoot(dir)
	if err != nil {
		b.Fatal(err)
	}
	defer root.Close()
	m := &manifests.Manifest{Sources: []manifests.Source{{ID: "t", File: "t.csv", Encoding: "utf-8", Separator: "comma", Decimal: "point", Composition: "oxide wt%",
		NotAnalysed: []string{"n.a."}, BelowDetection: []string{"b.d.l."}}}}
	b.SetBytes(int64(len(text)))
	b.ReportAllocs()
	before := cpuTime(b)
	defer func() { b.ReportMetric(float64(cpuTime(b)-before)/1e6/float64(b.N), "cpu-ms/op") }()
	for b.Loop() {
		all, _, problems := Read(root, m, nil)
		if problems.Len() > 0 || all.Len() != 100000 {
			b.Fatalf("%d analyses, problems: %v", all.Len(), problems.Err())
		}
	}
}

func BenchmarkBaseline(b *testing.B) {
	text := synthetic(100000)
	b.SetBytes(int64(len(text)))
	b.ReportAllocs()
	before := cpuTime(b)
	defer func() { b.ReportMetric(float64(cpuTime(b)-before)/1e6/float64(b.N), "cpu-ms/op") }()
	for b.Loop() {
		r := csv.NewReader(bytes.NewReader(text))
		r.ReuseRecord = true
		r.Read()
		for {
			row, err := r.Read()
			if err == io.EOF {
				break
			}
			for _, cell := range row[7:] {
				if _, err := strconv.ParseFloat(cell, 64); err != nil {
					b.Fatal(err)
				}
			}
		}
	}
}

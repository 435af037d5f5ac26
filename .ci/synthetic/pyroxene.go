package main

import (
	"bufio"
	"fmt"
	"os"
	"path/filepath"
	"strconv"

	"tieline/thermo/chem"
)

const manifest = `[compilation]
id = "synthetic"
title = "Made-up pyroxene pairs, to measure a run of many analyses"
contributors = ["the tieline authors"]
licence = "CC0-1.0"
date = 2026-11-30

[[source]]
id = "made-up"
file = "pyroxenes.csv"
citation = "No source: compositions drawn from a fixed seed"

[source.columns]
"analysis" = "label"
"sample" = "sample"
"unit" = "unit"
"pair" = "pair"
"phase" = "phase"
"P (kbar)" = "p_kbar"
"SiO2" = "SiO2"
"TiO2" = "TiO2"
"Al2O3" = "Al2O3"
"Cr2O3" = "Cr2O3"
"FeO" = "FeO total"
"MnO" = "MnO"
"MgO" = "MgO"
"CaO" = "CaO"
"Na2O" = "Na2O"

[groups]
by = ["unit"]
`

// oxides are the columns of the file, in its order.
var oxides = []chem.Oxide{chem.SiO2, chem.TiO2, chem.Al2O3, chem.Cr2O3, chem.FeO, chem.MnO, chem.MgO, chem.CaO, chem.Na2O}

const (
	seed           = 20261130
	pairsPerSample = 5
	samplesPerUnit = 500
)

// writeCompilation writes the manifest and one file of pairs; the same pairs
// every time.
func writeCompilation(dir string, pairs int) (file string, err error) {
	if err := os.WriteFile(filepath.Join(dir, "compilation.toml"), []byte(manifest), 0o644); err != nil {
		return "", err
	}
	file = filepath.Join(dir, "pyroxenes.csv")
	f, err := os.Create(file)
	if err != nil {
		return "", err
	}
	defer f.Close()
	w := bufio.NewWriterSize(f, 1<<20)
	w.WriteString("analysis,sample,unit,pair,phase,P (kbar),SiO2,TiO2,Al2O3,Cr2O3,FeO,MnO,MgO,CaO,Na2O\n")
	d := draws(seed)
	for i := range pairs {
		sample := i / pairsPerSample
		opx, cpx := drawPair(&d)
		p := 8 + 40*d.unit()
		for _, side := range []struct {
			phase string
			wt    [chem.NumOxides]float64
		}{{"Opx", opx}, {"Cpx", cpx}} {
			fmt.Fprintf(w, "%s-%d,S%d,U%d,%d,%s,%.1f", side.phase, i+1, sample+1, sample/samplesPerUnit+1, i%pairsPerSample+1, side.phase, p)
			for _, o := range oxides {
				w.WriteByte(',')
				w.Write(strconv.AppendFloat(w.AvailableBuffer(), side.wt[o], 'f', 2, 64))
			}
			w.WriteByte('\n')
		}
	}
	if err := w.Flush(); err != nil {
		return "", err
	}
	return file, f.Close()
}

// drawPair makes an orthopyroxene and a clinopyroxene of a peridotite: the
// hotter, the more Ca in the one and the less in the other.
func drawPair(d *draws) (opx, cpx [chem.NumOxides]float64) {
	hot := d.unit() // 0 about 800 degC, 1 about 1400 degC
	mg := d.between(0.86, 0.93)
	opx = weights(d, pyroxene{
		Ca: 0.015 + 0.055*hot + d.between(0, 0.01), Na: d.between(0, 0.01), AlM1: d.between(0.02, 0.10),
		Cr: d.between(0.005, 0.025), Ti: d.between(0, 0.004), Mn: 0.003, Mg: mg,
	})
	cpx = weights(d, pyroxene{
		Ca: 0.88 - 0.30*hot + d.between(-0.02, 0.02), Na: d.between(0.02, 0.12), AlM1: d.between(0.04, 0.14),
		Cr: d.between(0.01, 0.04), Ti: d.between(0, 0.015), Mn: 0.003, Mg: mg + 0.01,
	})
	return opx, cpx
}

// pyroxene is a formula on 6 oxygens and 4 cations without Fe3+: what is not
// named follows from charge and sites. Mg is Mg/(Mg + Fe2+).
type pyroxene struct{ Ca, Na, AlM1, Cr, Ti, Mn, Mg float64 }

// weights gives oxide wt% with a total near 100 and an error on every oxide.
func weights(d *draws, x pyroxene) (wt [chem.NumOxides]float64) {
	tetrahedral := x.AlM1 + x.Cr + 2*x.Ti - x.Na // Al that balances the charge
	if tetrahedral < 0 {
		x.Na += tetrahedral
		tetrahedral = 0
	}
	femg := 2 - x.Ca - x.Na - x.AlM1 - x.Cr - x.Ti - x.Mn
	apfu := map[chem.Oxide]float64{
		chem.SiO2: 2 - tetrahedral, chem.TiO2: x.Ti, chem.Al2O3: x.AlM1 + tetrahedral, chem.Cr2O3: x.Cr,
		chem.FeO: femg * (1 - x.Mg), chem.MnO: x.Mn, chem.MgO: femg * x.Mg, chem.CaO: x.Ca, chem.Na2O: x.Na,
	}
	sum := 0.0
	for _, o := range oxides {
		data := chem.Oxides[o]
		wt[o] = apfu[o] / data.Cations * data.Mass
		sum += wt[o]
	}
	total := d.between(99.2, 100.8)
	for _, o := range oxides {
		wt[o] *= total / sum * (1 + d.between(-0.004, 0.004))
	}
	return wt
}

// draws is a stream of uniform numbers: splitmix64 (Steele, Lea & Flood 2014).
type draws uint64

// unit gives a number in [0, 1).
func (d *draws) unit() float64 {
	*d += 0x9e3779b97f4a7c15
	z := uint64(*d)
	z = (z ^ z>>30) * 0xbf58476d1ce4e5b9
	z = (z ^ z>>27) * 0x94d049bb133111eb
	return float64((z^z>>31)>>11) / (1 << 53)
}

func (d *draws) between(low, high float64) float64 { return low + (high-low)*d.unit() }

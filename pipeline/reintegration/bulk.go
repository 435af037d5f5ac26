// Package reintegration puts an exsolved feldspar together again: from the
// compositions and area fractions of its parts, the composition it had before.
package reintegration

// Volumes are molar volumes, cm3/mol. Celsian, of which feldspars hold little
// and whose volume is near that of Or, counts with Or's.
type Volumes struct{ Ab, Or, An float64 }

// volumes by the name a manifest gives them. Robie RA, Hemingway BS, Fisher JR
// (1978) USGS Bull 1452, from memory: high albite, sanidine and anorthite; low
// albite, microcline and anorthite.
var volumes = map[string]Volumes{
	"high": {Ab: 100.43, Or: 109.05, An: 100.79},
	"low":  {Ab: 100.07, Or: 108.72, An: 100.79},
}

// Part is one of the feldspars of an exsolved grain: mole fractions Ab, Or, An
// and Cn with the sum 1, and its share of the grain's area, in any unit.
type Part struct {
	X    [4]float64
	Area float64
}

// Bulk gives the mole fractions of the grain. An area fraction is a volume
// fraction in a random section (Delesse 1847), so with V_i = sum X_k V_k
//
//	f_i = (A_i / V_i) / sum_j (A_j / V_j),  X = sum f_i X_i
//
// The areas must be 0 or more and their sum above 0.
func Bulk(parts []Part, v Volumes) (x [4]float64) {
	moles := 0.0
	for i := range parts {
		p := &parts[i]
		n := p.Area / p.volume(v)
		moles += n
		for k := range x {
			x[k] += float64(n * p.X[k])
		}
	}
	for k := range x {
		x[k] /= moles
	}
	return x
}

func (p *Part) volume(v Volumes) float64 {
	return float64(p.X[0]*v.Ab) + float64(p.X[1]*v.Or) + float64(p.X[2]*v.An) + float64(p.X[3]*v.Or)
}

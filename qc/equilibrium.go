package qc

import (
	"fmt"
	"math"

	"tieline/manifests"
)

// Distribution holds a pyroxene pair's (Fe/Mg)cpx / (Fe/Mg)opx, total iron,
// against what coexisting pyroxenes show: igneous pairs 1.09 +- 0.14, subsolidus
// ones about 0.7 +- 0.2. Putirka KD (2008) Rev Mineral Geochem 69:61-120, from
// memory. A filter, no thermometer.
func Distribution(limits *manifests.QC, kd float64) []Finding {
	i, s := limits.KDIgneous, limits.KDSubsolidus
	if inside(kd, i) || inside(kd, s) {
		return nil
	}
	return []Finding{{Rule: "Fe-Mg distribution", Effect: Flagged, Value: number(kd), Limit: between(s) + " or " + between(i),
		Detail: fmt.Sprintf("(Fe/Mg)cpx / (Fe/Mg)opx is %s, of neither subsolidus (%s) nor igneous pairs (%s)", text(kd, 3), between(s), between(i))}}
}

// IgneousDistribution sets aside the temperatures of a method made for igneous
// pyroxenes (Putirka 2008, equations 36 and 37) where the distribution is not
// theirs. It is asked for each such estimate.
func IgneousDistribution(limits *manifests.QC, kd float64) []Finding {
	if inside(kd, limits.KDIgneous) {
		return nil
	}
	r := between(limits.KDIgneous)
	return []Finding{{Rule: "igneous Fe-Mg distribution", Effect: SetAside, Value: number(kd), Limit: r,
		Detail: fmt.Sprintf("(Fe/Mg)cpx / (Fe/Mg)opx is %s, outside the %s of igneous pairs the method is for", text(kd, 3), r)}}
}

// FeldsparPair applies the rules on the two compositions of a feldspar pair,
// each Ab, Or, An.
func FeldsparPair(limits *manifests.QC, afs, pl [3]float64) []Finding {
	out := feldsparSides(afs, pl)
	if an := pl[2]; an > limits.PlAnFlagged+eps {
		l := text(limits.PlAnFlagged, 3)
		out = append(out, Finding{Rule: "I-1 plagioclase", Effect: Flagged, Value: number(an), Limit: "at most " + l,
			Detail: fmt.Sprintf("An in plagioclase is %s, above %s: its structure is I-1 there, and no model here is of it", text(an, 3), l)})
	}
	ab, or, limit := math.Abs(afs[0]-pl[0]), math.Abs(afs[1]-pl[1]), limits.CriticalDistanceFlagged
	if ab < limit-eps && or < limit-eps {
		out = append(out, Finding{Rule: "close to the critical curve", Effect: Flagged, Value: number(math.Max(ab, or)), Limit: "at least " + text(limit, 3),
			Detail: fmt.Sprintf("Ab differs by %s and Or by %s between the feldspars, both below %s: close to the critical curve, where small errors move T far", text(ab, 3), text(or, 3), text(limit, 3))})
	}
	return out
}

// feldsparSides sets aside a pair whose alkali feldspar is not the side with more
// Or and less An: the methods give such a pair a temperature too.
func feldsparSides(afs, pl [3]float64) []Finding {
	if afs[1] > pl[1] && afs[2] < pl[2] {
		return nil
	}
	return []Finding{{Rule: "sides exchanged", Effect: SetAside, Value: number(afs[1] - pl[1]), Limit: "more Or and less An in the alkali feldspar",
		Detail: fmt.Sprintf("the alkali feldspar (Or %s, An %s) is not richer in Or and poorer in An than the plagioclase (Or %s, An %s): labels exchanged, or no such pair",
			text(afs[1], 3), text(afs[2], 3), text(pl[1], 3), text(pl[2], 3))}}
}

// PyroxeneSides sets aside a pair whose clinopyroxene does not hold more Ca than
// its orthopyroxene, apfu on 6 O.
func PyroxeneSides(opx, cpx float64) []Finding {
	if cpx > opx {
		return nil
	}
	return []Finding{{Rule: "sides exchanged", Effect: SetAside, Value: number(cpx - opx), Limit: "more Ca in the clinopyroxene",
		Detail: fmt.Sprintf("Ca of the clinopyroxene (%s) is not above that of the orthopyroxene (%s): labels exchanged, or no such pair", text(cpx, 3), text(opx, 3))}}
}

// Concordance holds the spread of the temperatures one method gives from Ab, Or
// and An of one pair against the limit, or against twice the combined 1-sigma of
// the two components furthest apart where that is more, degC. Absent ones are
// nil. The finding goes to each of them.
func Concordance(limits *manifests.QC, ts [3]*float64, sigma [3]float64) []Finding {
	low, high := -1, -1
	for c, t := range ts {
		if t == nil {
			continue
		}
		if low < 0 || *t < *ts[low] {
			low = c
		}
		if high < 0 || *t > *ts[high] {
			high = c
		}
	}
	if low < 0 {
		return nil
	}
	spread := *ts[high] - *ts[low]
	limit := math.Max(limits.ConcordanceC, 2*math.Sqrt(float64(sigma[low]*sigma[low])+float64(sigma[high]*sigma[high])))
	if spread <= limit+eps {
		return nil
	}
	return []Finding{{Rule: "concordance", Effect: Flagged, Value: number(spread), Limit: text(limit, 0) + " degC",
		Detail: fmt.Sprintf("the components' temperatures spread over %s degC, from %s to %s, beyond %s: not in equilibrium, reset on cooling, at another pressure, or the model misfits these compositions",
			text(spread, 0), text(*ts[low], 0), text(*ts[high], 0), text(limit, 0))}}
}

// InDoubt sets aside a pair, or the temperatures of one analysis, whose phase the
// composition contradicts. The analysis itself is flagged and never renamed.
func InDoubt(phase string, doubted bool) []Finding {
	if !doubted {
		return nil
	}
	return []Finding{{Rule: "phase in doubt", Effect: SetAside, Limit: "a composition of the mineral named",
		Detail: "the composition of the " + phase + " contradicts its name"}}
}

// Reset holds the temperature of Ca exchange against that of Fe-Mg exchange of
// one pair, with the 1-sigma of each, all degC. Fe-Mg closes last on cooling.
// The finding goes to both estimates.
func Reset(limits *manifests.QC, ca, caSigma, feMg, feMgSigma float64) []Finding {
	diff, sigma := ca-feMg, math.Sqrt(float64(caSigma*caSigma)+float64(feMgSigma*feMgSigma))
	limit := float64(limits.ResetSigma * sigma)
	if math.Abs(diff) <= limit+eps {
		return nil
	}
	why := "Fe-Mg was reset on cooling, or the pair is not in equilibrium"
	if diff < 0 {
		why = "the pair is not in equilibrium, or ferric iron was not what was taken"
	}
	return []Finding{{Rule: "possible resetting", Effect: Flagged, Value: number(diff), Limit: "0 +- " + text(limit, 0) + " degC",
		Detail: fmt.Sprintf("T of Ca is %s degC from T of Fe-Mg (%s and %s), beyond %s combined sigma (%s): %s",
			text(diff, 0), text(ca, 0), text(feMg, 0), text(limits.ResetSigma, 1), text(limit, 0), why)}}
}

func inside(v float64, r [2]float64) bool { return v >= r[0]-eps && v <= r[1]+eps }

func between(r [2]float64) string { return text(r[0], 3) + " to " + text(r[1], 3) }

package qc

import "fmt"

// Pair is what the rules see of two analyses taken as coexisting. A number is
// nil where its row has none.
type Pair struct {
	KD         *float64    // (Fe/Mg)cpx / (Fe/Mg)opx, all iron; pyroxene pairs
	PublishedC [2]*float64 // degC, as each row gives it
	PKbar      [2]*float64 // kbar, as each row gives it
	Texture    [2]string   // as each row gives it
}

// OfPair applies the rules for one pair.
func OfPair(p *Pair) []Finding {
	var out []Finding
	if p.KD != nil && *p.KD >= 1 {
		out = append(out, Finding{Rule: "Mg number order", Effect: Flagged, Value: p.KD, Limit: "below 1",
			Detail: fmt.Sprintf("Mg# of cpx is not above that of opx: (Fe/Mg)cpx / (Fe/Mg)opx is %s", text(*p.KD, 3))})
	}
	if t := p.Texture; t[0] != "" && t[1] != "" && t[0] != t[1] && !exsolved[t[0]] && !exsolved[t[1]] {
		out = append(out, Finding{Rule: "textures differ", Effect: Flagged, Limit: "one textural position",
			Detail: fmt.Sprintf("one side is %s, the other %s: did they ever exchange?", t[0], t[1])})
	}
	if differ(p.PKbar) {
		out = append(out, Finding{Rule: "pressures differ", Effect: Flagged, Value: p.PKbar[1], Limit: text(*p.PKbar[0], 3) + " kbar",
			Detail: fmt.Sprintf("the two rows give %s and %s kbar; the first was used", text(*p.PKbar[0], 3), text(*p.PKbar[1], 3))})
	}
	if differ(p.PublishedC) {
		out = append(out, Finding{Rule: "published temperatures differ", Effect: Flagged, Value: p.PublishedC[1], Limit: text(*p.PublishedC[0], 1) + " degC",
			Detail: fmt.Sprintf("the two rows give %s and %s degC; neither was compared", text(*p.PublishedC[0], 1), text(*p.PublishedC[1], 1))})
	}
	return out
}

// exsolved are the textures of a grain that came apart, or was put together
// again; they pair with each other and with any texture of the other mineral.
var exsolved = map[string]bool{"host": true, "lamella": true, "lamellae": true, "re-integrated": true}

func differ(v [2]*float64) bool { return v[0] != nil && v[1] != nil && *v[0] != *v[1] }

// PublishedAgree says whether the rows' published temperatures allow comparing.
func (p *Pair) PublishedAgree() bool { return !differ(p.PublishedC) }

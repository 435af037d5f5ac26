package feldspar

import (
	"math"

	"tieline/thermo/chem"
	"tieline/thermo/method"
)

// equality is what one component's equality of activities in two feldspars is
// made of. RT ln gamma is linear in the parameters, parameters are linear in T
// and P, so that T is exact: (dH + P dV)/(dS - R ln(a/a')).
type equality struct {
	id, component string
	energy        string             // unit of energy per mole: J or cal
	terms         []*method.Quantity // of the parameters in RT ln gamma, one feldspar less the other
	h, s, v       []float64          // the parameters, in the order of terms
	ratio         *method.Quantity   // ln of the ratio of ideal activities, the same way round
	r             float64            // energy/mol/K
	least         float64            // energy/mol/K: where |D| is less there is no number
}

// solution is T = (h + P v)/d, P in bar; v is nil where pressure plays no part.
type solution struct{ h, v, d *method.Quantity }

func (e equality) solution() solution {
	s := e.difference("dS", e.energy+"/mol/K", e.s)
	return solution{
		h: e.difference("dH", e.energy+"/mol", e.h),
		v: e.difference("dV", e.energy+"/mol/bar", e.v),
		d: &method.Quantity{
			Name:  "D of " + e.component + " (" + e.id + ")",
			Unit:  e.energy + "/mol/K",
			Needs: []*method.Quantity{s, e.ratio},
			Fill: func(b *method.Block, q []float64, why []method.Reason) {
				s, ln := b.Of(s), b.Of(e.ratio)
				for i := range q {
					q[i] = s[i] - float64(e.r*ln[i])
					if why[i] == method.OK && math.Abs(q[i]) < e.least {
						why[i] = method.SmallEntropy
					}
				}
			},
		},
	}
}

// difference is the enthalpy, entropy or volume in RT ln gamma, one feldspar
// less the other; nil where all parameters are zero. Those that are zero need no term.
func (e equality) difference(name, unit string, w []float64) *method.Quantity {
	d := &method.Quantity{Name: name + " of " + e.component + " (" + e.id + ")", Unit: unit}
	var parameters []float64
	for m, p := range w {
		if p != 0 {
			parameters = append(parameters, p)
			d.Needs = append(d.Needs, e.terms[m])
		}
	}
	if parameters == nil {
		return nil
	}
	d.Fill = func(b *method.Block, q []float64, _ []method.Reason) {
		first := b.Of(d.Needs[0])
		for i := range q {
			q[i] = float64(parameters[0] * first[i])
		}
		for m, p := range parameters[1:] {
			for i, term := range b.Of(d.Needs[m+1])[:len(q)] {
				q[i] += float64(p * term)
			}
		}
	}
	return d
}

// eval writes the temperature into a lane whose reasons hold those of Needs.
func (s solution) eval(b *method.Block, lane method.Lane) {
	h, d := b.Of(s.h), b.Of(s.d)
	why := lane.Why[:b.N]
	method.Join(why, b.Why(s.d)) // h and v are made of what Needs holds
	if s.v == nil {
		for i := range h {
			lane.T[i] = chem.Kelvin(h[i] / d[i])
		}
	} else {
		v := b.Of(s.v)
		for i, p := range b.P {
			lane.T[i] = chem.Kelvin((h[i] + float64(float64(p)*v[i])) / d[i])
		}
	}
	for i, t := range lane.T[:b.N] {
		if why[i] == method.OK {
			why[i] = method.ReasonFor(t)
		}
	}
}

func (s solution) uses() []*method.Quantity {
	if s.v == nil {
		return []*method.Quantity{s.h, s.d}
	}
	return []*method.Quantity{s.h, s.v, s.d}
}

// equalities makes a method of one solution per component.
func equalities(info method.Info, k any, solved []solution) *method.Method {
	for _, s := range solved {
		info.Uses = append(info.Uses, s.uses()...)
	}
	return &method.Method{Info: info, Const: k, Eval: func(b *method.Block, lanes []method.Lane) {
		for c, s := range solved {
			s.eval(b, lanes[c])
		}
	}}
}

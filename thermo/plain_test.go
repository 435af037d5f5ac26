package thermo

import (
	"math"

	"tieline/thermo/chem"
	"tieline/thermo/feldspar"
	"tieline/thermo/method"
	"tieline/thermo/mixing"
)

// The equations once more, row by row with math.Log and sums the compiler may
// fuse: what a block's speed and numbers are held against.

// plainRow is what one row of a block holds.
type plainRow struct {
	p              float64 // bar
	afs, pl        [3]float64
	na, k          [3]float64 // lamellae
	cpx, opx       cations    // 6 O, all Fe2+
	cpxBal, opxBal cations    // 4 cations, charge balance
}

type cations struct{ si, ti, al, cr, fe3, fe2, mn, mg, ca, na, k float64 }

// of is where a leaf's value goes.
func (r *plainRow) of(l *method.Quantity) *float64 {
	phase := l.Leaf.Phase
	if len(l.Leaf.Cations) == 0 {
		x := map[chem.Phase]*[3]float64{chem.Afs: &r.afs, chem.Pl: &r.pl, chem.NaFsp: &r.na, chem.KFsp: &r.k}[phase]
		return &x[l.Leaf.EndMember-chem.XAb]
	}
	c := map[chem.Phase]*cations{chem.Cpx: &r.cpx, chem.Opx: &r.opx}[phase]
	if l.Leaf.Basis.Ferric == method.Balanced {
		c = map[chem.Phase]*cations{chem.Cpx: &r.cpxBal, chem.Opx: &r.opxBal}[phase]
	}
	return map[chem.Cation]*float64{chem.Si: &c.si, chem.Ti: &c.ti, chem.Al: &c.al, chem.Cr: &c.cr, chem.Fe3: &c.fe3, chem.Fe2: &c.fe2,
		chem.Mn: &c.mn, chem.Mg: &c.mg, chem.Ca: &c.ca, chem.Na: &c.na, chem.K: &c.k}[l.Leaf.Cations[0]]
}

func plainRows(p []chem.Bar, values map[*method.Quantity][]float64) []plainRow {
	rows := make([]plainRow, len(p))
	for i := range rows {
		rows[i].p = float64(p[i])
		for l, v := range values {
			*rows[i].of(l) = v[i]
		}
	}
	return rows
}

// equation gives the temperatures of a row in K.
type equation func(r *plainRow) [3]float64

func one(f func(r *plainRow) float64) equation {
	return func(r *plainRow) [3]float64 { return [3]float64{f(r)} }
}

// plainly is a method's equation.
func plainly(m *method.Method) equation {
	if k, ok := m.Const.(*feldspar.Constants); ok {
		return func(r *plainRow) [3]float64 { return plainTwoFeldspar(k, r.afs, r.pl, r.p) }
	}
	if k, ok := m.Const.(*feldspar.SolvusConstants); ok {
		return func(r *plainRow) [3]float64 { return plainSolvus(k, r) }
	}
	pick := func(r *plainRow) (cpx, opx *cations) { return &r.cpxBal, &r.opxBal }
	if m.Variant == "all Fe2+" {
		pick = func(r *plainRow) (cpx, opx *cations) { return &r.cpx, &r.opx }
	}
	switch m.ID {
	case "two-feldspar/holland-powell-2003":
		return func(r *plainRow) [3]float64 { return plainHollandPowell(r) }
	case "two-feldspar/haselton-1983":
		return one(plainHaselton)
	case "two-feldspar/stormer-1975":
		return one(func(r *plainRow) float64 {
			x := r.afs[0]
			return (6326.7 - 9963.2*x + 946.3*x*x + 2690.2*x*x*x + (.0925-.1458*x+.0141*x*x+.0392*x*x*x)*r.p) /
				(-1.9872*math.Log(x/r.pl[0]) + 4.6321 - 10.815*x + 7.7345*x*x - 1.5512*x*x*x)
		})
	case "two-feldspar/whitney-stormer-1977":
		return one(func(r *plainRow) float64 {
			x := r.afs[0]
			return (7973.1 - 16910.6*x + 9901.9*x*x - 964.4*x*x*x + (.11-.22*x+.11*x*x)*r.p) /
				(-1.9872*math.Log(x/r.pl[0]) + 6.48 - 21.58*x + 23.72*x*x - 8.62*x*x*x)
		})
	case "two-feldspar/powell-powell-1977":
		return one(func(r *plainRow) float64 {
			x, o := r.afs[0], r.afs[1]
			return -(o * o * (6330 + .093*r.p + 2*x*(1340+.019*r.p))) / (o*o*(-4.63+1.54*x) + 1.987*math.Log(x/r.pl[0]))
		})
	case "two-feldspar/putirka-2008-27b":
		return one(func(r *plainRow) float64 {
			return 273.15 + (-442-3.72*r.p/1000)/(-.11+.1*math.Log(r.afs[0]/r.pl[0])-3.27*r.afs[2]+.098*math.Log(r.afs[2])+.52*r.pl[2]*r.pl[0])
		})
	case "two-pyroxene/brey-koehler-1990":
		return one(func(r *plainRow) float64 {
			c, o := &r.cpx, &r.opx
			ln := math.Log((1 - c.ca/(1-c.na)) / (1 - o.ca/(1-o.na)))
			return (23664 + (24.9+126.3*c.fe2/(c.fe2+c.mg))*r.p/1000) / (13.38 + ln*ln + 11.59*o.fe2/(o.fe2+o.mg))
		})
	case "two-pyroxene/brey-koehler-1990-na":
		return one(func(r *plainRow) float64 {
			ln := math.Log(r.opx.na / r.cpx.na)
			return (35000 + 61.5*r.p/1000) / (ln*ln + 19.8)
		})
	case "two-pyroxene/taylor-1998":
		return one(func(r *plainRow) float64 {
			a := func(c *cations) float64 { return (1 - c.ca - c.na) * (1 - (c.al+c.cr+c.na)/2) }
			c := &r.cpx
			ln := math.Log(a(c) / a(&r.opx))
			return (24787 + 678*r.p/10000) / (15.67 + 14.37*c.ti + 3.69*c.fe2 - 3.25*(c.al+c.cr-c.na) + ln*ln)
		})
	case "two-pyroxene/wells-1977":
		return one(func(r *plainRow) float64 {
			c, o := pick(r)
			return 7341 / (3.355 + 2.44*o.fe2/(o.fe2+o.mg) - math.Log(twoSite(c)/twoSite(o)))
		})
	case "two-pyroxene/wood-banno-1973":
		return one(func(r *plainRow) float64 {
			c, o := pick(r)
			x := o.fe2 / (o.fe2 + o.mg)
			return -10202 / (math.Log(twoSite(c)/twoSite(o)) - 7.65*x + 3.88*x*x - 4.6)
		})
	case "two-pyroxene/kretz-1982-fe-mg":
		return one(func(r *plainRow) float64 {
			c, o := pick(r)
			return 1130 / (math.Log((o.fe2/o.mg)/(c.fe2/c.mg)) + 0.505)
		})
	case "clinopyroxene/kretz-1982-ca":
		return one(func(r *plainRow) float64 {
			c, _ := pick(r)
			x, l := c.fe2/(c.fe2+c.mg), math.Log(1-2*c.ca/(c.ca+c.mg+c.fe2))
			return math.Min(1000/(.468+.246*x-.123*l), 1000/(.054+.608*x-.304*l))
		})
	case "two-pyroxene/bertrand-mercier-1985":
		return one(plainBertrandMercier)
	case "two-pyroxene/putirka-2008-36":
		return one(plainPutirka36)
	case "two-pyroxene/putirka-2008-37":
		return one(plainPutirka37)
	case "two-pyroxene/lindsley-grover-davidson-1981":
		return plainLindsley
	case "orthopyroxene/brey-koehler-1990-ca":
		return one(func(r *plainRow) float64 { return (6425 + 26.4*r.p/1000) / (1.843 - math.Log(r.opx.ca)) })
	case "orthopyroxene/nimis-gruetter-2010":
		return one(func(r *plainRow) float64 {
			t := (6425+26.4*r.p/1000)/(1.843-math.Log(r.opx.ca)) - 273.15
			return -628.7 + 2.0690*t - 4.530e-4*t*t + 273.15
		})
	case "orthopyroxene/witt-eickschen-seck-1991":
		return one(func(r *plainRow) float64 {
			o := &r.opx
			return 273.15 + 636.54 + 2088.21*(o.al-o.cr-2*o.ti+o.na)/2 + 14527.32*o.cr
		})
	case "clinopyroxene/nimis-taylor-2000":
		return one(func(r *plainRow) float64 {
			c := &r.cpx
			ln := math.Log((1 - c.ca - c.na - c.k) * (1 - (c.al+c.cr+c.na+c.k)/2))
			return (23166 + 39.28*r.p/1000) / (13.25 + 15.35*c.ti + 4.50*c.fe2 - 1.55*(c.al+c.cr-c.na-c.k) + ln*ln)
		})
	}
	panic(m.ID + " has no plain equation")
}

// twoSite is the ideal two-site activity of Mg2Si2O6.
func twoSite(c *cations) float64 {
	m := c.mg / (c.mg + c.fe2)
	vi := c.al - math.Max(math.Min(2-c.si, c.al), 0)
	return (1 - c.ca - c.na - c.k - c.mn) * m * (1 - vi - c.cr - c.ti - c.fe3) * m
}

// plainTwoFeldspar gives T_Ab, T_Or, T_An.
func plainTwoFeldspar(k *feldspar.Constants, afs, pl [3]float64, p float64) (t [3]float64) {
	pairs := [6][3]int{{0, 1, 2}, {1, 0, 2}, {0, 2, 1}, {2, 0, 1}, {1, 2, 0}, {2, 1, 0}}
	w := func(m *mixing.Margules) [6]float64 {
		return [6]float64{m.AbOr, m.OrAb, m.AbAn, m.AnAb, m.OrAn, m.AnOr}
	}
	h, s, v := w(&k.Excess.H), w(&k.Excess.S), w(&k.Excess.V)
	var dh, ds, dv [3]float64
	for phase, x := range [2][3]float64{pl, afs} {
		sign := 1 - 2*float64(phase)
		for m, ij := range pairs {
			xi, xj, xk := x[ij[0]], x[ij[1]], x[ij[2]]
			f := xi * xj * (xj + xk/2)
			var g [3]float64
			g[ij[0]] = sign * (xj*xj + xj*xk/2 - 2*f)
			g[ij[1]] = sign * (2*xi*xj + xi*xk/2 - 2*f)
			g[ij[2]] = sign * (xi*xj/2 - 2*f)
			for c := range g {
				dh[c] += h[m] * g[c]
				ds[c] += s[m] * g[c]
				dv[c] += v[m] * g[c]
			}
		}
		for c := range t {
			g := sign * (x[(c+1)%3]*x[(c+2)%3] - 2*x[0]*x[1]*x[2])
			dh[c] += k.Excess.H.AbOrAn * g
			ds[c] += k.Excess.S.AbOrAn * g
			dv[c] += k.Excess.V.AbOrAn * g
		}
	}
	ideal := func(x [3]float64) [3]float64 {
		if k.Ideal == mixing.Molecular {
			return x
		}
		an := x[2]
		return [3]float64{x[0] * (1 - an*an), x[1] * (1 - an*an), an * (1 + an) * (1 + an) / 4}
	}
	a, b := ideal(pl), ideal(afs)
	for c := range t {
		t[c] = (dh[c] + p*dv[c]) / (ds[c] - k.R*math.Log(a[c]/b[c]))
	}
	return t
}

func plainHollandPowell(r *plainRow) (t [3]float64) {
	const alpha = .643
	size := func(x [3]float64) [3]float64 {
		s := alpha*x[0] + x[1] + x[2]
		return [3]float64{alpha * x[0] / s, x[1] / s, x[2] / s}
	}
	terms := func(phi [3]float64, c int) (abOr, abAn, orAn float64) {
		q := [3]float64{-phi[0], -phi[1], -phi[2]}
		q[c]++
		a := 1.0
		if c == 0 {
			a = alpha
		}
		return -q[0] * q[1] * 2 * a / (1 + alpha), -q[0] * q[2] * 2 * a / (1 + alpha), -q[1] * q[2] * a
	}
	pl, afs := size(r.pl), size(r.afs)
	for c := range t {
		a1, a2, a3 := terms(pl, c)
		b1, b2, b3 := terms(afs, c)
		abOr, abAn, orAn := a1-b1, a2-b2, a3-b3
		t[c] = (25100*abOr + 3100*abAn + 40000*orAn + r.p*.338*abOr) / (10.8*abOr - chem.GasConstant*math.Log(r.pl[c]/r.afs[c]))
	}
	return t
}

func plainHaselton(r *plainRow) float64 {
	x, y := r.afs[0]/(r.afs[0]+r.afs[1]), r.pl[0]/(r.pl[0]+r.pl[2])
	o, n := 1-x, 1-y
	return (o*o*(18810+17030*x+.364*r.p) - n*n*(28230-39520*y)) / (10.3*o*o + 8.3143*math.Log(y*y*(2-y)/x))
}

func plainSolvus(k *feldspar.SolvusConstants, r *plainRow) (t [3]float64) {
	x, y := r.na[1]/(r.na[0]+r.na[1]), r.k[1]/(r.k[0]+r.k[1])
	abOf := func(w feldspar.Binary, o float64) float64 { return o * o * (w.AbOr + 2*(1-o)*(w.OrAb-w.AbOr)) }
	orOf := func(w feldspar.Binary, o float64) float64 { return (1 - o) * (1 - o) * (w.OrAb + 2*o*(w.AbOr-w.OrAb)) }
	h := feldspar.Binary{AbOr: k.H.AbOr - k.Coherency, OrAb: k.H.OrAb - k.Coherency}
	t[0] = (abOf(h, x) - abOf(h, y) + r.p*(abOf(k.V, x)-abOf(k.V, y))) / (abOf(k.S, x) - abOf(k.S, y) - k.R*math.Log((1-x)/(1-y)))
	t[1] = (orOf(h, x) - orOf(h, y) + r.p*(orOf(k.V, x)-orOf(k.V, y))) / (orOf(k.S, x) - orOf(k.S, y) - k.R*math.Log(x/y))
	return t
}

// plainBertrandMercier takes Newton steps.
func plainBertrandMercier(r *plainRow) float64 {
	c, o := &r.cpx, &r.opx
	ca, caO, x := c.ca/(1-c.na), o.ca/(1-o.na), c.fe2/(c.fe2+c.mg)
	h := 36273 + 399*r.p/10000
	t := 1500.0
	for range 50 { // Newton
		cc := ca + (-.77+1e-3*t)*x
		if cc >= 1 {
			t -= 200
			continue
		}
		d := 19.31 - 8.314*math.Log((1-cc)/(1-caO)) - 12.15*cc*cc
		next := t - (t*d-h)/(d+t*1e-3*x*(8.314/(1-cc)-24.3*cc))
		if math.Abs(next-t) < 1e-9 {
			return next
		}
		t = next
	}
	return t
}

func plainPutirka36(r *plainRow) float64 {
	c, o := &r.cpx, &r.opx
	_, enFs, _, fm2 := putirkaComponents(c, o)
	m := o.mg / (o.mg + o.mn + o.fe2)
	return 273.15 + 1e4/(11.2-1.96*math.Log(enFs/fm2)-3.3*c.ca-25.8*c.cr/2+33.2*o.mn-23.6*o.na-2.08*fm2*m-8.33*o.ca*m-.05*r.p/1000)
}

func plainPutirka37(r *plainRow) float64 {
	c, o := &r.cpx, &r.opx
	diHd, enFs, fmAl2, fm2 := putirkaComponents(c, o)
	return 273.15 + 1e4/(13.4-3.40*math.Log(enFs/fm2)+5.59*math.Log(c.mg)-8.8*c.mg/(c.mg+c.fe2)+23.85*o.mn+6.48*fmAl2-
		2.38*diHd*c.mg/(c.mg+c.mn+c.fe2)-.044*r.p/1000)
}

func putirkaComponents(c, o *cations) (diHd, enFs, fmAl2, fm2 float64) {
	iv := math.Max(math.Min(2-c.si, c.al), 0)
	vi := c.al - iv
	caTs := vi - math.Min(c.na, vi)
	diHd = c.ca - caTs - math.Max((iv-caTs)/2, 0) - c.cr/2
	enFs = (c.fe2 + c.mg - diHd) / 2
	viO := o.al - math.Max(math.Min(2-o.si, o.al), 0)
	fmAl2 = math.Max(viO-math.Min(o.na, viO)-o.cr, 0)
	return diHd, enFs, fmAl2, (o.fe2 + o.mn + o.mg - o.ti - fmAl2 - o.ca) / 2
}

func plainLindsley(r *plainRow) [3]float64 {
	x, o, p := r.cpx.ca, r.opx.ca, r.p
	wEn, wDi := 25484+.0812*p, 31216-.0061*p
	gEn := x * x * (wEn + 2*(1-x)*(wDi-wEn))
	gDi := (1 - x) * (1 - x) * (wDi + 2*x*(wEn-wDi))
	return [3]float64{
		(3561 + .0355*p + gEn - 25000*o*o) / (1.91 - chem.GasConstant*math.Log((1-x)/(1-o))),
		(-21178 - .0908*p + gDi - 25000*(1-o)*(1-o)) / (-8.16 - chem.GasConstant*math.Log(x/o)),
	}
}

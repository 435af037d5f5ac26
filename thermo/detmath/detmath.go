// Package detmath holds the elementary functions every digested number goes
// through. They give the same bits on every architecture: only + - * / and
// integer operations, each product rounded by float64() before it meets a sum,
// so that no compiler fuses the two. The functions of package math do not
// promise that.
package detmath

import "math"

// ln2Hi is ln 2 to 41 bits, so that ln2Hi times any exponent of a float64 is
// exact; ln2Lo is the rest.
const (
	ln2Hi = 0x1.62e42fefa3000p-1
	ln2Lo = 0x1.3de6af278ece6p-42
)

const (
	minNormal = 0x0010000000000000 // bits of the least normal float64
	infinity  = 0x7ff0000000000000 // bits of +Inf
	sqrtHalf  = 0x3fe6a09e667f3bcd // bits of sqrt(1/2), rounded up
	mantissa  = 1<<52 - 1
)

// Chebyshev coefficients of (2 atanh(s) - 2s)/s^3 in s^2 on
// |s| <= (sqrt 2 - 1)/(sqrt 2 + 1), error 3.1e-16 of a sum near 2/3, which
// stands for 5e-18 of the logarithm.
const (
	l1 = 0x1.5555555555558p-1
	l2 = 0x1.99999999952d7p-2
	l3 = 0x1.2492492df281ap-2
	l4 = 0x1.c71c62e3f11e6p-3
	l5 = 0x1.7462b51cb66b1p-3
	l6 = 0x1.39fe51a7c18f9p-3
	l7 = 0x1.2b5900de53b32p-3
)

// Log is the natural logarithm of x, within 1 ulp over all positive x,
// subnormal ones too. Log(+Inf) = +Inf, Log(0) = -Inf; negative and NaN give NaN.
//
// x = 2^k m with sqrt(1/2) <= m < sqrt(2); ln m = 2 atanh(s), s = (m-1)/(m+1).
// The only branch is one no ordinary argument takes, so that runs of varied
// compositions never stall on a wrong guess.
func Log(x float64) float64 {
	bits := math.Float64bits(x)
	scale := 0.0
	if bits-minNormal >= infinity-minNormal {
		switch {
		case x == 0:
			return math.Inf(-1)
		case x < 0:
			return math.NaN()
		case !(x <= math.MaxFloat64): // +Inf, NaN
			return x
		}
		bits = math.Float64bits(float64(x * 0x1p54))
		scale = -54
	}
	// The exponent of m is found by subtraction, without asking on which side
	// of sqrt(2) the mantissa lies.
	e := bits - sqrtHalf
	k := float64(int64(e)>>52) + scale
	f := math.Float64frombits(bits-e&^mantissa) - 1

	s := f / (2 + f)
	z := float64(s * s)
	w := float64(z * z)
	even := float64(w * (l2 + float64(w*(l4+float64(w*l6)))))
	odd := float64(z * (l1 + float64(w*(l3+float64(w*(l5+float64(w*l7)))))))
	half := float64(0.5 * float64(f*f))
	return float64(s*(half+(even+odd))) + float64(k*ln2Lo) - half + f + float64(k*ln2Hi)
}

// Chebyshev coefficients of (r coth(r/2) - 2)/r^2 in r^2 on |r| <= ln(2)/2,
// error 5e-17 of a sum near 1/6.
const (
	e1 = 0x1.5555555555553p-3
	e2 = -0x1.6c16c16c0ab48p-9
	e3 = 0x1.1566ab5bcf73bp-14
	e4 = -0x1.bbd5311697a6ap-20
	e5 = 0x1.63f1d4d490c22p-25
)

const (
	log2e   = 0x1.71547652b82fep+0
	expMax  = 709.782712893384   // above it Exp overflows
	expZero = -745.1332191019412 // below it Exp is under half the least subnormal
)

// Exp is e to the power x, within 1 ulp, subnormal results too. It gives +Inf
// above 709.78, 0 below -745.13, NaN for NaN.
//
// x = k ln 2 + r with |r| <= ln(2)/2; e^r = 1 + 2r/(r coth(r/2) - r).
func Exp(x float64) float64 {
	switch {
	case x != x:
		return x
	case x > expMax:
		return math.Inf(1)
	case x < expZero:
		return 0
	}
	k := math.Floor(float64(x*log2e) + 0.5)
	hi := x - float64(k*ln2Hi)
	lo := float64(k * ln2Lo)
	r := hi - lo
	z := float64(r * r)
	c := r - float64(z*(e1+float64(z*(e2+float64(z*(e3+float64(z*(e4+float64(z*e5)))))))))
	y := 1 + (float64(r*c)/(2-c) - lo + hi)
	// Two steps, because 2^k alone may lie outside the normal numbers.
	half := math.Floor(k / 2)
	return float64(float64(y*pow2(half)) * pow2(k-half))
}

// pow2 is 2^k for a whole k from -1022 to 1023.
func pow2(k float64) float64 { return math.Float64frombits(uint64(int64(k)+1023) << 52) }

// Package portmath has exp, log, pow and tanh with the same bits natively and
// in WebAssembly.
//
// The standard library's versions use assembly on some processors and differ
// from its portable ones in the last bits; one such bit can move an event by a
// microsecond and with it everything after. These use additions,
// multiplications and divisions only, and every product is rounded on its own
// (the float64 conversions stop a compiler from fusing a multiply and an add).
//
// Accuracy: within 2 ulp of the exact value for exp and log over the arguments
// a plan can reach, checked against the standard library in the tests.
package portmath

import "math"

const (
	ln2Hi = 6.93147180369123816490e-01 // the leading bits of ln 2
	ln2Lo = 1.90821492927058770002e-10 // ln 2 minus ln2Hi
)

// Exp is e to the x. It gives 0 below -745 and +Inf above 709.7.
func Exp(x float64) float64 {
	switch {
	case math.IsNaN(x):
		return x
	case x > 709.7:
		return math.Inf(1)
	case x < -745:
		return 0
	}
	// x = k ln 2 + r with |r| <= ln2/2, so that the series below needs 13 terms.
	k := math.Floor(x/math.Ln2 + 0.5)
	r := float64(x-float64(k*ln2Hi)) - float64(k*ln2Lo)
	sum := 1.0
	for n := 14; n >= 1; n-- {
		sum = 1 + float64(float64(r*sum)/float64(n))
	}
	return math.Ldexp(sum, int(k))
}

// Log is the natural logarithm; NaN below zero, -Inf at zero.
func Log(x float64) float64 {
	switch {
	case math.IsNaN(x) || math.IsInf(x, 1):
		return x
	case x < 0:
		return math.NaN()
	case x == 0:
		return math.Inf(-1)
	}
	// x = m 2^e with m near 1; log m = 2 atanh s, s = (m-1)/(m+1), |s| < 0.172.
	m, e := math.Frexp(x)
	if m < math.Sqrt2/2 {
		m, e = m*2, e-1
	}
	s := (m - 1) / (m + 1)
	s2 := float64(s * s)
	sum := 0.0
	for n := 25; n >= 3; n -= 2 {
		sum = float64(s2 * (1/float64(n) + sum))
	}
	k := float64(e)
	return float64(k*ln2Hi) + (float64(2*s) + (float64(2*float64(s*sum)) + float64(k*ln2Lo)))
}

// Pow is x to the y for x >= 0; NaN for a negative x.
func Pow(x, y float64) float64 {
	switch {
	case y == 0:
		return 1
	case x == 0 && y > 0:
		return 0
	}
	return Exp(float64(y * Log(x)))
}

// Tanh is the hyperbolic tangent.
func Tanh(x float64) float64 {
	if x < 0 {
		return -Tanh(-x)
	}
	if x > 20 {
		return 1
	}
	if x < 1e-5 {
		return x - float64(float64(float64(x*x)*x)/3)
	}
	e := Exp(float64(-2 * x))
	return (1 - e) / (1 + e)
}

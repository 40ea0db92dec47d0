package tissue

import "escapement/engine/portmath"

// The transmembrane potential of a node that is depolarised at 0 and
// repolarised at d is rise(t) + fall(t-d) - 1, from rest 0 to plateau 1. Only
// their differences from one millisecond to the next are kept.
const (
	riseReach             = 24       // the upstroke is over this long before and after its middle, ms
	fallBefore, fallAfter = 200, 120 // likewise for repolarisation
)

// riseSteps is the logistic upstroke; the steps sum to 1.
func (s Shape) riseSteps() []float64 {
	return steps(-riseReach, riseReach, func(t float64) float64 {
		return 1 / (1 + portmath.Exp(float64(-float64(s.Rise)*t)))
	}, 0)
}

// fallSteps is the repolarisation; the steps sum to -1.
func (s Shape) fallSteps() []float64 {
	k := steps(-fallBefore, fallAfter, func(t float64) float64 {
		a := 1 + portmath.Exp(float64(float64(s.Fall)*t))
		b := 1 + portmath.Exp(float64(float64(s.Fall2)*t))
		return 1 / float64(a*b)
	}, 1)
	for i := range k {
		k[i] = -k[i]
	}
	return k
}

// steps are the differences of f over whole milliseconds, scaled to sum to 1 in
// magnitude. Before the range f is 0 if it rises and as at the range's start if it falls.
func steps(from, to int, f func(float64) float64, falls int) []float64 {
	var out []float64
	last := 0.0
	if falls == 1 {
		last = f(float64(from))
	}
	sum := 0.0
	for t := from; t <= to; t++ {
		now := f(float64(t))
		out = append(out, now-last)
		sum += now - last
		last = now
	}
	for i := range out {
		out[i] /= sum
	}
	return out
}

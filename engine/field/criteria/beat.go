package criteria

import (
	"math"

	"escapement/engine/lead"
)

// small keeps ratios finite.
const small = 1e-3

// Beat measures one wave. Amplitudes are millivolts, times milliseconds;
// measures of a single lead look at it from the wave's onset to its offset.
type Beat struct {
	*lead.Complex
}

func (b Beat) qrs(l lead.Name) []float32 { return b.MV[l][b.On : b.Off+1] }

// Duration from onset to offset.
func (b Beat) Duration() float64 { return float64(b.Off - b.On) }

// axis in the frontal plane of the areas over the first ms milliseconds (0: all).
func (b Beat) axis(ms int) float64 {
	one, foot := sumOf(head(b.qrs(lead.I), ms)), sumOf(head(b.qrs(lead.AVF), ms))
	return degrees(foot, one)
}

// netAxis is the axis of the sums of the largest and smallest deflections.
func (b Beat) netAxis() float64 {
	net := func(l lead.Name) float64 { hi, lo := extremes(b.qrs(l)); return hi + lo }
	return degrees(net(lead.AVF), net(lead.I))
}

// degrees of the axis whose projections on aVF and I are given: aVF is longer
// than a bipolar lead by 2/sqrt 3.
func degrees(foot, one float64) float64 {
	return math.Atan2(2/math.Sqrt(3)*foot, one) * 180 / math.Pi
}

// rs is the largest upward and downward deflection.
func (b Beat) rs(l lead.Name) (r, s float64) {
	hi, lo := extremes(b.qrs(l))
	return max(hi, 0), max(-lo, 0)
}

func (b Beat) r(l lead.Name) float64 { r, _ := b.rs(l); return r }
func (b Beat) s(l lead.Name) float64 { _, s := b.rs(l); return s }

// ratio of R to S.
func (b Beat) ratio(l lead.Name) float64 { r, s := b.rs(l); return r / (s + small) }

// q is the downward deflection before the largest R.
func (b Beat) q(l lead.Name) float64 {
	y := b.qrs(l)
	_, lo := extremes(y[:highest(y)+1])
	return max(-lo, 0)
}

// sAfter is the downward deflection after the largest R.
func (b Beat) sAfter(l lead.Name) float64 {
	y := b.qrs(l)
	_, lo := extremes(y[highest(y):])
	return max(-lo, 0)
}

// rBefore and rAfter are the upward deflections before and after the largest S.
func (b Beat) rBefore(l lead.Name) float64 {
	y := b.qrs(l)
	hi, _ := extremes(y[:lowest(y)+1])
	return max(hi, 0)
}

func (b Beat) rAfter(l lead.Name) float64 {
	y := b.qrs(l)
	hi, _ := extremes(y[lowest(y):])
	return max(hi, 0)
}

// peakTime is when the largest R stands.
func (b Beat) peakTime(l lead.Name) float64 { return float64(highest(b.qrs(l))) }

// t is the largest deflection after the QRS, with its sign.
func (b Beat) t(l lead.Name) float64 {
	best := 0.0
	for _, v := range b.MV[l][min(b.Off+20, len(b.MV[l])):] {
		if math.Abs(float64(v)) > math.Abs(best) {
			best = float64(v)
		}
	}
	return best
}

// delta is the mean of the first 30 ms.
func (b Beat) delta(l lead.Name) float64 { return sumOf(head(b.qrs(l), 30)) / 30 }

// deflection is the smallest voltage that counts as a deflection in widths.
const deflection = 0.03

// widths are how long the first large R and the S after it last.
func (b Beat) widths(l lead.Name) (r, s float64) {
	y := b.qrs(l)
	k := highest(y[:max(2, len(y)*7/10)])
	for _, v := range y[:k+1] {
		if v > deflection {
			r++
		}
	}
	for i, v := range y[k:] {
		if v < deflection {
			r += float64(i)
			break
		}
	}
	for _, v := range y[k:] {
		if v < -deflection {
			s++
		}
	}
	return r, s
}

// notches counts the leads whose R is notched, with two tops at least 0.02 mV
// above the dip between them, or slurred: for 14 ms or more of its upper half it
// changes by less than 15% of its steepest millisecond.
func (b Beat) notches(leads ...lead.Name) float64 {
	n := 0.0
	for _, l := range leads {
		if y := b.qrs(l); tops(y) >= 2 || slur(y) >= 14 {
			n++
		}
	}
	return n
}

func tops(y []float32) int {
	n, rising, top, dip := 0, true, float32(0), float32(0)
	for _, v := range y {
		switch {
		case rising && v > top:
			top = v
		case rising && v < top-0.02 && top > 0.1:
			n, rising, dip = n+1, false, v
		case !rising && v < dip:
			dip = v
		case !rising && v > dip+0.02:
			rising, top = true, v
		}
	}
	return n
}

func slur(y []float32) int {
	hi, _ := extremes(y)
	steep := 0.0
	for i := 1; i < len(y); i++ {
		steep = max(steep, math.Abs(float64(y[i]-y[i-1])))
	}
	n := 0
	for i := 1; i < len(y); i++ {
		if float64(y[i]) > hi/2 && math.Abs(float64(y[i]-y[i-1])) < 0.15*steep {
			n++
		}
	}
	return n
}

func extremes(y []float32) (hi, lo float64) {
	hi, lo = math.Inf(-1), math.Inf(1)
	for _, v := range y {
		hi, lo = max(hi, float64(v)), min(lo, float64(v))
	}
	return hi, lo
}

func highest(y []float32) int {
	k := 0
	for i, v := range y {
		if v > y[k] {
			k = i
		}
	}
	return k
}

func lowest(y []float32) int {
	k := 0
	for i, v := range y {
		if v < y[k] {
			k = i
		}
	}
	return k
}

func head(y []float32, n int) []float32 {
	if n > 0 && n < len(y) {
		return y[:n]
	}
	return y
}

func sumOf(y []float32) float64 {
	sum := 0.0
	for _, v := range y {
		sum += float64(v)
	}
	return sum
}

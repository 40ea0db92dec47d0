package heart

import (
	"math"

	"escapement/engine/tick"
)

// Rate is how fast a focus runs over the strip: straight lines between knots,
// constant before the first and after the last. Two knots at one time are a step.
type Rate []Knot

// Knot is a rate at a time.
type Knot struct {
	T   tick.Time
	BPM float64 // above 0
}

// Constant is an unchanging rate.
func Constant(bpm float64) Rate { return Rate{{0, bpm}} }

// At is the rate at an instant, after any step there.
func (r Rate) At(t tick.Time) float64 {
	i := r.after(t)
	if i == 0 {
		return r[0].BPM
	}
	if i == len(r) {
		return r[i-1].BPM
	}
	return along(r[i-1], r[i], t)
}

// after is the index of the first knot later than t.
func (r Rate) after(t tick.Time) int {
	i := 0
	for i < len(r) && r[i].T <= t {
		i++
	}
	return i
}

func along(a, b Knot, t tick.Time) float64 {
	return a.BPM + float64((b.BPM-a.BPM)*(float64(t-a.T)/float64(b.T-a.T)))
}

// Next is the instant at which the focus has run through the given number of
// cycles since from: the integral of the rate reaches cycles. The count may be a
// fraction.
func (r Rate) Next(from tick.Time, cycles float64) tick.Time {
	t := from
	for {
		i := r.after(t)
		rate := r.At(t)
		if i == len(r) || r[i].BPM == rate {
			// A constant stretch; exact for a rate without knots.
			need := tick.MS(float64(cycles * (60000 / rate)))
			if i == len(r) || t.Add(need) <= r[i].T {
				return t.Add(need)
			}
			cycles -= float64(r[i].T.Sub(t)) / float64(tick.Minute) * rate
			t = r[i].T
			continue
		}
		length := float64(r[i].T.Sub(t)) / float64(tick.Minute)
		area := float64(length * float64(0.5*(rate+r[i].BPM)))
		if area < cycles {
			cycles -= area
			t = r[i].T
			continue
		}
		// rate*x + slope/2*x^2 = cycles, the smaller positive root.
		slope := (r[i].BPM - rate) / length
		root := math.Sqrt(float64(rate*rate) + float64(2*float64(slope*cycles)))
		return t.Add(tick.Dur(math.RoundToEven(2 * cycles / (rate + root) * float64(tick.Minute))))
	}
}

// Cycles is the integral of the rate between two instants: how many cycles the focus
// runs through.
func (r Rate) Cycles(from, to tick.Time) float64 {
	sum := 0.0
	for t := from; t < to; {
		i := r.after(t)
		end := to
		if i < len(r) {
			end = min(end, r[i].T)
		}
		last := r.At(t)
		if i > 0 && i < len(r) {
			last = along(r[i-1], r[i], end)
		}
		sum += float64(float64(end.Sub(t)) / float64(tick.Minute) * float64(0.5*(r.At(t)+last)))
		t = end
	}
	return sum
}

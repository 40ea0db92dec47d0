package field

import (
	"slices"

	"escapement/engine/portmath"
	"escapement/engine/tick"
)

// Adaptation of the ventricular action potential to the cycle. In the steady
// state it lengthens by 23 ms for every 100 ms of cycle (Franz, Swerdlow, Liem,
// Schaefer, J Clin Invest 1988;82:972: human endocardium, r = 0.995). After a
// step the first beat changes at once and the rest takes minutes (same); the
// share and the time constant are choices within that.
const (
	referenceCycle  = 800 * tick.Millisecond // at which the model's durations hold
	durationPerMS   = 0.23                   // change of duration per change of cycle
	atOnce          = 0.6                    // share of the change that the very next beat shows
	memory          = 60 * tick.Second       // time constant of the rest
	shortestCycle   = 250 * tick.Millisecond // below it the duration stays
	bendCycle       = 1000 * tick.Millisecond
	pastBend        = 0.08 // per ms above bendCycle: about the slope of Hodges' QT formula at 50/min
	longestCycle    = 2000 * tick.Millisecond
	effectiveStep   = 10 * tick.Millisecond // effective cycles are rounded to this
	steadyFromFirst = 8                     // cycles whose median stands for those before the strip
)

// effectiveCycles gives, for each wave, the steady cycle that would make its
// action potentials as long: part the cycle before it, part a running mean of
// those before. The heart is taken to have come to the strip from a steady
// cycle, the median of the first few; with a single wave, the reference.
func effectiveCycles(first []tick.Time) []tick.Dur {
	out := make([]tick.Dur, len(first))
	var cycles []tick.Dur
	for i := 1; i < len(first); i++ {
		cycles = append(cycles, first[i].Sub(first[i-1]))
	}
	start := referenceCycle
	if len(cycles) > 0 {
		early := slices.Sorted(slices.Values(cycles[:min(len(cycles), steadyFromFirst)]))
		start = early[len(early)/2]
	}
	mean := bound(start).MS()
	for i := range first {
		last := start
		if i > 0 {
			last = cycles[i-1]
		}
		c := bound(last).MS()
		effective := float64(atOnce*c) + float64((1-atOnce)*mean)
		out[i] = roundTo(tick.MS(effective), effectiveStep)
		kept := portmath.Exp(-c / memory.MS())
		mean = float64(kept*mean) + float64((1-kept)*c)
	}
	return out
}

func bound(c tick.Dur) tick.Dur { return min(max(c, shortestCycle), longestCycle) }

// stretch is the change of every action potential's duration from that at the
// reference cycle.
func stretch(cycle tick.Dur) tick.Dur {
	below, above := min(cycle, bendCycle), max(cycle-bendCycle, 0)
	return tick.MS(float64(durationPerMS*(below-referenceCycle).MS()) + float64(pastBend*above.MS()))
}

// roundTo rounds to a multiple of step, halves up.
func roundTo(d, step tick.Dur) tick.Dur {
	q := (d + step/2) / step
	if (d+step/2)%step < 0 {
		q--
	}
	return q * step
}

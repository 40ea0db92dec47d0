package pacer

import (
	"fmt"

	"escapement/engine/tick"
)

// longestPattern is how many P waves are looked at for a pattern to repeat.
const longestPattern = 256

// Pattern is how many P waves go with how many ventricular stimuli at an atrial
// cycle, for a heart that does not conduct. It follows the rules of tracking from P
// to P until they repeat; 0, 0 where they do not within 256 P waves.
//
// For TARP <= PP < MTRI the fact sheet's N = floor((PP - TARP)/(MTRI - PP)) + 2 gives
// (N+1):N, where one dropped P makes a pause that is not shorter than MTRI. Else the
// next AV delay begins stretched, and the pattern is another one.
func Pattern(pp, mtri, sav, pvarp tick.Dur) (ps, vs int) {
	return pattern(pp, mtri, func(tick.Dur) (tick.Dur, tick.Dur) { return sav, pvarp })
}

// pattern asks for the AV delay and PVARP at an atrial interval: after a P that was not
// tracked the interval is longer, and so may they be.
func pattern(pp, mtri tick.Dur, at func(interval tick.Dur) (sav, pvarp tick.Dur)) (ps, vs int) {
	type state struct {
		since  tick.Dur // last stimulus to P; the same for all that track at once
		gap    int      // P waves since the last that was tracked
		ps, vs int
	}
	var seen []state
	sav, pvarp := at(pp)
	lastP, lastV := -1, -max(mtri-sav, pvarp)
	for i := range longestPattern {
		p := tick.Dur(i) * pp
		since := p - lastV
		if since < pvarp { // in PVARP, or before the stimulus it waits for
			continue
		}
		gap := i - lastP
		was := pvarp
		sav, pvarp = at(tick.Dur(gap) * pp)
		since = min(since, max(mtri-sav, was))
		for _, s := range seen {
			if s.since == since && s.gap == gap {
				return i - s.ps, vs - s.vs
			}
		}
		seen = append(seen, state{since, gap, i, vs})
		lastV = max(p+sav, lastV+mtri)
		lastP = i
		vs++
	}
	return 0, 0
}

func patternValues(s *Settings, pp, mtri tick.Dur) []Value {
	tarp := s.TARPAt(pp)
	ps, n := pattern(pp, mtri, func(d tick.Dur) (tick.Dur, tick.Dur) { return s.SensedAVAt(d), s.PVARPAt(d) })
	if n == 0 {
		return nil
	}
	mean := float64(n) * 60e6 / (float64(ps) * float64(pp))
	pause := 2*pp - tick.Dur(n-1)*(mtri-pp)
	wenckebach := n > 1 && !s.adapts() && pp >= tarp && ps == n+1 && n == int((pp-tarp)/(mtri-pp))+2 && pause >= mtri
	formula, sum := "each P by the rules of tracking, until they repeat", fmt.Sprintf("%d P waves, %d stimuli", ps, n)
	switch {
	case wenckebach:
		formula = "N = floor((PP - TARP) / (MTRI - PP)) + 2, (N+1):N"
		sum = fmt.Sprintf("floor((%s) / (%s)) + 2 = %d", less(pp, tarp), less(mtri, pp), n)
	case ps == 1:
		formula, sum = "P-P >= MTRI and TARP: 1:1", number(pp.MS())+" >= "+number(max(mtri, tarp).MS())
	case n == 1 && !s.adapts() && pp < tarp && ps == int((tarp+pp-1)/pp):
		formula, sum = "P-P < TARP: TARP / PP, rounded up, to 1", fmt.Sprintf("%s / %s, rounded up = %d", number(tarp.MS()), number(pp.MS()), ps)
	}
	vs := []Value{
		{Name: "pattern", Label: "P waves to ventricular stimuli at sinus " + number(pp.BPM()) + "/min", Amount: float64(n) / float64(ps), Text: fmt.Sprintf("%d:%d", ps, n),
			Formula: formula, Numbers: sum, Source: sourceDerived},
		{Name: "mean_rate", Label: "mean ventricular rate then", Amount: mean, Unit: "/min", Text: number(mean), Formula: "60000 V / (P PP)",
			Numbers: fmt.Sprintf("60000 x %d / (%d x %s) = %s /min", n, ps, number(pp.MS()), number(mean)), Source: sourceDerived},
	}
	if wenckebach {
		vs = append(vs, length("av_growth", "AV delay longer by, each beat", mtri-pp, "MTRI - PP", less(mtri, pp), sourceDerived),
			length("pause", "pause at the dropped beat", pause, "2 PP - (N - 1) (MTRI - PP)",
				fmt.Sprintf("2 x %s - %d x %s", number(pp.MS()), n-1, number((mtri-pp).MS())), sourceDerived))
	}
	return vs
}

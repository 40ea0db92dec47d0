package pacer

import "escapement/engine/tick"

// fallState watches for a sudden fall of the rate.
type fallState struct {
	fast  int       // intervals at the fast rate in a row
	seen  tick.Time // when it was last there
	known bool
	slow  int       // stimuli at the lower rate since
	until tick.Time // end of pacing after a fall
}

// fastBeats are the intervals in a row that make the rate before a fall.
const fastBeats = 3

func (d *Device) findFall(paced bool, vv tick.Dur) {
	s, f := &d.s.Fall, &d.fall
	if s.From <= 0 {
		return
	}
	responding := f.until > 0 && d.now <= f.until.Add(interval(s.Rate))
	if f.fast++; vv == 0 || vv > interval(s.From) || responding {
		f.fast = 0
	}
	if f.fast >= fastBeats {
		f.seen, f.known = d.now, true
	}
	if !paced && !d.mode.SensesA() {
		f.slow = 0
	}
}

// countEscape counts a stimulus at the lower rate, which may confirm a fall.
func (d *Device) countEscape(dl deadline) {
	s, f := &d.s.Fall, &d.fall
	if s.From <= 0 || !f.known || dl.timer != EscapeTimer && dl.timer != LowerTimer || dl.why != "" && dl.why != ByHysteresis {
		return
	}
	if f.slow++; f.slow < max(1, s.Beats) {
		return
	}
	if d.now.Sub(f.seen) <= s.Within {
		f.until = d.now.Add(s.For)
	}
	f.slow, f.known = 0, false
}

// fallInterval is the interval while pacing after a fall, or 0.
func (d *Device) fallInterval() tick.Dur {
	if d.now < d.fall.until {
		return interval(d.s.Fall.Rate)
	}
	return 0
}

// stableInterval is the longest interval that evens an irregular rhythm, or 0.
func (d *Device) stableInterval() tick.Dur {
	s := &d.s.Stabilise
	if s.By <= 0 || d.anyVV == 0 || s.OnlySwitched && !d.sw.away {
		return 0
	}
	return max(interval(s.Rate), d.anyVV+s.By, d.shortestEscape())
}

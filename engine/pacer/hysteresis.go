package pacer

import "escapement/engine/tick"

// hysteresisState counts towards the next search.
type hysteresisState struct {
	paced  int // stimuli since the last sensed beat
	search int // cycles left of a search
}

// hysteresis is the longer interval after a sensed beat or in a search, or 0.
func (d *Device) hysteresis(sensed bool) tick.Dur {
	h := &d.s.Hysteresis
	if h.Rate <= 0 {
		return 0
	}
	if !d.a.known && !d.v.known { // the strip begins
		return 0
	}
	if sensed {
		d.hyst = hysteresisState{}
		return tick.PerMinute(h.Rate)
	}
	d.hyst.paced++
	if d.hyst.search > 0 {
		d.hyst.search--
		return tick.PerMinute(h.Rate)
	}
	if h.Every > 0 && d.hyst.paced >= h.Every {
		d.hyst = hysteresisState{search: max(1, h.Cycles) - 1}
		return tick.PerMinute(h.Rate)
	}
	return 0
}

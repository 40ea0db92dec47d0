package pacer

import "escapement/engine/tick"

// loopState counts ventricular stimuli that look like an endless loop.
type loopState struct {
	count    int
	va       tick.Dur
	withhold bool // leave out the next stimulus
}

// findLoop looks at a ventricular event and tells whether the PVARP after it should
// be long. A loop slower than the upper rate and its margin is not found, as in
// devices that go by rate.
func (d *Device) findLoop(paced bool, vv tick.Dur) bool {
	s, l := &d.s.Loop, &d.loop
	if s.Beats <= 0 {
		return false
	}
	if !paced || !d.mode.Tracks() || !d.avRunning || d.a.paced || vv == 0 || vv > d.upperInterval()+s.RateMargin {
		l.count = 0
		return false
	}
	va := d.a.at.Sub(d.v.at)
	if l.count == 0 || max(va-l.va, l.va-va) > s.Margin {
		l.count, l.va = 0, va
	}
	if l.count++; l.count < s.Beats {
		return false
	}
	l.count = 0
	l.withhold = s.Withhold
	return !s.Withhold
}

// withhold leaves out a ventricular stimulus to end a loop. In DDD the escape begins
// anew.
func (d *Device) withhold(dl deadline) bool {
	if !d.loop.withhold || !d.avRunning {
		return false
	}
	d.loop.withhold, d.avRunning = false, false
	if d.within(LowerRate) { // VDD: the lower rate still stands
		d.set(slotVentricle, d.spans[LowerRate].until, deadline{timer: LowerTimer, cause: d.v.id, why: ByLoop})
	} else {
		d.restart(dl.cause)
	}
	next := min(d.timers[slotAtrium].at, d.timers[slotVentricle].at)
	d.open(Withheld, next.Sub(d.now), dl.cause, ByLoop)
	return true
}

package pacer

import (
	"escapement/engine/event"
	"escapement/engine/tick"
)

// least is the shortest time a timer may run, so that no setting stops the clock.
const least = tick.Millisecond

// lowerInterval is the lower-rate interval in force: as set, by night, by magnet.
func (d *Device) lowerInterval() tick.Dur {
	rate, _ := d.lowerRate()
	return interval(rate)
}

func (d *Device) lowerRate() (float64, string) {
	if d.magnet && d.s.Magnet.Rate > 0 {
		return d.s.Magnet.Rate, ByMagnet
	}
	if n := &d.s.Night; n.Rate > 0 && n.From <= d.now && d.now < n.To {
		return n.Rate, ByNight
	}
	return d.s.LowerRate, ""
}

// escape is the interval that a beat now allows the heart, with what set it. It is
// the longest the lower rate, night or hysteresis allow, and less where the sensor, a
// response or a limit asks for more.
func (d *Device) escape(sensed bool) (tick.Dur, string) {
	rate, why := d.lowerRate()
	interval := interval(rate)
	if d.magnet {
		return interval, why
	}
	if longer := d.hysteresis(sensed); longer > interval {
		interval, why = longer, ByHysteresis
	}
	shorten := func(to tick.Dur, by string) {
		if to > 0 && to < interval {
			interval, why = to, by
		}
	}
	shorten(d.sensorInterval(), BySensor)
	shorten(d.fallInterval(), ByFall)
	shorten(d.stableInterval(), ByStabilise)
	if d.vv > 0 && d.s.ChangeLimit.Longer > 0 {
		shorten(max(d.vv+share(d.vv, d.s.ChangeLimit.Longer), d.shortestEscape()), ByChange)
	}
	shorten(d.rampInterval(), ByRamp)
	return max(interval, least), why
}

// shortestEscape bounds what follows the heart's own rate: the device does not pace
// faster than it may track.
func (d *Device) shortestEscape() tick.Dur {
	return max(d.upperInterval(), least)
}

// single begins the escape of a mode with one chamber.
func (d *Device) single(s slot, id event.ID, paced bool) {
	interval, why := d.escape(!paced)
	d.open(LowerRate, interval, id, why)
	d.set(s, d.now.Add(interval), deadline{timer: LowerTimer, cause: id, why: why})
}

// afterV begins the escape after a ventricular event.
func (d *Device) afterV(id event.ID, c cycle) {
	if !d.mode.PacesV() {
		return
	}
	if !d.mode.dual() {
		d.single(slotVentricle, id, !c.sensed)
		return
	}
	interval, why := d.escape(c.sensed)
	d.plannedAV = d.pacedAV(interval)
	at := max(d.baseAtrial(interval, c), d.now.Add(least))
	d.open(AtrialEscape, at.Sub(d.now), id, why)
	d.set(slotAtrium, at, deadline{timer: EscapeTimer, cause: id, why: why})
	if d.mode.ddi() {
		// The ventricular timer does not wait for the atrium.
		d.open(LowerRate, interval, id, why)
		d.set(slotVentricle, d.now.Add(interval), deadline{timer: LowerTimer, cause: id, why: why})
	}
}

// baseAtrial is when the atrial stimulus is due after a ventricular event now.
func (d *Device) baseAtrial(interval tick.Dur, c cycle) tick.Time {
	at := d.now.Add(interval - d.plannedAV)
	if !d.mode.Tracks() || !c.usedA { // such as a PVC
		return at
	}
	fromA := d.a.at.Add(interval)
	switch {
	case d.s.Base == AtrialBase && interval < d.upperInterval():
		// The sensor is faster than the upper tracking rate, and an AV delay stretched
		// to that must not make the next ventricular interval shorter than both.
		return max(fromA, at)
	case d.s.Base == AtrialBase, d.s.Base == ModifiedBase && c.conducted:
		return fromA
	}
	return at
}

// restart begins the escape as after a ventricular event, without one.
func (d *Device) restart(cause event.ID) {
	switch {
	case d.backup.alone || d.mode.atrialOnly():
		d.single(slotAtrium, cause, true)
	default:
		d.clear(slotAtrium)
		d.clear(slotVentricle)
		d.afterV(cause, cycle{})
	}
}

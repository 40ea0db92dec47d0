package pacer

import (
	"escapement/engine/event"
	"escapement/engine/tick"
)

// Sense tells the device of a signal above sensitivity on a channel. The id is the
// sense event's; windows that it opens or ends name it.
func (d *Device) Sense(now tick.Time, ch Channel, id event.ID) Sensed {
	d.Advance(now)
	if ch == Atrial {
		return d.senseA(id)
	}
	return d.senseV(id)
}

func (d *Device) senseA(id event.ID) Sensed {
	for _, n := range [...]WindowName{AtrialBlanking, PVAB} {
		if d.within(n) {
			return Sensed{event.Blanked, d.spans[n].id}
		}
	}
	escape, lower := d.because(AtrialEscape), d.because(LowerRate)
	d.countAtrial(id) // may change the mode, and begin these anew
	if !d.mode.SensesA() || d.mode.Response == 'O' {
		return Sensed{Use: event.Observed}
	}
	if d.within(AtrialNoise) {
		return Sensed{event.Noise, d.prolongNoise(AtrialNoise, AtrialRefractory, id)}
	}
	if because, refractory := d.atriumRefractory(); refractory {
		d.refA = beat{at: d.now, id: id, known: true}
		d.atrial = d.atrial || d.s.RefractoryCounts
		return Sensed{event.Refractory, because}
	}
	switch {
	case d.mode.Triggers():
		return d.triggerA(id)
	case d.backup.alone || d.mode.atrialOnly():
		d.beatA(id, false)
		return Sensed{event.Resets, lower}
	case d.mode.Tracks():
		d.beatA(id, false)
		return Sensed{Use: event.Tracked}
	}
	d.beatA(id, false)
	return Sensed{event.Inhibits, escape}
}

// atriumRefractory tells whether an atrial signal is refractory now, and by what.
func (d *Device) atriumRefractory() (event.ID, bool) {
	for _, n := range [...]WindowName{PVARP, AtrialRefractory} {
		if d.within(n) {
			return d.spans[n].id, true
		}
	}
	if d.avRunning {
		return d.awaited(), true
	}
	return 0, false
}

// awaited is the window at whose end a ventricular stimulus is due for an atrial event,
// also at the very instant at which it has ended. An AV delay that still runs comes
// before what may hold the stimulus back after it.
func (d *Device) awaited() event.ID {
	n := AVDelay
	if !d.within(AVDelay) {
		switch d.timers[slotVentricle].timer {
		case UpperTimer:
			n = UpperRate
		case SafetyTimer:
			n = Crosstalk
		case BackupTimer:
			n = BackupDelay
		case LowerTimer: // a P so late, without tracking past the lower rate, that it has no AV delay
			n = LowerRate
		}
	}
	return d.spans[n].id
}

func (d *Device) senseV(id event.ID) Sensed {
	switch {
	case d.within(PAVB):
		return Sensed{event.Blanked, d.spans[PAVB].id}
	case !d.mode.SensesV() || d.mode.Response == 'O':
		return Sensed{Use: event.Observed}
	case d.within(VentricularNoise):
		return Sensed{event.Noise, d.prolongNoise(VentricularNoise, VentricularRefractory, id)}
	case d.within(VentricularRefractory):
		return Sensed{event.Refractory, d.spans[VentricularRefractory].id}
	case d.within(Crosstalk):
		because := d.spans[Crosstalk].id
		d.planSafety(id)
		return Sensed{event.Safety, because}
	case d.mode.Triggers():
		return d.triggerV(id)
	}
	use, because := event.Resets, max(d.because(AtrialEscape), d.because(LowerRate))
	switch {
	case d.avRunning:
		use, because = event.Inhibits, d.awaited()
	case d.backup.alone: // the atrium's timer goes on; no backup stimulus will be due
		use, because = event.Inhibits, d.because(BackupDelay)
	}
	d.beatV(id, false)
	return Sensed{use, because}
}

// planSafety commits the ventricular stimulus to the end of the crosstalk window, or
// to the end of the AV delay if that is sooner.
func (d *Device) planSafety(id event.ID) {
	at := min(d.spans[Crosstalk].until, d.timers[slotVentricle].at)
	d.set(slotVentricle, at, deadline{timer: SafetyTimer, cause: id})
	d.close(AVDelay, id)
}

// A triggered stimulus keeps to the upper rate: a signal too soon after the last
// event only begins the timing anew.
func (d *Device) triggerA(id event.ID) Sensed {
	because := d.because(LowerRate)
	if d.a.known && d.now < d.a.at.Add(d.upperInterval()) {
		d.beatA(id, false)
		return Sensed{event.Resets, because}
	}
	d.paceA(deadline{timer: TriggerTimer, cause: id})
	return Sensed{event.Triggers, because}
}

func (d *Device) triggerV(id event.ID) Sensed {
	because := d.because(LowerRate)
	if d.v.known && d.now < d.v.at.Add(d.upperInterval()) {
		d.beatV(id, false)
		return Sensed{event.Resets, because}
	}
	d.paceV(deadline{timer: TriggerTimer, cause: id})
	return Sensed{event.Triggers, because}
}

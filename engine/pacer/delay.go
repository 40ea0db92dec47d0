package pacer

import "escapement/engine/tick"

// putOff postpones an atrial stimulus that would come soon after an atrial signal in
// a refractory period, into tissue that may not have recovered.
func (d *Device) putOff(dl deadline) bool {
	if d.s.AtrialDelay <= 0 || dl.timer != EscapeTimer || !d.refA.known {
		return false
	}
	at := d.refA.at.Add(d.s.AtrialDelay)
	if at <= d.now {
		return false
	}
	d.open(AtrialDelay, at.Sub(d.now), d.refA.id, "")
	// The ventricular stimulus keeps its time as far as the shortest delay allows.
	if due := d.now.Add(d.plannedAV); d.plannedAV > 0 {
		d.plannedAV = max(delayedAV, due.Sub(at))
	}
	d.set(slotAtrium, at, deadline{timer: DelayTimer, cause: d.refA.id, why: dl.why})
	return true
}

// delayedAV is the shortest AV delay after an atrial stimulus put off: long enough to
// be seen as one, short enough to keep the rate.
const delayedAV = 80 * tick.Millisecond

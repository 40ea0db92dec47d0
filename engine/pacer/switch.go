package pacer

import (
	"math/bits"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// switchState counts short atrial intervals. Every atrial event outside blanking
// ends one, refractory or not, paced or not.
type switchState struct {
	away    bool
	last    tick.Time
	known   bool // there has been an atrial event
	recent  uint32
	long    int      // long intervals in a row
	noticed bool     // an atrial event since the last ventricular one
	ramp    tick.Dur // interval on the way down, 0 when done
}

// countAtrial takes an atrial event into the counts, which may change the mode.
func (d *Device) countAtrial(id event.ID) {
	s, w := &d.s.Switch, &d.sw
	if s.Rate <= 0 || !d.s.Mode.Tracks() || d.magnet {
		return
	}
	short := d.now.Sub(w.last) < interval(s.Rate)
	counts := w.known
	w.last, w.known, w.noticed = d.now, true, true
	if !counts {
		return
	}
	w.recent <<= 1
	w.long++
	if short {
		w.recent |= 1
		w.long = 0
	}
	d.decideSwitch(id)
}

// countQuiet counts a ventricular cycle without any atrial event as a long interval,
// or a silent atrium would keep the device from coming back.
func (d *Device) countQuiet(id event.ID) {
	if d.sw.away && !d.sw.noticed {
		d.sw.long++
		d.decideSwitch(id)
	}
	d.sw.noticed = false
}

func (d *Device) decideSwitch(id event.ID) {
	s, w := &d.s.Switch, &d.sw
	of := min(max(s.Of, s.Short, 1), 32)
	switch {
	case !w.away && bits.OnesCount32(w.recent<<(32-of)) >= max(1, s.Short):
		*w = switchState{away: true, last: w.last, known: true, noticed: w.noticed}
		if s.Ramp > 0 {
			w.ramp = d.vv
		}
		d.backup.alone = false
		to := s.Mode
		if to == (Mode{}) {
			to = Mode{'V', 'V', 'I', 'O', 'O'}
			if d.s.Mode.PacesA() {
				to = Mode{'D', 'D', 'I', 'O', 'O'}
			}
		}
		d.change(d.s.Mode.like(to), "fast atrium", id)
	case w.away && w.long >= max(1, s.Return):
		*w = switchState{last: w.last, known: true, noticed: w.noticed}
		d.backup.start(d)
		d.change(d.s.Mode, "atrium slow again", id)
	}
}

// rampInterval is the interval on the way from the rate at the switch down to the
// lower rate, or 0.
func (d *Device) rampInterval() tick.Dur {
	w := &d.sw
	if w.ramp == 0 {
		return 0
	}
	if w.ramp += d.s.Switch.Ramp; w.ramp >= d.lowerInterval() {
		w.ramp = 0
	}
	return w.ramp
}

// change puts another mode in force. A ventricular stimulus that is due for an atrial
// event stays due; other timers are set as the new mode would have set them at the
// last ventricular event.
func (d *Device) change(to Mode, why string, cause event.ID) {
	d.mode = to
	id := d.recordMode(why, cause)
	if !d.avRunning {
		d.rearm(id)
	}
}

// recordMode records how the device behaves from now on.
func (d *Device) recordMode(why string, cause event.ID) event.ID {
	to := d.mode.String()
	if d.backup.alone {
		to = d.mode.like(Mode{'A', 'A', 'I', 'O', 'O'}).String()
	}
	from := d.named
	d.named = to
	return d.r.Mode(from, to, why, cause)
}

// rearm sets the timers for the mode in force in the middle of a cycle.
func (d *Device) rearm(id event.ID) {
	d.clear(slotAtrium)
	d.clear(slotVentricle)
	for _, n := range [...]WindowName{AtrialEscape, LowerRate, BackupDelay, AtrialDelay} {
		d.close(n, id)
	}
	interval, why := d.escape(false)
	due := max(d.v.at.Add(interval), d.now.Add(least))
	switch {
	case d.mode.Response == 'O' && d.mode.Paced == 'O':
	case d.backup.alone || d.mode.atrialOnly():
		due = max(d.a.at.Add(interval), d.now.Add(least))
		d.open(LowerRate, due.Sub(d.now), id, why)
		d.set(slotAtrium, due, deadline{timer: LowerTimer, cause: id, why: why})
		return
	case d.mode.dual():
		d.plannedAV = d.pacedAV(interval)
		if at := due.Add(-d.plannedAV); at > d.now {
			d.open(AtrialEscape, at.Sub(d.now), id, why)
			d.set(slotAtrium, at, deadline{timer: EscapeTimer, cause: id, why: why})
			if !d.mode.ddi() {
				return
			}
		}
	}
	d.open(LowerRate, due.Sub(d.now), id, why)
	d.set(slotVentricle, due, deadline{timer: LowerTimer, cause: id, why: why})
}

// turnMagnet begins or ends the magnet's mode.
func (d *Device) turnMagnet() {
	d.magnet = !d.magnet
	if d.magnet {
		d.set(slotMagnet, d.s.Magnet.To, deadline{})
		d.sw, d.backup.alone = switchState{}, false
		d.change(d.s.Magnet.Mode, ByMagnet, 0)
		return
	}
	d.backup.start(d)
	d.change(d.s.Mode, "magnet removed", 0)
}

package pacer

import (
	"escapement/engine/event"
	"escapement/engine/tick"
)

// Timer names what ended when a stimulus is given. The zero Timer is invalid.
type Timer uint8

const (
	_            Timer = iota
	EscapeTimer        // atrial escape
	LowerTimer         // lower-rate interval
	AVTimer            // AV delay
	UpperTimer         // AV delay over, held to the end of the upper-rate interval
	ChangeTimer        // AV delay over, held by the rate-change limit
	SafetyTimer        // end of the crosstalk window after a signal in it
	OffsetTimer        // further ventricular lead
	TriggerTimer       // none: a signal is answered at once
	DelayTimer         // atrial stimulus put off
	BackupTimer        // ventricular stimulus for a missed beat
)

var timerNames = [...]string{
	EscapeTimer: "atrial_escape", LowerTimer: "lower_rate", AVTimer: "av_delay", UpperTimer: "upper_rate",
	ChangeTimer: "rate_change", SafetyTimer: "safety", OffsetTimer: "offset", TriggerTimer: "trigger",
	DelayTimer: "atrial_delay", BackupTimer: "backup",
}

// String is the name as it stands in the record: "av_delay".
func (t Timer) String() string {
	if t == 0 || int(t) >= len(timerNames) {
		return "invalid"
	}
	return timerNames[t]
}

// slot is a place for one pending deadline. The order is the order in which deadlines
// of one instant are served.
type slot uint8

const (
	slotMagnet slot = iota
	slotCrosstalk
	slotNoiseV
	slotNoiseA
	slotAtrium
	slotVentricle
	slotLater // up to three further ventricular leads
	slotLater2
	slotLater3
	slotCount
)

type deadline struct {
	at    tick.Time
	timer Timer
	lead  Lead // of a further ventricular lead
	cause event.ID
	why   string
}

func (d *Device) set(s slot, at tick.Time, dl deadline) {
	dl.at = at
	d.timers[s] = dl
	d.stale = true
}

func (d *Device) clear(s slot) {
	d.timers[s].at = tick.Never
	d.stale = true
}

// Advance opens the windows that begin in the middle of others up to now, so that a
// signal at that very instant finds them. A kernel that numbers what it records calls it
// before it records the signal, or the window that decides its use would come after it;
// [Device.Sense] does it in any case.
func (d *Device) Advance(now tick.Time) {
	d.now = now
	for _, s := range [...]slot{slotCrosstalk, slotNoiseV, slotNoiseA} {
		if dl := d.timers[s]; dl.at <= now {
			d.clear(s)
			d.fire(s, dl)
		}
	}
}

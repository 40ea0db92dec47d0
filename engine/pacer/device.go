// Package pacer is a generic pacemaker as a state machine of timers and windows.
//
// It knows no heart. A kernel tells it what its leads sense ([Device.Sense]) and
// lets its timers end ([Device.Expire], at [Device.Due]); it asks for stimuli and
// records its windows through a [Recorder]. It models the timing that the NBG code
// and the literature define, and no device in particular: no batteries, leads,
// thresholds or amplifiers, which are the kernel's or the reader's.
//
// Conventions. Time is whole microseconds. Windows are half open: a signal exactly
// at the end of a refractory period is sensed. At one instant signals come before
// timers (the kernel calls Sense before Expire) and the atrium before the ventricle.
// A tracked stimulus comes at the later of P + sensed AV delay and the last
// ventricular event + upper-rate interval. The escape after a ventricular event is
// the lower-rate interval less the paced AV delay that would follow. The strip
// begins as though a ventricular event had just passed.
//
// A Recorder must not call the device back from within its methods.
package pacer

import (
	"escapement/engine/event"
	"escapement/engine/tick"
)

// Channel is a sense amplifier. The zero Channel is invalid.
type Channel uint8

const (
	_ Channel = iota
	Atrial
	Ventricular
)

// Lead is a place that can be stimulated. The zero Lead is invalid.
type Lead uint8

const (
	_ Lead = iota
	RA
	RV
	LV
	LV2
	HisLead
)

var leadNames = [...]string{RA: "RA", RV: "RV", LV: "LV", LV2: "LV2", HisLead: "His"}

// String is the usual abbreviation of the place.
func (l Lead) String() string {
	if l == 0 || int(l) >= len(leadNames) {
		return "invalid"
	}
	return leadNames[l]
}

// Recorder carries out what the device decides.
type Recorder interface {
	// Stimulate delivers a stimulus now and gives its event id.
	Stimulate(p Pulse) event.ID
	// Open records a window that begins now and gives its event id.
	Open(w Window) event.ID
	// Close ends a window now, before its time, by an event. A window that runs out
	// is not closed.
	Close(window, by event.ID)
	// Mode records a change of mode and gives its event id.
	Mode(from, to, why string, cause event.ID) event.ID
}

// Pulse is a stimulus. Cause is the event that asked for it: the P that is tracked,
// the event that began the escape, the signal in the crosstalk window.
type Pulse struct {
	Lead  Lead
	Timer Timer
	Cause event.ID
	Why   string // what changed the timer's usual length, as in Window
}

// Sensed is what the device did with a signal and the window that decided it.
type Sensed struct {
	Use     event.Use
	Because event.ID
}

// beat is an event that the timing counts from.
type beat struct {
	at    tick.Time
	id    event.ID
	paced bool
	known bool // there has been one
}

// Device is the state of a pacemaker. Make one with New.
type Device struct {
	s    Settings
	r    Recorder
	now  tick.Time
	mode Mode // in force; s.Mode is what was set

	named string // how the record last named the mode

	spans  [windowCount]span
	timers [slotCount]deadline
	next   tick.Time // earliest of the timers, unless stale
	stale  bool

	a, v      beat     // the last atrial and ventricular event that the timing used
	aa, vv    tick.Dur // the intervals before them, vv without PVCs; 0: not known
	anyVV     tick.Dur // the last ventricular interval of any kind
	atrial    bool     // an atrial event since the last ventricular one, for the definition of a PVC
	usedA     bool     // one that took part in the timing
	avRunning bool     // a ventricular stimulus is due for an atrial event
	plannedAV tick.Dur // paced AV delay that the running escape counts on
	refA      beat     // the last atrial signal in a refractory period

	longer  longerState
	shorter shorterState
	hyst    hysteresisState
	sensor  sensorState
	sw      switchState
	loop    loopState
	fall    fallState
	backup  backupState
	magnet  bool
}

// New makes a device. Settings must have passed [Settings.Faults]; lengths that would
// stop the clock are held at a millisecond.
func New(s Settings, r Recorder) *Device {
	s.LowerRate = max(s.LowerRate, 1)
	d := &Device{s: s, r: r, mode: s.Mode, stale: true}
	for i := range d.timers {
		d.timers[i].at = tick.Never
	}
	return d
}

// Program puts other settings in force, as a programmer does in the middle of a
// strip. What has begun runs out by the old ones; the mode stays.
func (d *Device) Program(s Settings) {
	s.LowerRate = max(s.LowerRate, 1)
	s.Mode = d.s.Mode
	d.s = s
}

// Start begins the strip.
func (d *Device) Start(now tick.Time) {
	d.now = now
	d.a.at, d.v.at = now, now
	d.sensor.start(&d.s, now)
	d.named = d.mode.String()
	if d.backup.start(d); d.backup.alone {
		d.recordMode("ventricular backup", 0)
	}
	if d.s.Magnet.Mode != (Mode{}) {
		d.set(slotMagnet, d.s.Magnet.From, deadline{})
	}
	d.restart(0)
}

// Senses tells whether a channel's amplifier is on, in the mode set or for the mode
// switch.
func (d *Device) Senses(ch Channel) bool {
	if ch == Atrial {
		return d.s.Mode.SensesA()
	}
	return d.s.Mode.SensesV()
}

// Due is the next instant at which a timer ends, or tick.Never.
func (d *Device) Due() tick.Time {
	if d.stale {
		d.next, d.stale = tick.Never, false
		for i := range d.timers {
			d.next = min(d.next, d.timers[i].at)
		}
	}
	return d.next
}

// Expire acts on every timer that ends at or before now.
func (d *Device) Expire(now tick.Time) {
	d.now = now
	for s := d.ended(); s < slotCount; s = d.ended() {
		dl := d.timers[s]
		d.clear(s)
		d.fire(s, dl)
	}
}

func (d *Device) ended() slot {
	for s := range slotCount {
		if d.timers[s].at <= d.now {
			return s
		}
	}
	return slotCount
}

func (d *Device) fire(s slot, dl deadline) {
	switch s {
	case slotMagnet:
		d.turnMagnet()
	case slotCrosstalk:
		d.open(Crosstalk, d.s.Crosstalk-d.s.PAVB, dl.cause, "")
	case slotNoiseV:
		d.open(VentricularNoise, d.spans[VentricularRefractory].until.Sub(d.now), dl.cause, "")
	case slotNoiseA:
		d.open(AtrialNoise, d.spans[AtrialRefractory].until.Sub(d.now), dl.cause, "")
	case slotAtrium:
		d.paceA(dl)
	case slotVentricle:
		d.paceV(dl)
	default:
		d.r.Stimulate(Pulse{dl.lead, dl.timer, dl.cause, dl.why})
	}
}

package plan

import (
	"escapement/engine/event"
	"escapement/engine/heart"
	"escapement/engine/pacer"
	"escapement/engine/tick"
)

// Program is a plan made ready to run: the heart's parameters, and what happens
// at which time.
type Program struct {
	Heart   *heart.Heart
	Span    tick.Time
	Seed    uint64
	Stimuli []Stimulus
	Changes []Change
	Device  *Device // nil: none
	Faults  []Fault // of the device, in order of time
}

// Stimulus is one artificial stimulus.
type Stimulus struct {
	T    tick.Time
	Site event.SiteID
	Rule event.Rule // Premature or Train
}

// Change puts another set of parameters in force. Field and To are recorded where
// Field is not empty; the steps of a ramp after its first are silent. Heart is nil
// where the field is a rate, which every heart of the program holds over the
// whole strip. Device is nil where the field is not one of the device.
type Change struct {
	T         tick.Time
	Field, To string
	Heart     *heart.Heart
	Device    *Device
}

// Fault is the beginning (1) or the end (-1) of a fault of the device, or one signal
// that comes from no heart.
type Fault struct {
	T          tick.Time
	Channel    pacer.Channel
	Deaf, Lost int
	Signal     bool
	Moved      bool // the lead lies at Site from now on
	Site       event.SiteID
}

// Lead is the lead of the fault's channel.
func (f *Fault) Lead() pacer.Lead {
	if f.Channel == pacer.Atrial {
		return pacer.RA
	}
	return pacer.RV
}

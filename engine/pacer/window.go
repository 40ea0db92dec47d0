package pacer

import (
	"escapement/engine/event"
	"escapement/engine/tick"
)

// WindowName says what a window is for. The zero name is invalid.
type WindowName uint8

const (
	_                     WindowName = iota
	AVDelay                          // atrial event to ventricular stimulus
	AtrialEscape                     // ventricular event to atrial stimulus (AEI)
	LowerRate                        // event to stimulus in the same chamber
	UpperRate                        // no tracked stimulus before its end (MTRI)
	PVARP                            // atrium refractory after a ventricular event
	PVAB                             // atrium deaf after a ventricular event
	AtrialBlanking                   // atrium deaf after an atrial event
	AtrialRefractory                 // atrium refractory after an atrial event
	PAVB                             // ventricle deaf after an atrial stimulus
	Crosstalk                        // a ventricular signal here brings a safety stimulus
	VentricularRefractory            // ventricle refractory
	VentricularNoise                 // ventricular signals here are interference
	AtrialNoise                      // atrial signals here are interference
	AtrialDelay                      // an atrial stimulus put off
	BackupDelay                      // atrial event to the stimulus for a missed beat
	Withheld                         // a stimulus left out to end a loop; the escape after it
	windowCount
)

var windowNames = [windowCount]string{
	AVDelay: "av_delay", AtrialEscape: "atrial_escape", LowerRate: "lower_rate", UpperRate: "upper_rate",
	PVARP: "pvarp", PVAB: "pvab", AtrialBlanking: "atrial_blanking", AtrialRefractory: "atrial_refractory",
	PAVB: "pavb", Crosstalk: "crosstalk", VentricularRefractory: "ventricular_refractory",
	VentricularNoise: "noise", AtrialNoise: "atrial_noise", AtrialDelay: "atrial_delay",
	BackupDelay: "backup_delay", Withheld: "withheld",
}

// String is the name as it stands in the record: "pvarp".
func (n WindowName) String() string {
	if n == 0 || n >= windowCount {
		return "invalid"
	}
	return windowNames[n]
}

// Channel is the channel that a window keeps from acting or the chamber that its end
// paces.
func (n WindowName) Channel() Channel {
	switch n {
	case AtrialEscape, PVARP, PVAB, AtrialBlanking, AtrialRefractory, AtrialNoise, AtrialDelay, Withheld:
		return Atrial
	}
	return Ventricular
}

// Window is a span of the device's attention that begins now. It lasts until Until
// unless Recorder.Close ends it before.
type Window struct {
	Name  WindowName
	Until tick.Time
	Cause event.ID // the event that began it; 0 at the start of the strip
	Why   string   // what changed its usual length ("sensor", "post-PVC"); "" for nothing
}

// Reasons for a length or a time other than the plain setting.
const (
	ByHysteresis = "hysteresis"
	BySensor     = "sensor"
	ByNight      = "night"
	ByFall       = "sudden rate fall"
	ByStabilise  = "interval stabilisation"
	ByChange     = "rate-change limit"
	ByRamp       = "fallback ramp"
	ByMagnet     = "magnet"
	ByPVC        = "post-PVC"
	ByLoop       = "endless loop"
	ByRate       = "rate-adaptive"
	ByLonger     = "longer AV delay"
	ByShorter    = "shorter AV delay"
	ByNoise      = "noise"
)

// span is a window as the device remembers it, half open: [from, until).
type span struct {
	id          event.ID
	from, until tick.Time
}

// open begins a window now; one of the same name that still runs ends by its cause.
func (d *Device) open(n WindowName, length tick.Dur, cause event.ID, why string) {
	d.close(n, cause)
	if length <= 0 {
		return
	}
	until := d.now.Add(length)
	id := d.r.Open(Window{Name: n, Until: until, Cause: cause, Why: why})
	d.spans[n] = span{id, d.now, until}
}

// close ends a window that still runs.
func (d *Device) close(n WindowName, by event.ID) {
	if s := &d.spans[n]; d.now < s.until {
		d.r.Close(s.id, by)
		s.until = d.now
	}
}

// within tells whether a window runs now.
func (d *Device) within(n WindowName) bool {
	s := &d.spans[n]
	return s.from <= d.now && d.now < s.until
}

// because is the id of a window if it runs now.
func (d *Device) because(n WindowName) event.ID {
	if d.within(n) {
		return d.spans[n].id
	}
	return 0
}

package pacer_test

// The fixed-step device: a second pacemaker, slow and simple, that judges the
// event-driven one (agree_test.go). It shares nothing with it but the names of the
// uses of a signal.
//
// Time goes in steps of one millisecond, every interval is a counter that runs
// down by one a step, and each rule is written as a clinician would say it. The
// rules are those of the published timing cycles (Hayes and Levine, "Pacemaker
// timing cycles"; Furman, PACE 1985;8:197; Mitrani, Hurst's The Heart 10e; from
// memory where they leave a choice). The choices:
//
//   - At one instant windows end first, then come the atrial signal, the
//     ventricular signal, the atrial stimulus and the ventricular stimulus.
//   - The strip begins as if a ventricular event had come at 0, for the escape
//     timers only: it opens no window and sets no upper rate.
//   - What is blanked or refractory starts, stops and lengthens nothing, but for the
//     refractory period itself in a noise window. It does not count as an atrial or
//     ventricular event for what comes later.
//   - A premature ventricular event is one with no stimulus and no non-refractory
//     signal in the atrium since the last ventricular event or the beginning.

// Modes of the fixed-step device, with what they do.
type stepMode struct {
	name                            string
	pacesA, pacesV, sensesA, tracks bool
}

var stepModes = []stepMode{
	{name: "DDD", pacesA: true, pacesV: true, sensesA: true, tracks: true},
	{name: "VDD", pacesV: true, sensesA: true, tracks: true},
	{name: "DDI", pacesA: true, pacesV: true, sensesA: true},
	{name: "VVI", pacesV: true},
	{name: "AAI", pacesA: true, sensesA: true},
}

// Base timings: which event the next atrial stimulus is counted from (DDD only).
const (
	fromVentricle = iota // every ventricular event
	fromAtrium           // the atrial event; a premature ventricular event
	fromEither           // the atrial event if the beat was conducted, else the ventricular
)

// stepSettings are in whole milliseconds; 0 is off.
type stepSettings struct {
	mode        stepMode
	base        int
	lower       int // lower rate interval
	upper       int // shortest interval from a ventricular event to a tracked stimulus
	paced       int // AV delay after an atrial stimulus
	sensed      int // AV delay after a tracked P
	pvarp, pvab int
	afterPVC    int // PVARP after a premature ventricular event, if longer
	pavb        int // ventricular blanking after an atrial stimulus
	crosstalk   int // end of the crosstalk window, after an atrial stimulus
	vrp, arp    int // arp in AAI
	blanking    int // atrial blanking after an atrial event
	noise       int // so much of the end of vrp and arp: a signal there begins it anew

	safety bool // a signal in the crosstalk window is answered by a stimulus
	counts bool // after a refractory P a ventricular event does not lengthen PVARP
	past   bool // VDD: the AV delay may run past the lower rate interval
}

// counter is an interval that runs down. It is open from the step that starts it to
// the step before it reaches nought; at nought it is up, until stopped or started.
type counter struct {
	left    int
	started bool
	starts  int // how often it was started
}

func (c *counter) start(ms int) { c.left, c.started, c.starts = ms, true, c.starts+1 }
func (c *counter) stop()        { c.left, c.started = 0, false }
func (c *counter) open() bool   { return c.started && c.left > 0 }
func (c *counter) up() bool     { return c.started && c.left <= 0 }

// stepDevice is the pacemaker.
type stepDevice struct {
	s stepSettings

	escapeA counter // to the next atrial stimulus
	escapeV counter // to the next ventricular stimulus, where no AV delay gives it
	av      counter // the AV delay
	safety  counter // takes its place after a signal in the crosstalk window
	upper   counter // since a ventricular event

	pvarp, pvab, blanking, arp, vrp, pavb, crosstalk counter
	noiseA, noiseV                                   counter

	afterPaced  bool // the AV delay followed a stimulus
	inAV        bool // an AV delay runs, or waits for the upper rate interval
	atrium      bool // an atrial event came since the last ventricular event
	refractoryP bool // and so did a P in a refractory period
	sinceA      int  // steps since that event
}

func newStepDevice(s stepSettings) *stepDevice {
	d := &stepDevice{s: s}
	d.escapes()
	if s.mode.name == "AAI" {
		d.escapeA.start(s.lower)
	}
	return d
}

// escapes starts the timers that a ventricular event starts: an atrial stimulus
// at LRI - PAV, or where the atrium is not paced a ventricular one at LRI. In DDI the
// ventricular one runs too, because a P may cancel the atrial one.
func (d *stepDevice) escapes() {
	if d.s.mode.pacesA {
		d.escapeA.start(d.s.lower - d.s.paced)
	}
	if d.s.mode.pacesV && d.s.mode.name != "DDD" {
		d.escapeV.start(d.s.lower)
	}
}

// tick lets a millisecond pass.
func (d *stepDevice) tick() {
	for _, c := range []*counter{&d.escapeA, &d.escapeV, &d.av, &d.safety, &d.upper, &d.pvarp,
		&d.pvab, &d.blanking, &d.arp, &d.vrp, &d.pavb, &d.crosstalk, &d.noiseA, &d.noiseV} {
		c.left--
	}
	d.sinceA++
	d.endBlanking()
	d.beginNoise(&d.noiseA, &d.arp)
	d.beginNoise(&d.noiseV, &d.vrp)
}

// beginNoise begins the noise window when no more than it is left of the refractory
// period.
func (d *stepDevice) beginNoise(noise, refractory *counter) {
	if d.s.noise > 0 && refractory.open() && refractory.left <= d.s.noise && !noise.open() {
		noise.start(refractory.left)
	}
}

// interference lengthens the refractory period by a new noise window. It inhibits
// nothing: while it lasts the device paces regardless.
func (d *stepDevice) interference(noise, refractory *counter) string {
	noise.start(d.s.noise)
	if refractory.left < d.s.noise {
		refractory.start(d.s.noise)
	}
	return "noise"
}

// endBlanking begins the crosstalk window, what is left of it, when the ventricle is
// no longer blind.
func (d *stepDevice) endBlanking() {
	if !d.pavb.up() {
		return
	}
	d.pavb.stop()
	if d.s.safety {
		d.crosstalk.start(d.s.crosstalk - d.s.pavb)
	}
}

// senseA is a signal in the atrium.
func (d *stepDevice) senseA() string {
	switch {
	case d.blanking.open() || d.pvab.open():
		return "blanked"
	case d.noiseA.open():
		return d.interference(&d.noiseA, &d.arp)
	case d.pvarp.open() || d.arp.open() || d.inAV:
		d.refractoryP = true
		return "refractory"
	}
	d.atrialEvent()
	switch {
	case d.s.mode.tracks:
		d.startAV(d.s.sensed, false)
		return "tracked"
	case d.s.mode.name == "DDI":
		return "inhibits"
	}
	return "resets"
}

// atrialEvent is what a stimulus and a P have in common. A P ends the wait for the
// stimulus: for this cycle, or for an interval where the atrium counts.
func (d *stepDevice) atrialEvent() {
	d.atrium, d.sinceA = true, 0
	d.blanking.start(d.s.blanking)
	d.escapeA.stop()
	switch {
	case d.s.mode.name == "AAI":
		d.arp.start(d.s.arp)
		d.noiseA.stop()
		d.beginNoise(&d.noiseA, &d.arp)
		d.escapeA.start(d.s.lower)
	case d.s.mode.name == "DDD" && d.s.base == fromAtrium:
		d.escapeA.start(d.s.lower)
	}
}

func (d *stepDevice) startAV(ms int, paced bool) {
	d.av.start(ms)
	d.inAV, d.afterPaced = true, paced
	if d.s.mode.name == "VDD" && d.s.past {
		d.escapeV.stop()
	}
}

// senseV is a signal in the ventricle.
func (d *stepDevice) senseV() string {
	switch {
	case d.pavb.open():
		return "blanked"
	case d.noiseV.open():
		return d.interference(&d.noiseV, &d.vrp)
	case d.vrp.open():
		return "refractory"
	case d.crosstalk.open():
		if d.av.started { // the first signal in this window
			d.safety.start(min(d.av.left, d.crosstalk.left))
			d.av.stop()
		}
		return "safety"
	}
	use := "resets"
	if d.inAV {
		use = "inhibits"
	}
	d.ventricularEvent(true)
	return use
}

// ventricularEvent is what a stimulus and a sensed beat have in common.
func (d *stepDevice) ventricularEvent(sensed bool) {
	premature := sensed && !d.atrium
	conducted := sensed && d.atrium
	lengthen := premature && !(d.s.counts && d.refractoryP) && d.s.afterPVC > d.s.pvarp
	d.inAV, d.atrium, d.refractoryP = false, false, false
	d.av.stop()
	d.safety.stop()
	d.crosstalk.stop()

	d.vrp.start(d.s.vrp)
	d.noiseV.stop()
	d.beginNoise(&d.noiseV, &d.vrp)
	if d.s.mode.tracks {
		d.upper.start(d.s.upper)
	}
	if d.s.mode.sensesA {
		d.pvab.start(d.s.pvab)
		d.pvarp.start(d.s.pvarp)
		if lengthen {
			d.pvarp.start(d.s.afterPVC)
		}
	}

	base := d.s.base
	if d.s.mode.name != "DDD" {
		base = fromVentricle
	}
	switch {
	case base == fromAtrium && !premature: // the interval from the atrium goes on
	case base == fromEither && conducted:
		d.escapeA.start(d.s.lower - d.sinceA)
	default:
		d.escapes()
	}
}

// pace gives the stimuli due now, the atrium's first.
func (d *stepDevice) pace() (a, v bool) {
	if d.escapeA.up() {
		a = true
		d.atrialEvent()
		if d.s.mode.pacesV {
			d.startAV(d.s.paced, true)
			d.pavb.start(d.s.pavb)
			d.endBlanking()
		}
	}
	if d.ventricleDue() {
		v = true
		d.ventricularEvent(false)
	}
	return a, v
}

// ventricleDue: the AV delay is up (after a P, the upper rate interval too); or the
// crosstalk window with a signal in it; or the lower rate interval.
func (d *stepDevice) ventricleDue() bool {
	if !d.inAV || d.escapeV.up() {
		return d.escapeV.up()
	}
	if d.afterPaced {
		return d.av.up() || d.safety.up()
	}
	return d.av.up() && !d.upper.open()
}

// windows are the counters that a record of windows shows, by name.
func (d *stepDevice) windows() []namedCounter {
	shown := []namedCounter{
		{"pvarp", &d.pvarp}, {"pvab", &d.pvab}, {"atrial_blanking", &d.blanking}, {"atrial_refractory", &d.arp},
		{"pavb", &d.pavb}, {"crosstalk", &d.crosstalk}, {"ventricular_refractory", &d.vrp},
		{"noise", &d.noiseV}, {"atrial_noise", &d.noiseA}, {"av_delay", &d.av}, {"upper_rate", &d.upper},
	}
	switch {
	case d.s.mode.name == "AAI":
		return append(shown, namedCounter{"lower_rate", &d.escapeA})
	case d.s.mode.name == "DDD" && d.s.base == fromAtrium:
		return shown // counted from the atrium here, shown from the ventricle there
	}
	return append(shown, namedCounter{"atrial_escape", &d.escapeA}, namedCounter{"lower_rate", &d.escapeV})
}

type namedCounter struct {
	name string
	*counter
}

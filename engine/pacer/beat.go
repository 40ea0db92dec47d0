package pacer

import (
	"escapement/engine/event"
	"escapement/engine/tick"
)

// paceA gives the atrial stimulus, unless a refractory signal puts it off.
func (d *Device) paceA(dl deadline) {
	if dl.timer != TriggerTimer && (d.putOff(dl) || d.silenced(AtrialNoise)) {
		return
	}
	d.countEscape(dl)
	d.beatA(d.r.Stimulate(Pulse{RA, dl.timer, dl.cause, dl.why}), true)
}

// paceV gives the ventricular stimulus and plans those of further leads.
func (d *Device) paceV(dl deadline) {
	if dl.timer != TriggerTimer && (d.withhold(dl) || d.silenced(VentricularNoise)) {
		return
	}
	d.countEscape(dl)
	pulses, n := d.s.Sites.pulses(d.mode)
	id := d.r.Stimulate(Pulse{pulses[0].lead, dl.timer, dl.cause, dl.why})
	for i := 1; i < n; i++ {
		d.set(slotLater+slot(i-1), d.now.Add(pulses[i].after), deadline{timer: OffsetTimer, lead: pulses[i].lead, cause: id})
	}
	d.beatV(id, true)
}

// beatA takes an atrial event into the timing.
func (d *Device) beatA(id event.ID, paced bool) {
	if d.a.known {
		d.aa = d.now.Sub(d.a.at)
	}
	d.a = beat{d.now, id, paced, true}
	d.atrial, d.usedA = true, true
	d.clear(slotAtrium)
	d.close(AtrialEscape, id)
	d.close(AtrialDelay, id)
	if d.watchesA() {
		d.open(AtrialBlanking, d.s.AtrialBlanking, id, "")
	}
	if !paced {
		d.fall.slow = 0
	}
	switch {
	case d.backup.alone:
		d.atrialRefractory(id)
		d.cycleAlone(id, paced)
	case d.mode.atrialOnly():
		d.atrialRefractory(id)
		d.single(slotAtrium, id, paced)
	case paced || d.mode.Tracks():
		d.startAV(id, paced)
		// else DDI: a P inhibits the atrial stimulus and begins nothing
	}
	if paced && d.mode.SensesV() {
		d.open(PAVB, d.s.PAVB, id, "")
		if d.s.SafetyStimulus && d.avRunning && d.s.Crosstalk > d.s.PAVB {
			d.set(slotCrosstalk, d.now.Add(d.s.PAVB), deadline{cause: id})
		}
	}
	if paced { // a P was counted before its use was known
		d.countAtrial(id)
	}
}

func (d *Device) atrialRefractory(id event.ID) {
	if !d.mode.SensesA() {
		return
	}
	d.open(AtrialRefractory, d.s.AtrialRefractory, id, "")
	d.clear(slotNoiseA)
	d.close(AtrialNoise, id)
	if w := d.s.Noise.Window; w > 0 && d.s.AtrialRefractory > 0 {
		d.set(slotNoiseA, d.now.Add(max(0, d.s.AtrialRefractory-w)), deadline{cause: id})
	}
}

// beatV takes a ventricular event into the timing: everything that ran for the cycle
// ends, the refractory periods begin, and so does the next escape.
func (d *Device) beatV(id event.ID, paced bool) {
	pvc := !paced && !d.atrial && d.watchesA()
	conducted := !paced && d.avRunning
	vv := tick.Dur(0)
	if d.v.known {
		vv = d.now.Sub(d.v.at)
	}
	d.learnAV(conducted, paced)
	looped := d.findLoop(paced, vv)
	d.findFall(paced, vv)
	if d.anyVV = vv; !pvc {
		d.vv = vv
	}
	c := cycle{pvc: pvc, usedA: d.usedA, conducted: !paced && d.usedA, sensed: !paced && !pvc}
	if d.mode.SensesA() {
		c.sensed = d.usedA && !d.a.paced && !pvc
	}
	d.v = beat{d.now, id, paced, true}
	d.atrial, d.usedA, d.avRunning = false, false, false
	d.countQuiet(id)
	d.clear(slotVentricle)
	d.clear(slotCrosstalk)
	for _, n := range [...]WindowName{AVDelay, AtrialEscape, Crosstalk, PAVB, BackupDelay, AtrialDelay, Withheld} {
		d.close(n, id)
	}
	d.refractoryAfterV(id, pvc, looped)
	if d.backup.alone || d.mode.atrialOnly() {
		d.backup.seen = true
		if d.timers[slotAtrium].at == tick.Never { // the mode changed in the AV delay
			d.rearm(id)
		}
		return
	}
	d.clear(slotAtrium)
	d.close(LowerRate, id)
	if d.retest(id) {
		return
	}
	d.afterV(id, c)
}

// cycle is what a ventricular event ended.
type cycle struct {
	pvc       bool
	usedA     bool // an atrial event took part in the timing
	conducted bool // and the ventricular event was sensed
	sensed    bool // the beat was the heart's own, for hysteresis
}

func (d *Device) refractoryAfterV(id event.ID, pvc, looped bool) {
	if d.mode.SensesV() {
		d.open(VentricularRefractory, d.s.VentricularRefractory, id, "")
		d.clear(slotNoiseV)
		d.close(VentricularNoise, id)
		if w := d.s.Noise.Window; w > 0 && d.s.VentricularRefractory > 0 {
			d.set(slotNoiseV, d.now.Add(max(0, d.s.VentricularRefractory-w)), deadline{cause: id})
		}
	}
	if d.watchesA() {
		d.open(PVAB, d.s.PVAB, id, "")
	}
	if d.mode.SensesA() && d.mode.PacesV() && !d.backup.alone {
		length, why := d.pvarp(pvc, looped)
		d.open(PVARP, length, id, why)
	}
	if d.mode.Tracks() && !d.backup.alone {
		d.open(UpperRate, d.upperInterval(), id, "")
	}
}

// watchesA tells whether atrial signals matter, if only to end a mode switch.
func (d *Device) watchesA() bool { return d.mode.SensesA() || d.sw.away && d.s.Mode.SensesA() }

// pvarp is the atrial refractory period that a ventricular event begins now.
func (d *Device) pvarp(pvc, looped bool) (tick.Dur, string) {
	length, why := d.s.AdaptivePVARP.at(d.s.PVARP, d.aa), ""
	if length != d.s.PVARP {
		why = ByRate
	}
	if pvc && d.s.PostPVC > length {
		length, why = d.s.PostPVC, ByPVC
	}
	if looped && d.s.Loop.PVARP > length {
		length, why = d.s.Loop.PVARP, ByLoop
	}
	return length, why
}

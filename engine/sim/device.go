package sim

import (
	"escapement/engine/event"
	"escapement/engine/pacer"
	"escapement/engine/plan"
	"escapement/engine/tick"
)

// device joins a pacemaker to the heart: it turns depolarisations at the leads into
// signals, and stimuli into depolarisations where they capture.
//
// A depolarisation is sensed when the site of the lead is reached: late, where the
// tissue there is reached late. What a lead's own stimulus depolarises is no signal
// to that lead. A signal is judged after everything else of its instant but before
// the device's timers.
type device struct {
	m          *Machine
	p          plan.Device
	d          *pacer.Device
	deaf, lost [pacer.Ventricular + 1]int // faults in force, by channel
}

func letter(ch pacer.Channel) byte {
	if ch == pacer.Atrial {
		return 'A'
	}
	return 'V'
}

func (m *Machine) connect(prog *plan.Program) {
	if prog.Device == nil {
		return
	}
	m.dev = &device{m: m, p: *prog.Device}
	m.dev.d = pacer.New(prog.Device.Settings, m.dev)
	m.dev.d.Start(0)
	for i := range prog.Faults {
		m.push(prog.Faults[i].T, classFault, i, 0, 0)
	}
}

// due is when the device next acts by itself.
func (v *device) due() tick.Time {
	if v == nil {
		return tick.Never
	}
	return v.d.Due()
}

func (v *device) expire(t tick.Time) {
	v.m.now, v.m.order = t, atLast
	v.d.Expire(t)
}

// fault begins or ends a fault, or puts a signal of no heart on a channel.
func (v *device) fault(f *plan.Fault) {
	v.deaf[f.Channel] += f.Deaf
	v.lost[f.Channel] += f.Lost
	if f.Moved {
		v.move(f.Lead(), f.Site)
		if f.Channel == pacer.Ventricular {
			v.move(pacer.HisLead, f.Site) // the same lead, by another name
		}
	}
	if f.Signal {
		v.signal(0, f.Channel, v.p.Leads[f.Lead()].Sensing, 0)
	}
}

func (v *device) move(lead pacer.Lead, to event.SiteID) {
	l := &v.p.Leads[lead]
	l.Site, l.Sensing, l.Muscle = to, to, event.None
}

// program puts other numbers in force; a lead that has moved stays where it is.
func (v *device) program(p *plan.Device) {
	next := *p
	for i := range next.Leads {
		old := &v.p.Leads[i]
		next.Leads[i].Site, next.Leads[i].Sensing, next.Leads[i].Muscle = old.Site, old.Sensing, old.Muscle
	}
	v.p = next
	v.d.Program(p.Settings)
}

// depolarised looks whether a lead senses the depolarisation of a site.
func (v *device) depolarised(w *wave, id event.ID) {
	a, r := &v.p.Leads[pacer.RA], &v.p.Leads[pacer.RV]
	own := false
	if w.rule == event.Captured {
		own = w.cause > v.m.base && v.m.at(w.cause).Rule == event.Timed
	}
	if w.site == a.Sensing && !own && a.Senses {
		v.signal(a.Delay, pacer.Atrial, w.site, id)
	}
	if w.site != r.Sensing {
		return
	}
	if !own && r.Senses {
		v.signal(r.Delay, pacer.Ventricular, w.site, id)
	}
	if v.p.FarField > 0 {
		v.signal(v.p.FarField, pacer.Atrial, w.site, id)
	}
	if v.p.TWave > 0 {
		v.signal(v.p.TWave, pacer.Ventricular, w.site, id)
	}
}

// signal brings one to a channel. A deaf channel hears nothing of heart and device;
// interference, which has no cause, arises behind the lead.
func (v *device) signal(after tick.Dur, ch pacer.Channel, site event.SiteID, cause event.ID) {
	if v.d.Senses(ch) && (cause == 0 || v.deaf[ch] == 0) {
		v.m.push(v.m.now.Add(after), classSense, int(site), uint8(ch), uint32(cause))
	}
}

// sense gives a signal to the device and records what it did with it.
func (v *device) sense(site event.SiteID, ch pacer.Channel, cause event.ID) {
	v.d.Advance(v.m.now)
	id := v.m.record(event.Event{Kind: event.Sense, Rule: event.Signal, Site: site, Path: event.None, Channel: letter(ch), Cause: cause})
	done := v.d.Sense(v.m.now, ch, id)
	e := v.m.at(id)
	e.Use, e.By = done.Use, done.Because
}

// at finds an event that is still kept.
func (m *Machine) at(id event.ID) *event.Event { return &m.log.Events[id-m.base-1] }

// Stimulate delivers a stimulus of the device (pacer.Recorder). Two tissues under one
// tip are captured each by its own threshold and its own refractory period; Outcome
// says which, where only one is.
func (v *device) Stimulate(p pacer.Pulse) event.ID {
	m := v.m
	lead := &v.p.Leads[p.Lead]
	ch := pacer.Ventricular
	if p.Lead == pacer.RA {
		ch = pacer.Atrial
	}
	st := &m.sites[lead.Site]
	excitable := m.excitable(lead.Site)
	site := excitable && v.lost[ch] == 0 && lead.Amplitude >= lead.Threshold
	muscle := lead.Muscle >= 0 && m.excitable(lead.Muscle) && v.lost[ch] == 0 && lead.Amplitude >= lead.MuscleThreshold
	e := event.Event{Kind: event.Stimulus, Rule: event.Timed, Site: lead.Site, Path: event.None, Cause: p.Cause, Field: p.Timer.String(), Why: p.Why,
		Channel: letter(ch), Captured: site || muscle}
	if st.id != 0 {
		e.Recovery, e.Needed = m.now.Sub(st.last), st.until.Sub(st.last)
	}
	switch {
	case muscle && !site:
		e.Outcome = event.MuscleOnly
	case site && lead.Muscle >= 0 && !muscle:
		e.Outcome = event.ConductionOnly
	case !e.Captured && excitable && v.lost[ch] > 0:
		e.Outcome = event.CaptureLost
	case !e.Captured && excitable:
		e.Outcome = event.BelowThreshold
	}
	id := m.record(e)
	if site {
		v.captureAfter(lead.Latency, lead.Site, id)
	}
	if muscle {
		v.captureAfter(lead.Latency, lead.Muscle, id)
	}
	if ch == pacer.Atrial && v.p.Cross > 0 {
		v.signal(v.p.Cross, pacer.Ventricular, v.p.Leads[pacer.RV].Sensing, id)
	}
	return id
}

func (m *Machine) excitable(site event.SiteID) bool {
	st := &m.sites[site]
	return st.id == 0 || m.now >= st.until
}

func (v *device) captureAfter(latency tick.Dur, site event.SiteID, stimulus event.ID) {
	if latency == 0 {
		v.capture(site, stimulus)
		return
	}
	v.m.push(v.m.now.Add(latency), classCapture, int(site), 0, uint32(stimulus))
}

// capture depolarises a site by a stimulus. Where another impulse came first during
// the latency, the record of the stimulus is put right.
func (v *device) capture(site event.SiteID, stimulus event.ID) {
	m := v.m
	captured := m.excitable(site)
	if stimulus > m.base && m.now > m.at(stimulus).T {
		v.outcome(m.at(stimulus), site, captured)
	}
	if captured {
		m.activate(&wave{rule: event.Captured, site: site, path: event.None, cause: stimulus, beat: m.now})
	}
}

// outcome corrects a stimulus for what one of its tissues did after the latency.
func (v *device) outcome(e *event.Event, site event.SiteID, captured bool) {
	beside := site != e.Site // the muscle beside the tissue that the lead lies on
	switch {
	case captured && !e.Captured:
		e.Captured, e.Outcome = true, event.MuscleOnly
	case !captured && beside && e.Captured && e.Outcome != event.MuscleOnly:
		e.Outcome = event.ConductionOnly
	case !captured:
		st := &v.m.sites[site]
		e.Captured, e.Outcome = false, event.Overtaken
		e.Recovery, e.Needed = v.m.now.Sub(st.last), st.until.Sub(st.last)
	}
}

// Open records a window (pacer.Recorder).
func (v *device) Open(w pacer.Window) event.ID {
	return v.m.record(event.Event{Kind: event.Window, Rule: event.Opened, Site: event.None, Path: event.None, Cause: w.Cause,
		Field: w.Name.String(), Until: w.Until, Why: w.Why, Channel: letter(w.Name.Channel())})
}

// Close ends a window before its time (pacer.Recorder).
func (v *device) Close(window, by event.ID) {
	if window > v.m.base {
		e := v.m.at(window)
		e.Until, e.By = v.m.now, by
	}
}

// Mode records a change of mode (pacer.Recorder).
func (v *device) Mode(from, to, why string, cause event.ID) event.ID {
	return v.m.record(event.Event{Kind: event.Mode, Rule: event.Switched, Site: event.None, Path: event.None, Cause: cause, Field: from, To: to, Why: why})
}

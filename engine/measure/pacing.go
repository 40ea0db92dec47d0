package measure

import (
	"fmt"
	"slices"
	"strings"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// devices looks for what a device does and what it makes of the rhythm.
func (f *finder) devices() {
	if f.dev == nil {
		return
	}
	f.dev.looped = map[event.ID]bool{}
	f.loops()
	f.synchronies()
	f.upperRate()
	f.pacedRhythm()
	f.modeChanges()
	f.locked()
	f.hysteresis()
	f.captures()
	f.pseudo()
	f.vulnerableTime()
	f.sensing()
	f.safety()
	f.noiseReversion()
	f.headline()
}

// pairs are the beats of one kind of pacing. An AV interval below 0 is none.
type pairs struct {
	ids    []event.ID
	n      int
	av, cy []tick.Dur // AV intervals; intervals to the beat before
}

func (p *pairs) add(av, cycle tick.Dur, ids ...event.ID) {
	p.ids = append(p.ids, ids...)
	p.n++
	if av >= 0 {
		p.av = append(p.av, av)
	}
	if cycle > 0 {
		p.cy = append(p.cy, cycle)
	}
}

func (p *pairs) rate() string {
	if c := medianDur(p.cy); c > 0 {
		return " " + perMinute(c)
	}
	return ""
}

// kinds of pacing by what a cycle of the device was made of.
type kinds struct{ tracked, sequential, atrial, ventricular, own pairs }

// pacedRhythm names the kinds of pacing on the strip. Beats that a loop or a
// synchrony explains are left to those.
func (f *finder) pacedRhythm() {
	k := f.kinds()
	least := 1
	if max(k.tracked.n, k.sequential.n, k.atrial.n, k.ventricular.n, len(f.dev.looped)) > 1 {
		least = 2 // a single beat among others is not the rhythm
	}
	if k.tracked.n >= least {
		f.tracking(&k.tracked, &k.own)
	}
	if n := k.sequential.n; n >= least {
		f.add(orderDevice, Finding{
			Slug: "av_sequential_pacing", Evidence: k.sequential.ids, Count: n,
			Text:   fmt.Sprintf("%s by a ventricular one after %s ms: consistent with AV sequential pacing.", plural(n, "atrial stimulus is followed", "atrial stimuli are followed"), whole(medianDur(k.sequential.av))),
			clause: fmt.Sprintf("AV sequential pacing%s (AV %s ms)", k.sequential.rate(), whole(medianDur(k.sequential.av))),
		})
	}
	if n := k.atrial.n; n >= least {
		ar := ""
		if d := medianDur(k.atrial.av); d > 0 {
			ar = fmt.Sprintf(" conducted (AR %s ms)", whole(d))
		}
		f.add(orderDevice, Finding{
			Slug: "atrial_pacing", Evidence: k.atrial.ids, Count: n,
			Text:   fmt.Sprintf("%s without a ventricular stimulus after it%s: consistent with atrial pacing.", plural(n, "atrial stimulus", "atrial stimuli"), ar),
			clause: fmt.Sprintf("atrial pacing%s%s", k.atrial.rate(), ar),
		})
	}
	if n := k.ventricular.n; n >= least {
		f.add(orderDevice, Finding{
			Slug: "ventricular_pacing", Evidence: k.ventricular.ids, Count: n,
			Text:   fmt.Sprintf("%s that no atrial event of the device began: consistent with ventricular pacing.", plural(n, "ventricular stimulus", "ventricular stimuli")),
			clause: "ventricular pacing" + k.ventricular.rate(),
		})
	}
}

func (f *finder) kinds() kinds {
	var k kinds
	var a *marker // the atrial beat of the present cycle, if the device counts it
	lone := func() {
		if a != nil && a.paced() && !f.dev.looped[a.e.ID] {
			k.atrial.add(-1, f.since(a), a.e.ID)
		}
	}
	for i := range f.dev.markers {
		m := &f.dev.markers[i]
		if !m.beat {
			continue
		}
		if m.e.Channel == 'A' {
			lone()
			a = m
			continue
		}
		before := a
		a = nil
		switch {
		case f.dev.looped[m.e.ID]:
		case before == nil || m.e.Field == "lower_rate" && !before.paced():
			if m.paced() {
				k.ventricular.add(-1, f.since(m), m.e.ID)
			}
		case m.paced() && before.paced():
			k.sequential.add(m.e.T.Sub(before.e.T), f.since(m), before.e.ID, m.e.ID)
		case m.paced() && f.fibrillates(before): // has a finding of its own
		case m.paced():
			k.tracked.add(m.e.T.Sub(before.e.T), f.since(before), before.e.ID, m.e.ID)
		case before.paced() && natureOf(f.log, m.e) == ofBeat:
			k.atrial.add(m.e.T.Sub(before.e.T), f.since(before), before.e.ID, m.e.ID)
		case !before.paced() && before.wave >= 0 && m.wave >= 0:
			k.own.add(m.e.T.Sub(before.e.T), f.since(before), before.e.ID, m.e.ID)
		}
	}
	lone()
	return k
}

// since is the interval to the P or QRS before the one it made or sensed, or to the
// beat of the device before where there is none; 0 for the first. From stimulus to
// stimulus, and to a signal of a beat, it is the device's own interval: the QRS begins
// at the one and before the other.
func (f *finder) since(m *marker) tick.Dur {
	if b := f.dev.at(m.prev); m.paced() && b != nil && (b.paced() || natureOf(f.log, b.e) == ofBeat) {
		return m.e.T.Sub(b.e.T)
	}
	switch {
	case m.wave > 0 && m.e.Channel == 'A':
		return f.pp(int(m.wave))
	case m.wave > 0:
		return f.rr(int(m.wave))
	}
	if b := f.dev.at(m.prev); b != nil {
		return m.e.T.Sub(b.e.T)
	}
	return 0
}

// judged says why a paced strip tells little about the AV node.
const judged = "Whether the heart conducts cannot be told from beats that the device paces before it could."

// tracking names P-synchronous pacing. Where the upper rate changes its pattern the
// finding about that has the clause.
func (f *finder) tracking(k, own *pairs) {
	low, high := slices.Min(k.av), slices.Max(k.av)
	av := "AV " + whole(medianDur(k.av)) + " ms"
	if high-low > steady {
		av = fmt.Sprintf("AV %s to %s ms", whole(low), whole(high))
	}
	clause := ""
	if !f.has("upper_rate_wenckebach") && !f.has("upper_rate_two_to_one") {
		clause = fmt.Sprintf("%s tracked 1:1 (%s)", f.atrialName(k), av)
		if own.n > 1 {
			clause += fmt.Sprintf(" and conducted in %d beats (AV %s ms)", own.n, whole(medianDur(own.av)))
		}
	}
	f.add(orderDevice, Finding{
		Slug: "p_synchronous_pacing", Evidence: k.ids, Count: k.n, Note: judged,
		Text:   fmt.Sprintf("%s by a ventricular stimulus at the end of an AV delay (%s): consistent with P-synchronous pacing (tracking).", plural(k.n, "sensed P is followed", "sensed P waves are followed"), av),
		clause: clause,
	})
}

// atrialName names the rhythm that is tracked, by most of its P waves; of some of them,
// where ids are given.
func (f *finder) atrialName(k *pairs, ids ...event.ID) string {
	sinus, all := 0, 0
	for i := range f.dev.markers {
		if m := &f.dev.markers[i]; m.e.Use == event.Tracked && !f.dev.looped[m.e.ID] && (len(ids) == 0 || contains(ids, m.e.ID)) {
			all++
			if m.wave >= 0 && f.pOrigin(int(m.wave)) == fromSinus {
				sinus++
			}
		}
	}
	name := "atrial rhythm"
	cycle := medianDur(k.cy)
	if 2*sinus >= all {
		name = "sinus"
		if c := f.sinusCycle(); c > 0 {
			cycle = c
		}
	} else if c := f.foreignCycle(); c > 0 {
		cycle = c
	}
	if cycle == 0 {
		return name
	}
	return name + " " + perMinute(cycle)
}

// foreignCycle is the median interval of P waves from above, not of the sinus node.
func (f *finder) foreignCycle() tick.Dur {
	var d []tick.Dur
	for i := 1; i < len(f.p); i++ {
		if f.descending(i) && f.pOrigin(i) != fromSinus && f.descending(i-1) {
			d = append(d, f.pp(i))
		}
	}
	return medianDur(d)
}

// headline puts the mode in front of the first clause of the device, and takes the
// sinus rate out of its own where a clause about tracking names it.
func (f *finder) headline() {
	mode := f.dev.mode()
	if mode == "" {
		mode = "pacing"
	}
	slices.SortStableFunc(f.found, func(a, b Finding) int { return a.order - b.order })
	for i := range f.found {
		x := &f.found[i]
		if x.order == orderDevice && x.clause != "" {
			x.clause = mode + ": " + x.clause
			f.silenceSinus()
			return
		}
	}
	ids := []event.ID{}
	for i := range f.dev.markers {
		if f.dev.markers[i].paced() {
			return
		}
		ids = append(ids, f.dev.markers[i].e.ID)
	}
	f.add(orderDevice, Finding{
		Slug: "pacing_inhibited", Evidence: ids, Count: max(1, len(ids)), clause: mode + ": no stimulus",
		Text: "The device gave no stimulus on this strip: consistent with a rhythm faster than its escape interval, or with signals that keep it back.",
	})
}

func (f *finder) silenceSinus() {
	for _, x := range f.found {
		for i := range f.found {
			s := &f.found[i]
			if x.order == orderDevice && s.order == orderAtria && strings.HasPrefix(s.clause, "sinus ") && strings.Contains(x.clause, s.clause+" tracked") {
				s.clause = ""
			}
		}
	}
}

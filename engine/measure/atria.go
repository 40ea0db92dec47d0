package measure

import (
	"fmt"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// sinusRhythm names the sinus rate. Limits: below 50/min bradycardia (2018
// ACC/AHA/HRS; older texts 60), above 100/min tachycardia (common practice).
func (f *finder) sinusRhythm() {
	var ids []event.ID
	n := 0
	for i := range f.p {
		if f.pOrigin(i) == fromSinus && f.descending(i) {
			ids = append(ids, f.p[i].id)
			n++
		}
	}
	cycle := f.sinusCycle()
	if n < 2 || cycle == 0 {
		return
	}
	slug, name := "sinus_rhythm", "sinus rhythm"
	switch bpm := cycle.BPM(); {
	case bpm < sinusBradycardy:
		slug, name = "sinus_bradycardia", "sinus bradycardia"
	case bpm > 100:
		slug, name = "sinus_tachycardia", "sinus tachycardia"
	}
	f.add(orderAtria, Finding{
		Slug: slug, Evidence: ids, Count: n,
		Text:   fmt.Sprintf("%s from the sinus node, median %s: consistent with %s.", plural(n, "P wave", "P waves"), perMinute(cycle), name),
		clause: "sinus " + perMinute(cycle),
	})
	f.arrhythmia()
}

// arrhythmia: PP of neighbouring sinus beats varies by more than 120 ms, up and
// down (textbooks, from memory), in at least half of the stretches of ten beats.
// Long intervals that are pauses are left out.
func (f *finder) arrhythmia() {
	if f.exitBlocked() {
		return
	}
	var ids []event.ID
	var low, high tick.Dur
	wavy, all := 0, 0
	for i := 1; i < len(f.p); i += 10 {
		lo, hi, turns, in := f.swing(i, min(i+10, len(f.p)))
		if len(in) < 3 {
			continue
		}
		all++
		if hi-lo > 120*tick.Millisecond && turns >= 2 {
			wavy++
			ids = append(ids, in...)
			if low == 0 || lo < low {
				low = lo
			}
			high = max(high, hi)
		}
	}
	if wavy == 0 || 2*wavy < all {
		return
	}
	f.add(orderAtria, Finding{
		Slug: "sinus_arrhythmia", Evidence: ids, Count: len(ids),
		Text:   fmt.Sprintf("PP varies between %s and %s ms: consistent with sinus arrhythmia.", whole(low), whole(high)),
		clause: "sinus arrhythmia",
	})
}

// swing is the range of sinus intervals among P waves i to j, and how often they
// turn from growing to shrinking.
func (f *finder) swing(i, j int) (lo, hi tick.Dur, turns int, ids []event.ID) {
	var last tick.Dur
	sign := 0
	for ; i < j; i++ {
		d := f.pp(i)
		if f.pOrigin(i) != fromSinus || f.pOrigin(i-1) != fromSinus || !f.descending(i-1) || 2*d > 3*f.local[i] {
			last = 0
			continue
		}
		if lo == 0 || d < lo {
			lo = d
		}
		hi = max(hi, d)
		ids = append(ids, f.p[i].id)
		if last != 0 && d != last {
			s := 1
			if d < last {
				s = -1
			}
			if sign != 0 && s != sign {
				turns++
			}
			sign = s
		}
		last = d
	}
	return lo, hi, turns, ids
}

// otherAtrial names runs of three or more P waves from one place other than the
// sinus node. Rates: ectopic rhythm up to 100/min, tachycardia above, flutter
// from 240/min (2001 definition, Saoudi et al., Eur Heart J 2001;22:1162, which
// itself calls a rate limit obsolete; regular here means within 20 ms).
func (f *finder) otherAtrial() {
	var all []gathered
	for i := 0; i < len(f.p); {
		j := i + 1
		for j < len(f.p) && f.sameSource(j, i) && f.descending(j) {
			j++
		}
		if j-i >= 3 && f.pOrigin(i) != fromSinus && f.descending(i) {
			all = f.atrialRun(all, i, j)
		}
		i = j
	}
	for _, g := range all {
		cycle := medianDur(g.paces)
		x := Finding{
			Slug: g.slug, Evidence: g.ids, Count: g.beats,
			Text:   fmt.Sprintf("%s in a row from one place in the atria, %s: consistent with %s.", plural(g.beats, "P wave", "P waves"), perMinute(cycle), g.words),
			clause: g.words + " " + perMinute(cycle),
		}
		if g.words == "atrial flutter" {
			x.Text = fmt.Sprintf("%s from one circuit in the atria, %s: consistent with atrial flutter.", plural(g.beats, "flutter wave", "flutter waves"), perMinute(cycle))
		}
		if g.slug == "atrial_flutter" {
			f.conductedFlutter(&x, g.ids)
		}
		f.add(orderAtria, x)
	}
	f.fibrillation()
}

func (f *finder) atrialRun(all []gathered, i, j int) []gathered {
	var d []tick.Dur
	for k := i + 1; k < j; k++ {
		d = append(d, f.pp(k))
	}
	cycle := medianDur(d)
	if f.arrival(i) {
		return all // fibrillation has a name of its own
	}
	slug, name := "ectopic_atrial_rhythm", "ectopic atrial rhythm"
	switch {
	case f.byDevice(f.p[i].id):
		return all // the device's rhythm has a name of its own
	case f.pOrigin(i) == fromStimulus:
		slug, name = "atrial_stimulation", "atrial stimulation"
	case f.pOrigin(i) == fromJunction:
		return all // echoes and junctional beats have findings of their own
	case cycle.BPM() >= 240:
		slug, name = "atrial_flutter", "a regular atrial driver in the range of flutter"
		if f.driven(i) {
			name = "atrial flutter"
		}
	case cycle.BPM() > 100:
		slug, name = "atrial_tachycardia", "atrial tachycardia"
	}
	all, g := gather(all, slug, name)
	g.beats += j - i
	g.paces = append(g.paces, d...)
	for k := i; k < j; k++ {
		g.ids = append(g.ids, f.p[k].id)
	}
	return all
}

package measure

import (
	"fmt"
	"sort"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// sensing finds beats that the device did not see and signals that were no beats.
func (f *finder) sensing() {
	f.undersensed(atrial, 'A')
	f.undersensed(ventricular, 'V')
	f.oversensed('A')
	f.oversensed('V')
	f.crosstalk()
}

// senses tells whether the device listens on a channel: its refractory periods show it.
func (d *device) senses(ch byte) bool {
	for _, w := range d.windows {
		switch w.Field {
		case "ventricular_refractory":
			if ch == 'V' {
				return true
			}
		case "pvarp", "atrial_refractory":
			if ch == 'A' {
				return true
			}
		}
	}
	return false
}

// undersensed: a stimulus after a beat of the same chamber that made no signal at
// all, since the timer began.
func (f *finder) undersensed(c int, ch byte) {
	if !f.dev.senses(ch) {
		return
	}
	heard := make([]bool, len(f.mark))
	for i := range f.dev.markers {
		if e := f.dev.markers[i].e; e.Kind == event.Sense && e.Channel == ch && natureOf(f.log, e) == ofBeat {
			heard[e.Cause] = true
		}
	}
	var ids []event.ID
	n := 0
	var silent []*event.Event // depolarisations at the lead that made no signal
	for i := range f.log.Events {
		e := &f.log.Events[i]
		switch {
		case e.Kind == event.Activate && e.Site == f.dev.site[c] && f.log.Sites[e.Site].Chamber() == ch && !heard[e.ID] && !f.ownCapture(e):
			silent = append(silent, e)
		case e.Kind == event.Stimulus && e.Rule == event.Timed && e.Channel == ch && len(silent) > 0:
			began := tick.Time(0)
			if c := f.log.At(e.Cause); c != nil {
				began = c.T
			}
			if last := silent[len(silent)-1]; last.T > began {
				n++
				ids = append(ids, last.ID, e.ID)
				if w := f.mark[last.ID].wave; w >= 0 && ch == 'V' {
					ids = append(ids, f.v[w].id)
				}
			}
			silent = silent[:0]
		}
	}
	if n == 0 {
		return
	}
	f.add(orderFault, Finding{
		Slug: "undersensing", Channel: string(rune(ch)), Evidence: ids, Count: n,
		Text:   fmt.Sprintf("%s after %s beat that the device had no signal of: consistent with %s undersensing.", plural(n, chamberOf(ch)+" stimulus comes", chamberOf(ch)+" stimuli come"), articled(ch), chamberOf(ch)),
		Rivals: []string{"asynchronous pacing, by mode or by magnet"},
		clause: fmt.Sprintf("%s undersensing (%s)", chamberOf(ch), times(n)),
	})
}

func (f *finder) ownCapture(e *event.Event) bool {
	c := f.log.At(e.Cause)
	return e.Rule == event.Captured && c.Rule == event.Timed
}

func chamberOf(ch byte) string {
	if ch == 'A' {
		return "atrial"
	}
	return "ventricular"
}

func articled(ch byte) string {
	if ch == 'A' {
		return "an atrial"
	}
	return "a ventricular"
}

// oversensed: signals that no depolarisation of the chamber made and that the device
// used as beats.
func (f *finder) oversensed(ch byte) {
	var ids []event.ID
	var kinds [ofT + 1]int
	n, tracked := 0, 0
	longest := tick.Dur(0)
	for i := range f.dev.markers {
		m := &f.dev.markers[i]
		k := natureOf(f.log, m.e)
		if m.paced() || m.e.Channel != ch || k == ofBeat || !m.beat {
			continue
		}
		n++
		kinds[k]++
		ids = append(ids, m.e.ID)
		if m.e.Use == event.Tracked {
			tracked++
		}
		if d := f.gapAround(m.e.T); d > longest && d > 0 {
			longest = d
		}
	}
	if n == 0 {
		return
	}
	what, words := "", [...]string{ofNothing: "interference or noise", ofFarField: "the far field of the other chamber", ofT: "T waves"}
	for _, k := range []nature{ofFarField, ofT, ofNothing} {
		if kinds[k] > 0 {
			if what != "" {
				what += " and "
			}
			what += words[k]
		}
	}
	one, many, around := "keeps stimuli back", "keep stimuli back", "them"
	if n == 1 {
		around = "it"
	}
	effect := fmt.Sprintf("%s; the longest RR around %s is %s ms", oneOr(n, one, many), around, whole(longest))
	if 2*tracked > n {
		effect = oneOr(n, "is", "are") + " followed by ventricular stimuli"
	}
	f.add(orderFault, Finding{
		Slug: "oversensing", Channel: string(rune(ch)), Evidence: ids, Count: n,
		Text:   fmt.Sprintf("%s (%s) taken for %s %s: consistent with %s oversensing.", plural(n, "signal that no beat of the chamber caused", "signals that no beat of the chamber caused"), what, oneOr(n, articled(ch)+" beat", chamberOf(ch)+" beats"), effect, chamberOf(ch)),
		Rivals: []string{"failure of output, if the signals are not seen"},
		clause: fmt.Sprintf("%s oversensing of %s (%s)", chamberOf(ch), what, times(n)),
	})
}

// gapAround is the interval between QRS complexes around a time; to the end of the
// strip after the last.
func (f *finder) gapAround(t tick.Time) tick.Dur {
	lo := f.firstQRS(t + 1)
	from, to := tick.Time(0), f.log.Span
	if lo > 0 {
		from = f.v[lo-1].t
	}
	if lo < len(f.v) {
		to = f.v[lo].t
	}
	return to.Sub(from)
}

// crosstalkReach is how long after an atrial stimulus a signal may be its crosstalk:
// the usual crosstalk window (110 ms; 80 to 120, read as an example).
const crosstalkReach = 120 * tick.Millisecond

// crosstalk: a signal on the ventricular channel just after an atrial stimulus that
// no QRS explains and that keeps the ventricular stimulus back.
func (f *finder) crosstalk() {
	var ids []event.ID
	n := 0
	for i := range f.dev.markers {
		m := &f.dev.markers[i]
		if m.paced() || m.e.Channel != 'V' || m.e.Use != event.Inhibits || natureOf(f.log, m.e) == ofBeat {
			continue
		}
		for k := i - 1; k >= 0 && m.e.T.Sub(f.dev.markers[k].e.T) <= crosstalkReach; k-- {
			if a := &f.dev.markers[k]; a.paced() && a.e.Channel == 'A' {
				n++
				ids = append(ids, a.e.ID, m.e.ID)
				break
			}
		}
	}
	if n == 0 {
		return
	}
	f.add(orderFault, Finding{
		Slug: "crosstalk_inhibition", Evidence: ids, Count: n,
		Text:   fmt.Sprintf("%s a signal on the ventricular channel comes within %s ms after an atrial stimulus, without a QRS, and keeps the ventricular stimulus back: consistent with crosstalk inhibition.", capital(times(n)), whole(crosstalkReach)),
		Rivals: []string{"interference that falls there by chance"},
		clause: fmt.Sprintf("crosstalk inhibition (%s)", times(n)),
	})
}

func (f *finder) safety() {
	var ids []event.ID
	n, late := 0, 0
	for i := range f.dev.markers {
		m := &f.dev.markers[i]
		if !m.paced() || m.e.Field != "safety" {
			continue
		}
		n++
		ids = append(ids, m.e.ID, m.e.Cause)
		if s := f.log.At(m.e.Cause); s != nil {
			if w := f.log.At(s.By); w != nil {
				ids = append(ids, w.ID, w.Cause)
			}
			if natureOf(f.log, s) == ofBeat {
				late++
			}
		}
	}
	if n == 0 {
		return
	}
	what := "crosstalk or interference"
	switch {
	case late == n:
		what = "a QRS of the heart's own there"
	case late > 0:
		what = "crosstalk or interference, or a QRS of the heart's own"
	}
	f.add(orderFault, Finding{
		Slug: "safety_stimulus", Evidence: ids, Count: n,
		Text:   fmt.Sprintf("%s a signal in the crosstalk window after an atrial stimulus is answered by an early ventricular stimulus: consistent with %s.", capital(times(n)), what),
		clause: fmt.Sprintf("safety stimulus (%s)", times(n)),
	})
}

// noiseReversion: signals in the noise window, and stimuli given in spite of them.
func (f *finder) noiseReversion() {
	var ids []event.ID
	n, paced := 0, 0
	for i := range f.dev.markers {
		m := &f.dev.markers[i]
		switch {
		case m.e.Use == event.Noise:
			n++
			ids = append(ids, m.e.ID)
		case m.paced() && m.beat && f.inNoise(m.e):
			paced++
			ids = append(ids, m.e.ID)
		}
	}
	if n == 0 {
		return
	}
	what, clause := "no stimulus came between them", "noise, no stimulus during it"
	if paced > 0 {
		what = plural(paced, "stimulus came", "stimuli came") + " all the same"
		clause = "noise, " + plural(paced, "stimulus", "stimuli") + " during it all the same"
	}
	f.add(orderFault, Finding{
		Slug: "noise_reversion", Evidence: ids, Count: n,
		Text:   fmt.Sprintf("%s close upon each other fell in the noise window, and %s: consistent with the device's response to noise.", plural(n, "signal", "signals"), what),
		clause: clause,
	})
}

// inNoise tells whether a noise window runs at a stimulus, or is ended by it.
func (f *finder) inNoise(e *event.Event) bool {
	i := sort.Search(len(f.dev.windows), func(i int) bool { return f.dev.windows[i].T > e.T })
	for i--; i >= 0 && e.T.Sub(f.dev.windows[i].T) < tick.Second; i-- {
		if w := f.dev.windows[i]; (w.Until > e.T || w.By >= e.ID) && w.ID < e.ID && (w.Field == "noise" && e.Channel == 'V' || w.Field == "atrial_noise" && e.Channel == 'A') {
			return true
		}
	}
	return false
}

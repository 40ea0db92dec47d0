package measure

import (
	"fmt"
	"slices"
	"strings"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// trackedRun is a row of tracked P waves that ends with one in the atrial refractory
// period after the last of their ventricular stimuli: a period of the upper rate.
type trackedRun struct {
	av   []tick.Dur
	ids  []event.ID
	held bool      // the upper-rate interval kept a stimulus back
	ramp bool      // long before that it did not: the rate rose into it
	open bool      // its beginning is not on the strip
	t    tick.Time // of its last ventricular stimulus
}

// upperRuns cuts the atrial signals into runs. Only P waves from above count.
func (f *finder) upperRuns() []trackedRun {
	var out []trackedRun
	run := trackedRun{open: true}
	for i := range f.dev.markers {
		m := &f.dev.markers[i]
		switch {
		case m.e.Channel == 'V' && m.beat && (!m.paced() || f.dev.looped[m.e.ID]):
			run = trackedRun{open: true} // the heart's own beat, or a loop
		case m.e.Channel == 'V' && m.beat:
			p := f.dev.marker(m.e.Cause)
			if p == nil || p.e.Use != event.Tracked || f.fibrillates(p) {
				run = trackedRun{open: true}
				continue
			}
			run.av = append(run.av, m.e.T.Sub(p.e.T))
			run.ids = append(run.ids, p.e.ID, m.e.ID)
			run.held = run.held || m.e.Field == "upper_rate"
			run.t = m.e.T
		case m.e.Channel == 'A' && m.paced():
			run = trackedRun{open: true}
		case m.e.Channel == 'A' && (m.e.Use == event.Refractory || m.e.Use == event.Blanked):
			if len(run.av) == 0 || m.e.By == 0 || !f.fromAboveP(m) || f.fibrillates(m) {
				continue
			}
			run.ids = append(run.ids, m.e.ID, m.e.By)
			run.trim(f)
			out = append(out, run)
			run = trackedRun{}
		}
	}
	return out
}

// trim leaves of a run in which the rate rose into the upper rate only the period
// itself: the last stimulus that came in time and those held back after it.
func (r *trackedRun) trim(f *finder) {
	first := len(r.av) // the first of the stimuli held back at the end
	for first > 0 && f.dev.marker(r.ids[2*first-1]).e.Field == "upper_rate" {
		first--
	}
	if cut := first - 1; cut > 0 && r.held {
		r.av, r.ids, r.ramp = r.av[cut:], r.ids[2*cut:], true
	}
}

// fromAboveP tells whether a signal is a P from above.
func (f *finder) fromAboveP(m *marker) bool { return m.wave >= 0 && f.descending(int(m.wave)) }

// fibrillates tells whether a signal is a wave of fibrillation.
func (f *finder) fibrillates(m *marker) bool { return m.wave >= 0 && f.arrival(int(m.wave)) }

// trackedFibrillation names ventricular stimuli after waves of fibrillation: neither
// Wenckebach nor 2:1 behaviour, for there is no atrial rate to follow.
func (f *finder) trackedFibrillation() {
	var ids []event.ID
	var vv []tick.Dur
	n, last := 0, tick.Time(0)
	for i := range f.dev.markers {
		m := &f.dev.markers[i]
		if m.e.Channel != 'V' || !m.beat {
			continue
		}
		p := f.dev.marker(m.e.Cause)
		if !m.paced() || p == nil || p.e.Channel != 'A' || p.e.Use != event.Tracked || !f.fibrillates(p) {
			last = 0
			continue
		}
		if n++; last > 0 {
			vv = append(vv, m.e.T.Sub(last))
		}
		ids, last = append(ids, p.e.ID, m.e.ID), m.e.T
	}
	if n < 3 || len(vv) < 2 { // fewer are chance (a choice)
		return
	}
	span := whole(slices.Min(vv)) + " to " + whole(slices.Max(vv)) + " ms"
	f.add(orderDevice, Finding{
		Slug: "tracked_fibrillation", Evidence: ids, Count: n, Note: judged,
		Text:   fmt.Sprintf("%s tracked with V-V %s, no shorter than the upper-rate interval%s: consistent with tracking of atrial fibrillation.", plural(n, "wave of fibrillation is", "waves of fibrillation are"), span, f.upperInterval()),
		Rivals: []string{"tracking of atrial premature beats", "tracking of far-field or other signals in the atrial channel"},
		clause: "atrial fibrillation tracked up to the upper rate (V-V " + span + ")",
	})
}

// upperRate names what the device makes of P waves faster than it may follow. Source
// of the terms: Furman, PACE 1985;8:197.
func (f *finder) upperRate() {
	var periods, halves []trackedRun
	runs := f.upperRuns()
	for i, r := range runs {
		switch {
		case r.held:
			periods = append(periods, r)
		case len(r.av) == 1 && f.neighbour(runs, i):
			halves = append(halves, r)
		}
	}
	f.trackedFibrillation()
	f.wenckebachPacing(periods)
	f.twoToOnePacing(halves)
}

// neighbour tells whether a run of one stands beside another: one P alone that is not
// tracked is no pattern.
func (f *finder) neighbour(runs []trackedRun, i int) bool {
	beside := func(j int) bool {
		return j >= 0 && j < len(runs) && !runs[j].held && len(runs[j].av) == 1 && max(runs[i].t.Sub(runs[j].t), runs[j].t.Sub(runs[i].t)) < 2*tick.Second
	}
	return beside(i-1) || beside(i+1)
}

func (f *finder) wenckebachPacing(runs []trackedRun) {
	if len(runs) == 0 {
		return
	}
	var ids []event.ID
	var groups []avGroup
	longest := -1
	for i, r := range runs {
		ids = append(ids, r.ids...)
		if (r.open || r.ramp) && anyClosed(runs) {
			continue
		}
		if !r.ramp {
			groups = append(groups, avGroup{c: make([]int, len(r.av)), b: make([]int, 1)})
		}
		if longest < 0 || len(r.av) > len(runs[longest].av) {
			longest = i
		}
	}
	ratio, av := ratios(groups), wholes(runs[longest].av)
	name := f.atrialName(&pairs{}, ids...)
	f.add(orderDevice, Finding{
		Slug: "upper_rate_wenckebach", Evidence: ids, Count: len(runs), Ratio: ratio, PRs: msList(runs[longest].av), Note: judged,
		Text: fmt.Sprintf("The AV interval grows (%s ms) because the upper-rate interval%s holds the stimulus back, until a P falls in PVARP and is not tracked, %s: consistent with Wenckebach behaviour of the device at its upper rate.",
			av, f.upperInterval(), times(len(runs))),
		Rivals: []string{"Wenckebach periods of the AV node, if the stimuli are not seen"},
		clause: strings.Join(strings.Fields(fmt.Sprintf("%s tracked %s at the upper rate (AV %s ms)", name, ratio, av)), " "),
	})
}

func anyClosed(runs []trackedRun) bool {
	return slices.ContainsFunc(runs, func(r trackedRun) bool { return !r.open && !r.ramp })
}

// upperInterval is the length of an upper-rate interval that ran out, in words.
func (f *finder) upperInterval() string {
	for _, w := range f.dev.windows {
		if w.Field == "upper_rate" && w.By == 0 {
			return " of " + whole(w.Until.Sub(w.T)) + " ms"
		}
	}
	return ""
}

func (f *finder) twoToOnePacing(runs []trackedRun) {
	if len(runs) < 2 {
		return
	}
	var ids []event.ID
	var av []tick.Dur
	blind := 0
	for _, r := range runs {
		ids = append(ids, r.ids...)
		av = append(av, r.av...)
		if m := f.dev.marker(r.ids[len(r.ids)-2]); m != nil && m.e.Use == event.Blanked {
			blind++
		}
	}
	where := "PVARP"
	if 2*blind > len(runs) {
		where = "blanking, unseen,"
	}
	name := f.atrialName(&pairs{}, ids...)
	if f.has("upper_rate_wenckebach") {
		name = "also"
	}
	f.add(orderDevice, Finding{
		Slug: "upper_rate_two_to_one", Evidence: ids, Count: len(runs), Ratio: "2:1", PRs: []float64{medianDur(av).MS()}, Note: judged,
		Text:   fmt.Sprintf("Every other P falls in %s after the last stimulus and is not tracked, %s, at a constant AV interval of %s ms: consistent with 2:1 behaviour of the device, PP shorter than its total atrial refractory period (AV delay and PVARP).", where, times(len(runs)), whole(medianDur(av))),
		Rivals: []string{"2:1 AV block, if the stimuli are not seen"},
		clause: fmt.Sprintf("%s tracked 2:1 (AV %s ms)", name, whole(medianDur(av))),
	})
}

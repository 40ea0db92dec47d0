package measure

import (
	"fmt"
	"sort"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// exitBlocked tells whether any sinus impulse was stopped on its way to the
// atrium by its own exit path, rather than by an atrial beat coming the other way.
func (f *finder) exitBlocked() bool {
	for _, id := range f.exits {
		if f.trueExitBlock(id) {
			return true
		}
	}
	return false
}

func (f *finder) trueExitBlock(id event.ID) bool {
	e := f.log.At(id)
	if e.Dir != event.Down || e.Rule == event.Collision {
		return false
	}
	b := f.log.At(f.mark[id].blocker)
	return b == nil || b.Dir != event.Up && f.origin(b.ID) == fromSinus
}

// sinoatrial looks at every long interval between P waves: exit block where the
// record shows that the node fired and did not get out, pause or arrest where it
// did not fire. The surface sees the P waves only.
func (f *finder) sinoatrial() {
	var one, two, pauses []event.ID
	var n1, n2, np int
	var cycles, longest tick.Dur
	blockedAfter := f.exitBlocks()
	for i := 1; i < len(f.p); i++ {
		if f.pOrigin(i) != fromSinus || f.pOrigin(i-1) != fromSinus || !f.descending(i-1) {
			continue
		}
		stuck := between(f.log, blockedAfter, f.p[i-1].t, f.p[i].t)
		if len(stuck) > 0 {
			evidence := append([]event.ID{f.p[i-1].id, f.p[i].id}, stuck...)
			e, ok := f.exitType(i)
			switch {
			case ok && e.Type == 1:
				one, n1, cycles = append(one, evidence...), n1+1, e.Cycle
			default:
				two, n2 = append(two, evidence...), n2+1
			}
		}
		if f.pp(i) > 3*tick.Second {
			pauses = append(pauses, f.p[i-1].id, f.p[i].id)
			np++
			longest = max(longest, f.pp(i))
		}
	}
	f.exit1(one, n1, cycles)
	f.exit2(two, n2)
	if np > 0 {
		why := "In the model the sinus node did not fire meanwhile."
		if n1+n2 > 0 {
			why = "In the model the sinus node fired but its impulse did not reach the atrium."
		}
		f.add(orderExit, Finding{
			Slug: "sinus_pause", Evidence: pauses, Count: np,
			Text:    fmt.Sprintf("%.1f s pass between two sinus P waves: consistent with a sinus pause (above 3 s).", float64(longest)/1e6),
			Surface: "undetermined", Note: "The surface does not tell a node that is silent from one whose impulse does not get out. " + why,
			Rivals: []string{"sinoatrial exit block", "arrest of the sinus node"},
			clause: fmt.Sprintf("sinus pause of %.1f s", float64(longest)/1e6),
		})
	}
	f.arrest(blockedAfter)
}

func (f *finder) exitBlocks() []event.ID {
	var ids []event.ID
	for _, id := range f.exits {
		if f.trueExitBlock(id) {
			ids = append(ids, id)
		}
	}
	return ids
}

// between picks the events whose time lies between two times; ids are in order.
func between(l *event.Log, ids []event.ID, from, to tick.Time) []event.ID {
	a := sort.Search(len(ids), func(k int) bool { return l.At(ids[k]).T >= from })
	b := sort.Search(len(ids), func(k int) bool { return l.At(ids[k]).T > to })
	if a >= b {
		return nil
	}
	return ids[a:b]
}

// exitType reads the PP intervals back from the pause to the pause before it.
func (f *finder) exitType(i int) (Exit, bool) {
	var pp []tick.Dur
	start := i - 1
	for start > 1 && i-start < 12 && f.pOrigin(start-1) == fromSinus && 4*f.pp(start) < 5*f.pp(i-1) {
		start--
	}
	for k := max(start, 1); k <= i; k++ {
		pp = append(pp, f.pp(k))
	}
	for len(pp) > 2 && pp[0] >= pp[len(pp)-1] {
		pp = pp[1:]
	}
	return InferExit(pp, steady)
}

func (f *finder) exit1(ids []event.ID, n int, cycle tick.Dur) {
	if n == 0 {
		return
	}
	f.add(orderExit, Finding{
		Slug: "sa_exit_block_1", Evidence: ids, Count: n, Level: "sinoatrial", Surface: "sinoatrial",
		Text: fmt.Sprintf("PP shortens before a pause that is less than twice the shortest PP, %s: consistent with second-degree sinoatrial exit block, type I, over a sinus cycle of %s ms.", times(n), whole(cycle)),
		Note: "The sinus node is not seen on the surface; its cycle is the length of the group divided by its beats.", Rivals: []string{"sinus arrhythmia"},
		clause: fmt.Sprintf("sinoatrial exit block type I (sinus cycle %s ms)", whole(cycle)),
	})
}

func (f *finder) exit2(ids []event.ID, n int) {
	if n == 0 {
		return
	}
	f.add(orderExit, Finding{
		Slug: "sa_exit_block_2", Evidence: ids, Count: n, Level: "sinoatrial", Surface: "sinoatrial",
		Text: fmt.Sprintf("A P drops out %s and the pause fits a multiple of the PP before it: consistent with second-degree sinoatrial exit block, type II.", times(n)),
		Note: "The sinus node is not seen on the surface.", Rivals: []string{"sinus pause that happens to be a multiple of PP", "blocked atrial premature beats hidden in the T wave"},
		clause: "sinoatrial exit block type II, " + times(n),
	})
}

// silence is a stretch without a sinus P: after one, before the next or the end
// of the strip, with only beats from below in it.
type silence struct {
	from, until tick.Time
	first, last event.ID
	others      []tick.Time // retrograde P waves in it
	ends        bool        // a sinus P ends it
}

// silences longer than three seconds. Other P waves from above explain why no
// sinus P comes and end a stretch without making it one.
func (f *finder) silences() []silence {
	var out []silence
	s := silence{}
	broken := false
	end := func(at tick.Time, id event.ID, ends bool) {
		s.until, s.last, s.ends = at, id, ends
		if d := at.Sub(s.from); !broken && d > 3*tick.Second && 2*d > 3*f.cycle0 {
			out = append(out, s)
		}
	}
	for i := range f.p {
		w := &f.p[i]
		switch {
		case !f.descending(i):
			s.others = append(s.others, w.t)
		case f.pOrigin(i) == fromSinus:
			end(w.t, w.id, true)
			s, broken = silence{from: w.t, first: w.id}, false
		default:
			broken = true
		}
	}
	end(f.log.Span, 0, false)
	return out
}

// arrest names silences as far as the surface shows: with no P at all up to a
// sinus P it is a pause (see sinoatrial), with beats from below in it or without
// an end it is arrest. Beats from below that come no slower than the sinus node
// would explain the silence themselves.
func (f *finder) arrest(stuck []event.ID) {
	if len(f.p)+len(f.v)+len(f.sinus) == 0 {
		return
	}
	var ids []event.ID
	n, fired := 0, 0
	var first silence
	for _, s := range f.silences() {
		if s.ends && len(s.others) == 0 && s.first != 0 || f.overdriven(s.others) {
			continue
		}
		if n == 0 {
			first = s
		}
		n++
		ids = append(append(ids, s.first, s.last), between(f.log, stuck, s.from, s.until)...)
		for _, id := range between(f.log, f.sinus, s.from, s.until) {
			if d := f.log.At(id); d.T > s.from && !(s.ends && s.until.Sub(d.T) < 200*tick.Millisecond) {
				fired++
			}
		}
	}
	if n == 0 {
		return
	}
	model := "In the model the sinus node does not fire."
	if fired > 0 {
		model = fmt.Sprintf("In the model the sinus node fires %s meanwhile and no P comes of it.", times(fired))
	}
	stretch := fmt.Sprintf("from %.1f s to %.1f s", first.from.Seconds(), first.until.Seconds())
	f.add(orderExit, Finding{
		Slug: "sinus_arrest", Evidence: ids, Count: n,
		Text:    fmt.Sprintf("No sinus P %s: consistent with sinus arrest.", stretch),
		Surface: "undetermined", Note: "The surface shows only that no sinus P comes; arrest and complete exit block look alike. " + model,
		Rivals: []string{"complete sinoatrial exit block"},
		clause: "no sinus P " + stretch,
	})
}

// overdriven tells whether beats come fast enough to keep the sinus node silent.
// Without a known sinus cycle that is 60/min.
func (f *finder) overdriven(at []tick.Time) bool {
	if len(at) < 2 {
		return false
	}
	cycle := f.cycle0
	if cycle == 0 {
		cycle = tick.Second
	}
	return at[len(at)-1].Sub(at[0])/tick.Dur(len(at)-1) <= cycle+cycle/20
}

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

// arrest: no sinus P from some point on for more than three seconds. Named as far
// as the surface shows. Other atrial beats explain the silence, and retrograde
// ones do if they come no slower than the sinus node would.
func (f *finder) arrest(stuck []event.ID) {
	last := tick.Time(0)
	var ids []event.ID
	var others []tick.Dur
	for i := range f.p {
		switch {
		case f.pOrigin(i) == fromSinus && f.descending(i):
			last, ids, others = f.p[i].t, []event.ID{f.p[i].id}, nil
		case f.descending(i):
			return
		default:
			others = append(others, f.p[i].t.Sub(last))
		}
	}
	if f.log.Span.Sub(last) <= 3*tick.Second || len(f.p)+len(f.v)+len(f.sinus) == 0 || f.overdriven(others) {
		return
	}
	fired := 0
	for _, id := range f.sinus {
		if f.log.At(id).T > last {
			fired++
		}
	}
	held := between(f.log, stuck, last, f.log.Span)
	model := "In the model the sinus node does not fire."
	if fired > 0 {
		model = fmt.Sprintf("In the model the sinus node fires %s and its impulse does not become a P of its own.", times(fired))
	}
	f.add(orderExit, Finding{
		Slug: "sinus_arrest", Evidence: append(ids, held...),
		Text:    fmt.Sprintf("No sinus P from %.1f s to the end of the strip: consistent with sinus arrest.", last.Seconds()),
		Surface: "undetermined", Note: "The surface shows only that no sinus P comes; arrest and complete exit block look alike. " + model,
		Rivals: []string{"complete sinoatrial exit block"},
		clause: fmt.Sprintf("no sinus P from %.1f s on", last.Seconds()),
	})
}

// overdriven tells whether beats at these distances from the last sinus P come
// fast enough to keep the sinus node silent. Without a known sinus cycle that is
// 60/min.
func (f *finder) overdriven(at []tick.Dur) bool {
	if len(at) < 2 {
		return false
	}
	cycle := f.cycle0
	if cycle == 0 {
		cycle = tick.Second
	}
	return (at[len(at)-1]-at[0])/tick.Dur(len(at)-1) <= cycle+cycle/20
}

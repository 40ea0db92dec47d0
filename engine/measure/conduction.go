package measure

import (
	"fmt"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// retrograde: P waves that entered the atria from below after a beat from below.
// Those that came back to the atria they had started from are re-entry.
func (f *finder) retrograde() {
	var up []event.ID
	var va []tick.Dur
	nu := 0
	for i := range f.p {
		w := &f.p[i]
		if !w.retrograde || f.roundBy(i) != 0 {
			continue
		}
		up = append(up, w.id)
		nu++
		if w.from >= 0 {
			up = append(up, f.v[w.from].id)
		}
		if t := f.va(i); t != nil {
			va = append(va, tick.MS(*t))
		}
	}
	if nu > 0 {
		times := ""
		if len(va) > 0 {
			times = fmt.Sprintf(", VA %s ms", whole(medianDur(va)))
		}
		f.add(orderConduction, Finding{
			Slug: "retrograde_conduction", Evidence: up, Count: nu,
			Text:   fmt.Sprintf("%s up from below%s: consistent with retrograde conduction.", plural(nu, "P comes", "P waves come"), times),
			clause: "retrograde conduction" + times,
		})
	}
	f.reentry()
}

// concealed: an impulse that entered a path of the conduction system, did not
// come out, and made the next one wait or fail. The effect must show: a block,
// or a passage at least 10 ms longer than the path's usual one.
func (f *finder) concealed() {
	usual := f.usualDelays()
	var ids []event.ID
	blockedN, slowed := 0, 0
	for k := range f.log.Events {
		e := &f.log.Events[k]
		if e.Path < 0 || e.Dir != event.Down || !f.conductionTissue(e.Path) {
			continue
		}
		b := f.log.At(f.mark[e.ID].blocker)
		if b == nil || b.Kind != event.Block || b.Path != e.Path || f.mark[b.ID].p == f.mark[e.ID].p && f.mark[b.ID].p >= 0 {
			continue
		}
		if r := e.Recovery; e.Kind == event.Activate && r != event.Unknown && f.log.At(e.Cause).T.Sub(b.T) < r-tick.Millisecond {
			continue // the path counts its recovery from something earlier
		}
		if f.byDevice(b.ID) {
			continue // what every paced beat does
		}
		if b.Dir == event.Down && f.ordinary(b) {
			continue // a dropped beat of the rhythm itself, not concealment
		}
		switch {
		case e.Kind == event.Block && e.Rule == event.PathRefractory:
			blockedN++
		case e.Kind == event.Activate && usual[e.Path] > 0 && f.delay(e) >= usual[e.Path]+10*tick.Millisecond:
			slowed++
		default:
			continue
		}
		ids = append(ids, b.ID, e.ID)
	}
	if n := blockedN + slowed; n > 0 {
		what := fmt.Sprintf("%s slowed", plural(slowed, "impulse is", "impulses are"))
		switch {
		case slowed == 0:
			what = fmt.Sprintf("%s blocked", plural(blockedN, "impulse is", "impulses are"))
		case blockedN > 0:
			what += fmt.Sprintf(" and %d blocked", blockedN)
		}
		f.add(orderConduction, Finding{
			Slug: "concealed_conduction", Evidence: ids, Count: n,
			Text:   what + " by one before that entered the path and did not come out: consistent with concealed conduction.",
			Note:   "On the surface concealed conduction is only inferred, from what follows.",
			clause: "concealed conduction, " + times(n),
		})
	}
}

func (f *finder) conductionTissue(p event.PathID) bool {
	switch f.log.Paths[p].Tissue {
	case event.Node, event.His, event.Purkinje:
		return true
	}
	return false
}

// ordinary tells whether an event belongs to a P of the rhythm on its way down.
func (f *finder) ordinary(e *event.Event) bool { return !f.foreign(e) }

func (f *finder) delay(e *event.Event) tick.Dur { return e.T.Sub(f.log.At(e.Cause).T) }

// usualDelays is the median passage downwards by path.
func (f *finder) usualDelays() []tick.Dur {
	all := make([][]tick.Dur, len(f.log.Paths))
	for k := range f.log.Events {
		e := &f.log.Events[k]
		if e.Kind == event.Activate && e.Path >= 0 && e.Dir == event.Down && f.conductionTissue(e.Path) {
			all[e.Path] = append(all[e.Path], f.delay(e))
		}
	}
	usual := make([]tick.Dur, len(all))
	for p := range all {
		usual[p] = medianDur(all[p])
	}
	return usual
}

func (f *finder) fusion() {
	var ids []event.ID
	n := 0
	for j := range f.v {
		if f.v[j].fusion && !(f.v[j].accessory && !f.own(j)) {
			n++
			ids = append(append(ids, f.v[j].id), f.v[j].roots...)
		}
	}
	if n > 0 {
		f.add(orderConduction, Finding{
			Slug: "fusion_beat", Evidence: ids, Count: n, clause: plural(n, "fusion beat", "fusion beats"),
			Text: fmt.Sprintf("%s depolarised from two origins: consistent with fusion.", plural(n, "QRS is", "QRS complexes are")),
		})
	}
	f.preExcitation()
}

// qt names a prolonged QT from the median of the Fridericia values; it stays
// silent for a wide QRS, whose width lengthens the QT by itself.
func (f *finder) qt() {
	var ids []event.ID
	for _, b := range f.report.Beats {
		if b.Kind == "QRS" && b.QT != nil && b.Conducted {
			ids = append(ids, b.ID)
		}
	}
	s := &f.report.Summary
	if s.Fridericia == nil || s.QRS == nil || *s.QRS >= 120 || *s.Fridericia < prolongedQTc || len(ids) == 0 {
		return
	}
	f.add(orderQT, Finding{
		Slug: "prolonged_qt", Evidence: ids, Count: len(ids),
		Text: fmt.Sprintf("QT %.0f ms; QTc by Fridericia %.0f, Bazett %.0f, Framingham %.0f, Hodges %.0f ms: consistent with a prolonged QT (460 ms in women, 450 in men).",
			*s.QT, *s.Fridericia, *s.Bazett, *s.Framingham, *s.Hodges),
		clause: fmt.Sprintf("QTc %.0f ms (Fridericia)", *s.Fridericia),
	})
}

package ladder

import (
	"escapement/engine/event"
	"escapement/engine/tick"
)

// priorities of the measures. A number that differs from the one before it of
// its kind says more than one that does not, and is kept longer.
var priorities = [...]int{PP: 65, RR: 70, PR: 80, VA: 75, AH: 50, HV: 40, HA: 45, NodeUp: 38, NodeIn: 38, Escape: 90}

const changedBonus = 15

// measure finds the intervals of the diagram, in order of measure and time.
func (b *builder) measure() {
	b.cycles('A', PP, b.lay.aTop)
	b.cycles('V', RR, b.lay.vFoot)
	for i := range b.ws.all {
		if v := &b.ws.all[i]; v.chamber == 'V' {
			b.conducted(v)
		} else {
			b.retrograde(i)
		}
	}
	b.node()
	b.escapes()
	var last [len(priorities)]tick.Dur
	for i := range b.d.Dims {
		d := &b.d.Dims[i]
		d.Priority = priorities[d.Measure]
		v := d.T1.Sub(d.T0)
		if was := last[d.Measure]; was != 0 && max(v-was, was-v) > max(10*tick.Millisecond, was/33) {
			d.Priority += changedBonus
		}
		last[d.Measure] = v
	}
}

func (b *builder) dim(m Measure, from, to *event.Event, y0, y1 float64, tissue event.Tissue) {
	if to.T > from.T {
		b.d.Dims = append(b.d.Dims, Dim{Measure: m, T0: from.T, T1: to.T, Y0: y0, Y1: y1, Event: to.ID, Tissue: tissue})
	}
}

func (b *builder) cycles(chamber byte, m Measure, y float64) {
	var was *event.Event
	for i := range b.ws.all {
		v := &b.ws.all[i]
		if v.chamber != chamber {
			continue
		}
		e := v.first(b.l)
		if was != nil {
			b.dim(m, was, e, y, y, b.l.Sites[e.Site].Tissue)
		}
		was = e
	}
}

// ancestor walks from an activation along its conduction, within one passage, and
// gives the nearest activation at a site of the tissue, or nil. A passage ends at
// another wave of the atria or the ventricles: what lies beyond is an earlier turn.
func (b *builder) ancestor(e *event.Event, tissue event.Tissue) *event.Event {
	start := b.ws.of[e.ID]
	for e.Kind == event.Activate && e.Rule == event.Conducted {
		if e = b.l.At(e.Cause); e == nil || e.Kind != event.Activate {
			return nil
		}
		if b.l.Sites[e.Site].Tissue == tissue {
			return e
		}
		if b.l.Sites[e.Site].Chamber() != 0 && b.ws.of[e.ID] != start {
			return nil
		}
	}
	return nil
}

// conducted measures a QRS from the P and the His bundle that it came from.
func (b *builder) conducted(v *wave) {
	e := v.first(b.l)
	if a := b.ancestor(e, event.Atrium); a != nil && b.ws.of[a.ID] >= 0 {
		p := b.ws.all[b.ws.of[a.ID]].first(b.l)
		b.dim(PR, p, e, b.lay.aTop, b.lay.vTop, event.Node)
	}
	if h := b.ancestor(e, event.His); h != nil {
		b.dim(HV, h, e, b.lay.y[h.Site], b.lay.vTop, event.Purkinje)
	}
}

// retrograde measures a P that came from below.
func (b *builder) retrograde(number int) {
	v := &b.ws.all[number]
	for i, id := range v.members {
		if v.entries[i] != below && v.entries[i] != beside {
			continue
		}
		e := b.l.At(id)
		if q := b.ancestor(e, event.Ventricle); q != nil && b.ws.of[q.ID] >= 0 {
			from := b.ws.all[b.ws.of[q.ID]].first(b.l)
			if a := b.top(v); a != nil && b.ancestor(a, event.Ventricle) == q {
				b.dim(VA, from, a, b.lay.vTop, b.lay.aTop, event.Node)
			}
		}
		if v.entries[i] == beside {
			return
		}
		b.sister(number, e)
		if h := b.ancestor(e, event.His); h != nil {
			b.dim(HA, h, e, b.lay.y[h.Site], b.lay.aFoot, event.Node)
		} else if j := b.ancestor(e, event.Node); j != nil {
			b.dim(NodeUp, j, e, b.lay.y[j.Site], b.lay.aFoot, event.Node)
		}
		return
	}
}

// sister measures a P that came up without the ventricles, as in re-entry in the AV
// node, from the QRS of the same activation of the junction.
func (b *builder) sister(number int, e *event.Event) {
	a, j := b.top(&b.ws.all[number]), b.ancestor(e, event.Node)
	if a == nil || j == nil || b.ancestor(e, event.Ventricle) != nil {
		return
	}
	for i := max(number-sisters, 0); i < min(number+sisters, len(b.ws.all)); i++ {
		q := &b.ws.all[i]
		if from := q.first(b.l); q.chamber == 'V' && b.ancestor(from, event.Node) == j {
			b.dim(VA, from, a, b.lay.vTop, b.lay.aTop, event.Node)
			return
		}
	}
}

// sisters is how many waves before or after a P its QRS may have begun.
const sisters = 4

// top is the activation of a wave at the top of the atria, the right atrium, to
// which VA runs, or nil where the wave did not come so far.
func (b *builder) top(v *wave) *event.Event {
	for _, id := range v.members {
		if e := b.l.At(id); b.lay.y[e.Site] == b.lay.aTop {
			return e
		}
	}
	return nil
}

// node measures the crossings of the AV node downwards.
func (b *builder) node() {
	reached := make([]bool, len(b.l.Events)+1) // by event id: the His bundle was reached from it
	for i := range b.l.Events {
		e := &b.l.Events[i]
		if e.Kind != event.Activate || e.Site < 0 || b.l.Sites[e.Site].Tissue != event.His {
			continue
		}
		reached[e.Cause] = true
		if a := b.ancestor(e, event.Atrium); a != nil {
			b.dim(AH, a, e, b.lay.aFoot, b.lay.y[e.Site], event.Node)
		}
	}
	for i := range b.l.Events {
		e := &b.l.Events[i]
		if e.Kind != event.Activate || e.Site < 0 || b.l.Sites[e.Site].Tissue != event.Node || reached[e.ID] {
			continue
		}
		if a := b.l.At(e.Cause); a != nil && a.Kind == event.Activate && b.l.Sites[a.Site].Tissue == event.Atrium {
			b.dim(NodeIn, a, e, b.lay.aFoot, b.lay.y[e.Site], event.Node)
		}
	}
}

// escapes measures the waits of foci below the sinus node that another impulse
// had reset, where the wait was no shorter than the ventricular cycle before it.
func (b *builder) escapes() {
	for i := range b.l.Events {
		a := &b.l.Events[i]
		if a.Kind != event.Activate || a.Rule != event.Fired {
			continue
		}
		e := b.l.At(a.Cause)
		if e == nil || e.Site < 0 || b.l.Sites[e.Site].Tissue < event.Node {
			continue
		}
		from := b.l.At(e.Cause)
		if from == nil || from.Kind != event.Activate || e.T.Sub(from.T) < b.cycleBefore(from.T) {
			continue
		}
		y := b.origin(e)
		b.dim(Escape, from, e, y, y, b.l.Sites[e.Site].Tissue)
	}
}

// cycleBefore is the last ventricular cycle complete at t, or 0.
func (b *builder) cycleBefore(t tick.Time) tick.Dur {
	var d tick.Dur
	for i := range b.d.Dims {
		if c := &b.d.Dims[i]; c.Measure == RR && c.T1 <= t.Add(beat) {
			d = c.T1.Sub(c.T0)
		}
	}
	return d
}

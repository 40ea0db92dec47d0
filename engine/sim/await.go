package sim

import (
	"math"

	"escapement/engine/plan"
	"escapement/engine/tick"
)

// await is what is known of the impulses on their way to a site, so that arrivals
// that cannot do anything are left out of the queue. In a wave through muscle these
// are most: nearly every path brings its impulse to tissue that the same wave has
// depolarised, and on a silent path that leaves no trace. An impulse is known to do
// nothing at the site where
//
//   - the site's last beat began no earlier than its own, since a site's beat only ever
//     gives way to a later one;
//   - the period that runs now ends after the arrival, since a period only ever gives
//     way to a later one; or
//   - another impulse arrives before it, once the period that runs now is over, and
//     the arrival comes sooner than the shortest refractory period from now. That
//     other impulse depolarises the site, or meets one that has left it, and then the
//     site was depolarised earlier still. (What is known is forgotten whenever the
//     site is depolarised.)
//
// The impulse itself stays inside its path as long as ever; only its arrival goes
// unseen, and [Machine.inside] tells when it is over by the place in the queue's order
// that the arrival would have had.
type await struct {
	first tick.Time // an arrival in the queue that comes when the site has recovered
	order uint64    // its place at that instant; 0: there is none
	least tick.Dur  // the shortest refractory period, by any parameters of the strip
}

// atLast is the place of the device's timers: after everything else of an instant.
const atLast uint64 = math.MaxUint64

// expect finds every site's shortest refractory period. It is monotonous in the
// cycle, so its ends tell.
func (m *Machine) expect(prog *plan.Program) {
	for i := range m.sites {
		m.sites[i].least = m.shortest(i)
	}
	for i := range prog.Changes {
		if h := prog.Changes[i].Heart; h != nil {
			for j := range m.sites {
				r := &h.Sites[j].Refractory
				m.sites[j].least = min(m.sites[j].least, r.At(0), r.At(tick.Dur(prog.Span)))
			}
		}
	}
}

func (m *Machine) shortest(site int) tick.Dur {
	r := &m.h.Sites[site].Refractory
	return min(r.At(0), r.At(max(tick.Dur(m.prog.Span), m.h.Basic)))
}

// send brings an impulse on its way to the far end of a path.
func (m *Machine) send(w *way, in *transit, t tick.Time) {
	in.order = m.queue.place(w.class)
	st := &m.sites[w.exit]
	stale := w.silent && st.id != 0 && in.beat <= st.beat
	recovered := st.id == 0 || t >= st.until && !stale
	awaited := st.order != 0 && (st.first > m.now || st.first == m.now && st.order > m.order)
	sooner := awaited && (st.first < t || st.first == t && st.order < in.order)
	in.unseen = w.silent && t > m.now && (!recovered || sooner && t < m.now.Add(st.least))
	if in.unseen {
		return
	}
	if recovered && !sooner {
		st.first, st.order = t, in.order
	}
	if t <= m.prog.Span {
		m.queue.put(item{t: t, order: in.order, gen: in.gen, index: int32(in.path), dir: uint8(in.dir)})
	}
}

// inside tells whether an impulse is still in its path.
func (m *Machine) inside(in *transit) bool {
	if in.active && in.unseen {
		if end := in.start.Add(in.delay); end < m.now || end == m.now && in.order < m.order {
			in.active = false
		}
	}
	return in.active
}

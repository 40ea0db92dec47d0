package ladder

import (
	"escapement/engine/event"
	"escapement/engine/tick"
)

// spread is the way of a ventricular wave, or of its upper or lower part, through
// the tier.
type spread struct {
	first  event.ID
	t0, t1 tick.Time
	y0, y1 float64
	meets  bool // it ends where the other part ends
}

func (s *spread) at(t tick.Time) float64 {
	switch {
	case t <= s.t0 || s.t1 == s.t0:
		return s.y0
	case t >= s.t1:
		return s.y1
	}
	return s.y0 + float64((s.y1-s.y0)*float64(t-s.t0))/float64(s.t1-s.t0)
}

// spread of the part that came from above (top) or from below. Two parts meet at
// the time of the wave's last activation; how deep tells how many regions each
// part depolarised.
func (b *builder) spread(v *wave, top bool) spread {
	s := spread{t1: v.last(b.l).T, y0: b.lay.vFoot, y1: b.lay.vTop}
	if top {
		s.y0, s.y1 = s.y1, s.y0
	}
	upper := 0
	for i, id := range v.members {
		if v.top[i] {
			upper++
		}
		if v.top[i] == top && s.first == 0 {
			s.first, s.t0 = id, b.l.At(id).T
		}
	}
	if upper > 0 && upper < len(v.members) {
		s.meets = true
		s.y1 = b.lay.vTop + (b.lay.vFoot-b.lay.vTop)*float64(upper)/float64(len(v.members))
	}
	return s
}

// wave draws the one or two strokes of a ventricular wave, and what the atria
// need besides their impulses.
func (b *builder) wave(v *wave) {
	if v.chamber == 'A' {
		b.atrialFusion(v)
		return
	}
	for _, top := range [...]bool{true, false} {
		s := b.spread(v, top)
		if s.first == 0 {
			continue
		}
		b.muscle(s, event.Ventricle)
	}
}

func (b *builder) muscle(s spread, tissue event.Tissue) {
	end := Arrived
	if s.meets {
		end = Collided
	}
	b.d.Strokes = append(b.d.Strokes, Stroke{Event: s.first, T0: s.t0, Y0: s.y0, T1: s.t1, Y1: s.y1, Tissue: tissue, End: end})
}

// atrialFusion draws a wave that entered the atria from both ends: the right
// atrium and the low septum were reached independently, so no impulse joins
// them. The two fronts run equally fast and meet at the latest activation.
func (b *builder) atrialFusion(v *wave) {
	var up, down *event.Event
	for i, id := range v.members {
		e := b.l.At(id)
		if v.entries[i] == within {
			continue
		}
		switch b.lay.y[e.Site] {
		case b.lay.aTop:
			down = e
		case b.lay.aFoot:
			up = e
		}
	}
	if up == nil || down == nil {
		return
	}
	meet := max(v.last(b.l).T, max(up.T, down.T).Add(10*tick.Millisecond))
	d, u := float64(meet-down.T), float64(meet-up.T)
	y := b.lay.aTop + (b.lay.aFoot-b.lay.aTop)*d/(d+u)
	b.muscle(spread{first: down.ID, t0: down.T, y0: b.lay.aTop, t1: meet, y1: y, meets: true}, event.Atrium)
	b.muscle(spread{first: up.ID, t0: up.T, y0: b.lay.aFoot, t1: meet, y1: y, meets: true}, event.Atrium)
}

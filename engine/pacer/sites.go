package pacer

import "escapement/engine/tick"

// pulse is a ventricular lead and its time after the first.
type pulse struct {
	lead  Lead
	after tick.Dur
}

// pulses are the leads to pace in order of time.
func (s *Sites) pulses(m Mode) (p [3]pulse, n int) {
	right := s.Right
	if right == 0 {
		right = RV
	}
	add := func(l Lead, at tick.Dur) {
		i := n
		for ; i > 0 && p[i-1].after > at; i-- {
			p[i] = p[i-1]
		}
		p[i] = pulse{l, at}
		n++
	}
	if !s.Left || !s.Only {
		add(right, 0)
	}
	if s.Left && (m.Multisite == 'V' || s.Only) {
		add(LV, s.Offset)
		if s.Point > 0 {
			add(LV2, s.Offset+s.Point)
		}
	}
	for i := n - 1; i >= 0; i-- {
		p[i].after -= p[0].after
	}
	return p, n
}

// ahead is by how much the first stimulus comes before the one that the AV delay
// refers to.
func (s *Sites) ahead(m Mode) tick.Dur {
	if !s.ToRV || s.Only || !s.Left || m.Multisite != 'V' {
		return 0
	}
	return max(0, -s.Offset)
}

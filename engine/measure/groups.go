package measure

import "escapement/engine/tick"

// token is what one P from above says about AV conduction.
type token uint8

const (
	apart     token = iota // premature, without opportunity, or undecided at the end: says nothing
	conducted              // reached the ventricles
	blocked                // did not, although it could have
)

// unsettled is how close to the end of the strip a P without a recorded block
// may still be on its way.
const unsettled = 600 * tick.Millisecond

func (s *strip) token(i int) token {
	w := &s.p[i]
	switch {
	case w.retrograde || w.premature || s.arrival(i):
		return apart
	case w.to >= 0 && s.begunByDevice(int(w.to)):
		return apart // it met a beat that the device had begun
	case w.to >= 0:
		return conducted
	case w.interfered || s.pacedOver(i) || s.byDevice(w.id) && early(s.pp(i), s.pp(i-1)):
		return apart
	case len(w.blocks) == 0 && s.log.Span.Sub(w.t) < unsettled:
		return apart
	}
	return blocked
}

// avGroup is a run of conducted P waves and the run of blocked ones after it.
type avGroup struct {
	c, b []int // indices of P waves
	next int   // the conducted P after the blocked run, or -1
	open bool  // the conducted run is not preceded by a blocked P: it may have begun earlier
}

// avGroups cuts the P waves that come from above into groups. A P that says
// nothing ends a group, because what came before it explains nothing after it.
func (s *strip) avGroups() []avGroup {
	var groups []avGroup
	g := avGroup{next: -1, open: true}
	flush := func() {
		if len(g.c)+len(g.b) > 0 {
			groups = append(groups, g)
		}
	}
	for i := range s.p {
		if s.p[i].retrograde {
			continue
		}
		switch s.token(i) {
		case apart:
			flush()
			g = avGroup{next: -1, open: true}
		case conducted:
			if len(g.b) > 0 {
				g.next = i
				flush()
				g = avGroup{next: -1}
			}
			g.c = append(g.c, i)
		case blocked:
			g.b = append(g.b, i)
		}
	}
	flush()
	return groups
}

func (s *strip) prs(ps []int) []tick.Dur {
	var d []tick.Dur
	for _, i := range ps {
		d = append(d, s.pr(i))
	}
	return d
}

// cycle is the median PP inside a group, up to the conducted P after it.
func (s *strip) cycle(g avGroup) tick.Dur {
	ps := append(append([]int{}, g.c...), g.b...)
	if g.next >= 0 {
		ps = append(ps, g.next)
	}
	var d []tick.Dur
	for k := 1; k < len(ps); k++ {
		if ps[k] == ps[k-1]+1 {
			d = append(d, s.pp(ps[k]))
		}
	}
	if len(d) == 0 && len(ps) > 0 {
		return s.pp(ps[0])
	}
	return medianDur(d)
}

// steady is how much PR intervals may differ and still count as constant: half a
// small square at 25 mm/s is 20 ms, and the log is finer than paper (a choice of
// this package).
const steady = 10 * tick.Millisecond

// behaviour of a group.
type behaviour uint8

const (
	oneToOne behaviour = iota
	mobitz1
	mobitz2
	twoToOne
	advanced
	untold // blocked, but too little before or after to say
)

// sort names a group by itself; [strip.sortAll] then looks at neighbours.
func (s *strip) sort(g avGroup, after *avGroup) behaviour {
	switch {
	case len(g.b) == 0:
		return oneToOne
	case len(g.b) > 1:
		return advanced
	case len(g.c) == 0:
		return untold
	}
	pr := s.prs(g.c)
	first, last := pr[0], pr[len(pr)-1]
	longer := after != nil && len(after.c) > 1 // something steady to compare with
	if len(pr) == 1 && !(g.open && longer) {
		return twoToOne
	}
	if g.next < 0 {
		if last-first > steady {
			return mobitz1
		}
		return untold
	}
	next := s.pr(g.next)
	switch {
	case last-next > steady:
		return mobitz1
	case next-last > steady:
		return untold
	case len(pr) > 1 && abs(float64(last-pr[len(pr)-2])) > float64(steady):
		return mobitz1
	}
	return mobitz2
}

// sortAll names all groups. A 2:1 group alone among groups of one type belongs
// to them: 2:1 is its shortest period.
func (s *strip) sortAll(groups []avGroup) []behaviour {
	kinds := make([]behaviour, len(groups))
	for i := range groups {
		var after *avGroup
		if i+1 < len(groups) && groups[i].next >= 0 {
			after = &groups[i+1]
		}
		kinds[i] = s.sort(groups[i], after)
	}
	single := append([]behaviour{}, kinds...)
	for i := range kinds {
		if single[i] != twoToOne {
			continue
		}
		before, after := oneToOne, oneToOne
		if i > 0 && groups[i-1].next >= 0 {
			before = single[i-1]
		}
		if i+1 < len(kinds) && groups[i].next >= 0 {
			after = single[i+1]
		}
		if before == twoToOne || after == twoToOne {
			continue
		}
		switch {
		case before == mobitz1 || after == mobitz1:
			kinds[i] = mobitz1
		case before == mobitz2 || after == mobitz2:
			kinds[i] = mobitz2
		case after == oneToOne && i+1 < len(kinds) && len(groups[i+1].c) == 1 && len(groups[i+1].b) == 0 && !groups[i].open:
			// B C B C and then the end: twice every other P
		default:
			kinds[i] = untold
		}
	}
	return kinds
}

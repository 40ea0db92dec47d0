package sim

import (
	"math/rand/v2"

	"escapement/engine/event"
	"escapement/engine/heart"
	"escapement/engine/tick"
)

// way is one direction of a path with its constants worked out.
type way struct {
	c        *heart.Conduct
	min      tick.Dur // the delay, where it does not depend on recovery
	theta    tick.Dur // likewise
	fixed    bool     // theta is constant
	decrease bool     // the delay depends on recovery
	silent   bool
	class    class // of arrivals
	exit     event.SiteID
}

func compile(h *heart.Heart, p *heart.Path, d event.Dir) way {
	c := p.Dir(d)
	w := way{c: c, min: tick.MS(c.MinMS), silent: p.Silent, fixed: c.Theta.PerCycle == 0, decrease: c.AlphaMS != 0, exit: p.Exit(d)}
	if w.fixed {
		w.theta = c.Refractory(0)
	}
	switch h.Sites[w.exit].Tissue {
	case event.Sinus:
		w.class = classArriveSinus
	case event.Atrium:
		w.class = classArriveAtrium
	case event.Node:
		w.class = classArriveNode
	case event.His:
		w.class = classArriveHis
	case event.Purkinje:
		w.class = classArrivePurkinje
	default:
		w.class = classArriveVentricle
	}
	return w
}

func (m *Machine) way(p event.PathID, d event.Dir) *way { return &m.ways[2*int(p)+int(d)-1] }

func other(d event.Dir) event.Dir { return event.Down + event.Up - d }

// theta is the recovery a path needs now.
func (m *Machine) theta(w *way, st *pathState) tick.Dur {
	if w.fixed {
		return m.quantise(w.theta)
	}
	cycle := m.h.Basic
	if st.entries == 2 {
		cycle = st.cycle
	}
	return m.quantise(w.c.Refractory(cycle))
}

func (m *Machine) delay(w *way, recovery tick.Dur) tick.Dur {
	switch {
	case !w.decrease:
		return m.quantise(w.min)
	case recovery == event.Unknown:
		return m.quantise(w.c.First())
	}
	return m.quantise(w.c.Delay(recovery))
}

// enter offers the impulse of a depolarised site to a path.
func (m *Machine) enter(p event.PathID, d event.Dir, cause event.ID, from event.SiteID) {
	w, st := m.way(p, d), &m.paths[p]
	against := &st.transit[other(d)]
	left, used := st.left, st.used
	if against.active {
		left, used = against.leftBefore, against.usedBefore
	}
	e := event.Event{Kind: event.Block, Dir: d, Site: from, Path: p, Cause: cause, Recovery: event.Unknown, Needed: m.theta(w, st)}
	if used {
		e.Recovery = m.now.Sub(left)
	}
	recovery, recovered := e.Recovery, !used || e.Recovery >= e.Needed
	switch {
	case !w.c.Open && (w.c.Reach == 0 || !recovered):
		e.Rule, e.Recovery, e.Needed = event.OneWay, 0, 0
		m.blocked(w, m.now, e)
	case !recovered:
		m.refuse(w, st, e, against.active)
	case w.c.Open && d == event.Down && st.drops.stops(&m.h.Paths[p].Drop, m.prog.Seed, p):
		e.Rule, e.Recovery, e.Needed = event.Dropped, 0, 0
		m.blocked(w, m.now, e)
	case against.active:
		m.collide(w, st, e, against)
	case !w.c.Open:
		e.Rule, e.Recovery, e.Needed, e.Depth = event.OneWay, 0, 0, w.c.Reach
		m.stopInside(w, st, m.reach(w, m.delay(w, recovery)), e)
	default:
		m.conduct(p, w, st, e)
	}
}

// reach is how long an impulse with a delay takes to come as deep as it can in a
// direction that is not open.
func (m *Machine) reach(w *way, delay tick.Dur) tick.Dur {
	return m.quantise(delay * tick.Dur(w.c.Reach) / 1000)
}

func (m *Machine) blocked(w *way, t tick.Time, e event.Event) {
	if !w.silent {
		m.later(t, e)
	}
}

// stopInside lets an impulse come a part of the way; the path counts as left there.
func (m *Machine) stopInside(w *way, st *pathState, after tick.Dur, e event.Event) {
	st.left, st.used = m.now.Add(after), true
	m.blocked(w, st.left, e)
}

// refuse blocks an impulse that the path has not recovered for, perhaps after a
// part of the way.
func (m *Machine) refuse(w *way, st *pathState, e event.Event, against bool) {
	e.Rule = event.PathRefractory
	inner := tick.Dur(float64(e.Needed) * w.c.Inner)
	if against || w.c.Inner >= 1 || e.Recovery <= inner {
		m.blocked(w, m.now, e)
		return
	}
	part, whole := e.Recovery-inner, e.Needed-inner
	e.Depth = uint16(min(max(part*1000/whole, 1), 999))
	m.stopInside(w, st, m.quantise(m.delay(w, e.Needed)*part/whole), e)
}

func (m *Machine) conduct(p event.PathID, w *way, st *pathState, e event.Event) {
	in := &st.transit[e.Dir]
	in.active = true
	in.gen++
	in.start, in.delay, in.cause = m.now, m.delay(w, e.Recovery), e.Cause
	in.leftBefore, in.usedBefore = st.left, st.used
	in.recovery, in.needed = e.Recovery, e.Needed
	st.enter(m.now)
	st.left, st.used = m.now.Add(in.delay), true
	m.push(st.left, w.class, int(p), uint8(e.Dir), in.gen)
}

// enter notes a conducted entry, for the cycle that sets refractoriness.
func (st *pathState) enter(t tick.Time) {
	if st.entries > 0 {
		st.cycle = t.Sub(st.entered)
		st.entries = 2
	} else {
		st.entries = 1
	}
	st.entered = t
}

// collide stops an entering impulse and the opposite one where they meet.
func (m *Machine) collide(w *way, st *pathState, e event.Event, against *transit) {
	mine := max(m.delay(w, e.Recovery), 1)
	theirs := max(against.delay, 1)
	rest := against.start.Add(against.delay).Sub(m.now) // what the other one had still to go
	x := m.quantise(tick.Dur(float64(rest) * float64(mine) / float64(mine+theirs)))
	x = min(x, rest)
	against.active = false
	against.gen++
	gone := m.now.Add(x).Sub(against.start)
	e.Rule, e.Depth = event.Collision, uint16(min(x*1000/mine, 1000))
	if w.c.Open {
		st.enter(m.now)
	} else {
		e.Recovery, e.Needed = 0, 0
		if reach := m.reach(w, mine); reach < x {
			// It stops before they meet, and the other one where it finds that tissue
			// depolarised.
			x, gone = reach, m.quantise(theirs*tick.Dur(1000-w.c.Reach)/1000)
			e.Rule, e.Depth = event.OneWay, w.c.Reach
		}
	}
	st.left, st.used = against.start.Add(gone), true
	they := event.Event{Kind: event.Block, Rule: event.Collision, Dir: other(e.Dir), Path: e.Path, Site: w.exit, Cause: against.cause,
		Recovery: against.recovery, Needed: against.needed, Depth: uint16(min(gone*1000/theirs, 1000))}
	m.blocked(w, st.left, they)
	m.blocked(w, m.now.Add(x), e)
}

// arrive brings an impulse to the far end of its path.
func (m *Machine) arrive(p event.PathID, d event.Dir, gen uint32) {
	w, in := m.way(p, d), &m.paths[p].transit[d]
	if !in.active || in.gen != gen {
		return
	}
	in.active = false
	st := &m.sites[w.exit]
	if st.id == 0 || m.now >= st.until {
		m.activate(event.Event{Rule: event.Conducted, Site: w.exit, Path: p, Dir: d, Cause: in.cause, Recovery: in.recovery, Needed: in.needed})
		return
	}
	m.blocked(w, m.now, event.Event{Kind: event.Block, Rule: event.SiteRefractory, Dir: d, Path: p, Site: m.log.Paths[p].Entry(d), Cause: in.cause,
		Depth: 1000, Recovery: m.now.Sub(st.last), Needed: st.until.Sub(st.last)})
}

// dropState counts the impulses of a drop pattern.
type dropState struct {
	seen   int
	random *rand.Rand // nil until it is needed
}

// stops tells whether the pattern stops the next impulse of a path.
func (s *dropState) stops(d *heart.Drop, seed uint64, p event.PathID) bool {
	if d.Of == 0 {
		if d.Chance == 0 {
			return false
		}
		if s.random == nil {
			s.random = rand.New(rand.NewPCG(seed, uint64(p)<<1))
		}
		return s.random.Float64() < d.Chance
	}
	place := s.seen % d.Of
	s.seen++
	return place >= d.Pass
}

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
	open     bool
	silent   bool
	plain    bool  // silent muscle: open, all or none, no depth; see cross
	anew     bool  // begins a beat
	drops    bool  // a drop pattern stands in it
	atrial   bool  // through atrial muscle
	class    class // of arrivals
	exit     event.SiteID
}

func (m *Machine) compile(p *heart.Path, d event.Dir) way {
	c := p.Dir(d)
	w := way{c: c, min: m.quantise(tick.MS(c.MinMS)), open: c.Open, silent: p.Silent, anew: c.Anew, fixed: c.Theta.PerCycle == 0, decrease: c.AlphaMS != 0, exit: p.Exit(d)}
	if w.fixed {
		w.theta = m.quantise(c.Refractory(0))
	}
	w.atrial = p.Tissue == event.Atrium
	w.drops = d == event.Down && (p.Drop.Of > 0 || p.Drop.Chance > 0)
	w.plain = w.silent && w.open && w.fixed && !w.decrease && !w.drops && c.Inner >= 1
	switch m.h.Sites[w.exit].Tissue {
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

// attempt is an impulse at the entrance of a path.
type attempt struct {
	path     event.PathID
	dir      event.Dir
	from     event.SiteID
	cause    event.ID
	beat     tick.Time // of the depolarisation it comes from
	recovery tick.Dur  // event.Unknown where nothing has left the path yet
	needed   tick.Dur
}

// theta is the recovery a path needs now.
func (m *Machine) theta(w *way, st *pathState) tick.Dur {
	if w.fixed {
		return w.theta
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
		return w.min
	case recovery == event.Unknown:
		return m.quantise(w.c.First())
	}
	return m.quantise(w.c.Delay(recovery))
}

// enter offers the impulse of a depolarised site to a path.
func (m *Machine) enter(x *exit, cause event.ID, from event.SiteID) {
	w, st, p, d := x.way, x.st, x.path, x.dir
	if w.atrial && m.now >= m.h.Apart.From && m.now < m.h.Apart.Until {
		return
	}
	against := &st.transit[other(d)]
	if w.plain {
		m.cross(x, against, cause, from)
		return
	}
	left, used := st.left, st.used
	if m.inside(against) {
		left, used = against.leftBefore, against.usedBefore
	}
	a := attempt{path: p, dir: d, from: from, cause: cause, beat: m.sites[from].beat, recovery: event.Unknown, needed: m.theta(w, st)}
	if used {
		a.recovery = m.now.Sub(left)
	}
	recovered := !used || a.recovery >= a.needed
	switch {
	case !w.open && (w.c.Reach == 0 || !recovered):
		m.block(w, m.now, &a, event.OneWay, 0)
	case !recovered:
		m.refuse(w, st, &a, against.active)
	case w.open && w.drops && st.drops.stops(&m.h.Paths[p].Drop, m.prog.Seed, p):
		m.block(w, m.now, &a, event.Dropped, 0)
	case against.active:
		m.collide(w, st, &a, against)
	case !w.open:
		m.stopInside(w, st, m.reach(w, m.delay(w, a.recovery)), &a, event.OneWay, w.c.Reach)
	default:
		m.conduct(w, st, &st.transit[d], a)
	}
}

// cross is enter for the paths through muscle, which are most: the same rules, without
// what these cannot need, and nothing recorded.
func (m *Machine) cross(x *exit, against *transit, cause event.ID, from event.SiteID) {
	w, st := x.way, x.st
	left, used, met := st.left, st.used, m.inside(against)
	if met {
		left, used = against.leftBefore, against.usedBefore
	}
	recovery := event.Unknown
	if used {
		recovery = m.now.Sub(left)
		if recovery < w.theta {
			return
		}
	}
	if !met {
		m.conduct(w, st, &st.transit[x.dir], attempt{path: x.path, dir: x.dir, from: from, cause: cause, beat: m.sites[from].beat, recovery: recovery, needed: w.theta})
		return
	}
	against.active = false
	against.gen++
	st.enter(m.now)
	st.left, st.used = m.now.Add(m.meeting(max(w.min, 1), against)), true
}

// reach is how long an impulse with a delay takes to come as deep as it can in a
// direction that is not open.
func (m *Machine) reach(w *way, delay tick.Dur) tick.Dur {
	return m.quantise(delay * tick.Dur(w.c.Reach) / 1000)
}

// block records that an impulse stops at a time, now or to come.
func (m *Machine) block(w *way, t tick.Time, a *attempt, r event.Rule, depth uint16) {
	if w.silent {
		return
	}
	e := event.Event{Kind: event.Block, Rule: r, Dir: a.dir, Site: a.from, Path: a.path, Cause: a.cause, Depth: depth}
	if r == event.PathRefractory || r == event.Collision {
		e.Recovery, e.Needed = a.recovery, a.needed
	}
	m.later(t, e)
}

// stopInside lets an impulse come a part of the way; the path counts as left there.
func (m *Machine) stopInside(w *way, st *pathState, after tick.Dur, a *attempt, r event.Rule, depth uint16) {
	st.left, st.used = m.now.Add(after), true
	m.block(w, st.left, a, r, depth)
}

// refuse blocks an impulse that the path has not recovered for, perhaps after a
// part of the way.
func (m *Machine) refuse(w *way, st *pathState, a *attempt, against bool) {
	inner := tick.Dur(float64(a.needed) * w.c.Inner)
	if against || w.c.Inner >= 1 || a.recovery <= inner {
		m.block(w, m.now, a, event.PathRefractory, 0)
		return
	}
	part, whole := a.recovery-inner, a.needed-inner
	after := m.quantise(m.delay(w, a.needed) * part / whole)
	m.stopInside(w, st, after, a, event.PathRefractory, uint16(min(max(part*1000/whole, 1), 999)))
}

func (m *Machine) conduct(w *way, st *pathState, in *transit, a attempt) {
	in.active = true
	in.gen++
	in.start, in.delay = m.now, w.min
	if w.decrease {
		in.delay = m.delay(w, a.recovery)
	}
	in.leftBefore, in.usedBefore = st.left, st.used
	in.attempt = a
	st.enter(m.now)
	st.left, st.used = m.now.Add(in.delay), true
	m.send(w, in, st.left)
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
func (m *Machine) collide(w *way, st *pathState, a *attempt, against *transit) {
	mine := max(m.delay(w, a.recovery), 1)
	theirs := max(against.delay, 1)
	x := m.meeting(mine, against)
	against.active = false
	against.gen++
	gone := m.now.Add(x).Sub(against.start)
	rule, depth := event.Collision, uint16(min(x*1000/mine, 1000))
	if w.open {
		st.enter(m.now)
	} else if reach := m.reach(w, mine); reach < x {
		// It stops before they meet, and the other one where it finds that tissue
		// depolarised.
		x, gone = reach, m.quantise(theirs*tick.Dur(1000-w.c.Reach)/1000)
		rule, depth = event.OneWay, w.c.Reach
	}
	st.left, st.used = against.start.Add(gone), true
	m.block(w, st.left, &against.attempt, event.Collision, uint16(min(gone*1000/theirs, 1000)))
	m.block(w, m.now.Add(x), a, rule, depth)
}

// meeting is how long an impulse that enters now with a delay takes to meet an opposite
// one.
func (m *Machine) meeting(mine tick.Dur, against *transit) tick.Dur {
	rest := against.start.Add(against.delay).Sub(m.now) // what the other one had still to go
	x := m.quantise(tick.Dur(float64(rest) * float64(mine) / float64(mine+max(against.delay, 1))))
	return min(x, rest)
}

// arrive brings an impulse to the far end of its path.
func (m *Machine) arrive(p event.PathID, d event.Dir, gen uint32) {
	w, in := m.way(p, d), &m.paths[p].transit[d]
	if !in.active || in.gen != gen {
		return
	}
	in.active = false
	st := &m.sites[w.exit]
	if w.silent && st.id != 0 && in.beat <= st.beat {
		return
	}
	if st.id == 0 || m.now >= st.until {
		beat := max(in.beat, st.beat)
		if w.anew {
			beat = m.now
		}
		m.activate(&wave{rule: event.Conducted, site: w.exit, path: p, dir: d, cause: in.cause, beat: beat, recovery: in.recovery, needed: in.needed})
		return
	}
	if !w.silent {
		m.record(event.Event{Kind: event.Block, Rule: event.SiteRefractory, Dir: d, Path: p, Site: in.from, Cause: in.cause,
			Depth: 1000, Recovery: m.now.Sub(st.last), Needed: st.until.Sub(st.last)})
	}
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

// Package sim lets time pass over a heart: a queue of events in whole
// microseconds, from a plan to an [event.Log].
//
// The rules, in the order in which an impulse meets them. A slow and simple
// fixed-step simulation in the tests follows this text and must give the same log.
//
//  1. A site that is reached at t is depolarised if t >= the end of its refractory
//     period; that period then begins anew, its length by the cycle since the
//     site's depolarisation before. Otherwise the impulse is blocked (SiteRefractory),
//     unless its path is silent, and leaves no trace.
//  2. A depolarised site sends an impulse into every path that ends there, except
//     the one it came by, in order of path number.
//  3. A path that does not conduct in that direction blocks it (OneWay) after Reach
//     of its length; with a Reach above 0 the path counts as left at that moment.
//  4. Let r be the time since an impulse last left the path, at either end; it is
//     negative while one is inside, except that an impulse coming the other way is
//     judged by what left before that one entered. If r < theta the impulse is blocked
//     (PathRefractory). theta follows the interval between the last two entries.
//     If r lies above Inner*theta, and no opposite impulse is inside, it comes to a
//     depth of (r-inner)/(theta-inner), taking that share of the delay at theta, and
//     the path counts as left when it stops.
//  5. A drop pattern then may stop it at the entrance (Dropped); down only.
//  6. It is conducted with the delay of the recovery curve; the path counts as left
//     when it arrives. If an opposite impulse is inside, both stop where they meet
//     (Collision) and the path counts as left then.
//  7. A focus discharges when its rate has run through one cycle, lengthened by
//     overdrive suppression, since its last discharge or, unless it is protected, the
//     last depolarisation of its site.
//
// Ties are decided by the class table in queue.go. Random numbers come from one
// PCG stream per focus and per path, seeded by the plan.
package sim

import (
	"escapement/engine/event"
	"escapement/engine/heart"
	"escapement/engine/plan"
	"escapement/engine/tick"
)

// Machine is a run in progress. It can stop after any number of events and go on.
type Machine struct {
	log   event.Log
	h     *heart.Heart
	prog  *plan.Program
	queue queue
	now   tick.Time
	base  event.ID // events already taken away by Drain

	ways  []way // paths by 2*id + direction, compiled
	exits [][]exit
	sites []siteState
	paths []pathState
	foci  []focusState
	stops []event.Event // impulses under way to where they stop
	free  []int32
}

type siteState struct {
	last  tick.Time
	until tick.Time
	id    event.ID // its last depolarisation; 0 for none
}

// exit is a path as seen from one of its ends.
type exit struct {
	path event.PathID
	dir  event.Dir
}

type pathState struct {
	left    tick.Time // when an impulse last left or stopped inside; may lie ahead
	used    bool      // one ever did
	entered tick.Time // last entry that was conducted
	entries uint8     // how many, up to 2
	cycle   tick.Dur  // between the last two
	transit [3]transit
	drops   dropState
}

// transit is an impulse inside a path.
type transit struct {
	active     bool
	gen        uint32
	start      tick.Time
	delay      tick.Dur
	leftBefore tick.Time // the path's state before it entered
	usedBefore bool
	cause      event.ID
	recovery   tick.Dur
	needed     tick.Dur
}

// New prepares a run of a program.
func New(prog *plan.Program) *Machine {
	h := prog.Heart
	m := &Machine{prog: prog, sites: make([]siteState, len(h.Sites)), paths: make([]pathState, len(h.Paths)),
		foci: make([]focusState, len(h.Foci)), exits: make([][]exit, len(h.Sites))}
	m.log.Span = prog.Span
	for i := range h.Sites {
		m.log.Sites = append(m.log.Sites, h.Sites[i].Site)
	}
	for i := range h.Paths {
		p := &h.Paths[i]
		m.log.Paths = append(m.log.Paths, p.Path)
		m.exits[p.From] = append(m.exits[p.From], exit{event.PathID(i), event.Down})
		m.exits[p.To] = append(m.exits[p.To], exit{event.PathID(i), event.Up})
		m.paths[i].drops.init(&p.Drop, prog.Seed, i)
	}
	m.use(h)
	for i := range h.Foci {
		m.foci[i].init(m, i)
	}
	for i := range prog.Stimuli {
		m.push(prog.Stimuli[i].T, classStimulate, i, 0, 0)
	}
	for i := range prog.Changes {
		m.push(prog.Changes[i].T, classChange, i, 0, 0)
	}
	return m
}

// use takes over the parameters of a heart with the same sites and paths.
func (m *Machine) use(h *heart.Heart) {
	m.h = h
	m.ways = m.ways[:0]
	for i := range h.Paths {
		m.ways = append(m.ways, compile(h, &h.Paths[i], event.Down), compile(h, &h.Paths[i], event.Up))
	}
}

// Log is what has happened so far. It is the machine's own until the run is done.
func (m *Machine) Log() *event.Log { return &m.log }

// Now is the time reached.
func (m *Machine) Now() tick.Time { return m.now }

// Drain forgets the events recorded so far, for runs too long to keep; their
// numbers stay used.
func (m *Machine) Drain() {
	m.base += event.ID(len(m.log.Events))
	m.log.Events = m.log.Events[:0]
}

// Run goes on until the end of the strip or until about budget more events are
// recorded. It tells whether the end was reached.
func (m *Machine) Run(budget int) bool {
	stop := len(m.log.Events) + budget
	for m.queue.next() <= m.prog.Span {
		if len(m.log.Events) >= stop {
			return false
		}
		it := m.queue.pop()
		m.now = it.t
		switch it.class() {
		case classChange:
			m.change(&m.prog.Changes[it.index])
		case classStop:
			m.record(m.stops[it.index])
			m.free = append(m.free, it.index)
		case classDischarge:
			if m.foci[it.index].gen == it.gen {
				m.discharge(int(it.index))
			}
		case classStimulate:
			m.stimulate(&m.prog.Stimuli[it.index])
		default:
			m.arrive(event.PathID(it.index), event.Dir(it.dir), it.gen)
		}
	}
	m.now = m.prog.Span
	return true
}

// push queues an item unless it lies after the end of the strip.
func (m *Machine) push(t tick.Time, c class, index int, dir uint8, gen uint32) {
	if t <= m.prog.Span {
		m.queue.push(t, c, index, dir, gen)
	}
}

func (m *Machine) record(e event.Event) event.ID {
	e.ID = m.base + event.ID(len(m.log.Events)+1)
	e.T = m.now
	m.log.Events = append(m.log.Events, e)
	return e.ID
}

// later records an event at a time to come.
func (m *Machine) later(t tick.Time, e event.Event) {
	if t == m.now {
		m.record(e)
		return
	}
	var i int32
	if n := len(m.free); n > 0 {
		i = m.free[n-1]
		m.free = m.free[:n-1]
		m.stops[i] = e
	} else {
		i = int32(len(m.stops))
		m.stops = append(m.stops, e)
	}
	m.push(t, classStop, int(i), 0, 0)
}

func (m *Machine) change(c *plan.Change) {
	if c.Field != "" {
		m.record(event.Event{Kind: event.Change, Rule: event.Planned, Site: event.None, Path: event.None, Field: c.Field, To: c.To})
	}
	if c.Heart != nil {
		m.use(c.Heart)
	}
}

func (m *Machine) stimulate(s *plan.Stimulus) {
	st := &m.sites[s.Site]
	e := event.Event{Kind: event.Stimulus, Rule: s.Rule, Site: s.Site, Path: event.None, Captured: st.id == 0 || m.now >= st.until}
	if st.id != 0 {
		e.Recovery, e.Needed = m.now.Sub(st.last), st.until.Sub(st.last)
	}
	id := m.record(e)
	if e.Captured {
		m.activate(event.Event{Rule: event.Captured, Site: s.Site, Path: event.None, Cause: id})
	}
}

// activate depolarises an excitable site and sends the impulse on.
func (m *Machine) activate(e event.Event) {
	st := &m.sites[e.Site]
	cycle := m.h.Basic
	if st.id != 0 {
		cycle = m.now.Sub(st.last)
	}
	e.Kind = event.Activate
	e.Until = m.now.Add(m.quantise(m.h.Sites[e.Site].Refractory.At(cycle)))
	id := m.record(e)
	st.last, st.until, st.id = m.now, e.Until, id
	m.reset(e.Site, id, e.Rule == event.Fired)
	for _, x := range m.exits[e.Site] {
		if x.path != e.Path {
			m.enter(x.path, x.dir, id, e.Site)
		}
	}
}

// quantise rounds up to a whole number of quanta.
func (m *Machine) quantise(d tick.Dur) tick.Dur {
	if m.h.Quantum <= 1 {
		return d
	}
	return (d + m.h.Quantum - 1) / m.h.Quantum * m.h.Quantum
}

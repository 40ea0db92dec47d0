// Package sim lets time pass over a heart: a queue of events in whole
// microseconds, from a plan to an [event.Log].
//
// The rules, in the order in which an impulse meets them. A slow and simple
// fixed-step simulation in the tests follows this text and must give the same log.
//
//  1. A site that is reached at t is depolarised if t >= the end of its refractory
//     period; that period then begins anew, its length by the cycle since the
//     site's depolarisation before (the basic cycle at first). Otherwise the impulse
//     is blocked (SiteRefractory). No block on a silent path is recorded. Every
//     depolarisation belongs to a beat, known by when it began: at that instant, for
//     a stimulus, a focus and an impulse that came a way with Anew; otherwise it is
//     the beat of the site the impulse left, or the site's own last one if that began
//     later. An impulse on a silent path ends at a site whose last depolarisation is
//     of a beat that began no earlier than its own.
//  2. A depolarised site first resets its foci (rule 8), then sends an impulse into
//     every path that ends there, except the one it came by, in order of path number.
//  3. Let r be the time since an impulse last left the path, at either end. While
//     one is inside r is negative, counted to the moment at which it will leave; but
//     while one is being conducted the other way, r is counted from what left before
//     that one entered. The path has recovered if r >= theta or nothing ever left it.
//     theta follows the interval between the last two impulses that rule 7 let in,
//     either way (the basic cycle until there are two).
//  4. A path that does not conduct in that direction blocks the impulse (OneWay): at
//     the entrance where Reach is 0 or the path has not recovered, otherwise after
//     Reach of its length, taking that share of the delay of rule 7. The path then
//     counts as left when it stops. If an opposite impulse is inside, both stop as in
//     rule 7; if they would meet beyond Reach, this one stops at Reach and the other
//     (Collision) when it comes to that place, and the path counts as left then.
//  5. A path that has not recovered blocks the impulse (PathRefractory): at the
//     entrance or, if r lies above inner = Inner*theta and no opposite impulse is
//     inside, at a depth of (r-inner)/(theta-inner), taking that share of the delay
//     at theta. The path then counts as left when it stops. Depths are rounded down,
//     this one to 1 to 999 thousandths.
//  6. A drop pattern then may stop it at the entrance (Dropped); down only. The count
//     of a pattern begins with its Phase when it is put in force.
//  7. It is conducted with the delay of the recovery curve at r; the path counts as
//     left when it arrives. If an opposite impulse is inside, both stop where they
//     meet (Collision), the one that entered first recorded first, and the path
//     counts as left then.
//  8. A focus discharges when its rate has run through 1+S cycles since its last
//     discharge or, unless it is protected, the last depolarisation of its site by
//     anything but itself: that event is the discharge's cause. Jitter is drawn when
//     a cycle begins. A reset after the share x of the focus's own cycle (S = 0) adds
//     gain*(1-x) to S, if positive. Where First is given, the cycle under way at the
//     start counts as begun one cycle before it, and a reset before that as x = 0.
//  9. A focus with a driver has its first discharge at From (at once, if From is 0)
//     and none at Until or later. Reentry comes round by rule 8 without suppression;
//     other impulses reset it only after its first discharge, and one that comes less
//     than EndsBelow after the last discharge or reset ends it for good. Arrivals are
//     never reset: an interval is Least and an exponential one of mean Mean-Least, by
//     one uniform number each. While the atria are Apart, a path of atrial muscle lets
//     nothing in and records nothing.
//
// Ties are decided by the class table in queue.go; an impulse that stops where and
// when it enters is recorded at once. A change of parameters holds for what begins
// after it: impulses and cycles under way keep theirs. Random numbers come from one
// PCG stream for each focus and path, of the plan's seed and 2*number+1 or 2*number,
// and are drawn only where there is jitter, a chance of dropping, or arrivals.
package sim

import (
	"escapement/engine/event"
	"escapement/engine/heart"
	"escapement/engine/pacer"
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
	order uint64   // in the queue's total order at now: what comes before it has been
	base  event.ID // events already taken away by Drain
	dev   *device  // nil: none

	ways  []way // paths by 2*id + direction, compiled
	exits [][]exit
	laid  *heart.Heart // whose sites and paths exits were laid for
	sites []siteState
	paths []pathState
	foci  []focusState
	stops []event.Event // impulses under way to where they stop
	free  []int32
}

type siteState struct {
	last  tick.Time
	until tick.Time
	beat  tick.Time // when the beat began that it was of
	id    event.ID  // its last depolarisation; 0 for none

	cycle, period tick.Dur // the last cycle asked for and its refractory period
	await                  // what is on its way
}

// exit is a path as seen from one of its ends.
type exit struct {
	path event.PathID
	dir  event.Dir
	way  *way
	st   *pathState
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
	unseen     bool // its arrival is not in the queue: see await
	gen        uint32
	order      uint64 // that its arrival has, or would have, at its instant
	start      tick.Time
	delay      tick.Dur
	leftBefore tick.Time // the path's state before it entered
	usedBefore bool
	attempt
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
	for {
		next, due := m.queue.next(), m.dev.due()
		if min(next, due) > m.prog.Span {
			break
		}
		if len(m.log.Events) >= stop {
			return false
		}
		if due < next {
			m.dev.expire(due)
			continue
		}
		it := m.queue.pop()
		m.now, m.order = it.t, it.order
		switch it.class() {
		case classChange:
			m.change(&m.prog.Changes[it.index])
		case classFault:
			m.dev.fault(&m.prog.Faults[it.index])
		case classCapture:
			m.dev.capture(event.SiteID(it.index), event.ID(it.gen))
		case classSense:
			m.dev.sense(event.SiteID(it.index), pacer.Channel(it.dir), event.ID(it.gen))
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

// slot records an empty event, to be filled in before the next.
func (m *Machine) slot() *event.Event {
	n := len(m.log.Events)
	if n == cap(m.log.Events) {
		m.log.Events = append(m.log.Events, event.Event{})
	} else {
		m.log.Events = m.log.Events[:n+1]
		m.log.Events[n] = event.Event{}
	}
	e := &m.log.Events[n]
	e.ID, e.T = m.base+event.ID(n+1), m.now
	return e
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
	if c.Device != nil && m.dev != nil {
		m.dev.program(c.Device)
	}
	if c.Heart == nil {
		return
	}
	for i := range m.paths {
		if d := c.Heart.Paths[i].Drop; d != m.h.Paths[i].Drop {
			m.paths[i].drops.seen = d.Phase
		}
	}
	m.use(c.Heart)
	for i := range m.sites {
		m.sites[i].period = 0
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
		m.activate(&wave{rule: event.Captured, site: s.Site, path: event.None, cause: id, beat: m.now})
	}
}

// wave is what depolarises a site: a stimulus, a focus or an impulse that arrives.
type wave struct {
	rule     event.Rule
	dir      event.Dir
	site     event.SiteID
	path     event.PathID // it came by, or None
	cause    event.ID
	beat     tick.Time
	recovery tick.Dur // of that path, as on the event
	needed   tick.Dur
}

// activate depolarises an excitable site and sends the impulse on.
func (m *Machine) activate(a *wave) {
	st := &m.sites[a.site]
	cycle := m.h.Basic
	if st.id != 0 {
		cycle = m.now.Sub(st.last)
	}
	e := m.slot()
	e.Kind, e.Rule, e.Dir, e.Site, e.Path, e.Cause, e.Recovery, e.Needed = event.Activate, a.rule, a.dir, a.site, a.path, a.cause, a.recovery, a.needed
	e.Until = m.now.Add(m.refractory(a.site, cycle))
	id := e.ID
	st.last, st.until, st.beat, st.id = m.now, e.Until, a.beat, id
	st.await.order = 0
	m.reset(a, id)
	if m.dev != nil {
		m.dev.depolarised(a, id)
	}
	exits := m.exits[a.site]
	for i := range exits {
		if x := &exits[i]; x.path != a.path {
			m.enter(x, id, a.site)
		}
	}
}

// refractory is a site's refractory period after a cycle. In a steady rhythm it is
// that of the beat before.
func (m *Machine) refractory(site event.SiteID, cycle tick.Dur) tick.Dur {
	st := &m.sites[site]
	if st.period == 0 || st.cycle != cycle {
		st.cycle, st.period = cycle, m.quantise(m.h.Sites[site].Refractory.At(cycle))
	}
	return st.period
}

// quantise rounds up to a whole number of quanta.
func (m *Machine) quantise(d tick.Dur) tick.Dur {
	if m.h.Quantum <= 1 {
		return d
	}
	return (d + m.h.Quantum - 1) / m.h.Quantum * m.h.Quantum
}

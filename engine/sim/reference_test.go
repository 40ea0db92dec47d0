package sim

import (
	"math/rand/v2"

	"escapement/engine/event"
	"escapement/engine/heart"
	"escapement/engine/plan"
	"escapement/engine/portmath"
	"escapement/engine/tick"
)

// The reference is a slow second implementation of the rules at the top of the
// package. Time moves by a fixed step, the heart's quantum; at each step it looks at everything there
// is, in the order of the class table, and asks whether it is due. There is no
// queue. It is meant to be checked against the text by eye: the number of a rule
// stands beside what follows it.

type reference struct {
	prog  *plan.Program
	heart *heart.Heart // in force
	log   event.Log
	now   tick.Time
	made  int // counts what is set up; decides ties inside a class

	sites   []refSite
	paths   []refPath
	foci    []refFocus
	stops   []refStop
	changed int    // changes put in force
	given   []bool // stimuli given
}

type refSite struct {
	used   bool // depolarised before
	last   tick.Time
	beat   tick.Time // when the beat began that it was of
	period tick.Dur
}

type refPath struct {
	inside [3]refImpulse // by direction
	used   bool          // an impulse has left, or is stopping inside
	left   tick.Time     // when; ahead of now for one that is stopping
	letIn  []tick.Time
	met    int // impulses that met the drop pattern
	random *rand.Rand
}

// refImpulse is an impulse that is conducted and has not arrived.
type refImpulse struct {
	inside           bool
	entered, arrives tick.Time
	made             int
	e                event.Event // the Activate that it will make
	beat             tick.Time   // when the beat began that it is of
}

type refFocus struct {
	began, due tick.Time
	made       int
	cause      event.ID
	s          float64   // overdrive suppression
	at         tick.Time // as it was at this time
	random     *rand.Rand
	over       bool // a driver that has not begun or has ended
}

// refStop is an impulse that will stop inside a path.
type refStop struct {
	at   tick.Time
	made int
	e    event.Event
}

// referenceLog plays a program.
func referenceLog(prog *plan.Program) *event.Log {
	h := prog.Heart
	r := &reference{prog: prog, heart: h, sites: make([]refSite, len(h.Sites)), paths: make([]refPath, len(h.Paths)),
		foci: make([]refFocus, len(h.Foci)), given: make([]bool, len(prog.Stimuli))}
	r.log.Span = prog.Span
	for i := range h.Sites {
		r.log.Sites = append(r.log.Sites, h.Sites[i].Site)
	}
	for i := range h.Paths {
		r.log.Paths = append(r.log.Paths, h.Paths[i].Path)
		r.paths[i].random = rand.New(rand.NewPCG(prog.Seed, uint64(2*i)))
	}
	for i := range h.Foci {
		r.foci[i].random = rand.New(rand.NewPCG(prog.Seed, uint64(2*i+1)))
		r.first(i)
	}
	for ; r.now <= prog.Span; r.now = r.now.Add(prog.Heart.Quantum) {
		for r.one() {
		}
	}
	return &r.log
}

// one does one thing that is due now, the first by class and order of setting up.
func (r *reference) one() bool {
	var do func()
	first, made := class(255), 0
	due := func(c class, m int, f func()) {
		if c < first || c == first && m < made {
			first, made, do = c, m, f
		}
	}
	if i := r.changed; i < len(r.prog.Changes) && r.prog.Changes[i].T == r.now {
		due(classChange, i, func() { r.change(&r.prog.Changes[i]) })
	}
	for i := range r.stops {
		if r.stops[i].at == r.now {
			due(classStop, r.stops[i].made, func() { r.stop(i) })
		}
	}
	for i := range r.paths {
		for d := event.Down; d <= event.Up; d++ {
			if in := &r.paths[i].inside[d]; in.inside && in.arrives == r.now {
				due(arriving[r.log.Sites[in.e.Site].Tissue], in.made, func() { r.arrive(in) })
			}
		}
	}
	for i := range r.foci {
		if r.foci[i].due == r.now {
			due(classDischarge, r.foci[i].made, func() { r.discharge(i) })
		}
	}
	for i := range r.prog.Stimuli {
		if !r.given[i] && r.prog.Stimuli[i].T == r.now {
			due(classStimulate, i, func() { r.given[i] = true; r.stimulate(&r.prog.Stimuli[i]) })
		}
	}
	if do != nil {
		do()
	}
	return do != nil
}

var arriving = [...]class{event.Sinus: classArriveSinus, event.Atrium: classArriveAtrium, event.Node: classArriveNode,
	event.His: classArriveHis, event.Purkinje: classArrivePurkinje, event.Ventricle: classArriveVentricle}

func (r *reference) setUp() int { r.made++; return r.made }

func (r *reference) record(e event.Event) event.ID {
	e.ID, e.T = event.ID(len(r.log.Events)+1), r.now
	r.log.Events = append(r.log.Events, e)
	return e.ID
}

// up rounds up to a multiple of the quantum.
func (r *reference) up(d tick.Dur) tick.Dur {
	for d%r.heart.Quantum != 0 {
		d++
	}
	return d
}

func (r *reference) change(c *plan.Change) {
	r.changed++
	if c.Heart != nil {
		for i := range r.paths {
			if c.Heart.Paths[i].Drop != r.heart.Paths[i].Drop {
				r.paths[i].met = 0
			}
		}
		r.heart = c.Heart
	}
	if c.Field != "" {
		r.record(event.Event{Kind: event.Change, Rule: event.Planned, Field: c.Field, To: c.To, Site: event.None, Path: event.None})
	}
}

func (r *reference) stimulate(s *plan.Stimulus) {
	e := event.Event{Kind: event.Stimulus, Rule: s.Rule, Site: s.Site, Path: event.None}
	e.Captured = r.excitable(s.Site)
	e.Recovery, e.Needed = r.sinceLast(s.Site)
	if id := r.record(e); e.Captured {
		r.depolarise(event.Event{Cause: id, Rule: event.Captured, Site: s.Site, Path: event.None}, r.now)
	}
}

// Rule 1.
func (r *reference) excitable(s event.SiteID) bool {
	return !r.sites[s].used || r.now >= r.sites[s].last.Add(r.sites[s].period)
}

func (r *reference) sinceLast(s event.SiteID) (recovery, needed tick.Dur) {
	if !r.sites[s].used {
		return 0, 0
	}
	return r.now.Sub(r.sites[s].last), r.sites[s].period
}

// depolarise records an Activate, begins the refractory period, resets the foci
// of the site and sends the impulse on.
func (r *reference) depolarise(e event.Event, beat tick.Time) {
	s, cycle := &r.sites[e.Site], r.heart.Basic
	if s.used {
		cycle = r.now.Sub(s.last)
	}
	s.used, s.last, s.beat, s.period = true, r.now, beat, r.up(r.heart.Sites[e.Site].Refractory.At(cycle))
	e.Kind, e.Until = event.Activate, s.last.Add(s.period)
	id := r.record(e)
	for i := range r.foci {
		r.reset(i, &r.log.Events[id-1])
	}
	for i := range r.paths { // rule 2
		p := &r.log.Paths[i]
		for d := event.Down; d <= event.Up; d++ {
			if p.Entry(d) == e.Site && event.PathID(i) != e.Path {
				r.enter(event.PathID(i), d, id)
			}
		}
	}
}

// begin begins a cycle of a focus now (rule 8).
func (r *reference) begin(i int, cause event.ID) {
	f, h := &r.foci[i], &r.heart.Foci[i]
	f.began, f.cause, f.made = r.now, cause, r.setUp()
	cycle := h.Rate.Next(r.now, 1+f.s).Sub(r.now)
	if h.Jitter > 0 {
		cycle += tick.Dur((2*f.random.Float64() - 1) * float64(h.Jitter))
	}
	if h.Driver == heart.Arrivals { // rule 9
		cycle = h.Least + tick.Dur(float64(h.Mean-h.Least)*-portmath.Log(1-f.random.Float64()))
	}
	f.due = r.now.Add(max(r.up(cycle), r.heart.Quantum))
	if h.Driver != 0 && h.Until > 0 && f.due >= h.Until {
		f.due = tick.Never
	}
}

// first sets up the first discharge of a focus; where it is given, the cycle
// before it began one cycle earlier.
func (r *reference) first(i int) {
	f, h := &r.foci[i], &r.heart.Foci[i]
	if h.Driver != 0 {
		f.due, f.over, f.made = tick.Time(r.up(tick.Dur(h.From))), true, r.setUp()
		if h.Until > 0 && f.due >= h.Until {
			f.due = tick.Never
		}
		return
	}
	if h.First == 0 {
		r.begin(i, 0)
		return
	}
	f.due, f.made = tick.Time(r.up(h.First)), r.setUp()
	f.began = f.due.Add(-tick.PerMinute(h.Rate.At(f.due)))
}

func (r *reference) discharge(i int) {
	site := r.heart.Foci[i].Site
	rule := event.Phase4
	switch r.heart.Foci[i].Driver {
	case heart.Reentry:
		rule = event.Circuit
	case heart.Arrivals:
		rule = event.Arrival
	}
	r.foci[i].over = false
	id := r.record(event.Event{Kind: event.Discharge, Rule: rule, Cause: r.foci[i].cause, Site: site, Path: event.None})
	r.fade(i)
	r.begin(i, id)
	if r.excitable(site) {
		r.depolarise(event.Event{Cause: id, Rule: event.Fired, Site: site, Path: event.None}, r.now)
		return
	}
	b := event.Event{Kind: event.Block, Rule: event.SiteRefractory, Cause: id, Site: site, Path: event.None}
	b.Recovery, b.Needed = r.sinceLast(site)
	r.record(b)
}

// reset begins the cycle of a focus anew where its site was depolarised by
// anything but itself.
func (r *reference) reset(i int, e *event.Event) {
	f, h := &r.foci[i], &r.heart.Foci[i]
	if h.Site != e.Site || h.Protected || e.Rule == event.Fired && f.cause == e.Cause {
		return
	}
	if h.Driver != 0 && f.over {
		return
	}
	if h.Driver != 0 && r.now.Sub(f.began) < h.EndsBelow {
		f.due, f.over = tick.Never, true
		return
	}
	r.fade(i)
	own := h.Rate.Next(f.began, 1).Sub(f.began)
	f.s += float64(h.OverdriveGain * max(0, 1-float64(max(0, r.now.Sub(f.began)))/float64(own)))
	r.begin(i, e.ID)
}

// fade lets the suppression of a focus decay to now.
func (r *reference) fade(i int) {
	f := &r.foci[i]
	if tau := r.heart.Foci[i].OverdriveTau; tau > 0 {
		f.s = float64(f.s * portmath.Exp(-float64(r.now.Sub(f.at))/float64(tau)))
	}
	f.at = r.now
}

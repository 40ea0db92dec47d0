package sim

import (
	"escapement/engine/event"
	"escapement/engine/heart"
	"escapement/engine/plan"
)

// New prepares a run of a program.
func New(prog *plan.Program) *Machine {
	m := &Machine{}
	m.begin(prog)
	return m
}

// begin makes the machine ready for a program, in the room of the run before, if
// there was one: a search makes thousands.
func (m *Machine) begin(prog *plan.Program) {
	h := prog.Heart
	m.prog, m.now, m.order, m.base, m.dev = prog, 0, 0, 0, nil
	if m.log.Events == nil {
		m.log.Events = make([]event.Event, 0, 256)
	}
	m.log = event.Log{Span: prog.Span, Sites: m.log.Sites, Paths: m.log.Paths, Events: m.log.Events[:0]}
	m.queue.begin(2*len(h.Paths) + len(prog.Stimuli) + len(prog.Changes))
	m.sites, m.paths, m.foci = cleared(m.sites, len(h.Sites)), cleared(m.paths, len(h.Paths)), cleared(m.foci, len(h.Foci))
	m.stops, m.free = m.stops[:0], m.free[:0]
	if !sameNetwork(m.laid, h) {
		m.ways = make([]way, 2*len(h.Paths))
		m.lay(h)
	}
	m.laid = h
	for i := range h.Paths {
		m.paths[i].drops.seen = h.Paths[i].Drop.Phase
	}
	m.use(h)
	m.expect(prog)
	for i := range h.Foci {
		m.foci[i].init(m, i)
	}
	for i := range prog.Stimuli {
		m.push(prog.Stimuli[i].T, classStimulate, i, 0, 0)
	}
	for i := range prog.Changes {
		m.push(prog.Changes[i].T, classChange, i, 0, 0)
	}
	m.connect(prog)
}

// cleared is a slice of n zero values in the room of another one.
func cleared[T any](s []T, n int) []T {
	if cap(s) < n {
		return make([]T, n)
	}
	s = s[:n]
	clear(s)
	return s
}

// sameNetwork tells whether two hearts have the same sites and paths.
func sameNetwork(a, b *heart.Heart) bool {
	if a == nil || len(a.Sites) != len(b.Sites) || len(a.Paths) != len(b.Paths) {
		return false
	}
	for i := range a.Sites {
		if a.Sites[i].Site != b.Sites[i].Site {
			return false
		}
	}
	for i := range a.Paths {
		if a.Paths[i].Path != b.Paths[i].Path {
			return false
		}
	}
	return true
}

// lay names the sites and paths and lists the paths that leave each site, in order of
// their numbers.
func (m *Machine) lay(h *heart.Heart) {
	m.log.Sites, m.log.Paths = make([]event.Site, len(h.Sites)), make([]event.Path, len(h.Paths))
	for i := range h.Sites {
		m.log.Sites[i] = h.Sites[i].Site
	}
	for i := range h.Paths {
		m.log.Paths[i] = h.Paths[i].Path
	}
	count := make([]int, len(h.Sites))
	for i := range h.Paths {
		count[h.Paths[i].From]++
		count[h.Paths[i].To]++
	}
	all := make([]exit, 2*len(h.Paths))
	m.exits = make([][]exit, len(h.Sites))
	for i, n := range count {
		m.exits[i], all = all[:0:n], all[n:]
	}
	for i := range h.Paths {
		p := &h.Paths[i]
		m.exits[p.From] = append(m.exits[p.From], m.exit(event.PathID(i), event.Down))
		m.exits[p.To] = append(m.exits[p.To], m.exit(event.PathID(i), event.Up))
	}
}

func (m *Machine) exit(p event.PathID, d event.Dir) exit {
	return exit{p, d, m.way(p, d), &m.paths[p]}
}

// use takes over the parameters of a heart with the same sites and paths.
func (m *Machine) use(h *heart.Heart) {
	m.h = h
	for i := range h.Paths {
		p := &h.Paths[i]
		m.ways[2*i], m.ways[2*i+1] = m.compile(p, event.Down), m.compile(p, event.Up)
	}
}

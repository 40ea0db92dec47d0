package ladder

import "escapement/engine/event"

// choose marks the impulses worth a stroke. The heart's network has many ways
// through the Purkinje system and muscle that arrive late and change nothing;
// drawn, they would hide the ones that matter. An impulse is drawn for its own
// sake ([builder.seed]) or because a drawn one went on from it. Causes come
// before effects, so one pass from the end finds all of them.
func (b *builder) choose() {
	b.draw = make([]bool, len(b.l.Events)+1)
	needed := make([]bool, len(b.l.Events)+1)
	seed := b.seeds()
	for i := len(b.l.Events) - 1; i >= 0; i-- {
		e := &b.l.Events[i]
		if !seed[e.ID] && !needed[e.ID] {
			continue
		}
		cause := b.l.At(e.Cause)
		if e.Kind == event.Activate && (e.Rule != event.Conducted || e.Path < 0 || cause == nil || b.chamberOf(e) == 'V' && b.entry(e) == within) {
			continue // nothing to draw, or part of a ventricular wave
		}
		b.draw[e.ID] = true
		if cause != nil && cause.Kind == event.Activate {
			needed[cause.ID] = true
		}
	}
}

// chamberOf is the chamber of an activation's wave, or 0.
func (b *builder) chamberOf(e *event.Event) byte {
	if w := b.ws.of[e.ID]; w >= 0 {
		return b.ws.all[w].chamber
	}
	return 0
}

// entry is how an activation of muscle came about.
func (b *builder) entry(e *event.Event) entry {
	return b.ws.all[b.ws.of[e.ID]].entries[b.ws.member[e.ID]]
}

// seeds finds what is drawn for its own sake, in order of time.
func (b *builder) seeds() []bool {
	s := seeder{builder: b, seed: make([]bool, len(b.l.Events)+1), last: make([]event.ID, len(b.l.Sites)),
		down: make([][4]bool, len(b.ws.all)), up: make([][4]bool, len(b.ws.all))}
	for i := range b.l.Events {
		e := &b.l.Events[i]
		if e.Site < 0 {
			continue
		}
		switch e.Kind {
		case event.Activate:
			s.seed[e.ID] = e.Rule == event.Conducted && e.Path >= 0 && s.activate(e)
			s.last[e.Site] = e.ID
		case event.Block:
			s.seed[e.ID] = s.block(e)
		}
	}
	return s.seed
}

type seeder struct {
	*builder
	seed     []bool     // by event id
	last     []event.ID // by site: its last activation so far
	down, up [][4]bool  // by wave and branch: one way down or up is marked already
}

func (s *seeder) activate(e *event.Event) bool {
	p := &s.l.Paths[e.Path]
	switch p.Tissue {
	case event.Ventricle:
		return false
	case event.Atrium: // the left atrium only if something goes on from it
		return s.lay.y[e.Site] == s.lay.aTop || s.lay.y[e.Site] == s.lay.aFoot
	case event.Purkinje:
		if s.chamberOf(e) == 'V' {
			w := s.ws.of[e.ID]
			return s.ws.inside(s.l, w, e) == 0 && once(&s.down[w][s.lay.side(p)])
		}
		return s.lay.branch[p.From] == Trunk || s.lay.branch[p.To] == Trunk && s.l.Sites[p.To].Chamber() == 0
	}
	return true
}

func once(done *bool) bool {
	if *done {
		return false
	}
	*done = true
	return true
}

// block leaves out the stops that only say that the same beat was already there.
func (s *seeder) block(e *event.Event) bool {
	if e.Path < 0 {
		return true
	}
	p := &s.l.Paths[e.Path]
	if p.Tissue == event.Accessory && e.Rule == event.OneWay && e.Depth == 0 {
		return false // a pathway that never conducts this way is no news at every beat
	}
	if p.Tissue == event.Ventricle {
		return false
	}
	if p.Tissue != event.Purkinje {
		return true
	}
	if s.lay.branch[p.From] == Trunk {
		return e.Dir == event.Down || e.Rule != event.OneWay || s.ectopic(e)
	}
	own := e.Rule == event.Collision
	if l := s.l.At(s.last[p.Exit(e.Dir)]); l != nil && e.T.Sub(l.T) < beat {
		own = true
	}
	from := s.l.At(e.Cause)
	if own || from == nil {
		return false
	}
	if w := s.ws.of[from.ID]; w >= 0 {
		return once(&s.up[w][s.lay.side(p)])
	}
	return e.Rule != event.SiteRefractory || s.l.Sites[p.Exit(e.Dir)].Tissue == event.Purkinje
}

// ectopic tells whether an impulse came from a ventricular wave that began in the
// ventricles. A beat from above that only comes back to a dead bundle is no news.
func (s *seeder) ectopic(e *event.Event) bool {
	from := s.l.At(e.Cause)
	if from == nil {
		return false
	}
	if s.chamberOf(from) != 'V' {
		from = s.ancestor(from, event.Ventricle)
	}
	if from == nil || s.ws.of[from.ID] < 0 {
		return false
	}
	return s.ws.all[s.ws.of[from.ID]].entries[0] == born
}

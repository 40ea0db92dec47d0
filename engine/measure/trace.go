package measure

import (
	"escapement/engine/event"
	"escapement/engine/tick"
)

// strip is a log read once, front to back: the waves in it and, for every event,
// what it descends from. All later questions are answered from here, so the
// whole report takes time in proportion to the log.
type strip struct {
	log  *event.Log
	mark []mark // by event, mark[id]; entry 0 is unused
	p    []pwave
	v    []vwave

	rightAtrium, septum, his event.SiteID
	exits                    []event.ID // blocks in the tissue between sinus node and atrium
	sinus                    []event.ID // discharges of the sinus node
	cycle0                   tick.Dur   // sinus cycle, over the whole strip
	local                    []tick.Dur // by P: sinus cycle just before it
	crossed                  []bool     // by P: a beat from below came since the P before
	noise                    tick.Dur   // how finely the sinus node keeps time
	conducts                 bool       // any P from above reached the ventricles
	dev                      *device    // nil without a device
}

// mark is what one event descends from, and what stood in its way.
type mark struct {
	origin  event.ID // the discharge or stimulus that began the impulse
	his     event.ID // the last activation of the His bundle on the way here
	blocker event.ID // what left refractory the path or site that this event met
	p, v    int32    // the wave the impulse passed last: one of the two at most, else -1
	wave    int32    // the wave an atrial or ventricular activation belongs to, else -1
	led     int32    // the ventricular wave that this activation above the muscle led to, else -1
}

// pwave is one depolarisation of the atria.
type pwave struct {
	id     event.ID // first activation
	t      tick.Time
	roots  []event.ID // activations by which the wave entered the atria
	ra     event.ID   // activation of the right atrium
	septum event.ID   // activation of the low septal right atrium
	his    event.ID   // the His activation it led to
	blocks []event.ID // where its impulses stopped on the way down

	retrograde bool  // entered from below
	echo       bool  // came back from the wave before it without a ventricular beat between
	circling   bool  // entered from the atrial wave before it: re-entry inside the atria
	from       int32 // ventricular beat it came from, else -1
	to         int32 // ventricular beat it led to, else -1

	met        bool // met a wave from below inside the atria
	premature  bool
	interfered bool // blocked in what a beat from elsewhere had left refractory
}

// vwave is one depolarisation of the ventricles.
type vwave struct {
	id    event.ID
	t     tick.Time
	roots []event.ID
	his   event.ID // the His activation it came by
	p     int32    // atrial wave it was conducted from, else -1
	retro int32    // atrial wave it led to, else -1

	end       tick.Time // last activation of ventricular muscle
	circling  bool      // came from the ventricular beat before it without the atria between
	fusion    bool      // depolarised from two origins
	accessory bool      // entered by an accessory pathway
	premature bool
}

// A wave that has begun takes in further entries for this long; longer than the
// slowest spread over a chamber and shorter than a refractory period (a modelling
// choice of this package, not a clinical value).
const (
	atrialSpread      = 150 * tick.Millisecond
	ventricularSpread = 220 * tick.Millisecond
)

type tracer struct {
	strip
	pathUse []event.ID // by path: the last event that left it refractory
	pending []event.ID // by path: a block by an impulse still inside, whose own event comes later
	siteUse []event.ID // by site: its last activation
	in      []int32    // by site: the last wave of its chamber that held it
}

// read walks the log once.
func read(l *event.Log) *strip { return new(tracer).read(l) }

// read walks a log in the room that the one before it took.
func (t *tracer) read(l *event.Log) *strip {
	t.strip = strip{log: l, mark: room(t.mark, len(l.Events)+1), p: t.p[:0], v: t.v[:0], exits: t.exits[:0], sinus: t.strip.sinus[:0]}
	t.mark[0] = mark{}
	t.pathUse, t.pending, t.siteUse = room(t.pathUse, len(l.Paths)), room(t.pending, len(l.Paths)), room(t.siteUse, len(l.Sites))
	clear(t.pathUse)
	clear(t.pending)
	clear(t.siteUse)
	t.in = room(t.in, len(l.Sites))
	t.rightAtrium, t.septum, t.his = l.Site("right_atrium"), l.Site("atrial_septum"), l.Site("his")
	for i := range t.in {
		t.in[i] = -1
	}
	for i := range l.Events {
		t.event(&l.Events[i])
	}
	return &t.strip
}

// room is a slice of n entries, in the memory of an old one where that is enough; what
// stands in them is to be overwritten.
func room[T any](old []T, n int) []T {
	if cap(old) < n {
		return make([]T, n)
	}
	return old[:n]
}

// addP and addV append a wave, with the lists of one that stood there before.
func (t *tracer) addP(w pwave) {
	if n := len(t.p); n < cap(t.p) {
		old := &t.p[:n+1][n]
		w.roots, w.blocks = old.roots[:0], old.blocks[:0]
	}
	t.p = append(t.p, w)
}

func (t *tracer) addV(w vwave) {
	if n := len(t.v); n < cap(t.v) {
		w.roots = t.v[:n+1][n].roots[:0]
	}
	t.v = append(t.v, w)
}

func (t *tracer) event(e *event.Event) {
	m := &t.mark[e.ID]
	*m = mark{p: -1, v: -1, wave: -1, led: -1}
	switch e.Kind {
	case event.Discharge, event.Stimulus:
		m.origin = e.ID
		if e.Kind == event.Discharge && t.log.Sites[e.Site].Tissue == event.Sinus {
			t.strip.sinus = append(t.strip.sinus, e.ID)
		}
	case event.Activate, event.Block:
		if e.Cause > 0 {
			c := &t.mark[e.Cause]
			m.origin, m.his, m.p, m.v = c.origin, c.his, c.p, c.v
		}
	}
	switch e.Kind {
	case event.Activate:
		t.activate(e, m)
	case event.Block:
		t.block(e, m)
	}
}

func (t *tracer) activate(e *event.Event, m *mark) {
	if e.Path >= 0 {
		m.blocker = t.pathUse[e.Path]
		t.use(e)
	}
	switch t.log.Sites[e.Site].Chamber() {
	case 'A':
		t.atrial(e, m)
	case 'V':
		t.ventricular(e, m)
	}
	if e.Site == t.strip.his {
		m.his = e.ID
		if m.p >= 0 && t.p[m.p].his == 0 {
			t.p[m.p].his = e.ID
		}
	}
	t.siteUse[e.Site] = e.ID
}

// use notes that an impulse left the path refractory, and settles a block that
// was waiting to know which impulse it had met inside.
func (t *tracer) use(e *event.Event) {
	t.pathUse[e.Path] = e.ID
	if w := t.pending[e.Path]; w != 0 && w != e.ID {
		t.mark[w].blocker, t.pending[e.Path] = e.ID, 0
	}
}

func (t *tracer) block(e *event.Event, m *mark) {
	switch e.Rule {
	case event.SiteRefractory:
		end := e.Site
		if e.Path >= 0 {
			end = t.log.Paths[e.Path].Exit(e.Dir)
		}
		m.blocker = t.siteUse[end]
	case event.PathRefractory:
		m.blocker = t.pathUse[e.Path]
		if e.Recovery < 0 && e.Recovery != event.Unknown {
			t.pending[e.Path] = e.ID
		}
	}
	if e.Path < 0 {
		return
	}
	if e.Depth > 0 && e.Rule != event.Dropped {
		t.use(e)
	}
	switch t.log.Paths[e.Path].Tissue {
	case event.Sinus:
		t.exits = append(t.exits, e.ID)
	case event.Node, event.His, event.Purkinje:
		if e.Dir == event.Down && m.p >= 0 {
			t.p[m.p].blocks = append(t.p[m.p].blocks, e.ID)
		}
	}
}

// joins tells whether an activation belongs to wave g of its chamber, begun at
// start: its own cause is in g, or g is still spreading; and g has not held this
// site before.
func (t *tracer) joins(e *event.Event, g int32, start tick.Time, causeWave int32, spread tick.Dur) bool {
	if g < 0 || t.in[e.Site] >= g {
		return false
	}
	return causeWave == g || e.T.Sub(start) <= spread
}

// causeWave is the wave of the event's cause if that lies in the same chamber.
func (t *tracer) causeWave(e *event.Event) int32 {
	c := t.log.At(e.Cause)
	if c == nil || c.Kind != event.Activate || t.log.Sites[c.Site].Chamber() != t.log.Sites[e.Site].Chamber() {
		return -1
	}
	return t.mark[c.ID].wave
}

// chosen is the wave an activation belongs to: the wave of its cause, else the
// latest one, else a new one (-1).
func (t *tracer) chosen(e *event.Event, latest int32, start func(int32) tick.Time, spread tick.Dur) int32 {
	w := t.causeWave(e)
	if w >= 0 && t.joins(e, w, start(w), w, spread) {
		return w
	}
	if latest >= 0 && t.joins(e, latest, start(latest), w, spread) {
		return latest
	}
	return -1
}

func (t *tracer) atrial(e *event.Event, m *mark) {
	latest := int32(len(t.p)) - 1
	g := t.chosen(e, latest, func(i int32) tick.Time { return t.p[i].t }, atrialSpread)
	if g < 0 {
		g = latest + 1
		t.addP(pwave{id: e.ID, t: e.T, from: -1, to: -1})
		w := &t.p[g]
		w.retrograde = t.fromBelow(e)
		w.circling = t.causeWave(e) >= 0
		w.echo = w.retrograde && m.p >= 0
		if m.v >= 0 {
			w.from = m.v
			if t.v[m.v].retro < 0 {
				t.v[m.v].retro = g
			}
		}
	}
	w := &t.p[g]
	if t.causeWave(e) != g {
		w.roots = append(w.roots, e.ID)
		w.met = w.met || t.fromBelow(e) != w.retrograde
	}
	switch e.Site {
	case t.rightAtrium:
		w.ra = e.ID
	case t.septum:
		w.septum = e.ID
	}
	t.in[e.Site] = g
	m.wave, m.p, m.v = g, g, -1
}

// fromBelow tells whether an atrial activation came up from the AV node or an
// accessory pathway.
func (t *tracer) fromBelow(e *event.Event) bool {
	c := t.log.At(e.Cause)
	if e.Rule != event.Conducted || c == nil || c.Site < 0 {
		return false
	}
	switch t.log.Sites[c.Site].Tissue {
	case event.Sinus, event.Atrium:
		return false
	}
	return true
}

func (t *tracer) ventricular(e *event.Event, m *mark) {
	latest := int32(len(t.v)) - 1
	g := t.chosen(e, latest, func(i int32) tick.Time { return t.v[i].t }, ventricularSpread)
	if g < 0 {
		g = latest + 1
		t.addV(vwave{id: e.ID, t: e.T, his: m.his, p: m.p, retro: -1, circling: m.v >= 0})
	}
	w := &t.v[g]
	if t.causeWave(e) != g && m.v != g {
		w.roots = append(w.roots, e.ID)
		w.fusion = w.fusion || m.origin != t.mark[w.id].origin && !(t.byDevice(e.ID) && t.byDevice(w.id))
		if e.Path >= 0 && t.log.Paths[e.Path].Tissue == event.Accessory {
			w.accessory = true
		}
		if m.p >= 0 && t.p[m.p].to < 0 {
			t.p[m.p].to = g
		}
	}
	if c := &t.mark[e.Cause]; c.wave < 0 && c.led < 0 {
		c.led = g
	}
	w.end = max(w.end, e.T)
	t.in[e.Site] = g
	m.wave, m.v, m.p = g, g, -1
}

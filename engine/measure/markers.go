package measure

import (
	"sort"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// marker is one event of a device on one channel: a stimulus or a signal.
type marker struct {
	e    *event.Event
	beat bool  // the timing counts from it: a stimulus, or a signal that was used
	wave int32 // the P or QRS that it sensed or made, else -1
	prev int32 // index of the marker of the same channel before it with beat set, else -1
}

func (m *marker) paced() bool { return m.e.Kind == event.Stimulus }

// name is AS, AP, VS or VP.
func (m *marker) name() string {
	kind := byte('S')
	if m.paced() {
		kind = 'P'
	}
	return string([]byte{m.e.Channel, kind})
}

// device is what a strip shows of a pacemaker.
type device struct {
	markers []marker
	of      []int32        // by event: its marker, else -1; only where there is a device
	windows []*event.Event // in order of time
	changes []*event.Event // of mode
	site    [2]event.SiteID
	vp      []int32 // by QRS: the marker of the stimulus that has a part in it, else -1
	ap      []int32 // by P, likewise
	vs, as  []int32 // by QRS and P: the marker of the signal, else -1
	pr      tick.Dur
	looped  map[event.ID]bool // stimuli and signals explained by a loop or a synchrony; looked up only
}

// Indices into device.site.
const (
	atrial = iota
	ventricular
)

func channel(ch byte) int {
	if ch == 'A' {
		return atrial
	}
	return ventricular
}

// readDevice gathers a device's events, or returns nil for a strip without any.
func (s *strip) readDevice() *device { return s.readDeviceInto(&device{looped: map[event.ID]bool{}}) }

// readDeviceInto does so in the room that the device before it took.
func (s *strip) readDeviceInto(d *device) *device {
	clear(d.looped)
	*d = device{site: [2]event.SiteID{event.None, event.None}, looped: d.looped, markers: d.markers[:0], windows: d.windows[:0], changes: d.changes[:0],
		of: d.of, vp: d.vp, ap: d.ap, vs: d.vs, as: d.as}
	for i := range s.log.Events {
		switch e := &s.log.Events[i]; e.Kind {
		case event.Window:
			d.windows = append(d.windows, e)
		case event.Mode:
			d.changes = append(d.changes, e)
		case event.Sense:
			d.markers = append(d.markers, marker{e: e, beat: used(e), wave: s.sensedWave(e), prev: -1})
		case event.Stimulus:
			if e.Rule == event.Timed {
				d.markers = append(d.markers, marker{e: e, beat: e.Field != "offset", wave: s.madeWave(e), prev: -1})
			}
		}
	}
	if len(d.markers)+len(d.windows)+len(d.changes) == 0 {
		return nil
	}
	d.link(s)
	return d
}

// used tells whether the device took a signal for a beat. A signal answered by a
// stimulus at once is that stimulus's.
func used(e *event.Event) bool {
	switch e.Use {
	case event.Tracked, event.Resets, event.Inhibits:
		return true
	}
	return false
}

// sensedWave is the wave of its own chamber that a signal came from, else -1.
func (s *strip) sensedWave(e *event.Event) int32 {
	if c := s.log.At(e.Cause); natureOf(s.log, e) == ofBeat && c != nil {
		return s.mark[c.ID].wave
	}
	return -1
}

// madeWave is the wave that a stimulus has a part in, else -1. From a site of the
// conduction system that is the QRS its impulse comes to.
func (s *strip) madeWave(e *event.Event) int32 {
	switch c := s.log.Sites[e.Site].Chamber(); {
	case c == e.Channel:
	case c == 0 && e.Channel == 'V':
		return s.cameOf(e)
	default:
		return -1
	}
	for i := int(e.ID); e.Captured && i < len(s.log.Events) && s.log.Events[i].T == e.T; i++ {
		if a := &s.log.Events[i]; a.Kind == event.Activate && a.Cause == e.ID {
			return s.mark[a.ID].wave
		}
	}
	return -1
}

func (s *strip) cameOf(e *event.Event) int32 {
	for j := s.firstQRS(e.T); e.Captured && j < len(s.v) && s.v[j].t.Sub(e.T) < noRoom; j++ {
		for _, id := range s.v[j].roots {
			if s.mark[id].origin == e.ID {
				return int32(j)
			}
		}
	}
	return -1
}

// firstQRS is the index of the first QRS at or after a time.
func (s *strip) firstQRS(t tick.Time) int {
	return sort.Search(len(s.v), func(j int) bool { return s.v[j].t >= t })
}

// nature of a signal.
type nature uint8

const (
	ofNothing  nature = iota // no depolarisation: interference
	ofBeat                   // a depolarisation of its own chamber
	ofFarField               // one of the other chamber
	ofT                      // its own chamber's repolarisation
)

// lateSignal is how long after the depolarisation at the lead a ventricular signal
// must come to be its T wave: a lead has its own depolarisation without delay.
const lateSignal = 20 * tick.Millisecond

func natureOf(l *event.Log, e *event.Event) nature {
	c := l.At(e.Cause)
	switch {
	case c == nil || c.Site < 0:
		return ofNothing
	case l.Sites[c.Site].Chamber() != e.Channel:
		return ofFarField
	case e.Channel == 'V' && e.T.Sub(c.T) > lateSignal:
		return ofT
	}
	return ofBeat
}

func filled(old []int32, n int) []int32 {
	v := room(old, n)
	for i := range v {
		v[i] = -1
	}
	return v
}

// link joins markers with each other and with the waves.
func (d *device) link(s *strip) {
	d.of = filled(d.of, len(s.mark))
	d.vp, d.ap, d.vs, d.as = filled(d.vp, len(s.v)), filled(d.ap, len(s.p)), filled(d.vs, len(s.v)), filled(d.as, len(s.p))
	last := [2]int32{-1, -1}
	first := func(list []int32, w, m int32) {
		if w >= 0 && int(w) < len(list) && list[w] < 0 {
			list[w] = m
		}
	}
	for i := range d.markers {
		m := &d.markers[i]
		ch := channel(m.e.Channel)
		d.of[m.e.ID] = int32(i)
		m.prev = last[ch]
		if m.beat {
			last[ch] = int32(i)
		}
		lists := [2][2][]int32{{d.as, d.vs}, {d.ap, d.vp}}
		kind := 0
		if m.paced() {
			kind = 1
		}
		first(lists[kind][ch], m.wave, int32(i))
		if d.site[ch] < 0 && (m.paced() || natureOf(s.log, m.e) == ofBeat) {
			d.site[ch] = m.e.Site
		}
	}
	for i := range s.p {
		if s.p[i].to >= 0 && s.descending(i) && !s.begunByDevice(int(s.p[i].to)) {
			d.pr = max(d.pr, s.pr(i))
		}
	}
}

// marker of an event, or nil.
func (d *device) marker(id event.ID) *marker {
	if id <= 0 || int(id) >= len(d.of) || d.of[id] < 0 {
		return nil
	}
	return &d.markers[d.of[id]]
}

// at gives the marker with an index that may be -1.
func (d *device) at(i int32) *marker {
	if i < 0 {
		return nil
	}
	return &d.markers[i]
}

// window is the latest window of the name that the event opened, or nil. Windows are
// in order of time, so the search begins at the event's own.
func (d *device) window(cause event.ID, at tick.Time, name string) *event.Event {
	i := sort.Search(len(d.windows), func(i int) bool { return d.windows[i].T >= at })
	for ; i < len(d.windows) && d.windows[i].T == at; i++ {
		if w := d.windows[i]; w.Cause == cause && w.Field == name {
			return w
		}
	}
	return nil
}

// byDevice tells whether an impulse began from a stimulus of a device.
func (s *strip) byDevice(id event.ID) bool {
	o := s.log.At(s.mark[id].origin)
	return o != nil && o.Kind == event.Stimulus && o.Rule == event.Timed
}

// begunByDevice tells whether a QRS began with a stimulus of a device.
func (s *strip) begunByDevice(j int) bool {
	return s.v[j].p < 0 && !s.v[j].circling && s.byDevice(s.v[j].id)
}

// followsAtrium tells whether a QRS was paced because of an atrial event: at the end
// of an AV delay or what stood in for it.
func (s *strip) followsAtrium(j int) bool {
	if s.dev == nil {
		return false
	}
	m := s.dev.at(s.dev.vp[j])
	return m != nil && m.e.Field != "lower_rate"
}

// tracked tells whether the device paced for P i, or paced P i itself.
func (s *strip) tracked(i int) bool {
	if s.dev == nil {
		return false
	}
	m := s.dev.at(s.dev.as[i])
	return s.dev.ap[i] >= 0 || m != nil && m.e.Use == event.Tracked
}

// noRoom is how close to a paced beat a P must be to have had no opportunity: after
// it, for what its impulse leaves refractory in the AV node (refractory periods of
// 250 to 400 ms, from memory); before it, where the strip shows no PR to hold the
// time against. A choice of this package: rather no finding than a wrong one.
const noRoom = 300 * tick.Millisecond

// pacedOver tells whether P i had no opportunity to conduct, or none that shows,
// because the device paced the ventricles just before it or sooner than the heart
// could have conducted.
func (s *strip) pacedOver(i int) bool {
	if s.dev == nil {
		return false
	}
	room := noRoom
	if s.dev.pr > 0 {
		room = s.dev.pr + 2*steady
	}
	t := s.p[i].t
	for j := s.firstQRS(t.Add(-noRoom)); j < len(s.v) && s.v[j].t <= t.Add(room); j++ {
		if s.dev.vp[j] >= 0 {
			return true
		}
	}
	return false
}

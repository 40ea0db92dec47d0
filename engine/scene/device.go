package scene

import (
	"sort"

	"escapement/engine/event"
	"escapement/engine/ladder"
	"escapement/engine/tick"
)

// Sizes of the device's lane in millimetres.
const (
	tickMM  = 1.5  // a signal or a stimulus, from the line between the chambers
	hatchMM = 0.95 // between the lines of a hatching
	endMM   = 0.5  // a solid end edge
	leastMM = 0.7  // a bar narrower than this has no hatching
)

// watch is the device's lane: the marks of both chambers about one line, and the
// windows as bars below them.
type watch struct {
	*sheet
	d     *ladder.Device
	line  float64   // y of the line between the chambers' marks
	rows  []Box     // of the rows of bars, over the width of the window
	texts []caption // to be placed by priority
}

// caption is the text of a bar. It is left out where it has no room.
type caption struct {
	w        *ladder.Window
	texts    []string // the fullest first
	from, to int      // its marks
}

func (s *sheet) device() {
	v := watch{sheet: s, d: s.in.Diagram.Device}
	start := s.y
	h := MarkerText.height(s.o.FontMM)
	above, below := v.has('A'), v.has('V')
	s.y += 0.6 * h
	if above || !below {
		s.y += 1.05 * h
	}
	v.line = s.y + tickMM
	s.y += 2 * tickMM
	if below {
		s.y += 1.05 * h
	}
	s.y += 0.25 * h
	v.name("device", "dev.", v.line, LaneLabel)
	s.mark(Mark{Shape: Line, Class: WindowEdge, X: s.Axis.X0, Y: v.line, X2: s.right, Y2: v.line})
	v.markers()
	v.lay()
	for _, over := range [...]bool{false, true} { // what is deaf or watches lies over what ignores
		for i := range v.d.Windows {
			w := &v.d.Windows[i]
			if w.T0 > v.o.To {
				break // they are in order of time
			}
			if over == (w.Hearing == ladder.Deaf || w.Hearing == ladder.Watches) {
				v.window(w)
			}
		}
	}
	v.captions()
	s.Marks = append(append(s.Marks, s.halo...), s.over...)
	s.halo, s.over = nil, nil
	s.lane("device", "device", start, s.y)
}

func (v *watch) has(channel byte) bool {
	for i := range v.d.Markers {
		if v.d.Markers[i].Channel == channel {
			return true
		}
	}
	return false
}

// name writes the name of a row into the margin.
func (v *watch) name(long, short string, y float64, c Class) {
	for _, name := range [...]string{long, short} {
		if name != "" && c.Width(name, v.o.FontMM) <= v.Axis.X0-2*pad {
			v.place(Mark{Shape: Text, Class: c, X: pad, Y: y + 0.35*c.height(v.o.FontMM), Text: name})
			return
		}
	}
}

// lay gives the rows of bars their places.
func (v *watch) lay() {
	h := WindowText.height(v.o.FontMM)
	for i := range v.d.Rows {
		r := &v.d.Rows[i]
		tall := 1.35 * h
		if r.Timers {
			tall = 1.5 * h
		}
		b := Box{v.Axis.X0, v.y, v.right, v.y + tall}
		v.rows = append(v.rows, b)
		v.name(r.Label, r.Short, (b.Y0+b.Y1)/2, TierLabel)
		v.y = b.Y1 + 0.3*h
	}
}

// markers marks signals, stimuli and changes of mode, and names them where there is
// room: what the device did before what it saw.
func (v *watch) markers() {
	var named []*ladder.Marker
	first := sort.Search(len(v.d.Markers), func(i int) bool { return v.d.Markers[i].T >= v.o.From })
	for i := first; i < len(v.d.Markers) && v.d.Markers[i].T <= v.o.To; i++ {
		m := &v.d.Markers[i]
		v.tick(m)
		if m.Label != "" {
			named = append(named, m)
		}
	}
	for rank := range ranks {
		for _, m := range named {
			if rankOf(m) == rank {
				v.label(m)
			}
		}
	}
}

// rankOf gives the order in which marks are named: what is out of the ordinary and
// what the device did first.
func rankOf(m *ladder.Marker) int {
	switch {
	case m.Channel == 0:
		return 0
	case m.Paced || m.Refractory:
		return 1
	case len(m.Label) == 2:
		return 2
	}
	return 3 // a word that may come many times, as noise does
}

const ranks = 4

func (v *watch) tick(m *ladder.Marker) {
	x, y, y1 := v.Axis.X(m.T), v.line, v.line-tickMM
	if m.Channel == 'V' {
		y1 = v.line + tickMM
	}
	switch {
	case m.Channel == 0:
		v.add(Mark{Shape: Line, Class: Signal, X: x, Y: v.line - tickMM, X2: x, Y2: v.line + tickMM, Event: m.Event})
	case m.Unheard:
		const half = 0.35
		y1 = y + 0.8*(y1-y)
		v.add(Mark{Shape: Poly, Class: WindowEdge, Event: m.Event, Points: []Point{
			{float32(x - half), float32(y)}, {float32(x - half), float32(y1)}, {float32(x + half), float32(y1)}, {float32(x + half), float32(y)}}})
	case m.Paced:
		v.add(Mark{Shape: Line, Class: WindowEnd, X: x, Y: y, X2: x, Y2: y1, Event: m.Event})
	default:
		v.add(Mark{Shape: Line, Class: Signal, X: x, Y: y, X2: x, Y2: y1, Event: m.Event})
	}
}

// label names a mark over its end, a little aside where another stands too near.
func (v *watch) label(m *ladder.Marker) {
	h, x := MarkerText.height(v.o.FontMM), v.Axis.X(m.T)
	t := Mark{Shape: Text, Class: MarkerText, X: x, Y: v.line - tickMM - 0.3*h, Text: m.Label, Anchor: Middle, Event: m.Event}
	if m.Channel == 'V' {
		t.Y = v.line + tickMM + 0.9*h
	}
	w := MarkerText.Width(m.Label, v.o.FontMM)
	for _, shift := range [...]float64{0, 0.25, -0.25} {
		t.X = x + shift*w
		if b := v.TextBox(&t); b.X0 >= v.Axis.X0-w/2 && b.X1 <= v.right+w/2 && v.clear(&t, 0.3) && v.place(t) {
			return
		}
	}
}

// captions places the texts of the bars by priority.
func (v *watch) captions() {
	sort.SliceStable(v.texts, func(i, j int) bool {
		a, b := v.texts[i].w, v.texts[j].w
		if a.Priority != b.Priority {
			return a.Priority > b.Priority
		}
		return a.T0 < b.T0
	})
	for i := range v.texts {
		c := &v.texts[i]
		c.from = len(v.over)
		v.caption(c.w, c.texts)
		c.to = len(v.over)
	}
	v.thin()
}

// thin takes back the texts of a name of which fewer than three in five had room,
// except of the timers that differ from those before them.
func (v *watch) thin() {
	type kind struct {
		name    string
		hearing ladder.Hearing
	}
	type count struct{ tried, placed int }
	counts := map[kind]*count{} // only looked up
	for i := range v.texts {
		c := &v.texts[i]
		k := kind{c.w.Name, c.w.Hearing}
		n := counts[k]
		if n == nil {
			n = &count{}
			counts[k] = n
		}
		n.tried++
		if c.to > c.from {
			n.placed++
		}
	}
	if len(v.texts) == 0 {
		return
	}
	kept := v.over[:v.texts[0].from]
	for i := range v.texts {
		c := &v.texts[i]
		if n := counts[kind{c.w.Name, c.w.Hearing}]; 5*n.placed < 3*n.tried && !c.w.Differs {
			continue
		}
		kept = append(kept, v.over[c.from:c.to]...)
	}
	v.over = kept
}

// words are the texts that a bar may carry, the fullest first. A timer that an event
// ended has none: its length is not the device's, and stands in the ladder as PP, RR
// or PR. An AV delay is told by its place, between the marks of both chambers.
func words(w *ladder.Window) []string {
	value := ms(w.T1.Sub(w.T0))
	switch {
	case w.Hearing == ladder.Deaf:
		return nil // no text on hatching
	case w.Hearing != ladder.Timer && (w.Ended || w.Cut || w.Name == "av_delay"):
		return []string{w.Label}
	case w.Hearing != ladder.Timer:
		return []string{w.Label + " " + value, w.Label}
	case w.Cut, w.Ended && w.Name != "av_delay":
		return nil
	case w.Held != 0:
		return []string{value + "+" + ms(w.Held.Sub(w.T1)), ms(w.Held.Sub(w.T0))}
	case w.Why != "" && !w.Ended:
		return []string{value + " " + w.Why, value}
	case w.Label == "" || w.Name == "av_delay":
		return []string{value}
	}
	return []string{w.Label + " " + value, value}
}

// add paints a mark of the device, with a halo if its event is selected.
func (v *watch) add(m Mark) {
	v.over = append(v.over, m)
	if m.Event == 0 || m.Event != v.o.Selected || m.Shape == Text {
		return
	}
	m.Class = Selected
	if m.Shape == Rect {
		m.X, m.Y, m.X2, m.Y2 = m.X-0.8, m.Y-0.8, m.X2+0.8, m.Y2+0.8
	}
	v.halo = append(v.halo, m)
}

// visible is the part of a span of time inside the window, in millimetres.
func (v *watch) visible(t0, t1 tick.Time) (x0, x1 float64, ok bool) {
	if t1 < v.o.From || t0 > v.o.To {
		return 0, 0, false
	}
	return v.Axis.X(max(t0, v.o.From)), v.Axis.X(min(t1, v.o.To)), true
}

// upright adds an upright line across a row.
func (v *watch) upright(c Class, x, y0, y1 float64, id event.ID) {
	v.add(Mark{Shape: Line, Class: c, X: x, Y: y0, X2: x, Y2: y1, Event: id})
}

package scene

import (
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
	drawn []*ladder.Window
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

// add paints a mark of the device, with a halo if its event is selected.
func (v *watch) add(m Mark) {
	v.over = append(v.over, m)
	v.lone(m)
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

package scene

import (
	"slices"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// Half is one of two strips on a sheet.
type Half struct {
	Input
	Name  string     // "Before", "After"
	Says  string     // what stands behind the name: the title, the statement
	Alone []event.ID // events without a partner in the other half
}

// Link joins a beat before with its partner after. An id of 0 is none: the beat is gone,
// or new. Channel is A for a P, V for a QRS.
type Link struct {
	Channel       byte
	Before, After event.ID
	T0, T1        tick.Time
	Altered       bool // it is another beat than it was, at whatever time
}

// Lanes of [Stack] beside those of its strips.
const (
	BeforeLane  = "before:" // prefix of the upper half's
	ChangesLane = "changes"
)

// Stack lays out two strips one above the other on one time axis, with the changes of
// their beats between them: a stroke from each beat above to its partner below, with
// the milliseconds by which it moved, "−" for one that is gone and "+" for a new one.
//
// The event of a mark in the upper half is negative: -7 is event 7 before, and so it is
// in [Options.Selected]. The window, leads, scales and margin hold for both halves;
// title and statement stand above the whole, legend and caution below it.
func Stack(before, after Half, links []Link, o Options) *Scene {
	if o.Margin == 0 {
		b, a := o, o
		b.fill(&before.Input)
		a.fill(&after.Input)
		o.Margin = max(b.Margin, a.Margin)
	}
	if o.To == 0 {
		o.To = max(before.Log.Span, after.Log.Span)
	}
	s := begin(&after.Input, o)
	s.heading()
	s.half(&before, true)
	s.changes(links)
	s.half(&after, false)
	if s.o.Legend && after.Diagram != nil {
		s.legend()
	}
	if s.o.Caution {
		s.foot()
	}
	s.Height = s.y + pad
	return s.Scene
}

// half lays out one strip and sets it below what there is.
func (s *sheet) half(h *Half, upper bool) {
	o := s.o
	o.Title, o.Statement, o.Legend, o.Caution, o.noAxis = "", "", false, false, upper
	o.To = max(min(o.To, h.Log.Span), o.From+1)
	o.Selected, o.lonely, o.alone = max(s.o.Selected, 0), h.Alone, New
	sign, prefix := event.ID(1), ""
	if upper {
		o.Selected, o.alone = max(-s.o.Selected, 0), Gone
		sign, prefix = -1, BeforeLane
	}
	s.nameHalf(h)
	part := Strip(h.Input, o)
	s.Width = max(s.Width, part.Width)
	dy := s.y - pad
	for i := range part.Marks {
		m := &part.Marks[i]
		m.Y, m.Y2, m.Event = m.Y+dy, m.Y2+dy, m.Event*sign
		for j := range m.Points {
			m.Points[j].Y += float32(dy)
		}
	}
	s.Marks = append(s.Marks, part.Marks...)
	for _, l := range part.Lanes {
		s.lane(prefix+l.Name, h.Name+": "+l.Label, l.Y0+dy, l.Y1+dy)
	}
	if !upper { // what is above cannot be taken hold of
		for _, t := range part.Tiers {
			t.Y0, t.Y1 = t.Y0+dy, t.Y1+dy
			s.Tiers = append(s.Tiers, t)
		}
	}
	s.y += part.Height - 2*pad
}

// nameHalf writes the name of a half and as much of what it says as one line has room for.
func (s *sheet) nameHalf(h *Half) {
	em := LaneLabel.height(s.o.FontMM)
	y, x := s.y+ascent*em, pad
	s.place(Mark{Shape: Text, Class: LaneLabel, X: x, Y: y, Text: h.Name})
	x += LaneLabel.Width(h.Name+" ", s.o.FontMM) + 0.5*em
	if says := shorten(Note, h.Says, s.o.FontMM, s.Width-pad-x); says != "" {
		s.place(Mark{Shape: Text, Class: Note, X: x, Y: y, Text: says})
	}
	s.y += leading*em + 0.3
}

// shorten cuts a text to a width, with dots where something is missing.
func shorten(c Class, text string, fontMM, width float64) string {
	if c.Width(text, fontMM) <= width {
		return text
	}
	n := fit(c, text, fontMM, width-c.Width("...", fontMM))
	if n == 0 {
		return ""
	}
	return text[:n] + "..."
}

// changes is the lane between the halves: a row for the P waves, one for the QRS
// complexes.
func (s *sheet) changes(links []Link) {
	start, h := s.y, MovedText.height(s.o.FontMM)
	s.y += 0.5 * h
	for _, row := range [...]struct {
		channel byte
		name    string
	}{{'A', "P"}, {'V', "QRS"}} {
		if !slices.ContainsFunc(links, func(l Link) bool { return l.Channel == row.channel }) {
			continue
		}
		y0, y1 := s.y, s.y+1.9*h
		s.place(Mark{Shape: Text, Class: TierLabel, X: pad, Y: (y0+y1)/2 + 0.35*TierLabel.height(s.o.FontMM), Text: row.name})
		var own []*Link
		for i := range links {
			if l := &links[i]; l.Channel == row.channel && s.visible(l) {
				own = append(own, l)
			}
		}
		for _, l := range own {
			s.link(l, y0, y1)
		}
		for _, l := range own { // after all strokes: a text may not stand on one
			s.linkText(l, y0, y1)
		}
		s.y = y1 + 0.5*h
	}
	s.lane(ChangesLane, "changes", start, s.y)
}

func (s *sheet) visible(l *Link) bool {
	in := func(t tick.Time) bool { return t >= s.o.From && t <= s.o.To }
	return (l.Before == 0 || in(l.T0)) && (l.After == 0 || in(l.T1))
}

// moved is by how many whole milliseconds, of a beat with a partner.
func (l *Link) moved() int64 {
	if l.Before == 0 || l.After == 0 {
		return 0
	}
	d := int64(l.T1.Sub(l.T0))
	if d < 0 {
		return -((-d + 500) / 1000)
	}
	return (d + 500) / 1000
}

// link draws a stroke from a beat to its partner, or the end of one that has none. Its
// mark belongs to the event after, if there is one.
func (s *sheet) link(l *Link, y0, y1 float64) {
	x0, x1 := s.Axis.X(l.T0), s.Axis.X(l.T1)
	m := Mark{Shape: Line, Class: Moved, X: x0, Y: y0, X2: x1, Y2: y1, Event: l.After}
	switch {
	case l.After == 0:
		m.X2, m.Y2, m.Event = x0, y0+(y1-y0)*0.4, -l.Before
		s.tick(m, Gone)
		return
	case l.Before == 0:
		m.X, m.Y = x1, y1-(y1-y0)*0.4
		s.tick(m, New)
		return
	case l.moved() == 0 && !l.Altered:
		m.Class = Kept
	}
	s.room.line(m.X, m.Y, m.X2, m.Y2)
	s.mark(m)
}

// tick is a stroke with a broad one beneath.
func (s *sheet) tick(m Mark, beneath Class) {
	s.room.line(m.X, m.Y, m.X2, m.Y2)
	under := m
	under.Class, under.Event = beneath, 0
	s.mark(under)
	s.mark(m)
}

func (s *sheet) linkText(l *Link, y0, y1 float64) {
	h := MovedText.height(s.o.FontMM)
	x0, x1 := s.Axis.X(l.T0), s.Axis.X(l.T1)
	switch {
	case l.After == 0:
		s.place(Mark{Shape: Text, Class: GoneText, X: x0, Y: y1, Text: "−", Anchor: Middle, Event: -l.Before})
	case l.Before == 0:
		s.place(Mark{Shape: Text, Class: NewText, X: x1, Y: y0 + 0.75*h, Text: "+", Anchor: Middle, Event: l.After})
	default:
		text := signed(l.moved())
		if text == "" {
			if !l.Altered {
				return
			}
			text = "other"
		}
		m := Mark{Shape: Text, Class: MovedText, X: max(x0, x1) + 0.8, Y: (y0+y1)/2 + 0.35*h, Text: text, Event: l.After}
		if !s.place(m) {
			m.X, m.Anchor = min(x0, x1)-0.8, End
			s.place(m)
		}
	}
}

// signed writes whole milliseconds with their sign; nothing for none.
func signed(ms int64) string {
	switch {
	case ms < 0:
		return "−" + trim(float64(-ms))
	case ms > 0:
		return "+" + trim(float64(ms))
	}
	return ""
}

// lone puts a broad mark beneath one whose event has no partner in the other half. Of a
// window its area is enough.
func (s *sheet) lone(m Mark) {
	if m.Event == 0 || len(s.o.lonely) == 0 || m.Shape == Text || m.Shape == Poly || m.Class == Hatch || m.Class == WindowEdge || m.Class == Tail {
		return
	}
	if _, found := slices.BinarySearch(s.o.lonely, m.Event); !found {
		return
	}
	m.Class, m.Event = s.o.alone, 0
	if m.Shape == Ring {
		m.Shape = Disc
	}
	if m.Shape == Disc {
		m.R += 0.9
	}
	s.halo = append(s.halo, m)
}

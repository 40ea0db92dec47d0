package scene

import (
	"strconv"

	"escapement/engine/event"
	"escapement/engine/ladder"
	"escapement/engine/tick"
)

// ms writes a span in whole milliseconds.
func ms(d tick.Dur) string { return strconv.FormatInt((int64(d)+500)/1000, 10) }

func (r *rungs) dim(d *ladder.Dim) bool {
	value := ms(d.T1.Sub(d.T0))
	text := d.Measure.String() + " " + value
	switch d.Measure {
	case ladder.PP:
		return r.row(rowAbove, d, text, value)
	case ladder.RR:
		return r.row(rowCycle, d, text, value)
	case ladder.PR:
		return r.row(rowConduction, d, text, value)
	case ladder.VA:
		return r.row(rowConduction, d, text)
	case ladder.Escape:
		return r.along(d, text)
	}
	return r.beside(d, text)
}

// row puts a dimension line into a row outside the tiers, the number in a break
// of the line or, where the line is too short, beside it.
func (r *rungs) row(row int, d *ladder.Dim, texts ...string) bool {
	if r.named[row] == d.Measure {
		texts = []string{ms(d.T1.Sub(d.T0))}
	}
	y := r.rows[row] + 0.55*r.rowH
	x0, x1 := r.Axis.X(max(d.T0, r.o.From)), r.Axis.X(min(d.T1, r.o.To))
	h := DimText.height(r.o.FontMM)
	for _, text := range texts {
		w := DimText.Width(text, r.o.FontMM)
		m := Mark{Shape: Text, Class: DimText, X: (x0 + x1) / 2, Y: y + 0.35*h, Text: text, Anchor: Middle, Event: d.Event}
		if x1-x0 >= w+2.4 {
			if r.dimension(d, m, Box{x0, y - h/2, x1, y + h/2}, w/2+0.4) {
				return true
			}
			continue
		}
		if row != rowConduction || d.T0 < r.o.From || d.T1 > r.o.To {
			continue
		}
		for _, side := range [...]struct {
			x, from, to float64
			anchor      Anchor
		}{{x1 + 0.7, x0, x1 + 0.7 + w, Start}, {x0 - 0.7, x0 - 0.7 - w, x1, End}} {
			m.X, m.Anchor = side.x, side.anchor
			if r.dimension(d, m, Box{side.from, y - h/2, side.to, y + h/2}, 0) {
				return true
			}
		}
	}
	return false
}

// leastStub is the shortest line between a number and the end of its dimension, mm.
const leastStub = 1.2

// dimension places text and line together if the whole is free. gap is the half
// width of the break around the middle.
func (r *rungs) dimension(d *ladder.Dim, text Mark, whole Box, gap float64) bool {
	box := r.TextBox(&text)
	whole.Y0, whole.Y1 = min(whole.Y0, box.Y0), max(whole.Y1, box.Y1)
	whole.X0, whole.X1 = whole.X0+0.05, whole.X1-0.05 // neighbours share their end
	if !r.room.free(whole) || box.X0 < r.Axis.X0-0.05 || box.X1 > r.Width {
		return false
	}
	r.room.box(whole)
	y := text.Y - 0.35*DimText.height(r.o.FontMM)
	x0, x1 := r.Axis.X(max(d.T0, r.o.From)), r.Axis.X(min(d.T1, r.o.To))
	switch {
	case gap > 0 && (x1-x0)/2-gap < leastStub: // with its neighbour's it would read as a plus sign
	case gap > 0:
		r.dimLine(x0, (x0+x1)/2-gap, y, d.Event)
		r.dimLine((x0+x1)/2+gap, x1, y, d.Event)
	default:
		r.dimLine(x0, x1, y, d.Event)
	}
	r.ticks(d, y)
	r.mark(text)
	return true
}

func (r *rungs) dimLine(x0, x1, y float64, id event.ID) {
	r.mark(Mark{Shape: Line, Class: Dim, X: x0, Y: y, X2: x1, Y2: y, Event: id})
}

// ticks ends a dimension line, except where the window cut it.
func (r *rungs) ticks(d *ladder.Dim, y float64) {
	for _, t := range [...]tick.Time{d.T0, d.T1} {
		if r.inside(t) {
			x := r.Axis.X(t)
			r.mark(Mark{Shape: Line, Class: Dim, X: x, Y: y - 0.7, X2: x, Y2: y + 0.7, Event: d.Event})
		}
	}
}

// tierOf is the vertical room of the tier that holds a height.
func (r *rungs) tierOf(units float64) (y0, y1 float64) {
	for i := range r.d.Tiers {
		if t := &r.d.Tiers[i]; units <= t.Y1 || i == len(r.d.Tiers)-1 {
			return r.y(t.Y0), r.y(t.Y1)
		}
	}
	return 0, 0
}

// beside puts the name and time of a crossing beside its stroke, in its tier.
func (r *rungs) beside(d *ladder.Dim, texts ...string) bool {
	if !r.inside(d.T0) || !r.inside(d.T1) {
		return false
	}
	x0, y0, x1, y1 := r.Axis.X(d.T0), r.y(d.Y0), r.Axis.X(d.T1), r.y(d.Y1)
	top, foot := r.tierOf((d.Y0 + d.Y1) / 2)
	h := DimText.height(r.o.FontMM)
	for _, text := range texts {
		m := Mark{Shape: Text, Class: DimText, Text: text, Event: d.Event}
		for _, part := range [...]float64{0.4, 0.25, 0.55, 0.7, 0.85} {
			y := y0 + part*(y1-y0)
			if y-h*0.6 < top || y+h*0.6 > foot {
				continue
			}
			// The stroke leans: keep clear of it over the height of the text.
			lean := 0.0
			if y1 != y0 {
				lean = (x1 - x0) / (y1 - y0) * h * 0.6
			}
			if lean < 0 {
				lean = -lean
			}
			x := x0 + part*(x1-x0)
			for _, side := range [...]Anchor{Start, End} {
				m.Y, m.Anchor, m.X = y+0.35*h, side, x+lean+0.8
				if side == End {
					m.X = x - lean - 0.8
				}
				if r.inWindow(&m) && r.clear(&m, 0.7) && r.place(m) {
					return true
				}
			}
		}
	}
	return false
}

// clear tells whether a text would stand free with some room left and right.
func (s *sheet) clear(m *Mark, mm float64) bool {
	b := s.TextBox(m)
	b.X0, b.X1 = max(b.X0-mm, 0), min(b.X1+mm, s.Width)
	return s.room.free(b)
}

func (r *rungs) inWindow(m *Mark) bool {
	b := r.TextBox(m)
	return b.X0 >= r.Axis.X0 && b.X1 <= r.right+pad
}

// along puts a wait of a focus on a line at the height of the focus.
func (r *rungs) along(d *ladder.Dim, text string) bool {
	y := r.y(d.Y0)
	x0, x1 := r.Axis.X(max(d.T0, r.o.From)), r.Axis.X(min(d.T1, r.o.To))
	h, w := DimText.height(r.o.FontMM), DimText.Width(text, r.o.FontMM)
	if x1-x0 < w+3 {
		return false
	}
	for _, part := range [...]float64{0.5, 0.35, 0.65, 0.2, 0.8} {
		for _, base := range [...]float64{y - 0.3*h, y + 0.95*h} {
			m := Mark{Shape: Text, Class: DimText, X: x0 + part*(x1-x0), Y: base, Text: text, Anchor: Middle, Event: d.Event}
			if b := r.TextBox(&m); b.X0 < x0 || b.X1 > x1 || !r.place(m) {
				continue
			}
			r.room.line(x0, y, x1, y)
			r.dimLine(x0, x1, y, d.Event)
			r.ticks(d, y)
			return true
		}
	}
	return false
}

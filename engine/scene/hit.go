package scene

import (
	"math"

	"escapement/engine/event"
)

// Nearest is the event of the mark nearest to a place, if one lies within maxMM.
// Of marks equally near, the one painted last wins.
func (s *Scene) Nearest(x, y, maxMM float64) (event.ID, bool) {
	best, id := maxMM, event.ID(0)
	for i := range s.Marks {
		m := &s.Marks[i]
		if m.Event == 0 || m.Class == Selected {
			continue
		}
		if d := s.distance(m, x, y); d <= best {
			best, id = d, m.Event
		}
	}
	return id, id != 0
}

// distance from a place to a mark, in millimetres.
func (s *Scene) distance(m *Mark, x, y float64) float64 {
	switch m.Shape {
	case Line:
		return toSegment(x, y, m.X, m.Y, m.X2, m.Y2)
	case Disc, Ring:
		return max(math.Hypot(x-m.X, y-m.Y)-m.R, 0)
	case Rect:
		return toBox(x, y, Box{m.X, m.Y, m.X2, m.Y2})
	case Text:
		return toBox(x, y, s.TextBox(m))
	case Poly:
		d := math.Inf(1)
		for i := 1; i < len(m.Points); i++ {
			a, b := m.Points[i-1], m.Points[i]
			d = min(d, toSegment(x, y, float64(a.X), float64(a.Y), float64(b.X), float64(b.Y)))
		}
		return d
	}
	return math.Inf(1)
}

func toBox(x, y float64, b Box) float64 {
	return math.Hypot(max(b.X0-x, 0, x-b.X1), max(b.Y0-y, 0, y-b.Y1))
}

func toSegment(x, y, x0, y0, x1, y1 float64) float64 {
	dx, dy := x1-x0, y1-y0
	t := 0.0
	if n := dx*dx + dy*dy; n > 0 {
		t = min(max(((x-x0)*dx+(y-y0)*dy)/n, 0), 1)
	}
	return math.Hypot(x-x0-t*dx, y-y0-t*dy)
}

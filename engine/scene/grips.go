package scene

import (
	"math"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// Hold is where something may be taken hold of: upright at X, from Y0 to Y1.
type Hold struct{ X, Y0, Y1 float64 }

// Holds finds where the marks of events stand in the ladder and the device's lane at
// given instants: the ends of bars, the feet of strokes, discs and rings. Each is asked
// by events any of whose marks will do; where none is drawn the answer has no height.
func (s *Scene) Holds(events [][]event.ID, at []tick.Time) []Hold {
	asked := map[event.ID][]int{}
	out := make([]Hold, len(events))
	for i, ids := range events {
		out[i] = Hold{X: s.Axis.X(at[i]), Y0: math.Inf(1), Y1: math.Inf(-1)}
		for _, id := range ids {
			asked[id] = append(asked[id], i)
		}
	}
	top := math.Inf(1)
	for i := range s.Lanes {
		if n := s.Lanes[i].Name; n == "ladder" || n == "device" {
			top = min(top, s.Lanes[i].Y0)
		}
	}
	for i := range s.Marks {
		m := &s.Marks[i]
		if m.Event == 0 || m.Class == Selected || m.Class == Dim || m.Class == Tail {
			continue
		}
		for _, k := range asked[m.Event] {
			if y0, y1, ok := m.upright(out[k].X); ok && y0 >= top {
				out[k].Y0, out[k].Y1 = min(out[k].Y0, y0), max(out[k].Y1, y1)
			}
		}
	}
	for i := range out {
		if out[i].Y0 > out[i].Y1 {
			out[i].Y0, out[i].Y1 = 0, 0
		}
	}
	return out
}

// beside is how far beside an instant a mark may stand and count as being there.
const beside = 0.6

// upright is the height that a mark covers at x, where it begins or ends there.
func (m *Mark) upright(x float64) (y0, y1 float64, ok bool) {
	at := func(v float64) bool { return math.Abs(v-x) <= beside }
	switch m.Shape {
	case Disc, Ring:
		return m.Y - m.R, m.Y + m.R, at(m.X)
	case Rect:
		return m.Y, m.Y2, at(m.X2)
	case Line:
		switch {
		case at(m.X) && at(m.X2):
			return min(m.Y, m.Y2), max(m.Y, m.Y2), true
		case at(m.X):
			return m.Y, m.Y, true
		case at(m.X2):
			return m.Y2, m.Y2, true
		}
	}
	return 0, 0, false
}

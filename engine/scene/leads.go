package scene

import (
	"math"

	"escapement/engine/event"
	"escapement/engine/lead"
	"escapement/engine/tick"
)

// pulseRoom is what the calibration pulse needs left of the window, mm.
const pulseRoom = 6

// leads draws the chosen leads, each in a lane of its own. A lane is as high as
// the lead's whole record needs, so that it does not change as the window moves.
func (s *sheet) leads() {
	top := s.y
	zeros := make([]float64, len(s.o.Leads))
	for i, n := range s.o.Leads {
		low, high := extent(s.in.Record.MV[n])
		up := grow(high*s.o.MMPerMV, 0.5*s.o.MMPerMV)
		down := grow(-low*s.o.MMPerMV, 0.3*s.o.MMPerMV)
		if short := 1.4*s.o.FontMM - up - down; short > 0 {
			up, down = up+short/2, down+short/2
		}
		zeros[i] = s.y + up
		s.lane("lead:"+n.String(), n.String(), s.y, s.y+up+down)
		s.y += up + down
	}
	if s.o.Grid {
		s.grid(top, s.y)
	}
	first := len(s.Lanes) - len(s.o.Leads)
	for i, n := range s.o.Leads {
		s.waves(&s.Lanes[first+i], n, zeros[i])
	}
	for i, n := range s.o.Leads {
		s.trace(Trace, n, zeros[i], s.o.From, s.o.To, 0)
		s.name(n, zeros[i], &s.Lanes[first+i])
	}
}

// grow rounds a height up to whole millimetres, with a little room, from a least one.
func grow(mm, least float64) float64 { return math.Ceil(max(mm, least) + 0.5) }

func extent(mv []float32) (low, high float64) {
	var l, h float32
	for _, v := range mv {
		if v < l {
			l = v
		}
		if v > h {
			h = v
		}
	}
	if math.IsInf(float64(l), 0) || math.IsInf(float64(h), 0) {
		return 0, 0
	}
	return float64(l), float64(h)
}

// name writes a lead's name before its zero line, and the pulse of 1 mV where the
// lane has room for it: on the zero line, or lower where the lane ends too soon
// above it.
func (s *sheet) name(n lead.Name, zero float64, l *Lane) {
	h := s.o.FontMM
	s.place(Mark{Shape: Text, Class: LaneLabel, X: pad, Y: zero + 0.35*h, Text: n.String()})
	x := s.Axis.X0 - pad - 3
	foot := max(zero, l.Y0+s.o.MMPerMV+0.5)
	if x < pad+LaneLabel.Width(n.String(), h)+1 || foot > l.Y1-0.2 {
		return
	}
	y := foot - s.o.MMPerMV
	s.mark(Mark{Shape: Poly, Class: Calibration, Points: []Point{
		{float32(x - 0.8), float32(foot)}, {float32(x), float32(foot)}, {float32(x), float32(y)},
		{float32(x + 2), float32(y)}, {float32(x + 2), float32(foot)}, {float32(x + 2.8), float32(foot)}}})
}

// waves lays the areas of P and QRS-T for hit testing, and the halo of the
// selected one.
func (s *sheet) waves(l *Lane, n lead.Name, zero float64) {
	for i := range s.in.Record.Waves {
		w := &s.in.Record.Waves[i]
		end := max(w.Offset, w.End)
		if end < s.o.From || w.Onset > s.o.To || len(w.Sources) == 0 {
			continue
		}
		from, to := max(w.Onset, s.o.From), min(end, s.o.To)
		if s.o.Selected != 0 && holds(w.Sources, s.o.Selected) {
			s.trace(Selected, n, zero, from, to, s.o.Selected)
		}
		s.mark(Mark{Shape: Rect, Class: Wave, X: s.Axis.X(from), Y: l.Y0, X2: s.Axis.X(to), Y2: l.Y1, Event: w.Sources[0]})
	}
}

func holds(ids []event.ID, id event.ID) bool {
	for _, v := range ids {
		if v == id {
			return true
		}
	}
	return false
}

// trace draws a lead between two instants. Where samples are denser than columns
// it keeps the lowest and the highest of each column, at their own times, so
// that no peak is lost and none moves.
func (s *sheet) trace(c Class, n lead.Name, zero float64, from, to tick.Time, id event.ID) {
	mv := s.in.Record.MV[n]
	first := int((int64(from) + int64(lead.Step) - 1) / int64(lead.Step))
	last := min(int(int64(to)/int64(lead.Step)), len(mv)-1)
	if first > last {
		return
	}
	perSample := s.o.MMPerS * lead.Step.MS() / 1000 / s.o.ColumnMM
	point := func(k int) Point {
		x := s.Axis.X(tick.Time(k) * tick.Time(lead.Step))
		return Point{float32(x), float32(zero - float64(mv[k])*s.o.MMPerMV)}
	}
	points := make([]Point, 0, min(last-first+1, 2*int(perSample*float64(last-first+1))+8))
	points = append(points, point(first))
	for k := first + 1; k < last; {
		column := math.Floor(float64(k) * perSample)
		low, high := k, k
		for k++; k < last && math.Floor(float64(k)*perSample) == column; k++ {
			if mv[k] < mv[low] {
				low = k
			}
			if mv[k] > mv[high] {
				high = k
			}
		}
		points = append(points, point(min(low, high)))
		if low != high {
			points = append(points, point(max(low, high)))
		}
	}
	if last > first {
		points = append(points, point(last))
	}
	s.mark(Mark{Shape: Poly, Class: c, Points: points, Event: id})
}

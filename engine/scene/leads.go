package scene

import (
	"math"
	"slices"

	"escapement/engine/event"
	"escapement/engine/lead"
	"escapement/engine/tick"
)

// pulseRoom is what the calibration pulse needs left of the window, mm.
const pulseRoom = 6

// segment is a lead over a part of the window.
type segment struct {
	lead     lead.Name
	from, to tick.Time
}

// row is a lane of one or more segments side by side.
type row struct {
	parts []segment
	lane  Lane
	zero  float64 // y of 0 mV
}

// leads draws rows of leads. A row is as high as the whole records of its leads
// need, so that it does not change as the window moves.
func (s *sheet) leads(rows []row) {
	top := s.y
	for i := range rows {
		r := &rows[i]
		up, down := 0.5*s.o.MMPerMV, 0.3*s.o.MMPerMV
		name, label := "lead:", ""
		for j, p := range r.parts {
			low, high := extent(s.in.Record.MV[p.lead])
			up, down = max(up, high*s.o.MMPerMV), max(down, -low*s.o.MMPerMV)
			if j > 0 {
				name, label = name+",", label+" "
			}
			name, label = name+p.lead.String(), label+p.lead.String()
		}
		up, down = math.Ceil(up+0.5), math.Ceil(down+0.5)
		if len(r.parts) > 1 {
			up += LaneLabel.height(s.o.FontMM) // names stand over the traces
		}
		if short := 1.4*s.o.FontMM - up - down; short > 0 {
			up, down = up+short/2, down+short/2
		}
		r.zero = s.y + up
		r.lane = Lane{Name: name, Label: label, Y0: s.y, Y1: s.y + up + down}
		s.Lanes = append(s.Lanes, r.lane)
		s.y = r.lane.Y1
	}
	if s.o.Grid {
		s.grid(top, s.y)
	}
	for i := range rows {
		for _, p := range rows[i].parts {
			s.waves(&rows[i], p)
		}
	}
	for i := range rows {
		r := &rows[i]
		for j, p := range r.parts {
			s.spikes(r, p)
			s.trace(Trace, p.lead, r.zero, p.from, p.to, 0)
			if len(r.parts) > 1 {
				s.heading12(r, p, j > 0)
			}
		}
		s.margin(r)
	}
}

// heading12 writes the name of one of several leads of a row over its beginning, with
// a short line where it follows on another.
func (s *sheet) heading12(r *row, p segment, follows bool) {
	x, h := s.Axis.X(p.from), LaneLabel.height(s.o.FontMM)
	s.place(Mark{Shape: Text, Class: LaneLabel, X: x + 1, Y: r.lane.Y0 + ascent*h, Text: p.lead.String()})
	if follows {
		s.mark(Mark{Shape: Line, Class: Calibration, X: x, Y: r.zero - 0.25*s.o.MMPerMV, X2: x, Y2: r.zero + 0.25*s.o.MMPerMV})
	}
}

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

// margin writes the name of a row's only lead before its zero line, and the pulse
// of 1 mV where the lane has room for it: on the zero line, or lower where the
// lane ends too soon above it.
func (s *sheet) margin(r *row) {
	h, name := s.o.FontMM, ""
	if len(r.parts) == 1 {
		name = r.parts[0].lead.String()
		s.place(Mark{Shape: Text, Class: LaneLabel, X: pad, Y: r.zero + 0.35*h, Text: name})
	}
	x := s.Axis.X0 - pad - 3
	foot := max(r.zero, r.lane.Y0+s.o.MMPerMV+0.5)
	if x < pad+LaneLabel.Width(name, h)+1 || foot > r.lane.Y1-0.2 {
		return
	}
	y := foot - s.o.MMPerMV
	s.mark(Mark{Shape: Poly, Class: Calibration, Points: []Point{
		{float32(x - 0.8), float32(foot)}, {float32(x), float32(foot)}, {float32(x), float32(y)},
		{float32(x + 2), float32(y)}, {float32(x + 2), float32(foot)}, {float32(x + 2.8), float32(foot)}}})
}

// waves lays the areas of P and QRS-T for hit testing, and the halo of the
// selected one.
func (s *sheet) waves(r *row, p segment) {
	for i := range s.in.Record.Waves {
		w := &s.in.Record.Waves[i]
		end := max(w.Offset, w.End)
		if end < p.from || w.Onset > p.to || len(w.Sources) == 0 {
			continue
		}
		from, to := max(w.Onset, p.from), min(end, p.to)
		if s.o.Selected != 0 && slices.Contains(w.Sources, s.o.Selected) {
			s.trace(Selected, p.lead, r.zero, from, to, s.o.Selected)
		}
		s.mark(Mark{Shape: Rect, Class: Wave, X: s.Axis.X(from), Y: r.lane.Y0, X2: s.Axis.X(to), Y2: r.lane.Y1, Event: w.Sources[0]})
	}
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
	const slack = 1e-9 // a sample on the edge of a column belongs to the column it begins
	perSample := s.o.MMPerS * lead.Step.MS() / 1000 / s.o.ColumnMM
	point := func(k int) Point {
		x := s.Axis.X(tick.Time(k) * tick.Time(lead.Step))
		return Point{float32(x), float32(zero - float64(float64(mv[k])*s.o.MMPerMV))}
	}
	points := make([]Point, 0, min(last-first+1, 2*int(perSample*float64(last-first+1))+8))
	points = append(points, point(first))
	for k := first + 1; k < last; {
		column := math.Floor(float64(k)*perSample + slack)
		end := min(max(int(math.Ceil((column+1)/perSample-slack)), k+1), last)
		low, high := k, k
		for j, v := range mv[k:end] {
			if v < mv[low] {
				low = k + j
			}
			if v > mv[high] {
				high = k + j
			}
		}
		k = end
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

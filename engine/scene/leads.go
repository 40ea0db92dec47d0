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

// The pulse keeps so far from the upper and the lower edge of its lane, mm, together
// pulseEdge.
const (
	pulseAbove, pulseBelow = 0.5, 0.2
	pulseEdge              = pulseAbove + pulseBelow
)

// segment is a signal over a part of the window.
type segment struct {
	name     string
	mv       []float32
	gain     float64 // mm a millivolt
	clip     float64 // nothing is drawn further from zero, mm; 0 for no limit
	from, to tick.Time
}

// row is a lane of one or more segments side by side.
type row struct {
	parts    []segment
	signal   *Sampled // nil for leads
	lane     Lane
	up, down float64 // room above and below zero, mm
	zero     float64 // y of 0 mV
}

// signals draws rows of one kind that stand together.
func (s *sheet) signals(rows []row) {
	top := s.y
	for i := range rows {
		r := &rows[i]
		name, label := "lead:", ""
		for j, p := range r.parts {
			if j > 0 {
				name, label = name+",", label+" "
			}
			name, label = name+p.name, label+p.name
		}
		if r.signal != nil {
			name = r.signal.Name
		}
		r.zero = s.y + r.up
		r.lane = Lane{Name: name, Label: label, Y0: s.y, Y1: s.y + r.up + r.down}
		s.Lanes = append(s.Lanes, r.lane)
		s.y = r.lane.Y1
	}
	if s.o.Grid {
		s.grid(top, s.y, rows[0].signal == nil)
	}
	for i := range rows {
		for _, p := range rows[i].parts {
			s.waves(&rows[i], p)
		}
	}
	for i := range rows {
		r := &rows[i]
		s.levels(r)
		for j, p := range r.parts {
			if r.signal == nil || len(r.signal.Levels) == 0 { // a membrane shows no artefact
				s.spikes(r, p)
			}
			s.trace(Trace, p, r.zero, p.from, p.to, 0)
			if len(r.parts) > 1 {
				s.heading12(r, p, j > 0)
			}
		}
		s.arrows(r)
		s.margin(r)
	}
}

// levels draws the marked potentials of a signal.
func (s *sheet) levels(r *row) {
	if r.signal == nil {
		return
	}
	for _, l := range r.signal.Levels {
		y := r.zero - l.MV*r.signal.MMPerMV
		s.mark(Mark{Shape: Line, Class: LevelLine, X: s.Axis.X0, Y: y, X2: s.right, Y2: y})
		h := TierLabel.height(s.o.FontMM)
		s.place(Mark{Shape: Text, Class: TierLabel, X: s.Axis.X0 - 0.6, Y: y + 0.35*h, Text: l.Text, Anchor: End})
	}
}

// arrows marks the impulses that came too early on a signal: a short line upwards to the
// potential at which they found the site, with a bar over it as in the ladder.
func (s *sheet) arrows(r *row) {
	if r.signal == nil {
		return
	}
	for _, a := range r.signal.Arrows {
		k := int(int64(a.T) / int64(lead.Step))
		if a.T < s.o.From || a.T > s.o.To || k >= len(r.signal.MV) {
			continue
		}
		x, y := s.Axis.X(a.T), r.zero-float64(r.signal.MV[k])*r.signal.MMPerMV
		if a.Event == s.o.Selected {
			s.mark(Mark{Shape: Line, Class: Selected, X: x, Y: y - 3, X2: x, Y2: y, Event: a.Event})
		}
		s.mark(Mark{Shape: Line, Class: Block, X: x, Y: y - 3, X2: x, Y2: y - 0.4, Event: a.Event})
		s.mark(Mark{Shape: Line, Class: Block, X: x - barHalf, Y: y - 0.4, X2: x + barHalf, Y2: y - 0.4, Event: a.Event})
	}
}

// heading12 writes the name of one of several leads of a row over its beginning, with
// a short line where it follows on another.
func (s *sheet) heading12(r *row, p segment, follows bool) {
	x, h := s.Axis.X(p.from), LaneLabel.height(s.o.FontMM)
	s.place(Mark{Shape: Text, Class: LaneLabel, X: x + 1, Y: r.lane.Y0 + ascent*h, Text: p.name})
	if follows {
		s.mark(Mark{Shape: Line, Class: Calibration, X: x, Y: r.zero - 0.25*s.o.MMPerMV, X2: x, Y2: r.zero + 0.25*s.o.MMPerMV})
	}
}

// margin writes the name of a row's only lead before its zero line, and the pulse
// of 1 mV where the lane has room for it: on the zero line, or lower where the
// lane ends too soon above it.
func (s *sheet) margin(r *row) {
	h, name := s.o.FontMM, ""
	if r.signal != nil {
		s.placeName(r)
		return
	}
	if len(r.parts) == 1 {
		name = r.parts[0].name
		s.place(Mark{Shape: Text, Class: LaneLabel, X: pad, Y: r.zero + 0.35*h, Text: name})
	}
	x := s.Axis.X0 - pad - 3
	foot := max(r.zero, r.lane.Y0+s.o.MMPerMV+pulseAbove)
	if x < pad+LaneLabel.Width(name, h)+1 || foot > r.lane.Y1-pulseBelow+1e-9 {
		return
	}
	y := foot - s.o.MMPerMV
	s.mark(Mark{Shape: Poly, Class: Calibration, Points: []Point{
		{float32(x - 0.8), float32(foot)}, {float32(x), float32(foot)}, {float32(x), float32(y)},
		{float32(x + 2), float32(y)}, {float32(x + 2), float32(foot)}, {float32(x + 2.8), float32(foot)}}})
}

// placeName writes the name of a signal before its lane's middle.
func (s *sheet) placeName(r *row) {
	h, y := s.o.FontMM, r.zero
	if len(r.signal.Levels) > 0 {
		y = (r.lane.Y0 + r.lane.Y1) / 2
	}
	s.place(Mark{Shape: Text, Class: LaneLabel, X: pad, Y: y + 0.35*h, Text: r.signal.Label})
	if small := TierLabel.height(h); len(r.signal.Levels) == 0 && r.lane.Y1-y > 0.35*h+leading*small {
		text := r.signal.scale()
		if TierLabel.Width(text, h) > s.Axis.X0-pad-0.5 {
			text = trim(r.signal.MMPerMV) + "/mV"
		}
		s.place(Mark{Shape: Text, Class: TierLabel, X: pad, Y: y + 0.35*h + leading*small, Text: text})
	}
}

// waves lays the areas of P and QRS-T for hit testing, and the halo of the
// selected one.
func (s *sheet) waves(r *row, p segment) {
	if s.in.Record == nil || r.signal != nil {
		return
	}
	for i := range s.in.Record.Waves {
		w := &s.in.Record.Waves[i]
		end := max(w.Offset, w.End)
		if end < p.from || w.Onset > p.to || len(w.Sources) == 0 {
			continue
		}
		from, to := max(w.Onset, p.from), min(end, p.to)
		if s.o.Selected != 0 && slices.Contains(w.Sources, s.o.Selected) {
			s.trace(Selected, p, r.zero, from, to, s.o.Selected)
		}
		s.mark(Mark{Shape: Rect, Class: Wave, X: s.Axis.X(from), Y: r.lane.Y0, X2: s.Axis.X(to), Y2: r.lane.Y1, Event: w.Sources[0]})
	}
}

// trace draws a lead between two instants. Where samples are denser than columns
// it keeps the lowest and the highest of each column, at their own times, so
// that no peak is lost and none moves.
func (s *sheet) trace(c Class, p segment, zero float64, from, to tick.Time, id event.ID) {
	mv := p.mv
	first := int((int64(from) + int64(lead.Step) - 1) / int64(lead.Step))
	last := min(int(int64(to)/int64(lead.Step)), len(mv)-1)
	if first > last {
		return
	}
	const slack = 1e-9 // a sample on the edge of a column belongs to the column it begins
	perSample := s.o.MMPerS * lead.Step.MS() / 1000 / s.o.ColumnMM
	point := func(k int) Point {
		x := s.Axis.X(tick.Time(k) * tick.Time(lead.Step))
		up := float64(float64(mv[k]) * p.gain)
		if p.clip > 0 {
			up = min(max(up, -p.clip), p.clip)
		}
		return Point{float32(x), float32(zero - up)}
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

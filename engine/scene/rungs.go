package scene

import (
	"math"

	"escapement/engine/event"
	"escapement/engine/ladder"
	"escapement/engine/tick"
)

// Sizes of the ladder's signs in millimetres.
const (
	focusR    = 0.8
	stimulusR = 1.1
	captureR  = 0.6
	barHalf   = 1.3 // half of a bar across a stroke
	barSide   = 1.8 // a bar on one side, for one branch of two
	gapMM     = 0.6 // an impulse that met another one ends so much short of the meeting
)

// rungs is the ladder's lane: the tiers and what maps heights to millimetres.
type rungs struct {
	*sheet
	d        *ladder.Diagram
	top, per float64           // mm, mm per unit
	rows     [3]float64        // top of each row of dimension lines
	named    [3]ladder.Measure // the measure that gave the row its name in the margin, or 0
	rowH     float64
	foci     map[place]bool
}

// place is an instant and a height.
type place struct {
	t tick.Time
	y float64
}

// The rows of dimension lines: one above the tiers and two below.
const (
	rowAbove = iota
	rowConduction
	rowCycle
)

func (s *sheet) ladder() {
	r := rungs{sheet: s, d: s.in.Diagram, rowH: 1.35 * DimText.height(s.o.FontMM), foci: map[place]bool{}}
	start := s.y
	r.open(rowAbove, ladder.PP)
	r.top = s.y + max(0.3*s.o.FontMM, stimulusR+0.5) // a ring may stand on the edge
	r.per = s.o.LadderMM / r.d.Height()
	foot := r.y(r.d.Height())
	s.y = foot + max(0.35*s.o.FontMM, stimulusR+0.5)
	r.open(rowConduction, ladder.PR, ladder.VA)
	r.open(rowCycle, ladder.RR)
	s.lane("ladder", "ladder", start, s.y)
	r.tiers(foot)
	for i := range r.d.Strokes {
		r.stroke(&r.d.Strokes[i])
	}
	for i := range r.d.Marks {
		if m := &r.d.Marks[i]; m.Sign == ladder.Focus {
			r.foci[place{m.T, m.Y}] = true
		}
	}
	for i := range r.d.Marks {
		r.sign(&r.d.Marks[i])
	}
	s.Marks = append(append(s.Marks, s.halo...), s.over...)
	s.halo, s.over = nil, nil
	r.labels()
}

// open makes room for a row of dimension lines if the diagram, not only the
// window, has any of its measures, and names it in the margin by the first it has.
func (r *rungs) open(row int, measures ...ladder.Measure) {
	r.rows[row] = r.sheet.y
	for _, m := range measures {
		if !r.has(m) {
			continue
		}
		h, name := TierLabel.height(r.o.FontMM), m.String()
		if TierLabel.Width(name, r.o.FontMM) <= r.Axis.X0-2*pad &&
			r.place(Mark{Shape: Text, Class: TierLabel, X: pad, Y: r.sheet.y + 0.55*r.rowH + 0.35*h, Text: name}) {
			r.named[row] = m
		}
		r.sheet.y += r.rowH
		return
	}
}

func (r *rungs) has(m ladder.Measure) bool {
	for i := range r.d.Dims {
		if r.d.Dims[i].Measure == m {
			return true
		}
	}
	return false
}

func (r *rungs) y(units float64) float64 { return r.top + float64(units*r.per) }

func (r *rungs) tiers(foot float64) {
	step := r.step(5)
	if step < tick.Second {
		step = tick.Second
	}
	r.instants(step, func(t tick.Time) {
		r.mark(Mark{Shape: Line, Class: Second, X: r.Axis.X(t), Y: r.top, X2: r.Axis.X(t), Y2: foot})
	})
	edge := func(y float64) {
		r.room.line(r.Axis.X0, y, r.right, y) // no text across an edge
		r.mark(Mark{Shape: Line, Class: TierEdge, X: r.Axis.X0, Y: y, X2: r.right, Y2: y})
	}
	for i := range r.d.Tiers {
		t := &r.d.Tiers[i]
		r.Tiers = append(r.Tiers, Lane{t.Name, t.Label, r.y(t.Y0), r.y(t.Y1)})
		edge(r.y(t.Y0))
		h, middle := TierLabel.height(r.o.FontMM), (r.y(t.Y0)+r.y(t.Y1))/2
		for _, name := range [...]string{t.Label, t.Short} {
			if TierLabel.Width(name, r.o.FontMM) <= r.Axis.X0-2*pad && (t.Y1-t.Y0)*r.per >= h {
				r.place(Mark{Shape: Text, Class: TierLabel, X: pad, Y: middle + 0.35*h, Text: name})
				break
			}
		}
	}
	edge(foot)
}

// classOf gives the class of an impulse or a focus.
func classOf(t event.Tissue, b ladder.Branch) Class {
	switch t {
	case event.Sinus:
		return Sinus
	case event.Atrium:
		return Atrium
	case event.Node:
		if b == ladder.Slow {
			return NodeSlow
		}
		return Node
	case event.His:
		return His
	case event.Purkinje:
		if b == ladder.Right {
			return BundleRight
		}
		return BundleLeft
	case event.Accessory:
		return Accessory
	}
	return Ventricle
}

// stroke draws an impulse, cut to the window.
func (r *rungs) stroke(t *ladder.Stroke) {
	l := Box{r.Axis.X(t.T0), r.y(t.Y0), r.Axis.X(t.T1), r.y(t.Y1)}
	if t.End == ladder.Collided {
		if n := math.Hypot(l.X1-l.X0, l.Y1-l.Y0); n > 2*gapMM {
			l.X1 -= (l.X1 - l.X0) / n * gapMM
			l.Y1 -= (l.Y1 - l.Y0) / n * gapMM
		}
	}
	l, ok := clip(l, Box{r.Axis.X0, math.Inf(-1), r.right, math.Inf(1)})
	if !ok {
		return
	}
	r.room.line(l.X0, l.Y0, l.X1, l.Y1)
	r.add(Mark{Shape: Line, Class: classOf(t.Tissue, t.Branch), X: l.X0, Y: l.Y0, X2: l.X1, Y2: l.Y1, Event: t.Event})
}

// add paints a mark of the ladder, with a halo if its event is selected.
func (r *rungs) add(m Mark) {
	r.over = append(r.over, m)
	r.lone(m)
	if m.Event == 0 || m.Event != r.o.Selected {
		return
	}
	m.Class = Selected
	if m.Shape == Ring {
		m.Shape = Disc
	}
	if m.Shape == Disc {
		m.R += 0.9
	}
	r.halo = append(r.halo, m)
}

func (r *rungs) inside(t tick.Time) bool { return t >= r.o.From && t <= r.o.To }

func (r *rungs) sign(m *ladder.Mark) {
	x, y := r.Axis.X(m.T), r.y(m.Y)
	if m.Sign == ladder.Tail {
		l, ok := clip(Box{x, y, r.Axis.X(m.Until), y}, Box{r.Axis.X0, y - 1, r.right, y + 1})
		if ok {
			r.room.line(l.X0, l.Y0, l.X1, l.Y1)
			r.add(Mark{Shape: Line, Class: Tail, X: l.X0, Y: l.Y0, X2: l.X1, Y2: l.Y1, Event: m.Event})
		}
		return
	}
	if !r.inside(m.T) {
		return
	}
	switch m.Sign {
	case ladder.Focus:
		r.disc(Disc, classOf(m.Tissue, m.Branch), x, y, focusR, m.Event)
	case ladder.Stimulus:
		r.disc(Ring, Stimulus, x, y, stimulusR, m.Event)
	case ladder.Capture:
		r.disc(Ring, Stimulus, x, y, stimulusR, m.Event)
		r.disc(Disc, Stimulus, x, y, captureR, m.Event)
	case ladder.Bar:
		if r.foci[place{m.T, m.Y}] { // beside the disc, on the side to which the impulse did not go
			if y += focusR + 0.5; m.Up {
				y -= 2 * (focusR + 0.5)
			}
		}
		x0, x1 := x-barHalf, x+barHalf
		switch m.Branch {
		case ladder.Right:
			x0, x1 = x, x+barSide
		case ladder.Left:
			x0, x1 = x-barSide, x
		}
		x0, x1 = max(x0, r.Axis.X0-barHalf), min(x1, r.right+barHalf)
		r.room.box(Box{x0, y - 0.4, x1, y + 0.4})
		r.add(Mark{Shape: Line, Class: Block, X: x0, Y: y, X2: x1, Y2: y, Event: m.Event})
	}
}

func (r *rungs) disc(shape Shape, c Class, x, y, radius float64, id event.ID) {
	r.room.box(Box{x - radius - 0.2, y - radius - 0.2, x + radius + 0.2, y + radius + 0.2})
	r.add(Mark{Shape: shape, Class: c, X: x, Y: y, R: radius, Event: id})
}

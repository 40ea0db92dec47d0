package scene

import (
	"math"

	"escapement/engine/ladder"
)

// window draws a bar, cut to the sheet's window.
func (v *watch) window(w *ladder.Window) {
	x0, x1, ok := v.visible(w.T0, max(w.T1, w.Held))
	if !ok {
		return
	}
	row := v.rows[w.Row]
	v.drawn = append(v.drawn, w)
	if texts := words(w); len(texts) > 0 {
		v.texts = append(v.texts, caption{w: w, texts: texts})
	}
	if w.Hearing == ladder.Timer {
		v.timer(w, row)
		return
	}
	b := Box{x0, row.Y0, x1, row.Y1}
	class := Window
	if w.Hearing != ladder.Ignores {
		class = WindowArea // told by its hatching or its outline; there to be found
	}
	v.add(Mark{Shape: Rect, Class: class, X: b.X0, Y: b.Y0, X2: b.X1, Y2: b.Y1, Event: w.Event})
	v.edges(w, b)
	for i := range w.Hits {
		if h := &w.Hits[i]; v.o.From <= h.T && h.T <= v.o.To {
			x := v.Axis.X(h.T)
			v.room.box(Box{x - 0.3, b.Y0, x + 0.3, b.Y1})
			v.upright(Signal, x, b.Y0-0.3, b.Y1+0.3, h.Event)
		}
	}
	if w.Hearing == ladder.Deaf {
		v.room.box(Box{b.X0, b.Y0 + 0.1, b.X1, b.Y1 - 0.1})
		v.hatch(w, b)
	}
}

// edges draws the outline of a bar: open at the right where it ran out, closed by a
// solid edge where an event ended it.
func (v *watch) edges(w *ladder.Window, b Box) {
	points := []Point{{float32(b.X1), float32(b.Y0)}, {float32(b.X0), float32(b.Y0)}, {float32(b.X0), float32(b.Y1)}, {float32(b.X1), float32(b.Y1)}}
	if w.T0 >= v.o.From {
		v.add(Mark{Shape: Poly, Class: WindowEdge, Points: points, Event: w.Event})
	} else {
		v.add(Mark{Shape: Line, Class: WindowEdge, X: b.X0, Y: b.Y0, X2: b.X1, Y2: b.Y0, Event: w.Event})
		v.add(Mark{Shape: Line, Class: WindowEdge, X: b.X0, Y: b.Y1, X2: b.X1, Y2: b.Y1, Event: w.Event})
	}
	if w.Ended && w.T1 <= v.o.To && b.X1-b.X0 > 2*endMM { // a row of short ones would be one solid block
		x := b.X1 - endMM/2
		v.upright(WindowEnd, x, b.Y0, b.Y1, w.Event)
	}
}

// hatch fills a bar with slanted lines, cut to it. They are tied to the bar's start,
// so that they move with it.
func (v *watch) hatch(w *ladder.Window, b Box) {
	if b.X1-b.X0 < leastMM {
		return
	}
	start, tall := v.Axis.X(w.T0), b.Y1-b.Y0
	for k := math.Ceil((b.X0 - start) / hatchMM); start+k*hatchMM < b.X1+tall; k++ {
		x := start + k*hatchMM
		if l, ok := clip(Box{x, b.Y0, x - tall, b.Y1}, b); ok && l.X0-l.X1 > 0.05 {
			v.add(Mark{Shape: Line, Class: Hatch, X: l.X0, Y: l.Y0, X2: l.X1, Y2: l.Y1, Event: w.Event})
		}
	}
}

// timer draws a timer as a line along the foot of its row: a tick where it began,
// a solid edge where an event ended it, dashes where the stimulus was held back.
func (v *watch) timer(w *ladder.Window, row Box) {
	y, up := row.Y1-0.4, row.Y1-1.5
	if x0, x1, ok := v.visible(w.T0, w.T1); ok {
		v.add(Mark{Shape: Line, Class: Timer, X: x0, Y: y, X2: x1, Y2: y, Event: w.Event})
	}
	if w.T0 >= v.o.From {
		v.upright(WindowEdge, v.Axis.X(w.T0), up, row.Y1, w.Event)
	}
	if w.Ended && w.T1 <= v.o.To {
		v.upright(WindowEnd, v.Axis.X(w.T1)-endMM/2, up, row.Y1, w.Event)
	}
	if w.Held == 0 {
		return
	}
	if x0, x1, ok := v.visible(w.T1, w.Held); ok {
		v.add(Mark{Shape: Line, Class: Held, X: x0, Y: y, X2: x1, Y2: y, Event: w.HeldBy})
	}
}

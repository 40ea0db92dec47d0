package scene

import (
	"sort"

	"escapement/engine/ladder"
)

// markers marks signals, stimuli and changes of mode, and names them where there is
// room: what the device did before what it saw.
func (v *watch) markers() {
	var named []*ladder.Marker
	first := sort.Search(len(v.d.Markers), func(i int) bool { return v.d.Markers[i].T >= v.o.From })
	for i := first; i < len(v.d.Markers) && v.d.Markers[i].T <= v.o.To; i++ {
		m := &v.d.Markers[i]
		v.tick(m)
		if m.Label != "" {
			named = append(named, m)
		}
	}
	for rank := range ranks {
		for _, m := range named {
			if rankOf(m) == rank {
				v.label(m)
			}
		}
	}
}

// rankOf gives the order in which marks are named: what the device did and what is
// out of the ordinary first, words where there is room left.
func rankOf(m *ladder.Marker) int {
	switch {
	case m.Channel == 0:
		return 2
	case m.Paced || m.Refractory:
		return 0
	case len(m.Label) == 2:
		return 1
	}
	return 3 // noise, which comes many times
}

const ranks = 4

func (v *watch) tick(m *ladder.Marker) {
	x, y, y1 := v.Axis.X(m.T), v.line, v.line-tickMM
	if m.Channel == 'V' {
		y1 = v.line + tickMM
	}
	switch {
	case m.Channel == 0:
		v.add(Mark{Shape: Line, Class: Signal, X: x, Y: v.line - tickMM, X2: x, Y2: v.line + tickMM, Event: m.Event})
	case m.Unheard:
		const half = 0.35
		y1 = y + 0.8*(y1-y)
		v.add(Mark{Shape: Poly, Class: WindowEdge, Event: m.Event, Points: []Point{
			{float32(x - half), float32(y)}, {float32(x - half), float32(y1)}, {float32(x + half), float32(y1)}, {float32(x + half), float32(y)}}})
	case m.Paced:
		v.add(Mark{Shape: Line, Class: WindowEnd, X: x, Y: y, X2: x, Y2: y1, Event: m.Event})
	default:
		v.add(Mark{Shape: Line, Class: Signal, X: x, Y: y, X2: x, Y2: y1, Event: m.Event})
	}
}

// label names a mark over its end, a little aside where another stands too near. A
// change of mode belongs to no chamber and takes the side that is free.
func (v *watch) label(m *ladder.Marker) {
	h, x, w := MarkerText.height(v.o.FontMM), v.Axis.X(m.T), MarkerText.Width(m.Label, v.o.FontMM)
	above, below := v.line-tickMM-0.3*h, v.line+tickMM+0.9*h
	sides, shifts := []float64{above}, []float64{0, 0.25, -0.25}
	switch {
	case m.Channel == 'V':
		sides[0] = below
	case m.Channel == 0:
		shifts = append(shifts, 0.56, -0.56)
		if v.has('V') {
			sides = append(sides, below)
		}
	}
	for _, y := range sides {
		for _, shift := range shifts {
			t := Mark{Shape: Text, Class: MarkerText, X: x + shift*w, Y: y, Text: m.Label, Anchor: Middle, Event: m.Event}
			if b := v.TextBox(&t); b.X0 >= v.Axis.X0-w/2 && b.X1 <= v.right+w/2 && v.clear(&t, 0.3) && v.place(t) {
				return
			}
		}
	}
}

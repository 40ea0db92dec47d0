package scene

import (
	"slices"

	"escapement/engine/ladder"
)

// sign is an entry of the legend: a text and what it explains, drawn in the 3.2 mm
// from x on, about y; nil for letters, which the text holds.
type sign struct {
	text string
	draw func(x, y float64)
}

// signs tells whether there is anything for a legend to explain.
func (s *sheet) signs() bool { return tiersOf(s.in, &s.o) > 0 || s.deviceLane() }

func (s *sheet) deviceLane() bool {
	return s.in.Diagram != nil && s.in.Diagram.Device != nil && !s.o.NoDevice && s.o.has("device")
}

// legend explains the signs of the ladder in one or more lines.
func (s *sheet) legend() {
	h := Note.height(s.o.FontMM)
	s.y += 0.4 * h
	x, line := pad, s.y+0.8*h
	signs := []sign{
		{"impulse, steep is fast", func(x, y float64) { s.sample(Line, Atrium, x+1, y-1.2, x+2.2, y+1.2, 0) }},
		{"focus discharged", func(x, y float64) { s.sample(Disc, Ventricle, x+1.6, y, 0, 0, focusR) }},
		{"stimulus", func(x, y float64) { s.sample(Ring, Stimulus, x+1.6, y, 0, 0, stimulusR) }},
		{"captured", func(x, y float64) {
			s.sample(Ring, Stimulus, x+1.6, y, 0, 0, stimulusR)
			s.sample(Disc, Stimulus, x+1.6, y, 0, 0, captureR)
		}},
		{"blocked", func(x, y float64) {
			s.sample(Line, Node, x+1.2, y-1.4, x+1.6, y, 0)
			s.sample(Line, Block, x+0.3, y, x+2.9, y, 0)
		}},
		{"left refractory", func(x, y float64) { s.sample(Line, Tail, x, y, x+3.2, y, 0) }},
		{"left bundle", func(x, y float64) { s.sample(Line, BundleLeft, x+0.8, y-1.2, x+2.4, y+1.2, 0) }},
		{"right bundle", func(x, y float64) { s.sample(Line, BundleRight, x+0.8, y-1.2, x+2.4, y+1.2, 0) }},
	}
	signs = append(signs, s.pathwaySigns()...)
	if tiersOf(s.in, &s.o) == 0 {
		signs = nil
	}
	if s.deviceLane() {
		signs = append(signs, s.deviceSigns()...)
	}
	for _, e := range signs {
		lead := 4.0
		if e.draw == nil {
			lead = 0
		}
		w := lead + Note.Width(e.text, s.o.FontMM)
		if x > pad && x+w > s.Width-pad {
			x, line = pad, line+max(1.4*h, 3.4)
		}
		if x+w > s.Width {
			continue
		}
		if s.place(Mark{Shape: Text, Class: Note, X: x + lead, Y: line + 0.35*h, Text: e.text}) && e.draw != nil {
			e.draw(x, line)
		}
		x += w + 1.6*h
	}
	s.y = line + max(0.7*h, 1.7)
}

// pathwaySigns explain the strokes of pathways, where the strip has any.
func (s *sheet) pathwaySigns() []sign {
	var out []sign
	has := func(c Class) bool {
		return slices.ContainsFunc(s.in.Diagram.Strokes, func(t ladder.Stroke) bool { return classOf(t.Tissue, t.Branch) == c })
	}
	for _, k := range []struct {
		text  string
		class Class
	}{{"slow pathway", NodeSlow}, {"accessory pathway", Accessory}} {
		if has(k.class) {
			out = append(out, sign{k.text, func(x, y float64) { s.sample(Line, k.class, x+0.2, y-1.2, x+3, y+1.2, 0) }})
		}
	}
	return out
}

func (s *sheet) sample(shape Shape, c Class, x, y, x2, y2, r float64) {
	s.mark(Mark{Shape: shape, Class: c, X: x, Y: y, X2: x2, Y2: y2, R: r})
}

// deviceSigns explains the device's lane.
func (s *sheet) deviceSigns() []sign {
	bar := func(x, y float64) {
		s.mark(Mark{Shape: Poly, Class: WindowEdge, Points: []Point{
			{float32(x + 3.2), float32(y - 1.1)}, {float32(x), float32(y - 1.1)}, {float32(x), float32(y + 1.1)}, {float32(x + 3.2), float32(y + 1.1)}}})
	}
	return []sign{
		{"AS, VS sensed", nil}, {"AP, VP paced", nil}, {"AR, VR in a refractory period", nil},
		{"not seen", func(x, y float64) {
			s.mark(Mark{Shape: Poly, Class: WindowEdge, Points: []Point{
				{float32(x + 1.2), float32(y + 1)}, {float32(x + 1.2), float32(y - 1)}, {float32(x + 1.9), float32(y - 1)}, {float32(x + 1.9), float32(y + 1)}}})
		}},
		{"deaf", func(x, y float64) {
			bar(x, y)
			for d := 0.0; d < 5; d += hatchMM {
				if l, ok := clip(Box{x + d, y - 1.1, x + d - 2.2, y + 1.1}, Box{x, y - 1.1, x + 3.2, y + 1.1}); ok && l.X0-l.X1 > 0.05 {
					s.sample(Line, Hatch, l.X0, l.Y0, l.X1, l.Y1, 0)
				}
			}
		}},
		{"hears, does not react; ran out", func(x, y float64) {
			s.sample(Rect, Window, x, y-1.1, x+3.2, y+1.1, 0)
			bar(x, y)
		}},
		{"ended by an event", func(x, y float64) {
			bar(x, y)
			s.sample(Line, WindowEnd, x+3.2-endMM/2, y-1.1, x+3.2-endMM/2, y+1.1, 0)
		}},
		{"timer", func(x, y float64) {
			s.sample(Line, Timer, x, y, x+3.2, y, 0)
			s.sample(Line, WindowEdge, x, y-1, x, y+0.4, 0)
		}},
		{"stimulus held back", func(x, y float64) { s.sample(Line, Held, x, y, x+3.2, y, 0) }},
	}
}

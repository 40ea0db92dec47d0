package scene

// legend explains the signs of the ladder in one or more lines.
func (s *sheet) legend() {
	h := Note.height(s.o.FontMM)
	s.y += 0.4 * h
	x, line := pad, s.y+0.8*h
	for _, e := range [...]struct {
		text string
		draw func(x, y float64)
	}{
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
	} {
		w := 4 + Note.Width(e.text, s.o.FontMM)
		if x > pad && x+w > s.Width-pad {
			x, line = pad, line+max(1.4*h, 3.4)
		}
		if x+w > s.Width {
			continue
		}
		if s.place(Mark{Shape: Text, Class: Note, X: x + 4, Y: line + 0.35*h, Text: e.text}) {
			e.draw(x, line)
		}
		x += w + 1.6*h
	}
	s.y = line + max(0.7*h, 1.7)
}

func (s *sheet) sample(shape Shape, c Class, x, y, x2, y2, r float64) {
	s.mark(Mark{Shape: shape, Class: c, X: x, Y: y, X2: x2, Y2: y2, R: r})
}

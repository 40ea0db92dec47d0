package scene

import (
	"strings"
	"unicode/utf8"
)

// Advance widths in thousandths of the em, ASCII from space to tilde: for every
// letter the widest of three freely licensed sans faces (Go, DejaVu Sans,
// Liberation Sans), measured from their tables. Layout so never depends on a
// font, and a text set in any usual sans stays inside its box. Other letters
// count as a whole em, except those below.
var (
	regular = [95]uint16{
		318, 401, 460, 838, 637, 951, 780, 275, 391, 391, 584, 838, 318, 584, 318, 337,
		637, 637, 637, 637, 637, 637, 637, 637, 637, 637, 337, 337, 838, 838, 838, 557,
		1016, 685, 687, 723, 771, 667, 611, 778, 752, 399, 500, 667, 558, 863, 749, 788,
		667, 788, 723, 667, 611, 732, 685, 989, 686, 667, 686, 391, 337, 391, 838, 557,
		500, 613, 635, 550, 635, 616, 353, 635, 634, 278, 278, 580, 278, 975, 634, 612,
		635, 635, 412, 521, 393, 634, 592, 818, 592, 592, 525, 637, 337, 637, 838,
	}
	bold = [95]uint16{
		349, 457, 521, 838, 696, 1002, 873, 307, 458, 458, 559, 838, 380, 584, 380, 366,
		696, 696, 696, 696, 696, 696, 696, 696, 696, 696, 400, 400, 838, 838, 838, 611,
		1000, 774, 763, 734, 831, 684, 684, 821, 837, 454, 557, 775, 638, 996, 837, 851,
		733, 851, 771, 721, 683, 813, 774, 1104, 771, 725, 726, 458, 366, 458, 838, 557,
		500, 675, 716, 593, 716, 679, 436, 716, 712, 343, 343, 666, 343, 1042, 712, 688,
		716, 716, 494, 596, 479, 712, 652, 924, 646, 652, 583, 712, 366, 712, 838,
	}
)

// Ascent and descent of a line of text in ems, and the distance of lines.
const (
	ascent  = 0.80
	descent = 0.24
	leading = 1.3
)

// Width is the width of the text set in the class, in millimetres: an upper
// bound for the usual sans faces.
func (c Class) Width(text string, fontMM float64) float64 {
	s := Light.Style(c)
	table := &regular
	if s.Weight >= 600 {
		table = &bold
	}
	sum := 0
	for _, r := range text {
		switch {
		case r >= ' ' && r <= '~':
			sum += int(table[r-' '])
		case r == '·' || r == '’':
			sum += 380
		case r == '–':
			sum += 560
		default:
			sum += 1000
		}
	}
	return float64(sum) / 1000 * s.Size * fontMM
}

// height is the em size of a text class in millimetres.
func (c Class) height(fontMM float64) float64 { return Light.Style(c).Size * fontMM }

// Box is a rectangle, X0 <= X1 and Y0 <= Y1.
type Box struct{ X0, Y0, X1, Y1 float64 }

func (b Box) meets(o Box) bool {
	return b.X0 < o.X1 && o.X0 < b.X1 && b.Y0 < o.Y1 && o.Y0 < b.Y1
}

// TextBox is the room that a mark of shape Text takes.
func (s *Scene) TextBox(m *Mark) Box {
	w, h := m.Class.Width(m.Text, s.FontMM), m.Class.height(s.FontMM)
	x := m.X
	switch m.Anchor {
	case Middle:
		x -= w / 2
	case End:
		x -= w
	}
	return Box{x, m.Y - ascent*h, x + w, m.Y + descent*h}
}

// wrap breaks a text into lines no wider than the given width. A word that is
// wider by itself is broken where it must be.
func wrap(c Class, text string, fontMM, width float64) []string {
	var lines []string
	line := ""
	for _, word := range strings.Fields(text) {
		joined := word
		if line != "" {
			joined = line + " " + word
		}
		if c.Width(joined, fontMM) <= width {
			line = joined
			continue
		}
		if line != "" {
			lines = append(lines, line)
		}
		for c.Width(word, fontMM) > width {
			n := fit(c, word, fontMM, width)
			if n == 0 {
				return nil // not even a letter has room
			}
			lines, word = append(lines, word[:n]), word[n:]
		}
		line = word
	}
	if line != "" {
		lines = append(lines, line)
	}
	return lines
}

// fit is how many bytes of the word have room.
func fit(c Class, word string, fontMM, width float64) int {
	n := 0
	for n < len(word) {
		_, size := utf8.DecodeRuneInString(word[n:])
		if c.Width(word[:n+size], fontMM) > width {
			break
		}
		n += size
	}
	return n
}

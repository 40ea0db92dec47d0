package scene

import (
	"slices"
	"strconv"
)

// markWidth is how many numbers a mark takes in the wire form.
const markWidth = 11

// Encode gives the wire form, described in the package comment: meta is JSON, numbers
// holds all marks and after them the points of the polylines.
func Encode(s *Scene) (meta []byte, numbers []float32) {
	n := markWidth * len(s.Marks)
	for i := range s.Marks {
		n += 2 * len(s.Marks[i].Points)
	}
	numbers = make([]float32, 0, n)
	classes, texts := []Class{}, []string{}
	for i := range s.Marks {
		m := &s.Marks[i]
		class := slices.Index(classes, m.Class)
		if class < 0 {
			class = len(classes)
			classes = append(classes, m.Class)
		}
		text := 0
		if m.Text != "" {
			texts = append(texts, m.Text)
			text = len(texts)
		}
		numbers = append(numbers, float32(m.Shape), float32(class), float32(m.X), float32(m.Y), float32(m.X2), float32(m.Y2), float32(m.R),
			float32(text), float32(m.Anchor), float32(m.Event), float32(len(m.Points)))
	}
	for i := range s.Marks {
		for _, p := range s.Marks[i].Points {
			numbers = append(numbers, p.X, p.Y)
		}
	}
	meta = append(s.frame(make([]byte, 0, 1024+16*len(texts))), `,"marks":`...)
	meta = append(strconv.AppendInt(meta, int64(len(s.Marks)), 10), `,"classes":[`...)
	for i, c := range classes {
		meta = quoted(comma(meta, i), c.String())
	}
	meta = append(meta, `],"texts":[`...)
	for i, t := range texts {
		meta = quoted(comma(meta, i), t)
	}
	return append(meta, `]}`...), numbers
}

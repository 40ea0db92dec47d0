package scene

import (
	"encoding/json"
	"math"
	"strconv"
)

// Describe writes a scene as JSON that people can read: what the goldens hold.
//
//	{"width":262,"height":118.5,"font_mm":3,
//	 "axis":{"t0_us":0,"x0":12,"mm_per_s":25},
//	 "lanes":[{"name":"lead:II","label":"II","y0":10,"y1":35},...],
//	 "marks":[[1,"grid-minor",12,10,12,35],...]}
//
// A mark is an array, of which trailing zero or empty values are missing:
//
//	[shape, "class", x, y, x2, y2, r, "text", anchor, event, pointOffset, pointCount]
func Describe(s *Scene) []byte {
	b := make([]byte, 0, 4096+64*len(s.Marks))
	b = append(s.frame(b), `,"marks":[`...)
	offset := 0
	for i := range s.Marks {
		m := &s.Marks[i]
		b = m.encode(comma(b, i), offset)
		offset += len(m.Points)
	}
	return append(b, `]}`...)
}

// frame writes all but the marks, without the closing brace.
func (s *Scene) frame(b []byte) []byte {
	b = append(b, `{"width":`...)
	b = number(b, s.Width)
	b = append(b, `,"height":`...)
	b = number(b, s.Height)
	b = append(b, `,"font_mm":`...)
	b = number(b, s.FontMM)
	b = append(b, `,"axis":{"t0_us":`...)
	b = strconv.AppendInt(b, int64(s.Axis.T0), 10)
	b = append(b, `,"x0":`...)
	b = number(b, s.Axis.X0)
	b = append(b, `,"mm_per_s":`...)
	b = number(b, s.Axis.MMPerS)
	b = append(b, `},"lanes":[`...)
	for i := range s.Lanes {
		b = lane(comma(b, i), &s.Lanes[i])
	}
	return append(b, ']')
}

func comma(b []byte, i int) []byte {
	if i > 0 {
		return append(b, ',')
	}
	return b
}

func lane(b []byte, l *Lane) []byte {
	b = append(b, `{"name":`...)
	b = quoted(b, l.Name)
	b = append(b, `,"label":`...)
	b = quoted(b, l.Label)
	b = append(b, `,"y0":`...)
	b = number(b, l.Y0)
	b = append(b, `,"y1":`...)
	b = number(b, l.Y1)
	return append(b, '}')
}

// encode writes the mark as an array and cuts trailing zero values.
func (m *Mark) encode(b []byte, offset int) []byte {
	b = append(b, '[')
	b = strconv.AppendInt(b, int64(m.Shape), 10)
	b = append(b, ',', '"')
	b = append(append(b, m.Class.String()...), '"')
	end := len(b) // what stands behind it is only zeros so far
	keep := func(filled bool) {
		if filled {
			end = len(b)
		}
	}
	for _, v := range [...]float64{m.X, m.Y, m.X2, m.Y2, m.R} {
		b = number(append(b, ','), v)
		keep(units(v) != 0)
	}
	b = quoted(append(b, ','), m.Text)
	keep(m.Text != "")
	if len(m.Points) == 0 {
		offset = 0
	}
	for i, v := range [...]int64{int64(m.Anchor), int64(m.Event), int64(offset), int64(len(m.Points))} {
		b = strconv.AppendInt(append(b, ','), v, 10)
		keep(v != 0 && (i < 2 || len(m.Points) > 0))
	}
	return append(b[:end], ']')
}

// Numbers are written in tenths of a micrometre: at 100 mm/s that is one
// microsecond. Integers are several times faster to write than the shortest
// decimal of a float.
func units(v float64) int64 {
	if !(math.Abs(v) < 1e12) { // also for NaN
		return 0
	}
	return int64(math.Round(v * 1e4))
}

func number(b []byte, v float64) []byte {
	n := units(v)
	if n < 0 {
		b, n = append(b, '-'), -n
	}
	b = strconv.AppendInt(b, n/1e4, 10)
	if n %= 1e4; n > 0 {
		b = append(b, '.', byte('0'+n/1000), byte('0'+n/100%10), byte('0'+n/10%10), byte('0'+n%10))
		for b[len(b)-1] == '0' {
			b = b[:len(b)-1]
		}
	}
	return b
}

func quoted(b []byte, s string) []byte {
	if s == "" {
		return append(b, '"', '"')
	}
	q, err := json.Marshal(s)
	if err != nil {
		panic("scene: text does not encode: " + err.Error())
	}
	return append(b, q...)
}

package scene

import "math"

// room knows what is taken on the sheet, so that labels can ask whether a box is
// free. Things are sorted into upright stripes, so that a question looks only at
// what is near.
type room struct {
	width, height float64
	stripes       [][]taken
}

// taken is a box, or a line segment from X0,Y0 to X1,Y1 where line is set.
type taken struct {
	Box
	line bool
}

const stripe = 8.0 // mm

func newRoom(width float64) *room {
	return &room{width: width, height: math.Inf(1), stripes: make([][]taken, int(width/stripe)+1)}
}

func (r *room) each(x0, x1 float64, f func(i int) bool) {
	last := len(r.stripes) - 1
	for i := min(max(int(x0/stripe), 0), last); i <= min(max(int(x1/stripe), 0), last); i++ {
		if !f(i) {
			return
		}
	}
}

func (r *room) take(t taken) {
	x0, x1 := min(t.X0, t.X1), max(t.X0, t.X1)
	r.each(x0, x1, func(i int) bool {
		r.stripes[i] = append(r.stripes[i], t)
		return true
	})
}

func (r *room) box(b Box)                   { r.take(taken{Box: b}) }
func (r *room) line(x0, y0, x1, y1 float64) { r.take(taken{Box{x0, y0, x1, y1}, true}) }

// free tells whether a box lies on the sheet and meets nothing.
func (r *room) free(b Box) bool {
	if b.X0 < 0 || b.Y0 < 0 || b.X1 > r.width || b.Y1 > r.height {
		return false
	}
	ok := true
	r.each(b.X0, b.X1, func(i int) bool {
		for j := range r.stripes[i] {
			t := &r.stripes[i][j]
			if t.line && crosses(t.Box, b) || !t.line && t.meets(b) {
				ok = false
				return false
			}
		}
		return true
	})
	return ok
}

// crosses tells whether the segment l has a point inside the box.
func crosses(l, b Box) bool {
	_, ok := clip(l, b)
	return ok
}

// clip cuts the segment l to the box (Liang and Barsky 1984).
func clip(l, b Box) (Box, bool) {
	t0, t1 := 0.0, 1.0
	dx, dy := l.X1-l.X0, l.Y1-l.Y0
	for _, e := range [...][2]float64{{-dx, l.X0 - b.X0}, {dx, b.X1 - l.X0}, {-dy, l.Y0 - b.Y0}, {dy, b.Y1 - l.Y0}} {
		p, q := e[0], e[1]
		switch {
		case p == 0 && q < 0:
			return l, false
		case p < 0:
			t0 = max(t0, q/p)
		case p > 0:
			t1 = min(t1, q/p)
		}
	}
	if t0 > t1 {
		return l, false
	}
	out := l
	if t0 > 0 {
		out.X0, out.Y0 = l.X0+t0*dx, l.Y0+t0*dy
	}
	if t1 < 1 {
		out.X1, out.Y1 = l.X0+t1*dx, l.Y0+t1*dy
	}
	return out, true
}

package scene

import "math"

// Extents remembers the lowest and the highest value of signals. Twelve leads of half a
// minute are 360,000 samples, which a drag would look through twice a frame. The zero
// value is empty and ready.
type Extents struct{ known map[*float32][2]float64 }

// of is the lowest value of a signal, or 0, and the highest, or 0.
func (x *Extents) of(mv []float32) (low, high float64) {
	if x == nil || len(mv) == 0 {
		return extent(mv)
	}
	e, ok := x.known[&mv[0]]
	if !ok {
		e[0], e[1] = extent(mv)
		if x.known == nil {
			x.known = map[*float32][2]float64{}
		}
		x.known[&mv[0]] = e
	}
	return e[0], e[1]
}

func extent(mv []float32) (low, high float64) {
	var l, h float32
	for _, v := range mv {
		if v < l {
			l = v
		}
		if v > h {
			h = v
		}
	}
	if math.IsInf(float64(l), 0) || math.IsInf(float64(h), 0) {
		return 0, 0
	}
	return float64(l), float64(h)
}

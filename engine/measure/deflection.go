package measure

import "escapement/engine/lead"

// threshold is the smallest deflection that is named, in millivolts: a third of
// a small square (a choice of this package).
const threshold = 0.03

// deflection is one swing to one side of the baseline within a QRS. Times are
// milliseconds from the onset of the QRS in any lead.
type deflection struct {
	peak     float64 // millivolts, signed
	at       int     // time of the peak
	from, to int     // first and last sample on this side
}

// deflections of one lead of a complex, between its onset and offset. Swings
// that stay below the threshold are left out and the ones beside them joined if
// they go the same way.
func deflections(c *lead.Complex, l lead.Name) []deflection {
	v := c.Depol[l][c.On : c.Off+1]
	var out []deflection
	for k := 0; k < len(v); {
		d := deflection{peak: float64(v[k]), at: k, from: k}
		for d.to = k; k < len(v) && (v[k] > 0) == (v[d.from] > 0); k++ {
			d.to = k
			if abs(float64(v[k])) > abs(d.peak) {
				d.peak, d.at = float64(v[k]), k
			}
		}
		if abs(d.peak) < threshold {
			continue
		}
		if n := len(out); n > 0 && (out[n-1].peak > 0) == (d.peak > 0) {
			out[n-1].to = d.to
			if abs(d.peak) > abs(out[n-1].peak) {
				out[n-1].peak, out[n-1].at = d.peak, d.at
			}
			continue
		}
		out = append(out, d)
	}
	return out
}

func abs(x float64) float64 {
	if x < 0 {
		return -x
	}
	return x
}

func (d deflection) length() int { return d.to - d.from + 1 }

// figure is a lead's QRS in the trade's letters: positive swings are r, negative
// ones before the first of them q, those after it s.
type figure struct {
	d       []deflection
	samples []float32
}

func figureOf(c *lead.Complex, l lead.Name) figure {
	return figure{deflections(c, l), c.Depol[l][c.On : c.Off+1]}
}

// q is the depth of a negative swing that comes first and is followed by an r.
func (f figure) q() float64 {
	if len(f.d) > 1 && f.d[0].peak < 0 {
		return -f.d[0].peak
	}
	return 0
}

// side lists the swings that go the given way.
func (f figure) side(up bool) []deflection {
	var out []deflection
	for _, d := range f.d {
		if (d.peak > 0) == up {
			out = append(out, d)
		}
	}
	return out
}

// tallest is the largest positive swing; ok is false where there is none.
func (f figure) tallest() (best deflection, ok bool) {
	for _, d := range f.d {
		if d.peak > 0 && d.peak > best.peak {
			best, ok = d, true
		}
	}
	return best, ok
}

// s is the deepest negative swing after the first positive one.
func (f figure) s() (best deflection, ok bool) {
	up := false
	for _, d := range f.d {
		if d.peak > 0 {
			up = true
		} else if up && d.peak < best.peak {
			best, ok = d, true
		}
	}
	return best, ok
}

// letters writes the figure, capitals for swings of at least half the largest:
// "rSR'".
func (f figure) letters() string {
	largest := 0.0
	for _, d := range f.d {
		largest = max(largest, abs(d.peak))
	}
	if len(f.d) == 1 && f.d[0].peak < 0 {
		return "QS"
	}
	out, r, s := "", 0, 0
	for _, d := range f.d {
		letter := "q"
		switch {
		case d.peak > 0:
			letter = "r" + primes(r)
			r++
		case r > 0:
			letter = "s" + primes(s)
			s++
		}
		if abs(d.peak) >= largest/2 {
			letter = string(letter[0]-'a'+'A') + letter[1:]
		}
		out += letter
	}
	return out
}

func primes(n int) string {
	if n > 2 {
		n = 2
	}
	return "''"[:n]
}

// notched tells whether the tallest r has a second top or a shelf: between
// rising past half and falling below half of its peak, the trace turns, or
// slows to under a quarter of the lead's steepest slope for at least 8 ms beside
// the peak itself (a choice of this package: the recommendations give no number).
func (f figure) notched() bool {
	r, ok := f.tallest()
	if !ok {
		return false
	}
	v := f.samples[r.from : r.to+1]
	steepest := 0.0
	for k := 1; k < len(v); k++ {
		steepest = max(steepest, abs(float64(v[k]-v[k-1])))
	}
	tops, shelf, turned := 0, 0, false
	for k := 1; k+1 < len(v); k++ {
		if float64(v[k]) < r.peak/2 {
			continue
		}
		before, after := float64(v[k]-v[k-1]), float64(v[k+1]-v[k])
		if before > 0 && after <= 0 {
			tops++
		}
		if abs(after) < steepest/4 {
			shelf++
		} else {
			turned = turned || shelf >= 8
			shelf = 0
		}
	}
	return tops > 1 || turned || shelf >= 8
}

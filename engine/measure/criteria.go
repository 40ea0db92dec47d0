package measure

import (
	"fmt"
	"strings"

	"escapement/engine/lead"
)

// The tests behind the table in morphology.go. Each returns what it found, in
// words, and whether the criterion holds.

func width(asks string, from, below int) rule {
	return rule{asks, false, func(x *exam) (string, bool) {
		return fmt.Sprintf("%d ms", x.qrs), x.qrs >= from && x.qrs < below
	}}
}

func axisWithin(lo, hi float64) func(*exam) (string, bool) {
	return func(x *exam) (string, bool) {
		if x.axis == nil {
			return "no axis", false
		}
		a := *x.axis
		if hi == 180 && a <= -180 {
			a += 360
		}
		return fmt.Sprintf("%.0f degrees", a), a >= lo && a <= hi
	}
}

// rPeak is the time of the tallest R of a lead, or 0 without one.
func (x *exam) rPeak(l lead.Name) int {
	r, ok := x.fig[l].tallest()
	if !ok {
		return 0
	}
	return r.at
}

func peakAbove(limit int, leads ...lead.Name) func(*exam) (string, bool) {
	return func(x *exam) (string, bool) {
		return each(leads, func(l lead.Name) (string, bool) {
			t := x.rPeak(l)
			return fmt.Sprintf("%s %d ms", l, t), t > limit
		})
	}
}

// each asks the same of several leads; all must hold.
func each(leads []lead.Name, ask func(lead.Name) (string, bool)) (string, bool) {
	var words []string
	all := true
	for _, l := range leads {
		w, ok := ask(l)
		words = append(words, w)
		all = all && ok
	}
	return strings.Join(words, ", "), all
}

func noQ(x *exam) (string, bool) {
	return each([]lead.Name{lead.I, lead.V5, lead.V6}, func(l lead.Name) (string, bool) {
		q := x.fig[l].q()
		return fmt.Sprintf("%s q %.2f mV", l, q), q == 0
	})
}

// qR: a small negative swing, then a dominant R.
func qR(leads ...lead.Name) func(*exam) (string, bool) {
	return func(x *exam) (string, bool) {
		return each(leads, func(l lead.Name) (string, bool) {
			f := x.fig[l]
			r, ok := f.tallest()
			s, _ := f.s()
			return l.String() + " " + f.letters(), ok && f.q() > 0 && f.q() < r.peak && -s.peak < r.peak
		})
	}
}

// rS: a positive swing, then a larger negative one; no q.
func rS(leads ...lead.Name) func(*exam) (string, bool) {
	return func(x *exam) (string, bool) {
		return each(leads, func(l lead.Name) (string, bool) {
			f := x.fig[l]
			r, ok := f.tallest()
			s, deep := f.s()
			return l.String() + " " + f.letters(), ok && deep && f.q() == 0 && -s.peak > r.peak
		})
	}
}

// terminalR: a second R in V1 or V2; or, for a single R that dominates V1, a
// notch and a late peak, as part III asks for the pure R.
func terminalR(x *exam) (string, bool) {
	found, holds := "", false
	for _, l := range []lead.Name{lead.V1, lead.V2} {
		f := x.fig[l]
		ups := f.side(true)
		if found != "" {
			found += ", "
		}
		found += l.String() + " " + f.letters()
		holds = holds || len(ups) >= 2 && ups[len(ups)-1].to == lastSwing(f)
	}
	f := x.fig[lead.V1]
	if r, ok := f.tallest(); ok && len(f.side(true)) == 1 {
		s, _ := f.s()
		if r.peak > -s.peak && r.peak > f.q() && f.notched() && r.at > 50 {
			holds = true
		}
	}
	return found, holds
}

// lastSwing is the end of the last swing, or of the one before it if that last
// one is small beside it: an R' may be followed by a small s.
func lastSwing(f figure) int {
	n := len(f.d)
	if n >= 2 && f.d[n-1].peak < 0 && -f.d[n-1].peak < f.d[n-2].peak/2 {
		return f.d[n-2].to
	}
	return f.d[n-1].to
}

func longS(x *exam) (string, bool) {
	return each([]lead.Name{lead.I, lead.V6}, func(l lead.Name) (string, bool) {
		s, deep := x.fig[l].s()
		r, _ := x.fig[l].tallest()
		if !deep {
			return l.String() + " no S", false
		}
		return fmt.Sprintf("%s S %d ms, R %d ms", l, s.length(), r.length()), s.length() > r.length() || s.length() > 40
	})
}

func lastPeakV1(x *exam) (string, bool) {
	ups := x.fig[lead.V1].side(true)
	if len(ups) == 0 {
		return "V1 no R", false
	}
	t := ups[len(ups)-1].at
	return fmt.Sprintf("V1 %d ms", t), t > 50
}

func peakNormal(x *exam) (string, bool) {
	return each([]lead.Name{lead.V5, lead.V6}, func(l lead.Name) (string, bool) {
		t := x.rPeak(l)
		return fmt.Sprintf("%s %d ms", l, t), t > 0 && t <= 50
	})
}

func broadR(x *exam) (string, bool) {
	notched := 0
	found, holds := each([]lead.Name{lead.I, lead.AVL, lead.V5, lead.V6}, func(l lead.Name) (string, bool) {
		f := x.fig[l]
		r, ok := f.tallest()
		s, deep := f.s()
		word := l.String() + " " + f.letters()
		if f.notched() {
			notched++
			word += " notched or slurred"
		}
		lateral := l == lead.V5 || l == lead.V6
		return word, ok && (lateral || !deep || -s.peak < r.peak/4) && 2*r.length() >= x.qrs
	})
	return found, holds && notched >= 2
}

// discordant: the mean of the 60 ms after the QRS has the other sign than the
// QRS area.
func discordant(x *exam) (string, bool) {
	return each([]lead.Name{lead.I, lead.V6, lead.V1}, func(l lead.Name) (string, bool) {
		v := x.c.MV[l]
		from, to := x.c.Off+1, min(x.c.Off+61, len(v))
		if from >= to {
			return l.String() + " no ST", false
		}
		qrs, st := areaOf(x.fig[l].samples), areaOf(v[from:to])/float64(to-from)
		return fmt.Sprintf("%s ST %+.2f mV", l, st), float64(qrs*st) < 0
	})
}

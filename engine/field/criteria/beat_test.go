package criteria

import (
	"math"
	"testing"

	"escapement/engine/lead"
)

// shape makes a beat whose lead I is the given samples between 25 flat ones on
// either side, marked from the first to the last.
func shape(y ...float32) Beat {
	c := &lead.Complex{On: 25, Off: 25 + len(y) - 1}
	for l := range c.MV {
		c.MV[l] = make([]float32, len(y)+50)
	}
	copy(c.MV[lead.I][25:], y)
	return Beat{c}
}

func TestDeflections(t *testing.T) {
	for _, x := range []struct {
		name                  string
		b                     Beat
		q, r, s, before, late float64
	}{
		{"qRs", shape(0, -0.1, 0.5, 1, 0.5, -0.2, 0), 0.1, 1, 0.2, 1, 0},
		{"rSr'", shape(0, 0.2, -0.8, 0.4, 0), 0.8, 0.4, 0.8, 0.2, 0.4},
		{"QS", shape(0, -0.5, -1, 0), 0, 0, 1, 0, 0},
	} {
		l := lead.I
		for _, m := range []struct {
			name      string
			got, want float64
		}{{"q", x.b.q(l), x.q}, {"R", x.b.r(l), x.r}, {"S", x.b.s(l), x.s}, {"r before S", x.b.rBefore(l), x.before}, {"r after S", x.b.rAfter(l), x.late}} {
			if math.Abs(m.got-m.want) > 1e-6 {
				t.Errorf("%s: %s is %v, want %v", x.name, m.name, m.got, m.want)
			}
		}
	}
}

func TestNotchesAndSlurs(t *testing.T) {
	flat := make([]float32, 20)
	for i := range flat {
		flat[i] = 1
	}
	for _, c := range []struct {
		name string
		b    Beat
		want float64
	}{
		{"one top", shape(0, 0.5, 1, 0.5, 0), 0},
		{"two tops", shape(0, 0.5, 1, 0.7, 0.9, 0), 1},
		{"a wiggle under 0.02 mV", shape(0, 0.5, 1, 0.99, 1, 0.5, 0), 0},
		{"a plateau of 20 ms", shape(append(append([]float32{0, 0.5}, flat...), 0.5, 0)...), 1},
	} {
		if got := c.b.notches(lead.I); got != c.want {
			t.Errorf("%s: %v leads are notched or slurred, want %v", c.name, got, c.want)
		}
	}
}

func TestAxis(t *testing.T) {
	for _, c := range []struct {
		name      string
		one, foot float64
		want      float64
	}{
		{"along I", 1, 0, 0}, {"along aVF", 0, 1, 90}, {"along II", 1, math.Sqrt(3) / 2 * math.Sqrt(3), 60}, {"left and up", 1, -math.Sqrt(3) / 2, -45},
	} {
		if got := degrees(c.foot, c.one); math.Abs(got-c.want) > 1e-9 {
			t.Errorf("%s: %v degrees, want %v", c.name, got, c.want)
		}
	}
}

func TestMissIsCountedInUnitsOfTheScale(t *testing.T) {
	for _, c := range []struct {
		name string
		b    Bound
		want float64
	}{
		{"inside", within("x", 5, 0, 10, 2), 0}, {"on the limit", within("x", 10, 0, 10, 2), 0},
		{"above", within("x", 14, 0, 10, 2), 2}, {"below", atLeast("x", 1, 2, 4), 0.25}, {"no number", atMost("x", math.NaN(), 1, 1), 10},
	} {
		if got := c.b.Miss(); got != c.want {
			t.Errorf("%s: misses by %v, want %v", c.name, got, c.want)
		}
	}
}

package tick

import (
	"testing"

	"pgregory.net/rapid"
)

func TestMSRoundsHalvesToEven(t *testing.T) {
	for _, c := range []struct {
		ms   float64
		want Dur
	}{{0, 0}, {1, 1000}, {0.0005, 0}, {0.0015, 2}, {-0.0015, -2}, {335.95, 335950}} {
		if got := MS(c.ms); got != c.want {
			t.Errorf("MS(%v) = %d, want %d", c.ms, got, c.want)
		}
	}
}

func TestMSSurvivesTheRoundTrip(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		d := Dur(rapid.Int64Range(-1e12, 1e12).Draw(r, "us"))
		if got := MS(d.MS()); got != d {
			r.Fatalf("MS(%d.MS()) = %d", d, got)
		}
	})
}

func TestPerMinute(t *testing.T) {
	if got := PerMinute(75); got != 800*Millisecond {
		t.Errorf("75/min is %v ms, want 800", got)
	}
	if got := (800 * Millisecond).BPM(); got != 75 {
		t.Errorf("800 ms is %v/min, want 75", got)
	}
	if got := Dur(0).BPM(); got != 0 {
		t.Errorf("no interval gave %v/min", got)
	}
}

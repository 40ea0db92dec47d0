package field

import (
	"testing"

	"escapement/engine/lead"
	"escapement/engine/tick"
)

// qtAt beats once every cycle, then every other, and gives each beat's QT in ms.
func qtAt(t *testing.T, first tick.Time, beats int, then tick.Time, more int) []float64 {
	s := newStrip(first*tick.Time(beats) + then*tick.Time(more) + 2000000)
	at := tick.Time(500000)
	for range beats {
		s.fascicles(at)
		at += first
	}
	for k := range more {
		s.fascicles(at - first + then*tick.Time(k+1))
	}
	var qt []float64
	for _, w := range Record(s.log(t)).Waves {
		if w.Kind == lead.QRS {
			qt = append(qt, (w.End - w.Onset).Sub(0).MS())
		}
	}
	return qt
}

// Franz et al., J Clin Invest 1988;82:972: 23 ms for every 100 ms of cycle in
// the steady state, so 92 between 600 and 1000 (the band is about one standard
// error of a set of 17 hearts); the first beat after a step changes at once, the
// final value comes minutes later.
func TestDurationFollowsTheCycle(t *testing.T) {
	const settle = 400
	qt := qtAt(t, 600000, settle, 1000000, settle)
	if len(qt) != 2*settle {
		t.Fatalf("%d beats, want %d", len(qt), 2*settle)
	}
	before, first, last := qt[settle-1], qt[settle], qt[len(qt)-1]
	if got := last - before; got < 80 || got > 104 {
		t.Errorf("from 600 to 1000 ms the steady QT changes by %v ms, want 92 +/- 12", got)
	}
	if step := (first - before) / (last - before); step < 0.2 || step > 0.9 {
		t.Errorf("the first beat shows %.2f of the change, want some but not all", step)
	}
	if slow := (qt[settle+20] - before) / (last - before); slow > 0.95 {
		t.Errorf("after 20 s %.2f of the change has come, want it to take longer", slow)
	}
}

func TestSteadyCycleFromTheFirstBeatOn(t *testing.T) {
	qt := qtAt(t, 1000000, 12, 0, 0)
	for i, v := range qt {
		if v != qt[0] {
			t.Errorf("beat %d has a QT of %v ms, the first %v, at one steady cycle", i, v, qt[0])
		}
	}
}

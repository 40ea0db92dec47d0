package sim

import (
	"math"
	"testing"

	"escapement/engine/event"
)

// Flutter at 300/min conducted 2:1 gives 150/min, 4:1 gives 75 (exact arithmetic).
func TestFlutterRatios(t *testing.T) {
	for _, c := range []struct {
		node string
		rate float64
	}{{`"min_ms":100,"alpha_ms":60,"tau_ms":100,"theta_ms":220,"up":null`, 150}, {`"min_ms":100,"alpha_ms":0,"tau_ms":100,"theta_ms":600,"up":null`, 75}} {
		s := play(t, 9000, `"atria":{"rhythm":"flutter","erp_ms":150,"flutter":{"cycle_ms":200}},"av_node":{"fast":{`+c.node+`}}`)
		d := diffs(s.times("his"))
		near(t, "ventricular rate", 60000/d[len(d)-1], c.rate, 0.5)
		near(t, "ventricular rate, the beat before", 60000/d[len(d)-2], c.rate, 0.5)
	}
}

// A beat that enters the circuit moves the next turn to one cycle after itself: at the
// circuit PPI equals the cycle. One that comes before ends_below_ms ends it, and the
// sinus node takes over.
func TestPacingEntersAndEndsFlutter(t *testing.T) {
	const heart = `"atria":{"rhythm":"flutter","erp_ms":150,"flutter":{"cycle_ms":240,"ends_below_ms":180}}`
	for _, c := range []struct {
		coupling float64
		ends     bool
	}{{200, false}, {181, false}, {178, true}} {
		s := play(t, 9000, heart, stimulus(1+10*240+c.coupling, "right_atrium"))
		a := diffs(s.times("right_atrium"))
		near(t, "coupling", a[10], c.coupling, exact)
		if got := a[len(a)-1] > 600; got != c.ends {
			t.Errorf("coupling %v: ended %v, want %v", c.coupling, got, c.ends)
		}
		if !c.ends {
			near(t, "return cycle", a[11], 240, exact)
		}
	}
	// Before it begins and after its end nothing drives.
	s := play(t, 9000, `"atria":{"rhythm":"flutter","erp_ms":150,"rhythm_from_ms":3000,"rhythm_until_ms":5000}`)
	n := 0
	for i := range s.Events {
		if e := &s.Events[i]; e.Rule == event.Circuit {
			if n++; e.T < 3000*milli || e.T >= 5000*milli {
				t.Errorf("the circuit passes at %v", e.T)
			}
		}
	}
	if n != 9 { // 3000, 3240 ... 4920
		t.Errorf("%d turns in 2 s, want 9", n)
	}
}

// What is typed is measured back at every atrial site: mean and shortest interval, and
// the spread of an exponential above the shortest (its standard deviation is its mean).
func TestFibrillationIntervals(t *testing.T) {
	s := play(t, 600000, `"sinus":{"rate_bpm":60,"exit":{"up":null,"drop":"1:0"}},"atria":{"rhythm":"fibrillation"},"av_node":{"fast":{"va_ms":null}}`)
	for _, site := range []string{"right_atrium", "left_atrium", "atrial_septum"} {
		d := diffs(s.times(site))
		sum, least := 0.0, math.Inf(1)
		for _, x := range d {
			sum, least = sum+x, min(least, x)
		}
		mean, square := sum/float64(len(d)), 0.0
		for _, x := range d {
			square += (x - mean) * (x - mean)
		}
		near(t, site+" mean", mean, 182, 3) // standard error 72/sqrt(3300) = 1.3
		near(t, site+" standard deviation", math.Sqrt(square/float64(len(d))), 182-110, 6)
		if least < 110 || least > 111 {
			t.Errorf("%s: shortest interval %.3f, want just over 110", site, least)
		}
	}
}

// In fibrillation no RR is shorter than the node's functional refractory period
// (texts, from memory), here taken from the curve; the untreated rate is 100-160/min
// (from memory; a wide band) and the intervals are irregular.
func TestTheNodeSetsTheShortestIntervalInFibrillation(t *testing.T) {
	const node = `"min_ms":70,"alpha_ms":120,"tau_ms":120,"theta_ms":220,"up":null`
	s := play(t, 120000, `"atria":{"rhythm":"fibrillation"},"av_node":{"fast":{`+node+`}}`)
	d := diffs(s.times("his"))
	functional := 220 + 70 + 120*math.Exp(-220.0/120) // slope at theta above -1
	sum := 0.0
	for _, x := range d {
		sum += x
		if x < functional-exact {
			t.Errorf("an interval of %.1f ms, shorter than the functional refractory period of %.1f", x, functional)
		}
	}
	if rate := 60000 * float64(len(d)) / sum; rate < 90 || rate > 180 {
		t.Errorf("ventricular rate %.0f", rate)
	}
	same := 0
	for i := 1; i < len(d); i++ {
		if math.Abs(d[i]-d[i-1]) < 5 {
			same++
		}
	}
	if 5*same > len(d) {
		t.Errorf("%d of %d intervals like the one before", same, len(d))
	}
}

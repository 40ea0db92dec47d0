package sim

import (
	"fmt"
	"math"
	"testing"

	"escapement/engine/event"
)

// The checks of this file are arithmetic and worked examples from the literature;
// the source stands at each. "Exact" ones have a tolerance of 1 ms.

// Sinus rhythm reset by an atrial premature beat: PP 720, sinoatrial conduction in
// and out 160 together, coupling 360: the return cycle is 880 and the pair 1240,
// less than two cycles. Worked example: understandingecg.org, node 779.
func TestAtrialPrematureBeatResetsTheSinus(t *testing.T) {
	s := play(t, 6000, fmt.Sprintf(`"sinus":{"rate_bpm":%v,"exit":{"min_ms":80}}`, 60000.0/720), stimulus(300+80+2*720+360, "right_atrium"))
	pp := diffs(s.times("right_atrium"))
	near(t, "coupling", pp[2], 360, exact)
	near(t, "return cycle", pp[3], 880, exact)
	near(t, "the pair", pp[2]+pp[3], 1240, exact)
}

// Strauss's zones with PP 800 and 80 ms each way: a beat at 700 does not reset
// (return 900, sum 1600), one at 500 does (return 960), and the border is at
// 800-160 = 640. Half of 960-800 is the conduction time, 80. Strauss et al.,
// Circulation 1973;47:86 (zones and formula from memory).
func TestStraussZones(t *testing.T) {
	pair := func(coupling float64) (ret float64) {
		s := play(t, 6000, `"sinus":{"rate_bpm":75,"exit":{"min_ms":80}}`, stimulus(380+2*800+coupling, "right_atrium"))
		return diffs(s.times("right_atrium"))[3]
	}
	near(t, "return after 700", pair(700), 900, exact)
	near(t, "return after 500", pair(500), 960, exact)
	near(t, "sinoatrial conduction time", (pair(500)-800)/2, 80, exact)
	border := threshold(500, 700, 0.1, func(c float64) bool { return math.Abs(c+pair(c)-1600) < exact })
	near(t, "border of the zones", border, 640, exact)
	// Zone III: so early that the exit path is still refractory; the sinus impulse
	// comes through in its own time.
	near(t, "interpolated", 280+pair(280), 800, exact)
}

// Eight beats a little faster than the sinus: the pause is longer than the sinus
// cycle by the way in and out together; half of it is one way. Narula et al.,
// Circulation 1978;58:706.
func TestNarulaPacing(t *testing.T) {
	s := play(t, 12000, `"sinus":{"rate_bpm":75,"exit":{"min_ms":80}}`, train(2700, "right_atrium", 740, 8))
	last := 2700 + 7*740.0
	for _, a := range s.times("right_atrium") {
		if a > last+1 {
			near(t, "total conduction time", a-last-800, 160, exact)
			near(t, "one way", (a-last-800)/2, 80, exact)
			return
		}
	}
	t.Fatal("no sinus beat after pacing")
}

// A focus that suffers overdrive waits the longer the faster it was driven: the
// corrected sinus node recovery time is SNRT - sinus cycle (Narula, Samet, Javier,
// Circulation 1972;45:140), and rises with the pacing rate (36 dogs, abstract).
func TestOverdriveSuppression(t *testing.T) {
	corrected := func(cycle float64, overdrive string) float64 {
		s := play(t, 45000, `"sinus":{"rate_bpm":75,`+overdrive+`"exit":{"min_ms":60}}`, train(2500, "right_atrium", cycle, int(30000/cycle)))
		a := s.times("right_atrium")
		last := 2500 + cycle*float64(int(30000/cycle)-1)
		for _, x := range a {
			if x > last+1 {
				return x - last - 800
			}
		}
		return math.NaN()
	}
	near(t, "without suppression: way in and out", corrected(500, ""), 120, exact)
	slow, fast := corrected(600, `"overdrive":0.02,`), corrected(460, `"overdrive":0.02,`)
	if !(slow > 130 && fast > slow+20) {
		t.Errorf("corrected recovery time %.0f after 100/min and %.0f after 130/min, want more after the faster", slow, fast)
	}
}

// Ventricular premature beats: without reset the intervals around the beat are two
// sinus cycles exactly; with retrograde reset less; interpolated, the RR across is
// PP plus what the next PR is longer. Common practice; teaching pages agree.
func TestPausesAfterVentricularBeats(t *testing.T) {
	v := func(name string) (s strip, around, pp float64) {
		s = strip{preset(t, name), t}
		var stim float64
		for i := range s.Events {
			if s.Events[i].Kind == event.Stimulus {
				stim = s.Events[i].T.MS()
				break
			}
		}
		h := s.times("his")
		var before, after float64
		for _, x := range h {
			if x < stim {
				before = x
			} else if x > stim+200 {
				after = x
				break
			}
		}
		a := diffs(s.times("right_atrium"))
		return s, after - before, a[0]
	}
	_, around, pp := v("pvc-full-pause")
	near(t, "full pause", around, 2*pp, exact)
	_, around, pp = v("pvc-retrograde")
	if around > 2*pp-20 {
		t.Errorf("with retrograde reset the beats around are %.1f ms apart, want clearly less than %.1f", around, 2*pp)
	}
	s, around, pp := v("pvc-interpolated")
	ah := s.crossing("atrial_septum", "his")
	near(t, "interpolated: RR across", around, pp+ah[4]-ah[3], exact)
	if ah[4]-ah[3] < 20 {
		t.Errorf("AH after the interpolated beat is longer by %.1f ms only: nothing was concealed", ah[4]-ah[3])
	}
}

// Alternating Wenckebach: 2:1 with growing PR. Type I above and 2:1 below leave at
// most two P waves in a row blocked, 2:1 above and type I below three.
// Amat-y-Leon et al., Am J Cardiol 1975;36:757.
func TestAlternatingWenckebach(t *testing.T) {
	longest := func(s strip) int {
		run, most := 0, 0
		for _, d := range s.crossing("atrial_septum", "his") {
			if run++; d >= 0 {
				run = 0
			}
			most = max(most, run)
		}
		return most
	}
	if got := longest(strip{preset(t, "alternating-wenckebach"), t}); got != 3 {
		t.Errorf("2:1 above type I: at most %d blocked in a row, want 3", got)
	}
	const typeIAbove = `"sinus":{"rate_bpm":150},"av_node":{"fast":{"min_ms":60,"alpha_ms":300,"tau_ms":150,"theta_ms":310,"up":null},"lower":{"min_ms":20,"alpha_ms":0,"theta_ms":560}}`
	if got := longest(play(t, 30000, typeIAbove)); got != 2 {
		t.Errorf("type I above 2:1: at most %d blocked in a row, want 2", got)
	}
}

// Ashman's phenomenon in the whole heart: four beats of a didactic atlas (figure
// 112, with the rule of Gouaux and Ashman, Am Heart J 1947;34:366), as His-His
// intervals. Aberrant is a block in the right bundle with conduction in the left.
func TestAshman(t *testing.T) {
	for _, b := range []struct {
		preceding, current float64
		aberrant           bool
	}{{705, 485, false}, {1720, 485, true}, {1130, 500, false}, {1130, 465, true}} {
		at := 2000 + b.preceding
		s := play(t, 8000, quiet, stimulus(800, "his"), stimulus(2000, "his"), stimulus(at, "his"), stimulus(at+b.current, "his"))
		right, left := s.blocks("his_right", event.Down, event.PathRefractory), s.blocks("his_left", event.Down, event.PathRefractory)
		if got := right == 1; got != b.aberrant || left != 0 {
			t.Errorf("%v after %v: %d blocks in the right bundle and %d in the left, want aberrant %v", b.current, b.preceding, right, left, b.aberrant)
		}
	}
}

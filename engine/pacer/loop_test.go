package pacer

import (
	"testing"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// heart is a sinus node and an AV node that conducts upwards only: the smallest heart
// that can take part in an endless loop. One refractory state of the AV node serves
// both directions, or every tracked beat would begin a loop.
type heart struct {
	r               *rig
	sinus, va, node float64 // sinus cycle (0: none), VA time, AV-node refractory period, in ms
	aerp            float64 // atrial effective refractory period
	lose            int     // the atrial stimulus of this number does not capture

	atriumUntil, nodeUntil tick.Time
	turn                   int // of the sinus node
	stimuli, captured      int
}

func (h *heart) begin() *heart {
	h.r.paced = func(p Pulse) {
		if p.Lead == RA {
			h.stimuli++
			if h.stimuli != h.lose && h.r.now >= h.atriumUntil {
				h.captured++
				h.atrium(true, false)
			}
			return
		}
		h.ventricle()
	}
	h.wait()
	return h
}

// wait lets the sinus node begin its cycle anew.
func (h *heart) wait() {
	if h.sinus == 0 {
		return
	}
	h.turn++
	turn := h.turn
	h.r.soon(h.sinus, func() {
		if turn == h.turn && h.r.now >= h.atriumUntil {
			h.atrium(false, false)
		} else if turn == h.turn {
			h.wait()
		}
	})
}

// atrium depolarises; from below, the node has just been used.
func (h *heart) atrium(paced, below bool) {
	h.atriumUntil = h.r.now.Add(ms(h.aerp))
	h.wait()
	if !below && h.r.now >= h.nodeUntil {
		h.nodeUntil = h.r.now.Add(ms(h.node))
	}
	if !paced {
		h.r.signal(Atrial, h.r.now)
	}
}

// ventricle depolarises; the impulse may go up.
func (h *heart) ventricle() {
	if h.va == 0 || h.r.now < h.nodeUntil {
		return
	}
	h.nodeUntil = h.r.now.Add(ms(h.node))
	h.r.soon(h.va, func() {
		if h.r.now >= h.atriumUntil {
			h.atrium(false, true)
		}
	})
}

// pvc is a premature ventricular beat.
func (h *heart) pvc(at float64) *heart {
	h.r.heart(tick.Time(ms(at)), func() {
		h.r.signal(Ventricular, h.r.now)
		h.ventricle()
	})
	return h
}

// tail is the last n of a list.
func tail(x []float64, n int) []float64 { return x[max(0, len(x)-n):] }

func all(x []float64, want float64) bool {
	for _, v := range x {
		if v != want {
			return false
		}
	}
	return len(x) > 0
}

func TestEndlessLoop(t *testing.T) {
	for _, c := range []struct {
		name   string
		change func(*Settings, *heart)
		want   float64 // cycle length of the loop; 0: none
	}{
		{"13: VA 300, the upper rate; rule in a case series (abstract read), stepped", func(*Settings, *heart) {}, 500},
		{"14: VA 380 + SAV 200 is slower than the upper rate; same", func(s *Settings, h *heart) { s.SensedAV, h.va = ms(200), 380 }, 580},
		{"15: PVARP 350; stepped", func(s *Settings, _ *heart) { s.PVARP = ms(350) }, 0},
		{"16: post-PVC PVARP 400; stepped, Neth Heart J", func(s *Settings, _ *heart) { s.PostPVC = ms(400) }, 0},
		{"found after 8, PVARP long once", func(s *Settings, _ *heart) { s.Loop = Loop{Beats: 8, Margin: ms(16), PVARP: ms(400)} }, 0},
		{"found after 8, a stimulus left out", func(s *Settings, _ *heart) { s.Loop = Loop{Beats: 8, Margin: ms(16), Withhold: true} }, 0},
		{"a loop below the upper rate escapes a detector that goes by rate", func(s *Settings, h *heart) {
			s.SensedAV, h.va = ms(200), 380
			s.Loop = Loop{Beats: 8, Margin: ms(16), PVARP: ms(500)}
		}, 580},
	} {
		t.Run(c.name, func(t *testing.T) {
			s := Default()
			h := &heart{sinus: 1100, va: 300, node: 300, aerp: 230}
			s.LowerRate = 50
			c.change(&s, h)
			h.r = newRig(t, s)
			h.begin().pvc(2600)
			h.r.run(20000)
			vv := intervals(tail(h.r.times("VP"), 8))
			if looped := all(vv, c.want); looped != (c.want != 0) {
				t.Errorf("intervals at the end %v, want a loop of %v\n%s", vv, c.want, h.r.text(2000))
			}
			if c.want == 0 && !all(vv, 1100) {
				t.Errorf("no steady rhythm after it: %v", vv)
			}
		})
	}
}

// Check 13's second number: the AV delay is stretched to 200 and VP-AS is 300.
func TestLoopStretchesTheAVDelay(t *testing.T) {
	s := Default()
	s.LowerRate = 50
	h := &heart{r: newRig(t, s), sinus: 1100, va: 300, node: 300, aerp: 230}
	h.begin().pvc(2600)
	h.r.run(8000)
	n := len(h.r.record)
	last := h.r.record[n-3:]
	if last[0].what == "AS" {
		last = h.r.record[n-4 : n-1]
	}
	vp, as, next := last[0], last[1], last[2]
	if as.at.Sub(vp.at) != ms(300) || next.at.Sub(as.at) != ms(200) || next.timer != UpperTimer {
		t.Errorf("VP-AS %v, AS-VP %v by %v; want 300, 200 by upper_rate", as.at.Sub(vp.at), next.at.Sub(as.at), next.timer)
	}
}

// Checks 17 and 18: repetitive non-reentrant VA synchrony. Sources: Heart Rhythm
// 2016;13:1739, Atar 2022, read; numbers stepped.
func TestSynchronyWithoutReentry(t *testing.T) {
	for _, c := range []struct {
		name     string
		lower    float64
		delay    float64 // of the atrial stimulus after a refractory signal
		vv       float64
		captures bool
	}{
		{"17: lower rate 80, AP 200 ms after the P never captures", 80, 0, 750, false},
		{"18: lower rate 60, AP 450 ms after it captures", 60, 0, 1000, true},
		{"delaying the atrial stimulus ends it", 80, 300, 0, true},
	} {
		t.Run(c.name, func(t *testing.T) {
			s := Default()
			s.LowerRate, s.PacedAV, s.PVARP, s.AtrialDelay = c.lower, ms(300), ms(300), ms(c.delay)
			h := &heart{r: newRig(t, s), va: 250, node: 320, aerp: 230, lose: 3}
			h.begin()
			h.r.run(12000)
			if vv := tail(intervals(h.r.times("VP")), 6); c.vv != 0 && !all(vv, c.vv) {
				t.Errorf("V-V %v, want %v", vv, c.vv)
			}
			want := 2
			if c.captures {
				want = h.stimuli - 1
			}
			if h.captured != want {
				t.Errorf("%d of %d atrial stimuli captured, want %d\n%s", h.captured, h.stimuli, want, h.r.text(1500))
			}
		})
	}
}

// Checks 19 and 20: flutter of 240 ms. Sources: Strohmer 2006 and Goethals 2003,
// read; numbers stepped. Flutter waves do not conduct here.
func TestFlutterAndTheModeSwitch(t *testing.T) {
	for _, c := range []struct {
		name     string
		av, pvab float64
		switches bool
	}{
		{"19: AV 126 + PVAB 143 > 240, locked 2:1", 126, 143, false},
		{"20: AV 107 + PVAB 105 < 240, seen and left", 107, 105, true},
	} {
		t.Run(c.name, func(t *testing.T) {
			s := Default()
			s.SensedAV, s.PVAB, s.PVARP, s.UpperRate, s.AtrialBlanking = ms(c.av), ms(c.pvab), ms(300), 130, ms(50)
			s.Switch = Switch{Rate: 170, Short: 4, Of: 7, Return: 5}
			r := newRig(t, s).every(Atrial, 500, 240, 12000)
			r.run(12000)
			if got := len(r.modes) > 0; got != c.switches {
				t.Fatalf("modes %v\n%s", r.modes, r.text(0))
			}
			if vv := intervals(tail(r.times("VP"), 6)); !c.switches && !all(vv, 480) {
				t.Errorf("V-V %v, want 480 (125/min)", vv)
			}
			if as := r.times("AS", event.Refractory); c.switches {
				vp := r.times("VP")
				if len(as) == 0 || as[0]-vp[0] != 133 {
					t.Errorf("first refractory wave at %v after VP at %v, want 133 ms", as, vp)
				}
				if vv := intervals(tail(r.times("VP"), 6)); !all(vv, 1000) {
					t.Errorf("V-V after the switch %v, want 1000", vv)
				}
			}
		})
	}
}

package membrane

import (
	"math"
	"testing"

	"escapement/engine/event"
	"escapement/engine/field"
	"escapement/engine/sim/simtest"
	"escapement/engine/tick"

	"pgregory.net/rapid"
)

// trace runs a plan and gives a site's membrane.
func trace(t simtest.T, file, site string) (*event.Log, *Trace) {
	t.Helper()
	p := simtest.Play(t, file)
	prog, log := p.Program, p.Log
	v, a := field.Shapes()
	hearts := []InForce{{Heart: prog.Heart}}
	for _, c := range prog.Changes {
		if c.Heart != nil {
			hearts = append(hearts, InForce{c.T, c.Heart})
		}
	}
	return log, Site(log, hearts, log.Site(site), v, a)
}

func (t *Trace) mv(at tick.Time) float64 { return float64(t.MV[at/1000]) }

const usual = `{"format":"escapement-plan/1"}`

// Phase 0 within 10 ms of every activation, and nothing before it; about -60 mV again
// when working muscle is excitable again.
func TestPhasesOfMuscleFollowItsActivationsAndRefractoriness(t *testing.T) {
	log, m := trace(t, usual, "rv_apex")
	n := 0
	for i := range log.Events {
		e := &log.Events[i]
		if e.Kind != event.Activate || e.Site != log.Site("rv_apex") || e.Until >= log.Span {
			continue
		}
		n++
		if before, after := m.mv(e.T-1000), m.mv(e.T+10000); before > m.Rest+1 || after < m.Plateau-3 {
			t.Errorf("beat at %v: %.1f mV before and %.1f after, want rest and plateau", e.T, before, after)
		}
		if got := m.mv(e.Until); got < -66 || got > -54 {
			t.Errorf("beat at %v: %.1f mV when it is excitable again, want about -60", e.T, got)
		}
	}
	if n < 10 {
		t.Errorf("%d beats", n)
	}
}

// Phase 4 of the sinus node climbs to the threshold at every discharge, whatever the rate does.
func TestPhase4ReachesThresholdAtEveryDischarge(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		rate := rapid.IntRange(40, 130).Draw(rt, "rate")
		to := rapid.IntRange(40, 130).Draw(rt, "to")
		file := `{"format":"escapement-plan/1","heart":{"sinus":{"rate_bpm":` + itoa(rate) + `}},"interventions":[{"at_ms":3000,"do":"set","field":"heart.sinus.rate_bpm","to":` + itoa(to) + `,"over_ms":3000}]}`
		log, m := trace(rt, file, "sinus")
		if !m.Focus {
			rt.Fatal("the sinus node is no focus")
		}
		last := tick.Time(-1)
		for i := range log.Events {
			e := &log.Events[i]
			if e.Kind != event.Discharge || e.T < 2000 || e.T/1000 >= tick.Time(len(m.MV)) {
				continue
			}
			if got := m.mv(e.T - 1000); math.Abs(got-m.Threshold) > 0.6 {
				rt.Fatalf("%.2f mV just before the discharge at %v, want the threshold %v", got, e.T, m.Threshold)
			}
			if last >= 0 {
				if half := m.mv((last + e.T) / 2); half >= m.Threshold {
					rt.Fatalf("%.2f mV half way to the discharge at %v, not below the threshold", half, e.T)
				}
			}
			last = e.T
		}
	})
}

func itoa(n int) string {
	return string([]byte{byte('0' + n/100), byte('0' + n/10%10), byte('0' + n%10)})[btoi(n < 100):]
}

func btoi(b bool) int {
	if b {
		return 1
	}
	return 0
}

// A cycle cut short begins anew from below.
func TestResetFocusBeginsItsClimbAgain(t *testing.T) {
	_, m := trace(t, `{"format":"escapement-plan/1","heart":{"sinus":{"rate_bpm":60}},"interventions":[{"at_ms":3200,"do":"stimulate","site":"right_atrium"}]}`, "sinus")
	for k := 3200; k < 3600; k++ {
		if m.MV[k] > -10 {
			if got := float64(m.MV[k+300]); got > m.Rest+10 {
				t.Errorf("%.1f mV 300 ms after the reset, want near %v", got, m.Rest)
			}
			return
		}
	}
	t.Error("the premature beat did not reach the sinus node")
}

// The action potential is shorter at a shorter cycle (published slope of the
// refractory period it is tied to: Franz et al., JCI 1988;82:972).
func TestActionPotentialShortensWithTheCycle(t *testing.T) {
	lasts := func(rate string) (ms int) {
		log, m := trace(t, `{"format":"escapement-plan/1","heart":{"sinus":{"rate_bpm":`+rate+`}}}`, "rv_apex")
		for i := len(log.Events) - 1; i >= 0; i-- {
			e := &log.Events[i]
			if e.Kind == event.Activate && e.Site == log.Site("rv_apex") && e.T < log.Span-600000 {
				for m.MV[int(e.T/1000)+20+ms] > -60 {
					ms++
				}
				return ms
			}
		}
		return 0
	}
	slow, fast := lasts("60"), lasts("120")
	if d := slow - fast; d < 80 || d > 140 {
		t.Errorf("%d ms at 60/min and %d at 120/min: %d apart, want about 115", slow, fast, d)
	}
}

// A premature beat that finds the ventricle refractory is marked where it came.
func TestImpulsesThatCameTooEarlyAreMarked(t *testing.T) {
	log, m := trace(t, `{"format":"escapement-plan/1","interventions":[{"at_ms":2300,"do":"stimulate","site":"rv_apex"}]}`, "rv_apex")
	if len(m.Blocked) != 1 || log.At(m.Blocked[0]).T != 2300000 {
		t.Fatalf("marked: %v, want the stimulus at 2300 ms", m.Blocked)
	}
	if got := m.mv(2300000); got < -60 {
		t.Errorf("the stimulus found %.1f mV, want a plateau or phase 3", got)
	}
	if _, m = trace(t, usual, "rv_apex"); len(m.Blocked) != 0 {
		t.Errorf("%d marks in sinus rhythm", len(m.Blocked))
	}
}

func TestTraceIsContinuousButForPhase0(t *testing.T) {
	for _, site := range []string{"sinus", "right_atrium", "av_junction", "his", "right_bundle", "rv_apex"} {
		log, m := trace(t, `{"format":"escapement-plan/1","interventions":[{"at_ms":2900,"do":"stimulate","site":"right_atrium"},{"at_ms":5600,"do":"stimulate","site":"rv_apex"}]}`, site)
		active := map[tick.Time]bool{}
		for i := range log.Events {
			if e := &log.Events[i]; e.Kind == event.Activate && e.Site == log.Site(site) {
				for k := tick.Time(-1); k < 20; k++ {
					active[e.T/1000+k] = true
				}
			}
		}
		for k := 1; k < len(m.MV); k++ {
			d := float64(m.MV[k] - m.MV[k-1])
			if !active[tick.Time(k)] && math.Abs(d) > 4 {
				t.Fatalf("%s: a step of %.1f mV at %d ms without an activation", site, d, k)
			}
			if m.MV[k] < float32(m.Rest-0.1) || float64(m.MV[k]) > m.Plateau+m.Notch {
				t.Fatalf("%s: %.1f mV at %d ms", site, m.MV[k], k)
			}
		}
	}
}

package sim

import (
	"fmt"
	"math/rand/v2"
	"testing"

	"escapement/engine/event"
	"escapement/engine/heart"
)

// What a beat may do in muscle: the regions stand for more muscle than a wave needs to
// turn round in, and the network must not make circuits of its own.

// A premature beat at the edge of ventricular refractoriness must not start
// re-entry in a healthy ventricle: an ending of a fascicle once carried the impulse
// back through muscle that the same wave had just crossed.
func TestNoReentryThroughMuscleJustCrossed(t *testing.T) {
	for at := 3936.0; at < 3990; at += 2 {
		s := withDevice(t, 6000, `"sinus":{"rate_bpm":58},"av_node":{"fast":{"ah_ms":null,"va_ms":null}}`, `"mode":"DDD","lower_rate_bpm":50`, stimulus(at, "rv_apex"))
		for i, d := range diffs(s.times("rv_apex")) {
			if d < 300 {
				t.Fatalf("premature beat at %v ms: the apex is depolarised again after %.0f ms (beat %d)", at, d, i+1)
			}
		}
	}
}

// repeats counts the depolarisations of a region that follow another within 350 ms and
// come after the last stimulus.
func repeats(s strip, site string) (n int) {
	last := 0.0
	for i := range s.Events {
		if s.Events[i].Kind == event.Stimulus {
			last = s.Events[i].T.MS()
		}
	}
	at := s.times(site)
	for i := 1; i < len(at); i++ {
		if at[i] > last+1 && at[i]-at[i-1] < 350 {
			n++
		}
	}
	return n
}

// One or two extrastimuli after a drive must not start re-entry in a healthy ventricle,
// from any region, at any coupling: a wave that found its neighbours refractory once came
// to them by a longer way through muscle that it had crossed itself, and never ended.
// One extra beat over the bundles is possible (in half of normal hearts: common teaching,
// from memory). Two extrastimuli with an ERP under 200 ms may start more over the bundles.
func TestNoReentryAfterAnExtrastimulus(t *testing.T) {
	for _, erp := range []float64{50, 80, 120, 160, 180, 200, 230, 260, 290, 320} {
		h := fmt.Sprintf(`"ventricles":{"erp_ms":%v},"av_node":{"fast":{"ah_ms":null,"va_ms":null}}`, erp)
		for _, site := range heart.VentricularSites() {
			for _, drive := range []float64{400, 600} {
				for coupling := max(erp-60, 40); coupling < erp+60; coupling += 10 {
					if n := repeats(play(t, 7500, h, train(500, site, drive, 5, coupling)), site); n > 1 {
						t.Fatalf("ERP %v, drive %v, one beat at %v ms from %s: %d beats follow", erp, drive, coupling, site, n)
					}
					if erp < 200 {
						continue
					}
					if n := repeats(play(t, 7500, h, train(500, site, drive, 5, coupling, coupling)), site); n > 1 {
						t.Fatalf("ERP %v, drive %v, two beats at %v ms from %s: %d beats follow", erp, drive, coupling, site, n)
					}
				}
			}
		}
	}
}

// Re-entry over the bundle branches needs no rule: slow conduction to the muscle lets
// one beat follow, and a slow left bundle keeps it going.
func TestBundleBranchReentryLives(t *testing.T) {
	for _, c := range []struct {
		name, bundles string
		least, most   int
	}{
		{"HV 45", `"hv_ms":45`, 0, 0},
		{"HV 80", `"hv_ms":80`, 1, 1},
		{"HV 80 and a slow left bundle", `"hv_ms":80,"left_bundle":{"delay_ms":100}`, 10, 100},
	} {
		h := `"ventricles":{"erp_ms":220},"av_node":{"fast":{"ah_ms":null,"va_ms":null}},"his_purkinje":{` + c.bundles + `}`
		s := play(t, 7500, h, train(500, "rv_apex", 600, 5, 240))
		last := 500.0 + 4*600 + 240
		n, at := 0, s.times("rv_apex")
		for i := 1; i < len(at); i++ {
			if at[i] > last+1 && at[i]-at[i-1] < 400 {
				n++
			}
		}
		if n < c.least || n > c.most {
			t.Errorf("%s: %d beats follow, want %d to %d", c.name, n, c.least, c.most)
		}
	}
}

// No wave comes by muscle to where it has been since its beat began.
func TestNoBeatMeetsItselfInMuscle(t *testing.T) {
	hearts := 300
	if testing.Short() {
		hearts /= 10
	}
	for seed := uint64(1); hearts > 0; seed++ {
		prog := dice{rand.New(rand.NewPCG(seed, 5))}.clinical()
		if prog == nil {
			continue
		}
		hearts--
		l, err := Play(prog)
		if err != nil {
			t.Fatal(err)
		}
		for i := range l.Events {
			last := &l.Events[i]
			if last.Path < 0 || !prog.Heart.Paths[last.Path].Silent {
				continue
			}
			for e := last; e.Kind == event.Activate && e.Path >= 0 && !prog.Heart.Paths[e.Path].Dir(e.Dir).Anew; {
				if e = l.At(e.Cause); e.Site == last.Site {
					t.Fatalf("seed %d: the wave of event %d has been at %s before, in event %d", seed, last.ID, l.Sites[e.Site].Name, e.ID)
				}
			}
		}
	}
}

package sim

import (
	"errors"
	"fmt"
	"math/rand/v2"
	"testing"

	"escapement/engine/event"
	"escapement/engine/plan"
)

// Clinical numbers typed in are measured back by the protocol that a laboratory
// would run, within a millisecond. Definitions of AH, ERP, FRP and Wenckebach cycle
// length: common practice (extrastimulus technique, incremental pacing).
func TestClinicalNumbersAreMeasuredBack(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 11))
	want := 40
	if testing.Short() {
		want = 6
	}
	for done, tried := 0, 0; done < want; tried++ {
		if tried > 50*want {
			t.Fatalf("only %d of %d random sets of numbers fit together", done, tried)
		}
		n := numbers{ah: 60 + 60*r.Float64(), hv: 35 + 60*r.Float64(), erp: 220 + 160*r.Float64()}
		n.wcl = n.erp + 40 + 120*r.Float64()
		n.va = 180 + 120*r.Float64()
		if n.wcl > 560 {
			continue
		}
		if r.IntN(2) == 0 {
			n.vaWCL = n.wcl + 20 + 60*r.Float64()
		}
		if _, err := n.try(); err != nil {
			var ds plan.Diagnoses
			if !errors.As(err, &ds) {
				t.Fatal(err)
			}
			continue
		}
		done++
		n.check(t)
	}
}

type numbers struct{ ah, hv, erp, wcl, va, vaWCL float64 }

func (n numbers) heart() string {
	up := ""
	if n.vaWCL > 0 {
		up = fmt.Sprintf(`,"va_wenckebach_cl_ms":%v`, n.vaWCL)
	}
	// The atria are quick to recover, so that only the node limits.
	return fmt.Sprintf(`"atria":{"erp_ms":100,"erp_per_cycle":0},"av_node":{"fast":{"ah_ms":%v,"erp_ms":%v,"wenckebach_cl_ms":%v,"va_ms":%v%s}},"his_purkinje":{"hv_ms":%v}`, n.ah, n.erp, n.wcl, n.va, up, n.hv)
}

func (n numbers) try() (*plan.Program, error) {
	p, err := plan.Decode([]byte(`{"format":"escapement-plan/1","heart":{` + n.heart() + `}}`))
	if err != nil {
		return nil, err
	}
	return p.Compile()
}

func (n numbers) check(t *testing.T) {
	t.Helper()
	paced := quiet + "," + n.heart()
	s := play(t, 12000, `"sinus":{"rate_bpm":75},`+n.heart())
	near(t, "AH", last(s.crossing("atrial_septum", "his")), n.ah, exact)
	h := s.times("his")
	near(t, "HV", firstVentricular(s, h[len(h)-1])-h[len(h)-1], n.hv, exact)

	conducts := func(coupling float64) bool {
		c := play(t, 9000, paced, train(500, "right_atrium", 600, 10, coupling)).crossing("right_atrium", "his")
		return c[10] >= 0
	}
	near(t, "ERP of the node", threshold(110, 590, 0.2, conducts), n.erp, exact)

	// Incremental pacing: each cycle is reached from a slower one, as in a laboratory;
	// a sudden fast rate would block in the bundles first, by the cycle before.
	oneToOne := func(from, to string) func(float64) bool {
		return func(cycle float64) bool {
			slow := cycle + 60
			s := play(t, 1500+slow*12+cycle*40, paced, train(500, from, slow, 12), train(500+slow*11+cycle, from, cycle, 40))
			c := s.crossing(from, to)
			for _, d := range c[settled:51] {
				if d < 0 {
					return false
				}
			}
			return true
		}
	}
	near(t, "Wenckebach cycle length", threshold(n.erp-60, 700, 0.2, oneToOne("right_atrium", "his")), n.wcl, exact)

	v := play(t, 9000, paced, train(500, "rv_apex", 600, 12))
	near(t, "VA", v.crossing("rv_apex", "right_atrium")[10], n.va, exact)
	if n.vaWCL > 0 {
		near(t, "VA Wenckebach cycle length", threshold(n.wcl-60, 700, 0.2, oneToOne("rv_apex", "right_atrium")), n.vaWCL, exact)
	}
	if t.Failed() {
		t.Fatalf("with %+v", n)
	}
}

// settled is how many beats at the start are not judged: the bundles recover by the
// cycle before, which was a long one.
const settled = 8

func last(c []float64) float64 { return c[len(c)-2] }

// firstVentricular is the first depolarisation of ventricular muscle after t ms.
func firstVentricular(s strip, t float64) float64 {
	for i := range s.Events {
		if e := &s.Events[i]; e.Kind == event.Activate && s.Sites[e.Site].Tissue == event.Ventricle && e.T.MS() > t {
			return e.T.MS()
		}
	}
	return 0
}

// The functional refractory period fixes the time constant, and is measured back
// as the shortest interval between two His deflections.
func TestFunctionalRefractoryPeriodIsMeasuredBack(t *testing.T) {
	const heart = quiet + `,"atria":{"erp_ms":100,"erp_per_cycle":0},"av_node":{"fast":{"ah_ms":80,"erp_ms":280,"wenckebach_cl_ms":360,"frp_ms":350,"va_ms":null}},"his_purkinje":{"right_bundle":{"erp_ms":200},"left_bundle":{"erp_ms":200}}`
	shortest := 1e9
	for c := 281.0; c < 500; c++ {
		s := play(t, 9000, heart, train(500, "right_atrium", 600, 10, c))
		h := s.times("his")
		shortest = min(shortest, h[10]-h[9])
	}
	near(t, "FRP of the node", shortest, 350, exact)
}

// One normal beat. AH, HV and H from Alboni et al., Eur Heart J 1985;6:602, and
// Josephson's bands (from memory); PR 120-200 common practice.
func TestNormalBeat(t *testing.T) {
	s := strip{preset(t, "normal"), t}
	within := func(name string, got, lo, hi float64) {
		t.Helper()
		if got < lo || got > hi {
			t.Errorf("%s = %.1f ms, want %g to %g", name, got, lo, hi)
		}
	}
	a, h := s.times("right_atrium"), s.times("his")
	within("PA", s.crossing("right_atrium", "atrial_septum")[3], 25, 60)
	within("AH", s.crossing("atrial_septum", "his")[3], 55, 125)
	within("H", s.crossing("his", "left_bundle")[3], 10, 25)
	within("HV", firstVentricular(s, h[3])-h[3], 35, 55)
	within("PR", firstVentricular(s, h[3])-a[3], 120, 200)
}

package sim

import (
	"fmt"
	"math"
	"testing"
)

// Upper-rate behaviour on the whole heart; sources and tags as in
// device_published_test.go.

func TestPublishedUpperRate(t *testing.T) {
	for _, c := range []struct {
		name   string
		pp     float64
		device string
		want   string
	}{
		{"4: 1:1 at 550, rule Furman 1985 read, numbers derived", 550, ddd,
			"550 AS tracked, 700 VP, 1100 AS tracked, 1250 VP, 1650 AS tracked, 1800 VP"},
		{"5: 4:3 at 460, derived, stepped", 460, ddd,
			"460 AS tracked, 610 VP, 920 AS tracked, 1110 VP, 1380 AS tracked, 1610 VP, 1840 AS refractory, 2300 AS tracked, 2450 VP"},
		{"6: 5:4 at 470, derived, stepped", 470, ddd,
			"470 AS tracked, 620 VP, 940 AS tracked, 1120 VP, 1410 AS tracked, 1620 VP, 1880 AS tracked, 2120 VP, 2350 AS refractory, 2820 AS tracked, 2970 VP"},
		{"7: 3:2 at 420, derived, stepped", 420, ddd,
			"420 AS tracked, 570 VP, 840 AS tracked, 1070 VP, 1260 AS refractory, 1680 AS tracked, 1830 VP"},
		{"8: 2:1 at 380, rule read (Liryc)", 380, ddd,
			"380 AS tracked, 530 VP, 760 AS refractory, 1140 AS tracked, 1290 VP, 1520 AS refractory, 1900 AS tracked, 2050 VP"},
		{"10: 2:1 below the upper rate of 140, rule Furman 1985 read, numbers derived", 480, ddd + `,"sensed_av_ms":200,"pvarp_ms":300,"max_tracking_rate_bpm":140`,
			"480 AS tracked, 680 VP, 960 AS refractory, 1440 AS tracked, 1640 VP, 1920 AS refractory, 2400 AS tracked, 2600 VP"},
	} {
		t.Run(c.name, func(t *testing.T) {
			withDevice(t, 12000, sinusAt(c.pp, c.pp)+","+noAV, c.device).shows(300, c.want)
		})
	}
}

// The mean rates and pauses of 5, 7 and 8: 3 beats in 4 x 460 = 97.8/min with a pause
// of 2 x 460 - 2 x 40 = 840; 2 in 3 x 420 = 95.2/min; 1 in 760 = 78.9/min. Derived.
func TestPublishedUpperRateMeans(t *testing.T) {
	for _, c := range []struct{ pp, vs, mean, pause float64 }{{460, 3, 97.8, 840}, {420, 2, 95.2, 760}, {380, 1, 78.9, 760}} {
		v := withDevice(t, 30000, sinusAt(c.pp, c.pp)+","+noAV, ddd).at("VP")
		groups := math.Floor(float64(len(v)-1) / c.vs)
		near(t, fmt.Sprintf("mean rate at PP %v", c.pp), 60000*groups*c.vs/(v[int(groups*c.vs)]-v[0]), c.mean, 0.1)
		longest := 0.0
		for _, d := range diffs(v) {
			longest = max(longest, d)
		}
		near(t, fmt.Sprintf("pause at PP %v", c.pp), longest, c.pause, exact)
	}
}

// 9: W = MTRI - TARP = 500 - 400 = 100, so no AV delay is longer than SAV + W = MTRI -
// PVARP = 250, at any PP between TARP and MTRI. Furman 1985, read. Every delay is SAV
// or longer by a whole number of MTRI - PP, where a group begins unstretched.
func TestPublishedWenckebachCeiling(t *testing.T) {
	top := 0.0
	for pp := 401.0; pp <= 499; pp++ {
		s := withDevice(t, 20000+100*pp/(500-pp), sinusAt(pp, pp)+","+noAV, ddd)
		refractory := 0
		for _, av := range s.delays("AS tracked", "VP") {
			if av < 150-0.001 || av > 250+0.001 {
				t.Errorf("PP %v: AV delay of %v ms, outside 150 to 250", pp, av)
			}
			top = max(top, av)
		}
		for _, d := range diffs(s.at("VP")) {
			if d < 500-0.001 {
				t.Errorf("PP %v: stimuli %v ms apart", pp, d)
			}
		}
		if refractory = len(s.at("AS refractory")); refractory == 0 {
			t.Errorf("PP %v: no P in PVARP", pp)
		}
	}
	if top < 245 {
		t.Errorf("the longest AV delay of the sweep is %v ms: the ceiling was never neared", top)
	}
}

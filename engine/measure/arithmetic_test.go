package measure

import (
	"math"
	"slices"
	"testing"

	"escapement/engine/tick"
)

func durs(ms ...float64) []tick.Dur {
	var d []tick.Dur
	for _, v := range ms {
		d = append(d, tick.MS(v))
	}
	return d
}

// The formulas' primary papers are named at Correct; the values follow from them
// by arithmetic (tolerance 0.1 ms).
func TestCorrect(t *testing.T) {
	for _, c := range []struct {
		name   string
		qt, hr float64
		want   Corrected
	}{
		{"at 60 all agree", 400, 60, Corrected{400, 400, 400, 400}},
		{"at 75", 400, 75, Corrected{447.2, 430.9, 430.8, 426.25}},
		{"at 100", 360, 100, Corrected{464.8, 426.8, 421.6, 430}},
		{"at 120", 320, 120, Corrected{452.5, 403.2, 397, 425}},
		{"at 50", 440, 50, Corrected{401.7, 414.1, 409.2, 422.5}},
	} {
		got := Correct(tick.MS(c.qt), tick.PerMinute(c.hr))
		for _, v := range [][2]float64{{got.Bazett, c.want.Bazett}, {got.Fridericia, c.want.Fridericia}, {got.Framingham, c.want.Framingham}, {got.Hodges, c.want.Hodges}} {
			if math.Abs(v[0]-v[1]) > 0.1 {
				t.Errorf("%s: got %.2f, want %.2f", c.name, v[0], v[1])
			}
		}
	}
}

// The 5:4 example is a published worked one (a teaching blog of 2013); the rest is its
// arithmetic by the rule of Friedman et al. 1975 and Barold 2012. Exact.
func TestWenckebachGroup(t *testing.T) {
	for _, c := range []struct {
		name string
		g    Group
		want []tick.Dur
		sum  float64
	}{
		{"worked 5:4", Group{tick.MS(1000), durs(200, 300, 380, 440)}, durs(1100, 1080, 1060, 1760), 5000},
		{"4:3", Group{tick.MS(800), durs(180, 280, 330)}, durs(900, 850, 1450), 3200},
		{"2:1", Group{tick.MS(700), durs(200)}, durs(1400), 1400},
	} {
		if got := c.g.RR(); !slices.Equal(got, c.want) {
			t.Errorf("%s: got %v, want %v", c.name, got, c.want)
		}
		if got := c.g.Sum(); got != tick.MS(c.sum) {
			t.Errorf("%s: sum got %v, want %v", c.name, got, c.sum)
		}
	}
	if g := (Group{tick.MS(1000), durs(200, 300, 380, 440)}); !g.Typical() {
		t.Errorf("worked example: got atypical, want typical")
	}
	if g := (Group{tick.MS(1000), durs(200, 230, 330)}); g.Typical() {
		t.Errorf("growing increments: got typical, want atypical")
	}
}

// 2018 ACC/AHA/HRS for the types; 900, 850, 1450 -> 800 by arithmetic. Exact.
func TestInferExit(t *testing.T) {
	for _, c := range []struct {
		name string
		pp   []tick.Dur
		want Exit
		ok   bool
	}{
		{"type I", durs(900, 850, 1450), Exit{1, tick.MS(800), 4}, true},
		{"type II, one dropped", durs(800, 800, 800, 1600), Exit{2, tick.MS(800), 5}, true},
		{"type II, two dropped", durs(800, 2400), Exit{2, tick.MS(800), 4}, true},
		{"pause of no multiple", durs(800, 800, 2050), Exit{}, false},
		{"no pause", durs(800, 800), Exit{}, false},
		{"one interval", durs(800), Exit{}, false},
		{"none", nil, Exit{}, false},
	} {
		got, ok := InferExit(c.pp, tick.MS(10))
		if got != c.want || ok != c.ok {
			t.Errorf("%s: got %v %v, want %v %v", c.name, got, ok, c.want, c.ok)
		}
	}
}

// Return cycles after an atrial premature beat. 720/160/360 is a published worked
// example (a teaching site, read); 800/160 follows from the zones of Strauss et
// al. 1973. Exact; the boundary within 1 ms.
func TestAtrialReset(t *testing.T) {
	for _, c := range []struct {
		name                     string
		basic, through, coupling float64
		ret                      float64
		zone                     Zone
	}{
		{"worked example", 720, 160, 360, 880, Reset},
		{"zone I", 800, 160, 700, 900, Nonreset},
		{"zone II", 800, 160, 500, 960, Reset},
		{"just inside the boundary", 800, 160, 640, 960, Reset},
		{"just outside the boundary", 800, 160, 641, 959, Nonreset},
	} {
		ret, zone := AtrialReset(tick.MS(c.basic), tick.MS(c.through), tick.MS(c.coupling))
		if ret != tick.MS(c.ret) || zone != c.zone {
			t.Errorf("%s: got %v %v, want %v %v", c.name, ret, zone, c.ret, c.zone)
		}
		if c.coupling == c.basic-c.through {
			continue // on the boundary the two zones give the same return
		}
		if got := StraussZone(tick.MS(c.basic), tick.MS(c.coupling), ret, 0); got != c.zone {
			t.Errorf("%s: zone back got %v, want %v", c.name, got, c.zone)
		}
	}
	if got := StraussZone(tick.MS(800), tick.MS(300), tick.MS(500), 0); got != Interpolated {
		t.Errorf("interpolated: got %v", got)
	}
	if got := StraussZone(tick.MS(800), tick.MS(300), tick.MS(400), 0); got != Reentrant {
		t.Errorf("re-entry: got %v", got)
	}
	// 1240 is shorter than twice 720: the pause is not compensatory.
	if got := Compensatory(tick.MS(360), tick.MS(880), tick.MS(720), 0); got != LessThanFull {
		t.Errorf("worked pause: got %v, want %v", got, LessThanFull)
	}
}

// SACT by both methods; Narula et al. 1978 give totals, the half is one way. Exact.
func TestSACT(t *testing.T) {
	if got, want := StraussSACT(tick.MS(800), tick.MS(960)), (SACT{tick.MS(160), tick.MS(80)}); got != want {
		t.Errorf("Strauss: got %v, want %v", got, want)
	}
	// No depression of automaticity: the interval after pacing is the cycle + in + out.
	if got, want := NarulaSACT(tick.MS(800), tick.MS(800+75+85)), (SACT{tick.MS(160), tick.MS(80)}); got != want {
		t.Errorf("Narula: got %v, want %v", got, want)
	}
}

// Limits: 525 ms Narula et al. 1972; 550 ms Josephson and 160 per cent, from memory.
func TestRecoveryTime(t *testing.T) {
	for _, c := range []struct {
		name                     string
		snrt, cycle              float64
		narula, josephson, ratio bool
	}{
		{"normal", 1200, 800, false, false, false},
		{"at 525", 1725, 1200, false, false, false},
		{"above Narula only", 1740, 1200, true, false, false},
		{"above both", 1760, 1200, true, true, false},
		{"ratio", 1300, 800, false, false, true},
	} {
		got := RecoveryTime(tick.MS(c.snrt), tick.MS(c.cycle))
		if got.OverNarula != c.narula || got.OverJosephson != c.josephson || got.OverRatio != c.ratio || got.Corrected != tick.MS(c.snrt-c.cycle) {
			t.Errorf("%s: got %+v", c.name, got)
		}
	}
}

// Two teaching pages read for the facts: full = 2 PP exactly.
func TestCompensatory(t *testing.T) {
	for _, c := range []struct {
		name         string
		pre, post, p float64
		want         Pause
	}{
		{"full", 500, 1100, 800, Full},
		{"reset", 500, 900, 800, LessThanFull},
		{"interpolated", 400, 400, 800, InterpolatedBeat},
		{"longer", 500, 1500, 800, MoreThanFull},
	} {
		if got := Compensatory(tick.MS(c.pre), tick.MS(c.post), tick.MS(c.p), 0); got != c.want {
			t.Errorf("%s: got %v, want %v", c.name, got, c.want)
		}
	}
}

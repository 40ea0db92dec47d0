package pacer

import (
	"math"
	"slices"
	"strings"
	"testing"

	"escapement/engine/tick"
)

// fixed is a mode by its first three letters.
func fixed(code string) Mode { return Mode{code[0], code[1], code[2], 'O', 'O'} }

// conduct answers atrial stimuli by ventricular signals after so long, round and
// round; 0 is no answer.
func conduct(r *rig, after ...float64) {
	n := 0
	r.paced = func(p Pulse) {
		if p.Lead == RA {
			if a := after[n%len(after)]; a > 0 {
				r.soonSignal(Ventricular, a)
			}
			n++
		}
	}
}

// What the device does beside the plain timing cycles. The times follow from the
// definitions in Settings by the sums a reader can do; none is published.
func TestFeatures(t *testing.T) {
	noise := func(r *rig) { r.every(Ventricular, 1160, 50, 2500) }
	for _, c := range []struct {
		name   string
		change func(*Settings)
		heart  func(*rig)
		from   float64
		want   string
	}{
		{"rate-adaptive AV: 100/min is two thirds of the way, 150 - 33.333", func(s *Settings) { s.AdaptiveAV = Adaptive{60, 120, ms(150)} },
			func(r *rig) { r.every(Atrial, 600, 600, 9000) }, 0, "600 AS tracked, 750 VP, 1200 AS tracked, 1316.667 VP, 1800 AS tracked, 1916.667 VP"},
		{"hysteresis search after three stimuli", func(s *Settings) { s.Mode, s.Hysteresis = fixed("VVI"), Hysteresis{50, 3, 1} },
			plainHeart, 0, "1000 VP, 2000 VP, 3000 VP, 4200 VP, 5200 VP, 6200 VP, 7400 VP"},
		{"hysteresis in DDD goes by the atrium: 1200 - 200 after a sensed P", func(s *Settings) { s.Hysteresis.Rate = 50 },
			func(r *rig) { r.at(Atrial, 500) }, 0, "500 AS tracked, 650 VP, 1650 AP, 1850 VP, 2650 AP"},
		{"a PVC is no reason for hysteresis", func(s *Settings) { s.Hysteresis.Rate = 50 },
			func(r *rig) { r.at(Ventricular, 500) }, 0, "500 VS resets, 1300 AP"},
		{"night rate", func(s *Settings) { s.Mode, s.Night = fixed("VVI"), Night{50, 2500000, 5000000} },
			plainHeart, 0, "1000 VP, 2000 VP, 3000 VP, 4200 VP, 5400 VP, 6400 VP"},
		{"magnet: VOO at 90, then DDD again", func(s *Settings) { s.Magnet = Magnet{fixed("VOO"), 90, 0, 2500000, 4500000} },
			func(r *rig) { r.at(Ventricular, 2700) }, 1900, "2000 VP, 2666.667 VP, 2700 VS observed, 3333.334 VP, 4000.001 VP, 4800.001 AP, 5000.001 VP"},
		{"magnet: DOO at 100 with AV 100", func(s *Settings) { s.Magnet = Magnet{fixed("DOO"), 100, ms(100), 2100000, 4000000} },
			func(r *rig) { r.at(Atrial, 2400).at(Ventricular, 2650) }, 1900, "2000 VP, 2400 AS observed, 2500 AP, 2600 VP, 2650 VS observed, 3100 AP, 3200 VP"},
		{"magnet: AOO that comes in an AV delay", func(s *Settings) { s.Magnet = Magnet{fixed("AOO"), 90, 0, 900000, 4000000} },
			plainHeart, 0, "800 AP, 1000 VP, 1466.667 AP, 2133.334 AP"},
		{"an atrial stimulus put off leaves the ventricular one in its place", func(s *Settings) {
			s.LowerRate, s.PacedAV, s.PVARP, s.AtrialDelay = 80, ms(300), ms(300), ms(300)
		}, func(r *rig) { r.at(Atrial, 1000) }, 0, "450 AP, 750 VP, 1000 AS refractory, 1300 AP, 1500 VP, 1950 AP"},
		{"atrial base, sensor above the upper tracking rate: no V-V below both", func(s *Settings) {
			s.Mode.Rate, s.Base, s.UpperRate, s.PVARP = 'R', AtrialBase, 100, ms(150)
			s.Sensor = Sensor{Slope: 90, Limit: 150, Activity: []Activity{{0, 1}}}
		}, func(r *rig) { r.at(Atrial, 560) }, 0, "200 AP, 400 VP, 560 AS tracked, 1000 VP, 1200 AP, 1400 VP"},
		{"P waves that come and go are no loop", func(s *Settings) { s.Loop = Loop{Beats: 3, Margin: ms(16), PVARP: ms(400)} },
			func(r *rig) {
				n := 0.0
				r.paced = func(p Pulse) {
					if p.Lead != RA {
						n = 50 - n
						r.soonSignal(Atrial, 350-n)
					}
				}
			}, 900, "1000 VP, 1300 AS tracked, 1500 VP, 1850 AS tracked, 2000 VP, 2300 AS tracked, 2500 VP, 2850 AS tracked, 3000 VP, 3300 AS tracked, 3500 VP"},
		{"noise: pacing regardless", func(s *Settings) { s.Mode, s.Noise = fixed("VVI"), Noise{Window: ms(100)} },
			func(r *rig) { r.every(Ventricular, 1160, 50, 1390).at(Ventricular, 1485) }, 900,
			"1000 VP, 1160 VS noise, 1210 VS noise, 1260 VS noise, 1310 VS noise, 1360 VS noise, 1485 VS resets, 2485 VP"},
		{"a signal before the noise window is refractory", func(s *Settings) { s.Mode, s.Noise = fixed("VVI"), Noise{Window: ms(100)} },
			func(r *rig) { r.at(Ventricular, 1129.999, 1130) }, 900, "1000 VP, 1129.999 VS refractory, 1130 VS noise, 2000 VP"},
		{"change limit, longer by 10 %", func(s *Settings) { s.Mode, s.ChangeLimit.Longer = fixed("VVI"), 10 },
			func(r *rig) { r.every(Ventricular, 500, 500, 3001) }, 2900, "3000 VS resets, 3550 VP, 4155 VP, 4820.5 VP, 5552.55 VP"},
		{"change limit, shorter by 10 %", func(s *Settings) { s.ChangeLimit.Shorter = 10 },
			func(r *rig) { r.at(Atrial, 700, 1700, 2300) }, 0, "700 AS tracked, 850 VP, 1650 AP"},
		{"pacing after a sudden rate fall", func(s *Settings) { s.Mode, s.Fall = fixed("VVI"), Fall{90, 5 * tick.Second, 2, 100, 3 * tick.Second} },
			func(r *rig) { r.every(Ventricular, 600, 600, 6001) }, 5900,
			"6000 VS resets, 7000 VP, 8000 VP, 8600 VP, 9200 VP, 9800 VP, 10400 VP, 11000 VP, 12000 VP, 13000 VP, 14000 VP"},
		{"no pacing after a slow fall", func(s *Settings) { s.Mode, s.Fall = fixed("VVI"), Fall{90, ms(1900), 2, 100, 3 * tick.Second} },
			func(r *rig) { r.every(Ventricular, 600, 600, 6001) }, 5900, "6000 VS resets, 7000 VP, 8000 VP, 9000 VP"},
		{"interval stabilisation", func(s *Settings) { s.Mode, s.Stabilise = fixed("VVI"), Stabilise{By: ms(150), Rate: 100} },
			func(r *rig) { r.at(Ventricular, 1000, 1500) }, 1400, "1500 VS resets, 2150 VP, 2950 VP, 3900 VP, 4900 VP"},
		{"longer AV delay: a search after three stimuli finds conduction at 250", func(s *Settings) { s.LongerAV = LongerAV{ms(100), 0, 3, 1} },
			func(r *rig) { conduct(r, 250) }, 2700, "2800 AP, 3000 VP, 3050 VS refractory, 3700 AP, 3950 VS inhibits, 4650 AP, 4900 VS inhibits"},
		{"longer AV delay: a search in vain ends", func(s *Settings) { s.LongerAV = LongerAV{ms(100), 0, 3, 1} },
			plainHeart, 2700, "2800 AP, 3000 VP, 3700 AP, 4000 VP, 4800 AP, 5000 VP"},
		{"shorter AV delay: 20 below conduction at 150", func(s *Settings) { s.ShorterAV = ShorterAV{By: ms(20), Shortest: ms(60)} },
			func(r *rig) { conduct(r, 150) }, 700, "800 AP, 950 VS inhibits, 1820 AP, 1950 VP, 1970 VS refractory, 2820 AP, 2950 VP"},
		{"shorter AV delay goes back after two stimuli", func(s *Settings) { s.ShorterAV = ShorterAV{By: ms(20), Shortest: ms(60), Beats: 2} },
			func(r *rig) { conduct(r, 150, 0) }, 2700, "2820 AP, 2950 VP, 2970 VS refractory, 3750 AP, 3950 VP, 4750 AP, 4900 VS inhibits, 5770 AP"},
		{"VVT", func(s *Settings) { s.Mode = fixed("VVT") }, func(r *rig) { r.at(Ventricular, 600, 950) }, 0,
			"600 VS triggers, 600 VP, 950 VS resets, 1950 VP"},
		{"AAT", func(s *Settings) { s.Mode = fixed("AAT") }, func(r *rig) { r.at(Atrial, 600) }, 0, "600 AS triggers, 600 AP, 1600 AP"},
		{"DVI sees no P", func(s *Settings) { s.Mode = fixed("DVI") }, func(r *rig) { r.at(Atrial, 600) }, 0, "600 AS observed, 800 AP, 1000 VP"},
		{"DOO", func(s *Settings) { s.Mode = fixed("DOO") }, func(r *rig) { r.at(Atrial, 600).at(Ventricular, 900) }, 0, "600 AS observed, 800 AP, 900 VS observed, 1000 VP, 1800 AP"},
		{"AOO", func(s *Settings) { s.Mode = fixed("AOO") }, plainHeart, 0, "1000 AP, 2000 AP"},
		{"VOO", func(s *Settings) { s.Mode = fixed("VOO") }, func(r *rig) { r.at(Ventricular, 900) }, 0, "900 VS observed, 1000 VP, 2000 VP"},
		{"ODO paces nothing", func(s *Settings) { s.Mode = fixed("ODO") }, func(r *rig) { r.at(Atrial, 600).at(Ventricular, 900) }, 0, "600 AS observed, 900 VS observed"},
		{"VDD, a late P: the lower rate comes first", func(s *Settings) { s.Mode = fixed("VDD") }, func(r *rig) { r.at(Atrial, 950) }, 0, "950 AS tracked, 1000 VP, 2000 VP"},
		{"VDD, a late P: the AV delay runs on", func(s *Settings) { s.Mode, s.PastLowerRate = fixed("VDD"), true }, func(r *rig) { r.at(Atrial, 950) }, 0, "950 AS tracked, 1100 VP, 2100 VP"},
		{"a P delayed by the change limit", func(s *Settings) { s.LowerRate, s.ChangeLimit.Shorter = 40, 10 },
			func(r *rig) { r.at(Atrial, 1000, 2000, 2600) }, 0, "1000 AS tracked, 1150 VP, 2000 AS tracked, 2150 VP, 2600 AS tracked, 3050 VP"},
	} {
		t.Run(c.name, func(t *testing.T) {
			s := Default()
			c.change(&s)
			if f := s.Faults(); len(f) > 0 {
				t.Fatal(f)
			}
			r := newRig(t, s)
			c.heart(r)
			got := r.run(15000).text(c.from)
			if got != c.want && !strings.HasPrefix(got, c.want+", ") {
				t.Errorf("record\n%s\nwant\n%s", got, c.want)
			}
		})
	}
	t.Run("noise: no stimulus while it lasts", func(t *testing.T) {
		s := Default()
		s.Mode, s.Noise = fixed("VVI"), Noise{Window: ms(100), Inhibits: true}
		r := newRig(t, s)
		noise(r)
		if got := r.run(4500).times("VP"); !slices.Equal(got, []float64{1000, 3000, 4000}) {
			t.Errorf("stimuli at %v", got)
		}
	})
}

func TestAdaptivePVARP(t *testing.T) {
	s := Default()
	s.PVARP, s.AdaptivePVARP = ms(300), Adaptive{60, 120, ms(200)}
	r := newRig(t, s).every(Atrial, 600, 600, 4000)
	r.run(4000)
	last := recorded{}
	for _, w := range r.windows {
		if w.Name == PVARP {
			last = w
		}
	}
	// 100/min: 300 - 100 x 40/60.
	if got := last.Until.Sub(last.from); got != ms(233.333) || last.Why != ByRate {
		t.Errorf("PVARP %v by %q, want 233.333 by rate", got, last.Why)
	}
}

func TestSensorRisesAndFalls(t *testing.T) {
	set := Default()
	set.Sensor = Sensor{Slope: 60, Limit: 120, Rise: 10 * tick.Second, Fall: 20 * tick.Second,
		Activity: []Activity{{1000000, 1}, {21000000, 0.5}, {41000000, 0}}}
	for _, c := range []struct{ s, want float64 }{{0.5, 60}, {1, 60}, {6, 90}, {11, 120}, {21, 120}, {26, 105}, {31, 90}, {40, 90}, {45, 78}, {60, 60}} {
		var st sensorState
		st.start(&set, 0)
		for at := 0.0; at < c.s; at += 0.7 { // asked often or once, it is the same
			st.advance(&set, tick.Time(ms(1000*at)))
		}
		st.advance(&set, tick.Time(ms(1000*c.s)))
		if math.Abs(st.rate-c.want) > 1e-6 {
			t.Errorf("at %v s the rate is %v, want %v", c.s, st.rate, c.want)
		}
	}
}

func TestFallbackRamp(t *testing.T) {
	s := Default()
	s.SensedAV, s.AtrialBlanking, s.PVAB = ms(107), ms(50), ms(105)
	s.Switch = Switch{Rate: 170, Short: 4, Of: 7, Return: 3, Ramp: ms(50)}
	r := newRig(t, s).every(Atrial, 500, 240, 8000)
	r.every(Atrial, 8500, 800, 16000)
	r.run(16000)
	vv := intervals(r.times("VP"))
	rising := 0
	for i := 1; i < len(vv); i++ {
		if vv[i] > vv[i-1] && vv[i] < 1000 {
			rising++
			if vv[i]-vv[i-1] != 50 && rising > 1 {
				t.Errorf("interval %v after %v, want 50 more", vv[i], vv[i-1])
			}
		}
	}
	if rising < 5 || len(r.modes) != 2 || !strings.Contains(r.modes[0], "DDD-DDI fast atrium") || !strings.Contains(r.modes[1], "DDI-DDD atrium slow again") {
		t.Errorf("V-V %v, modes %v", vv, r.modes)
	}
	if !all(tail(vv, 4), 800) {
		t.Errorf("tracking again at 800: %v", tail(vv, 4))
	}
}

// A fallback that does not pace the atrium must not wait for it for ever.
func TestASilentAtriumEndsTheModeSwitch(t *testing.T) {
	s := Default()
	s.SensedAV, s.AtrialBlanking, s.PVAB = ms(107), ms(50), ms(105)
	s.Switch = Switch{Rate: 170, Short: 4, Of: 7, Mode: fixed("VVI"), Return: 3}
	r := newRig(t, s).every(Atrial, 500, 240, 4000)
	r.run(12000)
	if len(r.modes) != 2 || !strings.Contains(r.modes[1], "VVI-DDD") || len(r.times("AP")) == 0 {
		t.Errorf("modes %q\n%s", r.modes, r.text(0))
	}
}

func TestBackup(t *testing.T) {
	run := func(after ...float64) *rig {
		s := Default()
		s.Backup = Backup{Misses: 2, Of: 4, Delay: ms(80), Retest: 3 * tick.Second, RetestMax: 60 * tick.Second}
		r := newRig(t, s)
		conduct(r, after...)
		return r.run(19000)
	}
	r := run(300)
	if got, want := r.text(0), "1000 AP, 1300 VS inhibits, 2000 AP, 2300 VS inhibits, 3000 AP"; !strings.HasPrefix(got, want) {
		t.Errorf("conducting at 300: %s", got)
	}
	r = run(300, 300, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0)
	want := "3000 AP, 4000 AP, 4080 VP, 5000 AP, 6000 AP, 6080 VP, 6880 AP, 7080 VP, 7880 AP, 8080 VP, 8880 AP, 9080 VP, 9880 AP, 10880 AP, 10960 VP, 11760 AP, 11960 VP"
	if got := r.text(2900); !strings.HasPrefix(got, want) {
		t.Errorf("conduction lost:\n%s\nwant\n%s", got, want)
	}
	modes := []string{"0 DDD-AAI ventricular backup", "6000 AAI-DDD no conduction", "9080 DDD-AAI test of conduction", "10880 AAI-DDD no conduction", "16960 DDD-AAI test of conduction", "18760 AAI-DDD no conduction"}
	if !slices.Equal(r.modes, modes) {
		t.Errorf("modes %q, want %q", r.modes, modes)
	}
	r = run(300, 300, 0, 0, 0, 0, 0, 0, 0, 300, 300, 300, 300, 300, 300, 300, 300, 300)
	if n := len(r.modes); n != 3 || !all(intervals(tail(r.times("VS"), 4)), 1000) {
		t.Errorf("conduction back: %q\n%s", r.modes, r.text(8000))
	}
}

func TestVentricularLeads(t *testing.T) {
	for _, c := range []struct {
		name  string
		sites Sites
		want  string
	}{
		{"right", Sites{}, "1000 RV, 2000 RV"},
		{"His", Sites{Right: HisLead}, "1000 His, 2000 His"},
		{"left 40 first, AV to the first", Sites{Left: true, Offset: ms(-40)}, "1000 LV, 1040 RV, 2000 LV, 2040 RV"},
		{"left 40 first, AV to the right", Sites{Left: true, Offset: ms(-40), ToRV: true}, "1000 LV, 1040 RV, 2000 LV, 2040 RV"},
		{"right 20 first", Sites{Left: true, Offset: ms(20)}, "1000 RV, 1020 LV, 2000 RV, 2020 LV"},
		{"left only", Sites{Left: true, Only: true}, "1000 LV, 2000 LV"},
		{"two left points around the right", Sites{Left: true, Offset: ms(-10), Point: ms(30)}, "1000 LV, 1010 RV, 1030 LV2, 2000 LV"},
	} {
		s := Default()
		s.Mode.Multisite, s.Sites = 'V', c.sites
		r := newRig(t, s)
		r.run(2050)
		var b []string
		for _, e := range r.record {
			if e.lead != RA {
				b = append(b, e.at.String()+" "+e.lead.String())
			}
		}
		if got := strings.Join(b, ", "); !strings.HasPrefix(got, c.want) {
			t.Errorf("%s: %s, want %s", c.name, got, c.want)
		}
		// PAV is 200 to the first ventricular stimulus, or to the right one.
		to := 200.0
		if c.sites.ToRV {
			to -= 40
		}
		if got := r.times("VP")[0] - r.times("AP")[0]; got != to {
			t.Errorf("%s: first stimulus %v after the atrium, want %v", c.name, got, to)
		}
	}
}

func TestParseMode(t *testing.T) {
	for _, c := range []struct{ code, text, err string }{
		{"OAO", "OAO", ""}, {"VVT", "VVT", ""}, {"DDDRV", "DDDRV", ""}, {"DDDOV", "DDDOV", ""}, {"DDDOO", "DDD", ""}, {"VVIR", "VVIR", ""},
		{"X", "", `mode "X": a mode has three to five letters, as VVI, DDDR or DDDRV`},
		{"XDD", "", `mode "XDD": position 1 is the chamber paced and takes O A V D, not "X"`},
		{"D0O", "", `mode "D0O": position 2 is the chamber sensed and takes O A V D, not "0" (the letter O, not a zero)`},
		{"ddd", "", `mode "ddd": position 1 is the chamber paced and takes O A V D, not "d" (capital letters)`},
		{"SSI", "", `mode "SSI": position 1 is the chamber paced and takes O A V D, not "S" (S, single, is for a device before it is implanted: write A or V)`},
		{"DDDRD", "", `mode "DDDRD": this device has no multisite pacing of the atrium; position 5 takes O or V`},
		{"DDT", "", `mode "DDT": this device knows AAI, AAT, AOO, DDD, DDI, DOO, DVI, OAO, ODO, OVO, VDD, VOO, VVI, VVT`},
	} {
		m, err := ParseMode(c.code)
		if c.err == "" && (err != nil || m.String() != c.text) || c.err != "" && (err == nil || err.Error() != c.err) {
			t.Errorf("%s: %v, %v; want %s %s", c.code, m, err, c.text, c.err)
		}
	}
	for _, code := range Modes {
		for _, more := range []string{"", "R", "RV", "OV"} {
			if m, err := ParseMode(code + more); err != nil || m.String() != code+more {
				t.Errorf("%s: %v, %v", code+more, m, err)
			}
		}
	}
}

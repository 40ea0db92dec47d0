package pacer

import (
	"math"
	"slices"
	"testing"

	"escapement/engine/event"
	"escapement/engine/tick"
	"pgregory.net/rapid"
)

func TestArithmetic(t *testing.T) {
	for _, c := range []struct {
		name    string // number and source of the check
		change  func(*Settings)
		patient Patient
		value   string
		amount  float64
		text    string
		numbers string
	}{
		{"1: Furman 1985, Liryc; read", nil, Patient{}, "tarp", 400, "400", "150 + 250 = 400 ms"},
		{"1: 2:1 point", nil, Patient{}, "two_to_one", 150, "150", "60000 / 400 = 150 /min"},
		{"2: Liryc; read", func(s *Settings) { s.PVARP = ms(280) }, Patient{}, "tarp", 430, "430", "150 + 280 = 430 ms"},
		{"2: 2:1 point", func(s *Settings) { s.PVARP = ms(280) }, Patient{}, "two_to_one", 139.535, "139.5", "60000 / 430 = 139.5 /min"},
		{"3: Bernstein and Parsonnet 1995; read", nil, Patient{}, "aei", 800, "800", "1000 - 200 = 800 ms"},
		{"alert window; memory", nil, Patient{}, "alert_window", 550, "550", "800 - 250 = 550 ms"},
		{"9: Furman 1985; read", nil, Patient{}, "wenckebach", 100, "100", "500 - 400 = 100 ms"},
		{"9: ceiling; derived", nil, Patient{}, "longest_av", 250, "250", "500 - 250 = 250 ms"},
		{"5: pattern; derived", nil, Patient{PP: ms(460)}, "pattern", 0.75, "4:3", "floor((460 - 400) / (500 - 460)) + 2 = 3"},
		{"5: mean; derived", nil, Patient{PP: ms(460)}, "mean_rate", 97.826, "97.8", "60000 x 3 / (4 x 460) = 97.8 /min"},
		{"5: pause; derived", nil, Patient{PP: ms(460)}, "pause", 840, "840", "2 x 460 - 2 x 40 = 840 ms"},
		{"7: mean; derived", nil, Patient{PP: ms(420)}, "mean_rate", 95.238, "95.2", "60000 x 2 / (3 x 420) = 95.2 /min"},
		{"8: 2:1; read", nil, Patient{PP: ms(380)}, "mean_rate", 78.947, "78.9", "60000 x 1 / (2 x 380) = 78.9 /min"},
		{"13: loop; stepped", nil, Patient{VA: ms(300)}, "loop_cycle", 500, "500", "the longer of 500 and 300 + 150 = 500 ms"},
		{"14: loop; read", func(s *Settings) { s.SensedAV = ms(200) }, Patient{VA: ms(380)}, "loop_cycle", 580, "580", "the longer of 500 and 380 + 200 = 580 ms"},
		{"17: gap; read, derived", func(s *Settings) { s.LowerRate, s.PacedAV, s.PVARP = 80, ms(300), ms(300) }, Patient{VA: ms(250)}, "synchrony_gap", 200, "200", "750 - 300 - 250 = 200 ms"},
		{"19: flutter; Goethals 2003, Strohmer 2006; read", func(s *Settings) { s.SensedAV, s.PVAB = ms(126), ms(143) }, Patient{Flutter: ms(240)}, "flutter_margin", -29, "-29", "240 - 126 - 143 = -29 ms"},
		{"21: locked; Barold 2012, derived", func(s *Settings) { s.PVARP = ms(310) }, Patient{PR: ms(250)}, "locked_below", 560, "560", "250 + 310 = 560 ms"},
	} {
		t.Run(c.name, func(t *testing.T) {
			s := Default()
			if c.change != nil {
				c.change(&s)
			}
			vs := Arithmetic(&s, c.patient)
			i := slices.IndexFunc(vs, func(v Value) bool { return v.Name == c.value })
			if i < 0 {
				t.Fatalf("no %s in %v", c.value, vs)
			}
			v := vs[i]
			if math.Abs(v.Amount-c.amount) > 0.001 || v.Text != c.text || v.Numbers != c.numbers || v.Formula == "" || v.Source == "" {
				t.Errorf("%+v, want %v, %q, %q", v, c.amount, c.text, c.numbers)
			}
		})
	}
}

func TestWarnings(t *testing.T) {
	for _, c := range []struct {
		name    string
		change  func(*Settings)
		patient Patient
		want    []string
	}{
		{"the defaults", func(*Settings) {}, Patient{}, nil},
		{"10: Furman 1985", func(s *Settings) { s.SensedAV, s.PVARP, s.UpperRate = ms(200), ms(300), 140 }, Patient{}, []string{"two_to_one_below_upper_rate"}},
		{"W4: upper-rate interval = TARP", func(s *Settings) { s.UpperRate = 150 }, Patient{}, []string{"no_wenckebach"}},
		{"VA 280", func(*Settings) {}, Patient{VA: ms(280)}, []string{"pvarp_shorter_than_va"}},
		{"VA 240", func(*Settings) {}, Patient{VA: ms(240)}, []string{"pvarp_close_to_va"}},
		{"17", func(s *Settings) { s.LowerRate, s.PacedAV, s.PVARP = 80, ms(300), ms(300) }, Patient{VA: ms(250), AtrialERP: ms(230)}, []string{"va_synchrony"}},
		{"18", func(s *Settings) { s.PacedAV, s.PVARP = ms(300), ms(300) }, Patient{VA: ms(250), AtrialERP: ms(230)}, nil},
		{"19", func(s *Settings) { s.SensedAV, s.PVAB = ms(126), ms(143) }, Patient{Flutter: ms(240)}, []string{"flutter_hidden"}},
		{"20", func(s *Settings) { s.SensedAV, s.PVAB = ms(107), ms(105) }, Patient{Flutter: ms(240)}, nil},
		{"21", func(s *Settings) { s.PVARP, s.SensedAV = ms(310), ms(120) }, Patient{PR: ms(250), PP: ms(540)}, []string{"p_may_lock"}},
		{"sensor at 130", func(s *Settings) { s.Mode.Rate, s.Sensor = 'R', Sensor{Slope: 50, Limit: 130} }, Patient{}, []string{"short_alert_window"}},
		{"sensor at 150", func(s *Settings) { s.Mode.Rate, s.Sensor = 'R', Sensor{Slope: 50, Limit: 150} }, Patient{}, []string{"no_alert_window"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			s := Default()
			c.change(&s)
			var got []string
			for _, w := range Warnings(&s, c.patient) {
				got = append(got, w.Name)
			}
			if !slices.Equal(got, c.want) {
				t.Errorf("warnings %v, want %v", got, c.want)
			}
		})
	}
}

// Check 24: Lapicque with rheobase 0.5 V and chronaxie 0.4 ms. Source: Geddes 2004
// for the law, read; numbers derived. W15: 3.5 and 0.22 give 7.0, Prutchi, read.
func TestStrengthAndDuration(t *testing.T) {
	s := Strength{0.5, ms(0.4)}
	for _, c := range []struct{ width, want float64 }{{0.1, 2.5}, {0.2, 1.5}, {0.4, 1.0}, {1.0, 0.7}} {
		if got := s.Threshold(ms(c.width)); math.Abs(got-c.want) > 0.01*c.want {
			t.Errorf("threshold at %v ms is %v, want %v", c.width, got, c.want)
		}
	}
	if got := (Strength{3.5, ms(0.22)}).Threshold(ms(0.22)); got != 7 {
		t.Errorf("at the chronaxie %v, want twice the rheobase, 7", got)
	}
	if vs := s.Values(2, ms(0.4)); vs[1].Text != "2.0:1" || vs[0].Numbers != "0.50 (1 + 0.40 / 0.40) = 1.00 V" {
		t.Errorf("values %+v", vs)
	}
	best := ms(0.05)
	for w := best; w <= ms(2); w += 10 {
		if s.Energy(w, 500) < s.Energy(best, 500) {
			best = w
		}
	}
	if best != ms(0.4) {
		t.Errorf("least energy at %v ms, want 0.4", best)
	}
	if got, err := FitStrength(1.0, ms(0.4), 0.7, ms(1)); err != nil || math.Abs(got.Rheobase-0.5) > 0.001 || got.Chronaxie != ms(0.4) {
		t.Errorf("fit %v, %v; want 0.5 V, 0.4 ms", got, err)
	}
	for _, bad := range [][4]float64{{1, 0.4, 1, 0.4}, {1, 0.4, 0.3, 1}, {1, 0.4, 1.5, 1}} {
		if got, err := FitStrength(bad[0], ms(bad[1]), bad[2], ms(bad[3])); err == nil {
			t.Errorf("fit of %v gave %v", bad, got)
		}
	}
}

// The formula for the pattern and the device must agree on every cycle: the device
// steps through it beat by beat. The AV delay never passes its ceiling (check 9).
func TestPatternAgreesWithTheDevice(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		s := Default()
		s.SensedAV = ms(float64(rapid.IntRange(80, 180).Draw(rt, "sav")))
		s.PVARP = ms(float64(rapid.IntRange(200, 320).Draw(rt, "pvarp")))
		s.UpperRate = 60000 / float64(rapid.IntRange(400, 600).Draw(rt, "mtri"))
		s.LowerRate, s.PacedAV = 30, ms(200)
		tarp, mtri := s.SensedAV+s.PVARP, interval(s.UpperRate)
		pp := ms(float64(rapid.IntRange(max(220, int(tarp.MS())/2), 650).Draw(rt, "pp")))
		ps, n := Pattern(pp, mtri, s.SensedAV, s.PVARP)
		if n == 0 {
			return
		}
		if pp >= tarp && pp < mtri { // the fact sheet's formula, where the pause is not cut short
			want := int((pp-tarp)/(mtri-pp)) + 2
			if pause := 2*pp - tick.Dur(want-1)*(mtri-pp); pause >= mtri && (ps != want+1 || n != want) {
				rt.Fatalf("%d:%d, formula %d:%d", ps, n, want+1, want)
			}
		}
		r := newRig(t, s)
		const cycles = 4
		settle := 2 * ps // the first P waves may not belong to the pattern yet
		for i := range settle + ps*cycles + 2 {
			r.signal(Atrial, tick.Time(pp)*tick.Time(i+1))
		}
		r.run(float64(settle+ps*cycles+2) * pp.MS())
		var uses []event.Use
		for _, e := range r.record {
			if e.what == "AS" {
				uses = append(uses, e.use)
			}
		}
		got := 0
		for _, u := range uses[settle : settle+ps*cycles] {
			if u == event.Tracked {
				got++
			}
		}
		if got != n*cycles {
			rt.Fatalf("%d of %d P waves tracked, formula %d:%d (TARP %v, MTRI %v, PP %v)\n%s", got, ps*cycles, ps, n, tarp, mtri, pp, r.text(0))
		}
		var p tick.Time
		for _, e := range r.record {
			if e.use == event.Tracked {
				p = e.at
			}
			if e.what == "VP" && e.at.Sub(p) > max(s.SensedAV, mtri-s.PVARP) {
				rt.Fatalf("AV delay of %v at %v", e.at.Sub(p), e.at)
			}
		}
	})
}

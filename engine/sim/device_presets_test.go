package sim

import (
	"encoding/json"
	"math"
	"slices"
	"testing"

	"escapement/presets"
)

// deviceFacts is what the note of each preset with a device says, as numbers of its
// strip. Times are ms.
var deviceFacts = map[string]func(strip){
	"dual-treadmill-two-to-one": func(s strip) {
		v := diffs(s.at("VP"))
		i := greatestAt(v)
		for j := 1; j < len(v); j++ {
			if v[j] > 1.9*v[j-1] {
				i = j
				break
			}
		}
		near(s.t, "rate before the fall", 60000/v[i-1], 130, 1)
		near(s.t, "rate after it", 60000/v[i], 65.5, 1)
		s.every("AV delay", s.delays("AS tracked", "VP"), 160)
	},
	"dual-one-to-one-to-140": func(s strip) {
		if n := len(before(s.at("AS refractory"), 14000)); n != 0 {
			s.t.Errorf("%d P waves lost up to 140", n)
		}
		s.every("interval at 140", diffs(within(s.at("VP"), 10000, 14000)), 60000/140.0)
		if n := len(s.stimuli("upper_rate")); n == 0 || s.stimuli("upper_rate")[0] < 16000 {
			s.t.Errorf("Wenckebach behaviour: %v", s.stimuli("upper_rate"))
		}
	},
	"dual-upper-rate-wenckebach": func(s strip) {
		av := s.delays("AS tracked", "VP")
		const grow = 500 - 60000/131.0
		for i, want := range []float64{150, 150 + grow, 150 + 2*grow, 150, 150 + grow, 150 + 2*grow, 150} {
			near(s.t, "AV delay", av[i], want, exact)
		}
		near(s.t, "P to stimuli", float64(len(s.at("AS")))/float64(len(s.at("VP"))), 4.0/3, 0.05)
	},
	"dual-endless-loop": func(s strip) {
		s.every("cycle", diffs(after(s.at("VP"), 4500)), 480)
		s.every("VP to AS", tail(s.delays("VP", "AS tracked"), 10), 320)
		s.every("AV delay", tail(s.delays("AS tracked", "VP"), 10), 160)
	},
	"dual-tracked-atrial-tachycardia": func(s strip) {
		s.every("interval", diffs(within(s.at("VP"), 4200, 14000)), 500)
		s.every("AV delay", s.delays("AS tracked", "VP"), 150)
		if after(s.at("VP"), 13900)[0] < 14800 {
			s.t.Error("the ventricles do not stop with the atria")
		}
	},
	"dual-sensor-rate": func(s strip) {
		near(s.t, "rate by the sensor", 60000/tail(diffs(s.at("AP")), 1)[0], 108, 0.1)
		if n := len(after(s.at("AS"), 1000)); n != 0 {
			s.t.Errorf("%d P waves sensed", n)
		}
	},
	"dual-loop-kept-off": func(s strip) {
		near(s.t, "P conducted back after the premature beat", after(s.at("AS refractory"), 4000)[0]-4090, 280, exact)
		if n := len(within(s.at("VP"), 4090, 5000)); n != 0 {
			s.t.Errorf("%d stimuli after it", n)
		}
		s.every("interval at sinus 140", tail(diffs(s.at("VP")), 5), 2*60000/140.0)
	},
	"dual-slow-loop": func(s strip) {
		s.every("cycle", diffs(after(s.at("VP"), 4900)), 580)
		s.noWindowBy("endless loop")
	},
	"dual-loop-found": func(s strip) {
		if n := s.windowsBy("endless loop"); n != 1 {
			s.t.Errorf("%d long PVARPs, want 1", n)
		}
		s.every("loop", diffs(within(s.at("VP"), 4500, 9000)), 480)
		s.every("sinus again", tail(diffs(s.at("AS tracked")), 3), 60000/58.0)
	},
	"dual-va-synchrony": func(s strip) {
		s.every("AP to AP before", diffs(within(s.at("AP"), 900, 3500)), 750)
		if got, all := len(after(s.at("AP lost"), 4800)), len(after(s.at("AP"), 4800)); got != all {
			s.t.Errorf("%d of %d atrial stimuli lost", got, all)
		}
		s.every("refractory P to lost stimulus", tail(s.delays("AS refractory", "AP lost"), 10), 230)
	},
	"dual-va-synchrony-night": func(s strip) {
		if lost := s.at("AP lost"); len(lost) < 6 || lost[len(lost)-1] > 9500 {
			s.t.Errorf("lost at %v", lost)
		}
		s.every("A-A at night", diffs(after(s.at("AP"), 10000)), 1000)
		if n := len(after(s.at("AS refractory"), 10000)); n != 0 {
			s.t.Errorf("%d P waves still conducted back", n)
		}
	},
	"dual-va-synchrony-delayed": func(s strip) {
		if n := len(s.at("AP lost")); n != 1 {
			s.t.Errorf("%d stimuli lost, want the one of the fault", n)
		}
		near(s.t, "refractory P to stimulus", s.stimuli("atrial_delay")[0]-s.at("AS refractory")[0], 320, exact)
		s.every("A-A again", tail(diffs(s.at("AP")), 5), 750)
	},
	"dual-locked-p-waves": func(s strip) {
		if n := len(within(s.at("VP"), 4000, 11000)); n != 0 {
			s.t.Errorf("%d stimuli while locked", n)
		}
		s.every("QRS to refractory P", first(s.delays("VS", "AS refractory"), 10), 285)
		s.every("AV delay after release", tail(s.delays("AS tracked", "VP"), 5), 120)
	},
	"dual-p-scan": func(s strip) {
		for _, c := range []struct {
			what string
			ms   float64
		}{{"AS blanked", 3600}, {"AS refractory", 5710}} {
			if got := s.at(c.what); len(got) != 1 || math.Abs(got[0]-c.ms) > exact {
				s.t.Errorf("%s at %v, want %v", c.what, got, c.ms)
			}
		}
		near(s.t, "tracked early P", after(s.at("AS tracked"), 8200)[0], 8310, exact)
	},
	"dual-crosstalk-safety": func(s strip) {
		s.every("safety delay", s.delaysTo("AP", "safety"), 110)
		if n := len(s.stimuli("safety")); n != 2 {
			s.t.Errorf("%d safety stimuli, want 2", n)
		}
	},
	"dual-crosstalk-pause": func(s strip) {
		near(s.t, "longest pause", greatest(diffs(s.at("VP"))), 3595, exact)
		s.every("A-A in it", diffs(within(s.at("AP"), 3300, 6000)), 865)
	},
	"dual-pvc-after-atrial-stimulus": func(s strip) {
		s.shows(3300, "3330 AP, 3360 VS blanked, 3510 VP lost, 4330 AP, 4510 VP, 5330 AP, 5410 VS safety, 5440 VP lost, 6260 AP, 6440 VP, 7260 AP, 7400 VS inhibits, 8220 AP")
	},
	"dual-paced-rate-63": func(s strip) {
		near(s.t, "rate", 60000/tail(diffs(s.at("AP")), 1)[0], 63.3, 0.2)
		near(s.t, "A-A", tail(diffs(s.at("AP")), 1)[0], 770+tail(s.delays("AP", "VS inhibits"), 1)[0], exact)
	},
	"dual-atrial-base-long-interval": func(s strip) {
		s.every("A-A", diffs(s.at("AP")), 1000)
		near(s.t, "longest V-V", greatest(diffs(s.ventricular())), 1000+230-s.delays("AP", "VS inhibits")[0], exact)
	},
	"vvi-hysteresis": func(s strip) {
		v := s.at("VP")
		near(s.t, "pause", v[0]-tail(s.at("VS"), 1)[0], 1200, exact)
		s.every("then", diffs(v), 60000/70.0)
	},
	"vvi-t-wave-sensed": func(s strip) { s.every("V-V", diffs(s.at("VP")), 1330) },
	"aai-far-field": func(s strip) {
		near(s.t, "rate", 60000/tail(diffs(s.at("AP")), 1)[0], 52, 0.5)
		s.every("A-A", tail(diffs(s.at("AP")), 3), 60000/70.0+tail(s.delays("AP", "AS resets"), 1)[0])
	},
	"dual-far-field-switch": func(s strip) {
		s.modes("DDD>DDI")
		s.every("V-V after it", tail(diffs(s.at("VP")), 5), 1000)
	},
	"dual-far-field-hidden": func(s strip) {
		s.modes("")
		s.every("VP to far field", s.delays("VP", "AS blanked"), 110)
		s.every("V-V", diffs(s.at("VP")), 60000/90.0)
	},
	"dual-flutter-lock-in": func(s strip) {
		s.modes("")
		s.every("V-V in flutter", diffs(within(s.at("VP"), 5000, 18000)), 500)
	},
	"dual-flutter-switch": func(s strip) {
		s.modes("DDD>DDI DDI>DDD")
		s.every("V-V in flutter", diffs(within(s.at("VP"), 5000, 18000)), 1000)
		s.every("sinus tracked again", tail(s.delays("AS tracked", "VP"), 2), 110)
	},
	"dual-fibrillation-switch": func(s strip) {
		s.modes("DDD>DDI DDI>DDD")
		tracked := diffs(within(s.at("VP"), 4400, 9000))
		lo, hi := slices.Min(tracked), slices.Max(tracked)
		near(s.t, "shortest V-V: the upper rate", lo, 500, exact)
		if hi-lo < 20 {
			s.t.Errorf("V-V %v: the ventricles follow regularly", tracked)
		}
		s.every("V-V after the switch", diffs(within(s.at("VP"), 9100, 18000)), 1000)
		s.every("sinus tracked again", tail(s.delays("AS tracked", "VP"), 2), 150)
	},
	"vvi-atrial-fibrillation": func(s strip) {
		sensed, paced := s.at("VS"), s.at("VP")
		if len(sensed) < 5 || len(paced) < 5 {
			s.t.Errorf("%d sensed, %d paced: want both", len(sensed), len(paced))
		}
		for _, at := range paced {
			last := slices.Concat(before(sensed, at), before(paced, at))
			near(s.t, "since the last beat", at-slices.Max(last), 1000, exact)
		}
	},
	"vvi-undersensing": func(s strip) {
		s.every("V-V of the deaf device", diffs(s.at("VP")), 1000)
		if lost := len(s.at("VP lost")); lost == 0 || lost == len(s.at("VP")) {
			s.t.Errorf("%d of %d stimuli lost: some should, not all", lost, len(s.at("VP")))
		}
		if n := len(after(s.at("VP"), 8300)); n != 0 || len(after(s.at("VS resets"), 8000)) < 4 {
			s.t.Errorf("%d stimuli after the fault", n)
		}
	},
	"vvi-fusion": func(s strip) {
		left := s.times("left_bundle")
		v := s.at("VP")
		near(s.t, "left bundle reached before the first stimulus", v[0]-before(left, v[0])[len(before(left, v[0]))-1], 60, 40)
		if n := len(s.at("VP lost")); n != 0 {
			s.t.Errorf("%d stimuli lost", n)
		}
		if first, last := s.byStimulus(v[0]), s.byStimulus(v[len(v)-1]); first >= last {
			s.t.Errorf("%d regions follow the first stimulus, %d the last", first, last)
		}
	},
	"ddi-wandering-pr": func(s strip) {
		s.every("V-V", diffs(s.at("VP")), 1000)
		if d := s.delays("AS inhibits", "VP"); greatest(d) < 500 {
			s.t.Errorf("PR %v", d)
		}
	},
	"vdd-slow-sinus": func(s strip) {
		if n := len(s.at("AP")); n != 0 {
			s.t.Errorf("%d atrial stimuli in VDD", n)
		}
		s.every("tracked at first", first(s.delays("AS tracked", "VP"), 5), 150)
		if got := diffs(s.stimuli("lower_rate")); len(got) == 0 {
			s.t.Error("no stimulus at the lower rate")
		}
		if greatest(diffs(s.at("VP"))) > 1000+exact {
			s.t.Errorf("V-V %v", diffs(s.at("VP")))
		}
	},
	"magnet-asynchronous": func(s strip) {
		s.modes("DDD>DOO DOO>DDD")
		s.every("A-A under the magnet", diffs(within(s.at("AP"), 4100, 9000)), 60000/80.0)
		if n := len(within(s.at("AP lost"), 4000, 9000)) + len(within(s.at("VP lost"), 4000, 9000)); n == 0 {
			s.t.Error("no stimulus is lost")
		}
		soon := 0
		for _, v := range within(s.at("VP"), 4000, 9000) {
			if d := s.sinceBeat("rv_apex", v); d > 200 && d < 300 {
				soon++
			}
		}
		if soon != 2 {
			s.t.Errorf("%d stimuli 200 to 300 ms after a beat, want 2", soon)
		}
	},
	"biventricular-lost": func(s strip) {
		if len(within(s.at("VP"), 9000, 13500)) != 0 || len(within(s.at("VS"), 9000, 13500)) < 8 {
			s.t.Error("pacing is not lost between 9 and 13.5 s")
		}
		if len(before(s.at("VP"), 6000)) < 8 || len(after(s.at("VP"), 16000)) < 8 {
			s.t.Error("no pacing before or after")
		}
	},
	"dual-longer-av-search": func(s strip) {
		if len(within(s.at("VS"), 5000, 8500)) != 4 || len(after(s.at("VS"), 14000)) < 8 {
			s.t.Errorf("conducted beats at %v", s.at("VS"))
		}
		near(s.t, "the stimulus that ends the longer delay", greatest(s.delays("AS tracked", "VP")), 270, exact)
	},
	"atrial-pacing-with-backup": func(s strip) {
		s.every("backup", s.delaysTo("AP", "backup"), 80)
		if n := len(s.stimuli("backup")); n != 2 {
			s.t.Errorf("%d backup stimuli, want 2", n)
		}
		if n := len(after(s.at("VP"), 16500)); n != 0 {
			s.t.Errorf("%d ventricular stimuli after the test of conduction", n)
		}
	},
	"dual-sensor-above-limit": func(s strip) {
		near(s.t, "rate", 60000/tail(diffs(s.at("AP")), 1)[0], 126.3, 0.5)
	},
	"vvi-output-below-threshold": func(s strip) {
		if lost, all := len(s.at("VP lost")), len(s.at("VP")); lost != all || all == 0 {
			s.t.Errorf("%d of %d lost", lost, all)
		}
		s.every("escape to stimulus", s.delays("VS resets", "VP lost"), 1000)
	},
	"dual-atrial-capture-lost": func(s strip) {
		if n := len(s.at("AP lost")); n != 1 {
			s.t.Errorf("%d lost", n)
		}
		s.every("loop", diffs(after(s.at("VP"), 5200)), 500)
	},
	"vvi-noise-paces": func(s strip) {
		s.every("V-V", diffs(within(s.at("VP"), 4500, 9000)), 1000)
		if n := len(s.at("VS noise")); n < 40 {
			s.t.Errorf("%d signals taken for noise", n)
		}
	},
	"vvi-noise-inhibits": func(s strip) {
		near(s.t, "pause", greatest(diffs(s.at("VP"))), 5000, exact)
		if n := len(within(s.times("rv_apex"), 4500, 8000)); n == 0 || n > 2 {
			s.t.Errorf("%d beats in the noise", n)
		}
	},
	"dual-t-wave-long-pvarp": func(s strip) {
		s.every("VP to sensed T wave", s.delays("VP", "VS resets"), 360)
		if n := s.windowsBy("post-PVC"); n < 5 {
			s.t.Errorf("%d long PVARPs", n)
		}
		if n := len(after(s.at("AS refractory"), 1000)); n != len(after(s.at("AS"), 1000)) {
			s.t.Errorf("%d refractory P waves", n)
		}
	},
	"his-output-steps": func(s strip) {
		for _, e := range s.given('V') {
			t := e.T.MS()
			sv := firstVentricular(s, t-0.001) - t
			switch {
			case t < 4300 || t > 10700:
				near(s.t, "both tissues: stimulus to ventricle", sv, 0, exact)
			case t < 8600:
				near(s.t, "His bundle only: stimulus to ventricle", sv, 45, exact)
			case e.Captured:
				s.t.Errorf("captured at %v ms below both thresholds", t)
			}
		}
	},
	"map-upper-rate": func(s strip) {
		av := s.delays("AS tracked", "VP")
		const grow = 500 - 60000/130.0
		for i, want := range []float64{150, 150 + grow, 150 + 2*grow, 150} {
			near(s.t, "AV delay", av[i], want, exact)
		}
	},
	"map-endless-loop": func(s strip) {
		s.every("cycle", diffs(after(s.at("VP"), 5000)), 600) // the upper-rate interval, for 320 + 200 is less
		s.every("VP to AS", tail(s.delays("VP", "AS tracked"), 6), 320)
	},
	"map-premature-beat": func(s strip) {
		s.every("AV delay", s.delays("AS tracked", "VP"), 150)
	},
	"map-pacing-site": func(s strip) {
		s.every("AV delay", s.delays("AS tracked", "VP"), 150)
	},
	"goals-treadmill-conflict": func(s strip) {
		s.every("AV delay", s.delays("AS tracked", "VP"), 120)
	},
	"goals-treadmill-shorter-av": func(s strip) {
		s.every("AV delay at rest", s.delays("AS tracked", "VP"), 120)
	},
	"goals-least-ventricular-pacing": func(s strip) {
		s.every("paced at the lower rate", diffs(s.at("VP")), 60000/70.0)
	},
	"vdd-mechanical-sensing": func(s strip) {
		near(s.t, "P to stimulus", s.at("VP")[3]-s.times("right_atrium")[3], 140, exact)
		if n := len(after(s.at("AS refractory"), 8000)); n == 0 {
			s.t.Error("no P in PVARP at the fast rate")
		}
	},
	"his-pacing": func(s strip) {
		v := s.at("VP")
		for i, first := range s.firstVentricular() {
			if i < len(v) {
				near(s.t, "stimulus to QRS", first-v[i], 48, exact)
			}
		}
	},
	"left-fascicle-pacing": func(s strip) {
		v, left, right := s.at("VP"), s.times("lv_lateral"), s.times("rv_free_wall")
		for i := range right {
			if l, r := left[i]-v[i], right[i]-v[i]; l > 100 || r < l+40 {
				s.t.Errorf("lateral wall after %v, right free wall after %v", l, r)
			}
		}
	},
}

func TestDevicePresetsShowWhatTheirNotesSay(t *testing.T) {
	for _, e := range presets.List() {
		file, _ := presets.Read(e.Name)
		var plan struct{ Pacemaker map[string]any }
		if err := json.Unmarshal(file, &plan); err != nil {
			t.Fatal(err)
		}
		facts, ok := deviceFacts[e.Name]
		if ok != (plan.Pacemaker != nil) {
			t.Errorf("%s: a device: %v, facts listed: %v", e.Name, plan.Pacemaker != nil, ok)
		}
		if ok {
			t.Run(e.Name, func(t *testing.T) { facts(strip{preset(t, e.Name), t}) })
		}
	}
}

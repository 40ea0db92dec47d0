package sim

import (
	"fmt"
	"math"
	"testing"

	"escapement/engine/event"
)

// The checks below bear their number in the project's fact sheet on pacing, and run
// on the whole heart. "Read" means that the source or a page that quotes it was read,
// "memory" that it is textbook knowledge not read again, "derived" that it follows
// from the stated rule, "stepped" that a stepping script confirmed it. Intervals hold
// to 1 ms, rates to 0.1/min.

const ddd = `"mode":"DDD"`

// 11 to 12 and 23: what the lower rate is counted from. The heart conducts from the
// atrial stimulus to the ventricular lead in 150 ms.
func TestPublishedBaseTiming(t *testing.T) {
	const missed = `"av_node":{"fast":{"min_ms":17.105,"alpha_ms":0,"tau_ms":100,"theta_ms":200,"up":null,"drop":"4:3"}}`
	for _, c := range []struct{ name, heart, device, want string }{
		{"11: ventricular base, AR 150: A-A 950 (63.2/min), memory (Hayes and Levine)", conductsIn(150), ddd,
			"800 AP, 950 VS inhibits, 1750 AP, 1900 VS inhibits, 2700 AP, 2850 VS inhibits, 3650 AP"},
		{"12: atrial base: A-A 1000, the stimulus at 200 makes that V-V 1050 (57.1/min), memory, derived", missed, ddd + `,"base_timing":"atrial"`,
			"800 AP, 950 VS inhibits, 1800 AP, 1950 VS inhibits, 2800 AP, 2950 VS inhibits, 3800 AP, 4000 VP, 4800 AP, 4950 VS inhibits, 5800 AP"},
		{"modified base: the same, and V-A after a stimulus, memory", missed, ddd + `,"base_timing":"modified_atrial"`,
			"800 AP, 950 VS inhibits, 1800 AP, 1950 VS inhibits, 2800 AP, 2950 VS inhibits, 3800 AP, 4000 VP, 4800 AP, 4950 VS inhibits, 5800 AP"},
		{"sensor 120, PAV 200, AR 150: 450 (133.3/min), above the sensor's limit, memory, derived", conductsIn(150),
			`"mode":"DDDR","sensor":{"slope_bpm":100,"activity_at_ms":[0],"activity_level":[1]}`,
			"1200 AP, 1350 VS inhibits, 1650 AP, 1800 VS inhibits, 2100 AP, 2250 VS inhibits, 2550 AP"},
	} {
		t.Run(c.name, func(t *testing.T) {
			from := 700.0
			if c.want[:4] == "1200" {
				from = 1100
			}
			withDevice(t, 12000, still+","+c.heart, c.device).shows(from, c.want)
		})
	}
}

// slow is a sinus node at PP 1100 under a device at a lower rate that leaves it alone;
// the premature beat comes when the atria are at rest.
func loop(t *testing.T, vaMS float64, device string) strip {
	return withDevice(t, 20000, sinusAt(500, 1100)+","+conductsBack(vaMS, 380), `"mode":"DDD","lower_rate_bpm":50,`+device, stimulus(3300, "rv_apex"))
}

// 13 to 16: endless loops with conduction back through the node. Without the P that
// entered the node from above, every tracked beat would begin one. Case series of
// loops below the upper rate (abstract read); stepped. In 16 PVARP 400 after a PVC:
// Neth Heart J, read.
func TestPublishedEndlessLoop(t *testing.T) {
	for _, c := range []struct {
		name                 string
		va                   float64
		device               string
		cycle, av, backAfter float64
	}{
		{"13: VA 300, PVARP 250, SAV 150, upper rate 120: 500, AV stretched to 200", 300, `"pvarp_ms":250`, 500, 200, 300},
		{"14: VA 380, SAV 200: 580 (103.4/min), below the upper rate", 380, `"sensed_av_ms":200`, 580, 200, 380},
		{"15: PVARP 350: none", 300, `"pvarp_ms":350`, 0, 0, 0},
		{"16: PVARP 400 after the PVC: none", 300, `"post_pvc_pvarp_ms":400`, 0, 0, 0},
	} {
		t.Run(c.name, func(t *testing.T) {
			s := loop(t, c.va, c.device)
			s.every("before the premature beat", diffs(before(s.at("VP"), 3300)), 1100)
			v := after(s.at("VP"), 3400)
			if c.cycle == 0 {
				for _, d := range diffs(v) {
					if d < 900 {
						t.Errorf("stimuli %v ms apart after the premature beat", d)
					}
				}
				if n := len(after(s.at("AS refractory"), 3400)); n != 1 {
					t.Errorf("%d P waves in PVARP after the premature beat, want the one conducted back", n)
				}
				return
			}
			if len(v) < 25 {
				t.Fatalf("%d stimuli after the premature beat: no sustained loop", len(v))
			}
			s.every("cycle", diffs(v), c.cycle)
			s.every("VP to AS", tail(s.delays("VP", "AS tracked"), 20), c.backAfter)
			s.every("AS to VP", tail(s.delays("AS tracked", "VP"), 20), c.av)
		})
	}
}

// A loop begun in the other known ways: a lost atrial stimulus, and a late P. Triggers
// from the case series (read).
func TestLoopsBeginWithALostAtrialStimulus(t *testing.T) {
	s := withDevice(t, 15000, still+","+conductsBack(300, 380), ddd, `{"at_ms":3700,"do":"lose_capture","channel":"A","for_ms":900}`)
	s.every("before", diffs(before(s.at("VP"), 3700)), 1000)
	if got := tail(diffs(s.at("VP")), 10); len(got) > 0 {
		s.every("loop after the loss", got, 500)
	}
}

// 17 and 18: non-reentrant VA synchrony. No sinus, block downwards, PAV 300, PVARP
// 300, VA 250, atrial ERP 230, one lost atrial stimulus. At 80/min AEI is 450, so the
// next atrial stimulus comes 200 ms after the P conducted back and is lost too; at
// 60/min it comes after 450 and captures. Heart Rhythm 2016;13:1739 and Atar 2022,
// read; stepped.
func TestPublishedNonReentrantSynchrony(t *testing.T) {
	const heart = still + `,"atria":{"erp_ms":230,"erp_per_cycle":0},`
	const device = `"mode":"DDD","paced_av_ms":300,"pvarp_ms":300,"lower_rate_bpm":`
	fault := `{"at_ms":3500,"do":"lose_capture","channel":"A","for_ms":%d}`
	s := withDevice(t, 20000, heart+conductsBack(250, 500), device+"80", fmt.Sprintf(fault, 740))
	if n := len(before(s.at("AP lost"), 3500)); n != 0 {
		t.Errorf("%d atrial stimuli lost before the fault", n)
	}
	late := after(s.at("AP"), 5000)
	if lost := after(s.at("AP lost"), 5000); len(lost) != len(late) || len(lost) < 15 {
		t.Errorf("%d of %d atrial stimuli lost: not sustained", len(lost), len(late))
	}
	s.every("V-V", diffs(after(s.at("VP"), 5000)), 750)
	s.every("refractory P to lost stimulus", tail(s.delays("AS refractory", "AP lost"), 15), 200)

	s = withDevice(t, 20000, heart+conductsBack(250, 500), device+"60", fmt.Sprintf(fault, 990))
	if n := len(after(s.at("AP lost"), 5000)); n != 0 {
		t.Errorf("at 60/min %d atrial stimuli are lost after the fault", n)
	}
	s.every("refractory P to stimulus at 60/min", s.delays("AS refractory", "AP"), 450)
}

// flutter drives the right atrium at 240 ms: the plan has no atrial focus that would
// not be reset, and a train stands for it.
var flutter = train(2000, "right_atrium", 240, 100)

// 19 and 20: lock-in at 2:1 in flutter of 240 ms where AV + PVAB is longer than its
// cycle. Strohmer 2006 and Goethals 2003, read; 20 stepped.
func TestPublishedFlutterLockIn(t *testing.T) {
	const heart = `"atria":{"erp_ms":160},` + still + "," + noAV
	device := func(av, pvab int) string {
		return fmt.Sprintf(`"mode":"DDD","max_tracking_rate_bpm":130,"sensed_av_ms":%d,"pvab_ms":%d,"pvarp_ms":300,"mode_switch":{"rate_bpm":170}`, av, pvab)
	}
	s := withDevice(t, 24000, heart, device(126, 143), flutter)
	if n := s.count(event.Mode); n != 0 {
		t.Errorf("19: %d mode switches, want none", n)
	}
	v := tail(s.at("VP"), 30)
	near(t, "19: rate", 60000*float64(len(v)-1)/(v[len(v)-1]-v[0]), 125, 1)
	s.every("19: AV delay", tail(s.delays("AS tracked", "VP"), 30), 126)

	s = withDevice(t, 24000, heart, device(107, 105), flutter)
	if n := s.count(event.Mode); n != 1 {
		t.Errorf("20: %d mode switches, want 1", n)
	}
	seen := 0
	for _, d := range s.delays("VP", "AS refractory") {
		if math.Abs(d-133) <= exact {
			seen++
		}
	}
	if seen == 0 {
		t.Errorf("20: no refractory P 133 ms after a stimulus: %v", s.delays("VP", "AS refractory"))
	}
}

// 21: P waves locked in PVARP. PR 250 at the leads, PVARP 310, SAV 120: after a
// premature beat PP 540 stays locked although TARP is 430, and PP 560 = PR + PVARP is
// free (107/min). Barold and Herweg 2012, read; stepped.
func TestPublishedLockedP(t *testing.T) {
	const device = `"mode":"DDD","pvarp_ms":310,"sensed_av_ms":120,"max_tracking_rate_bpm":130`
	run := func(pp float64) strip {
		return withDevice(t, 20000, sinusAt(500, pp)+","+conductsIn(250)+`,"his_purkinje":{"right_bundle":{"erp_ms":200},"left_bundle":{"erp_ms":200}}`, device, stimulus(500+6*pp-150, "rv_apex"))
	}
	s := run(540)
	if n := len(before(s.at("VP"), 3000)); n == 0 {
		t.Error("no tracking before the premature beat")
	}
	locked := after(s.at("AS"), 5000)
	if got := after(s.at("AS refractory"), 5000); len(got) != len(locked) || len(after(s.at("VP"), 5000)) != 0 {
		t.Errorf("at 540 %d of %d P waves are refractory and %d stimuli come: not locked", len(got), len(locked), len(after(s.at("VP"), 5000)))
	}
	s.every("AR to VS", tail(s.delays("AS refractory", "VS resets"), 20), 250)
	for _, c := range []struct {
		pp     float64
		locked bool
	}{{559, true}, {561, false}, {570, false}} {
		s := run(c.pp)
		if got := len(tail(after(s.at("AS refractory"), 6000), 5)) > 0; got != c.locked {
			t.Errorf("at PP %v locked is %v, want %v", c.pp, got, c.locked)
		}
	}
}

func signalV(atMS float64) string {
	return fmt.Sprintf(`{"at_ms":%g,"do":"signal","channel":"V"}`, atMS)
}

// 22 and 23: crosstalk. Definition (dictionary, read); 23 derived. The signals are put
// on the ventricular channel at the time after the atrial stimulus.
func TestPublishedCrosstalk(t *testing.T) {
	const device = `"mode":"DDD","paced_av_ms":180,"pavb_ms":40`
	for _, c := range []struct {
		name, device, want string
		signals            []string
	}{
		{"22: at 20, in the blanking", device, "820 AP, 840 VS blanked, 1000 VP, 1820 AP", []string{signalV(840)}},
		{"22: at 70, in the window", device, "820 AP, 890 VS safety, 930 VP, 1750 AP", []string{signalV(890)}},
		{"22: at 130, after it", device, "820 AP, 950 VS inhibits, 1770 AP", []string{signalV(950)}},
		{"23: at 40, no safety stimulus: A-A 840 (71.4/min)", `"mode":"DDD","safety_stimulus":false`, "800 AP, 840 VS inhibits, 1640 AP, 1680 VS inhibits, 2480 AP",
			[]string{signalV(840), signalV(1680)}},
		{"23: with it: A-A 910 (65.9/min)", `"mode":"DDD"`, "800 AP, 840 VS safety, 910 VP, 1710 AP, 1750 VS safety, 1820 VP, 2620 AP", []string{signalV(840), signalV(1750)}},
	} {
		t.Run(c.name, func(t *testing.T) { withDevice(t, 6000, still+","+noAV, c.device, c.signals...).shows(700, c.want) })
	}
}

// 25: DDI at 60 with sinus 75 and complete block: V-V 1000, no tracking, PR varies,
// atrial stimuli are inhibited by P waves outside PVARP. Memory.
func TestPublishedDDI(t *testing.T) {
	s := withDevice(t, 20000, sinusAt(700, 800)+","+noAV, `"mode":"DDI"`)
	s.every("V-V", diffs(s.at("VP")), 1000)
	if n := len(s.at("AS tracked")); n != 0 {
		t.Errorf("%d P waves tracked", n)
	}
	if len(s.at("AS inhibits")) == 0 || len(s.at("AP")) == len(s.at("VP")) {
		t.Error("no atrial stimulus was inhibited")
	}
	lo, hi := math.Inf(1), 0.0
	for _, d := range s.delays("AS inhibits", "VP") {
		lo, hi = min(lo, d), max(hi, d)
	}
	if hi-lo < 200 {
		t.Errorf("PR only varies between %v and %v", lo, hi)
	}
}

// The extras of the list, each with its source.
func TestPublishedSingleChamber(t *testing.T) {
	const vvi = `"mode":"VVI"`
	for _, c := range []struct {
		name, heart, device string
		from                float64
		want                string
		do                  []string
	}{
		{"VVI 70, hysteresis 50: 1200 and 857, memory, derived", still + "," + noAV, `"mode":"VVI","lower_rate_bpm":70,"hysteresis":{"rate_bpm":50}`, 400,
			"500 VS resets, 1700 VP, 2557.1 VP, 3414.3 VP", []string{stimulus(500, "rv_apex")}},
		{"VVI 60, T wave at 320, VRP 250: 1320 (45.5/min), memory, derived", still + "," + noAV, vvi + `,"ventricular_refractory_ms":250,"leads":{"t_wave_ms":320}`, 400,
			"1000 VP, 1320 VS resets, 2320 VP, 2640 VS resets, 3640 VP", nil},
		{"the same, VRP 350: 1000, memory", still + "," + noAV, vvi + `,"ventricular_refractory_ms":350,"leads":{"t_wave_ms":320}`, 400,
			"1000 VP, 1320 VS refractory, 2000 VP, 2320 VS refractory, 3000 VP", nil},
		{"AAI 60, far-field R at 300, ARP 250: 1300 (46.2/min), memory, derived", still + "," + conductsIn(200), `"mode":"AAI","leads":{"far_field_ms":100}`, 400,
			"1000 AP, 1300 AS resets, 2300 AP, 2600 AS resets, 3600 AP", nil},
		{"the same, ARP 350: 1000", still + "," + conductsIn(200), `"mode":"AAI","atrial_refractory_ms":350,"leads":{"far_field_ms":100}`, 400,
			"1000 AP, 1300 AS refractory, 2000 AP, 2300 AS refractory, 3000 AP", nil},
		{"VDD without P waves: 1000, memory", still + "," + noAV, `"mode":"VDD"`, 400, "1000 VP, 2000 VP, 3000 VP", nil},
		{"VOO: 1000 through the heart's own beats, memory", still + "," + noAV, `"mode":"VOO"`, 400, "1000 VP, 2000 VP lost, 3000 VP", []string{stimulus(1850, "rv_apex")}},
	} {
		t.Run(c.name, func(t *testing.T) { withDevice(t, 8000, c.heart, c.device, c.do...).shows(c.from, c.want) })
	}
}

// W16: an output at threshold loses now and then; below it always. Output 2.5 V at 0.4
// ms against rheobase 0.5 V, chronaxie 0.4 ms: threshold 1.0 V (24, Geddes 2004, read).
func TestPublishedThresholdDecidesCapture(t *testing.T) {
	device := func(v, width float64) string {
		return fmt.Sprintf(`"mode":"VVI","leads":{"ventricular":{"amplitude_v":%v,"width_ms":%v,"rheobase_v":0.5,"chronaxie_ms":0.4}}`, v, width)
	}
	for _, c := range []struct {
		v, width float64
		captures bool
	}{{1.0, 0.4, true}, {0.99, 0.4, false}, {1.5, 0.2, true}, {1.49, 0.2, false}, {2.5, 0.1, true}, {2.49, 0.1, false}, {0.7, 1.0, true}, {0.69, 1.0, false}} {
		s := withDevice(t, 3500, still+","+noAV, device(c.v, c.width))
		if got := len(s.at("VP lost")) == 0; got != c.captures {
			t.Errorf("%v V at %v ms: capture %v, want %v", c.v, c.width, got, c.captures)
		}
	}
}

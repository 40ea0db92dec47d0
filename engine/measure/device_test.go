package measure

import (
	"slices"
	"strings"
	"testing"

	"escapement/engine/event"
	"escapement/engine/field"
	"escapement/engine/sim/simtest"
)

// paced runs a plan and measures it, without leads.
func paced(t testing.TB, body string) (*event.Log, *Report) {
	t.Helper()
	l := simtest.Body(t, body).Log
	r := Of(l, nil)
	checkReport(t, l, r)
	return l, r
}

// Hearts. The AV node's curves are given outright, so that its times are whole: 250 ms
// down (PR over 250 ms, too long for the device to wait for), so much up, and 300 ms of
// recovery shared by both directions.
const (
	blockedNode = `"av_node":{"fast":{"ah_ms":null,"va_ms":null}}`
	rising      = `"av_node":{"fast":{"min_ms":250,"alpha_ms":0,"tau_ms":1,"theta_ms":300,"up":{"min_ms":UP,"alpha_ms":0,"tau_ms":1,"theta_ms":300}}}`
)

// sinusEvery is a sinus node whose cycle is so many milliseconds.
func sinusEvery(rate string) string { return `"sinus":{"rate_bpm":` + rate + `}` }

func up(ms string) string { return strings.ReplaceAll(rising, "UP", ms) }

const pvcAt3300 = `"interventions":[{"at_ms":3300,"do":"stimulate","site":"rv_apex"}]`

// The strips of facts that publish or derive a number. "Stepped" numbers come from a
// fixed-step script over the stated rule; none of them is a maker's.
func TestPublishedStrips(t *testing.T) {
	for _, c := range []struct {
		name, plan string
		slugs      []string // all findings, in order
		says       []string // in the statement
		never      []string // findings that must not come
	}{
		{
			"5: SAV 150, PVARP 250, upper rate 120, PP 460: 4:3, AV 150, 190, 230 (rule of Furman, PACE 1985;8:197, read; numbers derived, stepped)",
			`"span_ms":8000,"heart":{` + sinusEvery("130.43478260869566") + `,` + blockedNode + `},"pacemaker":{"mode":"DDD"}`,
			[]string{"upper_rate_wenckebach", "p_synchronous_pacing", "sinus_tachycardia"},
			[]string{"DDD: sinus 130/min tracked 4:3 at the upper rate (AV 150, 190, 230 ms)"},
			[]string{"complete_av_block", "functional_av_block", "ventricular_stimulation"},
		},
		{
			"8: PP 380: 2:1 with a constant AV (rule in a teaching quiz, read; numbers derived)",
			`"span_ms":8000,"heart":{` + sinusEvery("157.89473684210526") + `,` + blockedNode + `},"pacemaker":{"mode":"DDD"}`,
			[]string{"upper_rate_two_to_one", "p_synchronous_pacing", "sinus_tachycardia"},
			[]string{"DDD: sinus 158/min tracked 2:1 (AV 150 ms)"},
			[]string{"complete_av_block", "two_to_one_av_block"},
		},
		{
			"13: VA 300, PVARP 250, one PVC: loop at the upper rate (rule in a case series, abstract read; stepped)",
			`"span_ms":12000,"heart":{` + sinusEvery("54.54545454545455") + `,` + up("167.1") + `},"pacemaker":{"mode":"DDD","lower_rate_bpm":50},` + pvcAt3300,
			[]string{"endless_loop_tachycardia", "p_synchronous_pacing", "sinus_rhythm", "premature_ventricular", "retrograde_conduction"},
			[]string{"endless-loop tachycardia 120/min (cycle 500 ms) started by a ventricular premature beat, to the end of the strip"},
			[]string{"complete_av_block", "ventricular_tachycardia"},
		},
		{
			"15: the same with PVARP 350: no loop (stepped)",
			`"span_ms":12000,"heart":{` + sinusEvery("54.54545454545455") + `,` + up("167.1") + `},"pacemaker":{"mode":"DDD","lower_rate_bpm":50,"pvarp_ms":350},` + pvcAt3300,
			nil, nil,
			[]string{"endless_loop_tachycardia", "repetitive_nonreentrant_va_synchrony"},
		},
		{
			"17: VA 250, PVARP 300, lower rate 80, AV 300, atrial ERP 230, one lost capture: synchrony (Heart Rhythm 2016;13:1739 and Atar 2022, read; stepped)",
			`"span_ms":12000,"heart":{"sinus":{"rate_bpm":30},"atria":{"erp_ms":230},` + up("117.1") + `},"pacemaker":{"mode":"DDD","lower_rate_bpm":80,"paced_av_ms":300,"pvarp_ms":300},
			 "interventions":[{"at_ms":3000,"do":"lose_capture","channel":"A","for_ms":700}]`,
			[]string{"repetitive_nonreentrant_va_synchrony", "av_sequential_pacing", "retrograde_conduction", "loss_of_capture"},
			[]string{"repetitive non-reentrant VA synchrony 80/min"},
			[]string{"endless_loop_tachycardia", "functional_non_capture", "functional_av_block"},
		},
		{
			"18: the same at 60/min: the atrial stimulus captures (same sources)",
			`"span_ms":12000,"heart":{"sinus":{"rate_bpm":30},"atria":{"erp_ms":230},` + up("117.1") + `},"pacemaker":{"mode":"DDD","lower_rate_bpm":60,"paced_av_ms":300,"pvarp_ms":300},
			 "interventions":[{"at_ms":3000,"do":"lose_capture","channel":"A","for_ms":900}]`,
			nil, nil, []string{"repetitive_nonreentrant_va_synchrony"},
		},
		{
			"21: PR 250, PVARP 310, SAV 120, PP 540: locked (Barold and Herweg, Europace 2012, read; stepped). Here a P that was not sensed lets the heart conduct first",
			`"span_ms":9000,"heart":{` + sinusEvery("111.11111111111111") + `,` + locking + `},"pacemaker":{"mode":"DDD","sensed_av_ms":120,"pvarp_ms":310},` + deafAt("1900", "160"),
			[]string{"p_synchronous_pacing", "sinus_tachycardia", "first_degree_av_block", "fusion_beat", "refractory_p_locked"},
			[]string{"P waves locked in PVARP (PP 540 < PR 250 + PVARP 310 ms)"},
			[]string{"undersensing", "upper_rate_two_to_one"},
		},
		{
			"21: PP 560 releases it (same)",
			`"span_ms":9000,"heart":{` + sinusEvery("107.14285714285714") + `,` + locking + `},"pacemaker":{"mode":"DDD","sensed_av_ms":120,"pvarp_ms":310},` + deafAt("1960", "160"),
			nil, nil, []string{"refractory_p_locked"},
		},
	} {
		_, r := paced(t, c.plan)
		if got := slugs(r); c.slugs != nil && !slices.Equal(got, c.slugs) {
			t.Errorf("%s: got %v, want %v", c.name, got, c.slugs)
		}
		for _, s := range c.says {
			if !strings.Contains(r.Statement, s) {
				t.Errorf("%s: statement got %q, want %q in it", c.name, r.Statement, s)
			}
		}
		for _, s := range c.never {
			if r.finding(s) != nil {
				t.Errorf("%s: %s must not be named: %s", c.name, s, r.Statement)
			}
		}
	}
}

// locking has a PR of 250 ms between the leads: 117 ms of it in the node's fast pathway.
const locking = `"av_node":{"fast":{"min_ms":117.1,"alpha_ms":0,"tau_ms":1,"theta_ms":300,"up":null}}`

func deafAt(at, span string) string {
	return `"interventions":[{"at_ms":` + at + `,"do":"undersense","channel":"A","for_ms":` + span + `}]`
}

// The numbers of the same strips, from the device's own markers.
func TestPublishedIntervals(t *testing.T) {
	get := func(r *Report, name string) *Interval {
		for i := range r.Device.Intervals {
			if r.Device.Intervals[i].Name == name {
				return &r.Device.Intervals[i]
			}
		}
		t.Fatalf("no interval %s in %v", name, r.Device.Intervals)
		return nil
	}
	_, r := paced(t, `"span_ms":20000,"heart":{`+sinusEvery("130.43478260869566")+`,`+blockedNode+`},"pacemaker":{"mode":"DDD"}`)
	// 5: the pause is 2 PP - (N-1)(MTRI-PP) = 920 - 2*40 = 840; the longest AV 150 + 2*40.
	if got := get(r, "V-V").Longest; abs(got-840) > 1 {
		t.Errorf("5: pause got %v, want 840", got)
	}
	if got := get(r, "AS-VP"); abs(got.Longest-230) > 1 || abs(got.Least-150) > 1 {
		t.Errorf("5: AV got %v to %v, want 150 to 230", got.Least, got.Longest)
	}
	if f := r.finding("upper_rate_wenckebach"); f == nil || f.Ratio != "4:3" || !slices.EqualFunc(f.PRs, []float64{150, 190, 230}, func(a, b float64) bool { return abs(a-b) < 1 }) {
		t.Errorf("5: got %+v, want 4:3 with AV 150, 190, 230", f)
	}
	_, r = paced(t, `"span_ms":8000,"heart":{`+sinusEvery("157.89473684210526")+`,`+blockedNode+`},"pacemaker":{"mode":"DDD"}`)
	if got := get(r, "V-V"); abs(got.Least-760) > 1 || abs(got.Longest-760) > 1 {
		t.Errorf("8: V-V got %v to %v, want 760", got.Least, got.Longest)
	}
	// 13: cycle 500, AV stretched to 200, VP-AS 300.
	l, r := paced(t, `"span_ms":12000,"heart":{`+sinusEvery("54.54545454545455")+`,`+up("167.1")+`},"pacemaker":{"mode":"DDD","lower_rate_bpm":50},`+pvcAt3300)
	last := r.Device.Markers[len(r.Device.Markers)-1]
	as := r.Device.Markers[len(r.Device.Markers)-2]
	if last.Mark == "AS" {
		last, as = as, r.Device.Markers[len(r.Device.Markers)-3]
	}
	if abs(*last.VV-500) > 1 || abs(*last.AV-200) > 1 || abs(*as.VA-300) > 1 || last.Timer != "upper_rate" {
		t.Errorf("13: got V-V %v, AV %v, VA %v by %s at %v; want 500, 200, 300 by upper_rate", *last.VV, *last.AV, *as.VA, last.Timer, l.At(last.ID).T)
	}
	// 17: V-V 750; the stimulus 200 ms after the P that came up.
	_, r = paced(t, `"span_ms":12000,"heart":{"sinus":{"rate_bpm":30},"atria":{"erp_ms":230},`+up("117.1")+`},"pacemaker":{"mode":"DDD","lower_rate_bpm":80,"paced_av_ms":300,"pvarp_ms":300},
		"interventions":[{"at_ms":3000,"do":"lose_capture","channel":"A","for_ms":700}]`)
	if got := get(r, "V-V"); abs(got.Longest-750) > 1 {
		t.Errorf("17: V-V got %v, want 750", got.Longest)
	}
	if f := r.finding("repetitive_nonreentrant_va_synchrony"); f == nil || !strings.Contains(f.Text, "VA 250 ms") || !strings.Contains(f.Text, "200 ms after it") {
		t.Errorf("17: got %+v, want VA 250, AP 200 ms after the P", f)
	}
	// Extras of facts section 9: VVI 70 with hysteresis 50: 1200 after a sensed beat,
	// 857 after a paced one (derived, from memory).
	_, r = paced(t, `"span_ms":12000,"heart":{`+sinusEvery("45")+`},"pacemaker":{"mode":"VVI","lower_rate_bpm":70,"hysteresis":{"rate_bpm":50}}`)
	if got := get(r, "V-V"); abs(got.Longest-1200) > 1 || abs(*got.Median-857.143) > 1 || r.finding("hysteresis_pause") == nil {
		t.Errorf("hysteresis: got %+v, want 1200 and 857 with a finding", got)
	}
	// VVI 60, T wave sensed at 320 (refractory period 230 here): 1320 (derived).
	_, r = paced(t, `"span_ms":12000,"heart":{`+blockedNode+`},"pacemaker":{"mode":"VVI","leads":{"t_wave_ms":320}}`)
	if got := r.Device.Longest; abs(got-1320) > 1 || r.finding("oversensing") == nil {
		t.Errorf("T wave: got %v, want 1320 with a finding", got)
	}
}

// What each fault looks like: one strip a finding.
func TestDeviceFindings(t *testing.T) {
	slow := sinusEvery("40")
	for _, c := range []struct{ name, plan, slug, says string }{
		{"AAI", `"span_ms":9000,"heart":{` + slow + `},"pacemaker":{"mode":"AAI"}`, "atrial_pacing", "AAI: atrial pacing 60/min"},
		{"AP VS", `"span_ms":9000,"heart":{` + slow + `},"pacemaker":{"mode":"DDD","paced_av_ms":300}`, "atrial_pacing", "conducted (AR"},
		{"sequential", `"span_ms":9000,"heart":{` + slow + `,` + blockedNode + `},"pacemaker":{"mode":"DDD"}`, "av_sequential_pacing", "DDD: AV sequential pacing 60/min (AV 200 ms)"},
		{"VVI", `"span_ms":9000,"heart":{` + blockedNode + `},"pacemaker":{"mode":"VVI"}`, "ventricular_pacing", "VVI: ventricular pacing 60/min"},
		{"tracking", `"span_ms":9000,"heart":{` + blockedNode + `},"pacemaker":{"mode":"DDD"}`, "p_synchronous_pacing", "DDD: sinus 75/min tracked 1:1 (AV 150 ms)"},
		{"inhibited", `"span_ms":9000,"heart":{},"pacemaker":{"mode":"VVI"}`, "pacing_inhibited", "VVI: no stimulus"},
		{"loss", `"span_ms":9000,"heart":{` + blockedNode + `},"pacemaker":{"mode":"DDD"},"interventions":[{"at_ms":3000,"do":"lose_capture","channel":"V","for_ms":2000}]`, "loss_of_capture", "loss of ventricular capture"},
		{"undersensing", `"span_ms":9000,"heart":{},"pacemaker":{"mode":"VVI"},"interventions":[{"at_ms":3000,"do":"undersense","channel":"V","for_ms":3000}]`, "undersensing", "ventricular undersensing"},
		{"functional", `"span_ms":9000,"heart":{},"pacemaker":{"mode":"VVI"},"interventions":[{"at_ms":3000,"do":"undersense","channel":"V","for_ms":3000}]`, "functional_non_capture", ""},
		{"noise", `"span_ms":12000,"heart":{` + blockedNode + `},"pacemaker":{"mode":"VVI"},"interventions":[{"at_ms":3000,"do":"signal","channel":"V","cycle_ms":400,"count":6}]`, "oversensing", "oversensing of interference or noise (6 times)"},
		{"reversion", `"span_ms":12000,"heart":{` + blockedNode + `},"pacemaker":{"mode":"VVI","noise":{"window_ms":100}},"interventions":[{"at_ms":3000,"do":"signal","channel":"V","cycle_ms":80,"count":30}]`, "noise_reversion", "stimuli during it all the same"},
		{"noise inhibits", `"span_ms":12000,"heart":{` + blockedNode + `},"pacemaker":{"mode":"VVI","noise":{"window_ms":100,"inhibits":true}},"interventions":[{"at_ms":3000,"do":"signal","channel":"V","cycle_ms":80,"count":30}]`, "noise_reversion", "no stimulus during it"},
		{"safety", `"span_ms":7000,"heart":{` + slow + `},"pacemaker":{"mode":"DDD","paced_av_ms":180,"pavb_ms":40},"interventions":[{"at_ms":1400,"do":"signal","channel":"V"}]`, "safety_stimulus", "safety stimulus (once)"},
		{"crosstalk", `"span_ms":7000,"heart":{` + slow + `,` + blockedNode + `},"pacemaker":{"mode":"DDD","safety_stimulus":false},"interventions":[{"at_ms":1350,"do":"signal","channel":"V"}]`, "crosstalk_inhibition", "crosstalk inhibition (once)"},
		{"fusion", `"span_ms":9000,"heart":{},"pacemaker":{"mode":"DDD"}`, "fusion_beat", "fusion beats"},
		{"pseudofusion", `"span_ms":9000,"heart":{},"pacemaker":{"mode":"VOO"}`, "pseudofusion", "pseudofusion"},
		{"mode switch", `"span_ms":9000,"heart":{` + sinusEvery("70") + `,` + blockedNode + `,"foci":[{"site":"left_atrium","rate_bpm":250}]},"pacemaker":{"mode":"DDD","sensed_av_ms":107,"pvab_ms":105,"atrial_blanking_ms":50,"pvarp_ms":300,"max_tracking_rate_bpm":130,"mode_switch":{"rate_bpm":170,"short":4,"of":7}}`, "mode_switch", "mode change DDD to DDI"},
		{"lock-in, check 19", `"span_ms":9000,"heart":{` + sinusEvery("70") + `,` + blockedNode + `,"foci":[{"site":"left_atrium","rate_bpm":250}]},"pacemaker":{"mode":"DDD","sensed_av_ms":126,"pvab_ms":143,"atrial_blanking_ms":50,"pvarp_ms":300,"max_tracking_rate_bpm":130,"mode_switch":{"rate_bpm":170,"short":4,"of":7}}`, "upper_rate_two_to_one", "atrial rhythm 250/min tracked 2:1"},
		{"loop ended", `"span_ms":12000,"heart":{` + sinusEvery("54.54545454545455") + `,` + up("167.1") + `},"pacemaker":{"mode":"DDD","lower_rate_bpm":50,"loop":{"beats":8}},` + pvcAt3300, "endless_loop_tachycardia", "ended by a PVARP of 500 ms (endless loop)"},
	} {
		l, r := paced(t, c.plan)
		f := r.finding(c.slug)
		if f == nil {
			t.Errorf("%s: got %v, want %s among them: %s", c.name, slugs(r), c.slug, r.Statement)
			continue
		}
		if !strings.Contains(r.Statement, c.says) || !strings.Contains(f.Text, "consistent with") && c.slug != "safety_stimulus" {
			t.Errorf("%s: got %q, %q; want %q", c.name, r.Statement, f.Text, c.says)
		}
		for _, id := range f.Evidence {
			if l.At(id) == nil {
				t.Errorf("%s: evidence %d is no event", c.name, id)
			}
		}
	}
}

// A P that the device paced over says nothing about the AV node, with complete block
// and without; one that it left time for does.
func TestConductionNeedsOpportunity(t *testing.T) {
	none := []string{"complete_av_block", "functional_av_block", "two_to_one_av_block", "mobitz_1", "mobitz_2", "advanced_av_block", "second_degree_av_block", "av_dissociation"}
	for _, c := range []struct{ name, plan, want string }{
		{"block, tracked", `"span_ms":20000,"heart":{` + blockedNode + `},"pacemaker":{"mode":"DDD"}`, ""},
		{"healthy, tracked before it conducts", `"span_ms":20000,"heart":{},"pacemaker":{"mode":"DDD","sensed_av_ms":80}`, ""},
		{"healthy, 2:1", `"span_ms":20000,"heart":{` + sinusEvery("158") + `},"pacemaker":{"mode":"DDD","sensed_av_ms":80,"pvarp_ms":320}`, ""},
		{"block, VVI", `"span_ms":20000,"heart":{` + blockedNode + `},"pacemaker":{"mode":"VVI"}`, "complete_av_block"},
		{"block, stimuli without capture", `"span_ms":9000,"heart":{` + blockedNode + `},"pacemaker":{"mode":"DDD"},"interventions":[{"at_ms":3000,"do":"lose_capture","channel":"V","for_ms":3000}]`, "complete_av_block"},
		{"healthy, stimuli among sinus beats", `"span_ms":14000,"heart":{` + sinusEvery("96") + `},"pacemaker":{"mode":"DDD","magnet":{"mode":"DOO","rate_bpm":80,"av_ms":100,"from_ms":4000,"to_ms":9000}}`, ""},
		{"healthy, VVI faster than the sinus", `"span_ms":20000,"heart":{"av_node":{"fast":{"ah_ms":80,"va_ms":null}}},"pacemaker":{"mode":"VVI","lower_rate_bpm":80}`, ""},
	} {
		_, r := paced(t, c.plan)
		for _, s := range none {
			if r.finding(s) != nil && c.want == "" && s != "av_dissociation" {
				t.Errorf("%s: %s must not be named: %s", c.name, s, r.Statement)
			}
		}
		if c.want != "" && r.finding(c.want) == nil {
			t.Errorf("%s: got %v, want %s", c.name, slugs(r), c.want)
		}
	}
}

// A stimulus of the device that comes before the next beat of the heart was due is no
// premature beat, and its rhythm is no ectopic one.
func TestPacedBeatsAreNotPremature(t *testing.T) {
	for _, body := range []string{
		`"span_ms":20000,"heart":{"sinus":{"rate_bpm":75},"av_node":{"fast":{"ah_ms":80,"va_ms":null}}},"pacemaker":{"mode":"VVI","lower_rate_bpm":80}`,
		`"span_ms":20000,"heart":{"sinus":{"rate_bpm":55}},"pacemaker":{"mode":"AAI","lower_rate_bpm":80,"hysteresis":{"rate_bpm":50}},"interventions":[{"at_ms":5000,"do":"stimulate","site":"left_atrium"},{"at_ms":12000,"do":"set","field":"heart.sinus.rate_bpm","to":90}]`,
		`"span_ms":20000,"heart":{"sinus":{"rate_bpm":75}},"pacemaker":{"mode":"DOO","lower_rate_bpm":100}`,
		`"span_ms":20000,"heart":{"sinus":{"rate_bpm":60}},"pacemaker":{"mode":"AOO","lower_rate_bpm":63}`,
		`"span_ms":20000,"heart":{"sinus":{"rate_bpm":60}},"pacemaker":{"mode":"VOO","lower_rate_bpm":53}`,
	} {
		l, r := paced(t, body)
		for _, b := range r.Beats {
			if b.Premature && b.Paced && l.At(b.Begun).Rule == event.Timed && b.Kind == "P" {
				t.Errorf("%s: the paced beat at %v is called premature", body, b.T)
			}
			if b.Premature && b.Kind == "QRS" && !b.Conducted && l.At(b.Begun).Rule == event.Timed {
				t.Errorf("%s: the paced beat at %v is called premature", body, b.T)
			}
		}
		for _, s := range []string{"ventricular_stimulation", "atrial_stimulation", "ectopic_atrial_rhythm", "junctional_escape", "ventricular_escape"} {
			if r.finding(s) != nil {
				t.Errorf("%s: %s: %s", body, s, r.Statement)
			}
		}
	}
}

// A paced QRS is wide for its own reason: no bundle branch block is read from it.
func TestPacedShapeIsNoBundleBranchBlock(t *testing.T) {
	l, _ := paced(t, `"span_ms":9000,"heart":{`+blockedNode+`},"pacemaker":{"mode":"DDD"}`)
	r := Of(l, field.New().Record(l))
	for _, s := range shapeWords {
		if r.finding(s.slug) != nil {
			t.Errorf("%s is named: %s", s.slug, r.Statement)
		}
	}
}

// Counts and shares, by hand: sinus 75 from 0.36 s, AV 150, in 9 s.
func TestDeviceCounts(t *testing.T) {
	_, r := paced(t, `"span_ms":9000,"heart":{`+blockedNode+`},"pacemaker":{"mode":"DDD"}`)
	d := r.Device
	// P at 360 + 800 k, k = 0..10; the QRS of the last would be at 8.51 s.
	if d.Mode != "DDD" || d.AS != 11 || d.VP != 11 || d.AP+d.VS != 0 || *d.VentricularPaced != 100 || *d.AtrialPaced != 0 || *d.Synchronous != 100 {
		t.Errorf("got %+v", d)
	}
	if d.Longest != 800 {
		t.Errorf("longest got %v, want 800", d.Longest)
	}
	paced := 0
	for _, b := range r.Beats {
		if b.Kind == "QRS" && b.Paced && b.Origin == fromStimulus && b.DeviceID > 0 {
			paced++
		}
	}
	if paced != 11 {
		t.Errorf("%d beats are paced, want 11", paced)
	}
}

// Modes are read off the windows.
func TestModeFromWindows(t *testing.T) {
	for _, mode := range []string{"AAI", "AOO", "DDD", "DDI", "DOO", "DVI", "VDD", "VOO", "VVI", "VVT", "AAT"} {
		_, r := paced(t, `"span_ms":9000,"heart":{"sinus":{"rate_bpm":55}},"pacemaker":{"mode":"`+mode+`"}`)
		if r.Device.Mode != mode {
			t.Errorf("%s: got %s", mode, r.Device.Mode)
		}
	}
}

func TestNoDevice(t *testing.T) {
	if r := Of(preset(t, "normal"), nil); r.Device != nil {
		t.Errorf("a device on a strip without one: %+v", r.Device)
	}
}

package sim

import (
	"encoding/json"
	"math/rand/v2"
	"strings"
	"testing"

	"escapement/engine/event"
	"escapement/engine/plan"
	"escapement/engine/tick"
)

// object is a part of a plan file.
type object = map[string]any

func (d dice) whole(lo, hi int) float64 { return float64(d.int(lo, hi)) }

// orNull is a number, or null in one case of four.
func (d dice) orNull(lo, hi int) any {
	if d.chance(0.25) {
		return nil
	}
	return d.whole(lo, hi)
}

// aHeart draws a heart that may need a pacemaker.
func (d dice) aHeart() object {
	fast := object{"ah_ms": d.orNull(50, 200), "va_ms": d.orNull(130, 420), "erp_ms": d.whole(200, 380), "wenckebach_cl_ms": d.whole(390, 560), "concealed_from": d.between(0.5, 1)}
	h := object{"sinus": object{"rate_bpm": d.whole(30, 160), "jitter_ms": d.either(0.5, 0, 150)}, "atria": object{"erp_ms": d.whole(160, 300)},
		"av_node": object{"fast": fast, "ah_at_cycle_ms": 1000, "erp_at_cycle_ms": 800}}
	if d.chance(0.2) {
		fast["drop"] = "30%"
	}
	if d.chance(0.2) {
		h["his_purkinje"] = object{"right_bundle": nil}
	}
	var foci []object
	for _, site := range []string{"av_junction", "rv_apex", "lv_lateral", "left_atrium"} {
		if d.chance(0.15) {
			foci = append(foci, object{"site": site, "rate_bpm": d.whole(25, 130), "jitter_ms": d.whole(0, 200)})
		}
	}
	if foci != nil {
		h["foci"] = foci
	}
	return h
}

// core draws the timing cycles of a device without further features.
func (d dice) core(modes ...string) object {
	o := object{"mode": modes[d.IntN(len(modes))], "lower_rate_bpm": d.whole(40, 90), "max_tracking_rate_bpm": d.whole(95, 170), "paced_av_ms": d.whole(60, 300), "sensed_av_ms": d.whole(40, 280),
		"pvarp_ms": d.whole(150, 450), "pvab_ms": d.whole(0, 150), "ventricular_refractory_ms": d.whole(150, 340), "atrial_blanking_ms": d.whole(0, 150), "atrial_refractory_ms": d.whole(150, 400),
		"pavb_ms": d.whole(0, 50), "crosstalk_window_ms": d.whole(60, 120), "safety_stimulus": d.chance(0.7), "base_timing": []string{"ventricular", "atrial", "modified_atrial"}[d.IntN(3)],
		"refractory_p_counts": d.chance(0.5)}
	if d.chance(0.4) {
		o["post_pvc_pvarp_ms"] = d.whole(200, 500)
	}
	leads := object{}
	if d.chance(0.2) {
		leads["far_field_ms"] = d.whole(20, 200)
	}
	if d.chance(0.2) {
		leads["t_wave_ms"] = d.whole(200, 400)
	}
	if d.chance(0.15) {
		leads["atrial"] = object{"amplitude_v": 0.5}
	}
	if d.chance(0.1) {
		leads["ventricular"] = object{"site": "his"}
	}
	o["leads"] = leads
	return o
}

// features adds what devices do beyond the timing cycles.
func (d dice) features(o object) {
	add := func(name string, v any) {
		if d.chance(0.25) {
			o[name] = v
		}
	}
	mode := o["mode"].(string)
	tracks := mode == "DDD" || mode == "VDD"
	if d.chance(0.3) {
		o["mode"] = mode + "R"
		o["sensor"] = object{"slope_bpm": d.whole(10, 80), "rise_s": d.whole(0, 5), "fall_s": d.whole(0, 5), "activity_at_ms": []int{1000, 6000}, "activity_level": []float64{d.Float64(), d.Float64()}}
	}
	add("adaptive_av", object{"shortest_ms": 60, "from_bpm": 70, "to_bpm": 130})
	add("adaptive_pvarp", object{"shortest_ms": 160, "from_bpm": 70, "to_bpm": 130})
	add("hysteresis", object{"rate_bpm": 35, "every": d.int(0, 5), "cycles": 2})
	add("longer_av", object{"by_ms": 100, "longest_ms": 350, "every": 4, "misses": 1})
	add("shorter_av", object{"by_ms": 30, "shortest_ms": 60, "beats": 5})
	add("noise", object{"window_ms": 100, "inhibits": d.chance(0.5)})
	add("change_limit", object{"longer_percent": 12, "shorter_percent": 9})
	add("night", object{"rate_bpm": 35, "from_ms": 3000, "to_ms": 7000})
	add("rate_fall", object{"from_bpm": 90, "within_ms": 4000, "beats": 1, "rate_bpm": 100, "for_ms": 3000})
	add("stabilise", object{"by_ms": 100, "rate_bpm": 100})
	if tracks {
		add("mode_switch", object{"rate_bpm": 150, "short": 3, "of": 5, "mode": "VVI", "return": 2, "ramp_ms": d.int(0, 60)})
		add("loop", object{"beats": 3, "rate_margin_ms": 300, "margin_ms": 20, "pvarp_ms": 450, "withhold": d.chance(0.5)})
	}
	if mode == "DDD" {
		add("backup", object{"misses": 2, "of": 4, "delay_ms": 80, "retest_ms": 2000, "retest_max_ms": 8000})
		add("magnet", object{"mode": "DOO", "from_ms": 4000, "to_ms": 6000})
		if d.chance(0.25) {
			o["mode"] = "DDDOV"
			delete(o, "sensor")
			o["left"] = object{"offset_ms": d.int(-60, 60), "only": d.chance(0.3), "av_to_right": d.chance(0.5), "second_point_ms": d.int(0, 30)}
		}
	}
}

func (d dice) interventions() []object {
	out := []object{}
	for range d.IntN(5) {
		at := object{"at_ms": d.whole(500, 9000)}
		switch d.IntN(6) {
		case 0:
			at["do"], at["channel"], at["for_ms"] = "lose_capture", []string{"A", "V"}[d.IntN(2)], d.whole(100, 3000)
		case 1:
			at["do"], at["channel"], at["for_ms"] = "undersense", []string{"A", "V"}[d.IntN(2)], d.whole(100, 3000)
		case 2:
			at["do"], at["channel"], at["cycle_ms"], at["count"] = "signal", []string{"A", "V"}[d.IntN(2)], d.whole(20, 400), d.int(1, 20)
		case 3:
			at["do"], at["site"], at["cycle_ms"], at["count"] = "train", "right_atrium", d.whole(180, 500), d.int(2, 20)
		default:
			at["do"], at["site"] = "stimulate", []string{"rv_apex", "lv_lateral", "left_atrium"}[d.IntN(3)]
		}
		out = append(out, at)
	}
	return out
}

// devices draws so many plans with a device that can run, and hands each over.
func devices(t *testing.T, n int, make func(d dice) object, look func(file []byte, prog *plan.Program, device object)) {
	t.Helper()
	if testing.Short() {
		n /= 10
	}
	done := 0
	for seed := uint64(1); done < n; seed++ {
		if seed > uint64(20*n) {
			t.Fatalf("only %d of %d seeds made a plan that can run", done, seed)
		}
		d := dice{rand.New(rand.NewPCG(seed, 7))}
		o := make(d)
		file, err := json.Marshal(object{"format": plan.Format, "span_ms": 12000, "seed": seed, "heart": d.aHeart(), "pacemaker": o, "interventions": d.interventions()})
		if err != nil {
			t.Fatal(err)
		}
		p, err := plan.Decode(file)
		if err != nil {
			t.Fatalf("seed %d: %v\n%s", seed, err, file)
		}
		prog, err := p.Compile()
		if err != nil {
			continue // numbers that cannot hold together
		}
		done++
		look(file, prog, o)
		if t.Failed() {
			t.Fatalf("seed %d: %s", seed, file)
		}
	}
}

var everyMode = []string{"DDD", "DDD", "VDD", "DDI", "DVI", "VVI", "VVT", "AAI", "AAT", "AOO", "VOO", "DOO", "OAO", "OVO", "ODO"}

// Any device on any heart makes a valid log, in which windows of one name follow each
// other; and a run in small steps makes the same one.
func TestAnyDeviceOnAnyHeart(t *testing.T) {
	kinds := map[string]int{}
	devices(t, 400, func(d dice) object {
		o := d.core(everyMode...)
		d.features(o)
		return o
	}, func(file []byte, prog *plan.Program, _ object) {
		l, err := Play(prog)
		if err != nil {
			t.Fatal(err)
		}
		for _, e := range event.Validate(l) {
			t.Error(e)
		}
		open := map[string]tick.Time{}
		for i := range l.Events {
			e := &l.Events[i]
			if e.Kind != event.Window {
				continue
			}
			kinds[e.Field]++
			if e.T < open[e.Field] {
				t.Errorf("%s begins at %v ms while one runs until %v", e.Field, e.T, open[e.Field])
			}
			open[e.Field] = e.Until
		}
		m := New(prog)
		for budget := 1; !m.Run(budget); budget = budget%7 + 1 {
		}
		if m.Log().Text() != l.Text() {
			t.Error("a run in small steps differs from one run")
		}
	})
	t.Log(kinds)
	for _, w := range []string{"av_delay", "atrial_escape", "lower_rate", "upper_rate", "pvarp", "pvab", "atrial_blanking", "atrial_refractory", "pavb", "crosstalk", "ventricular_refractory", "noise", "atrial_noise", "backup_delay", "withheld"} {
		if kinds[w] == 0 {
			t.Errorf("no %s in any of them: the draw has become too narrow", w)
		}
	}
}

// timing is what the rules about intervals look at.
type timing struct {
	v       []mark // ventricular events that count, stimuli and signals
	ap      []mark
	windows []*event.Event
}

func timings(l *event.Log) timing {
	var tm timing
	for _, m := range marks(l, 0) {
		switch {
		case strings.HasPrefix(m.what, "AP"):
			tm.ap = append(tm.ap, m)
		case strings.HasPrefix(m.what, "VP"), m.what == "VS inhibits", m.what == "VS resets":
			tm.v = append(tm.v, m)
		}
	}
	for i := range l.Events {
		if e := &l.Events[i]; e.Kind == event.Window {
			tm.windows = append(tm.windows, e)
		}
	}
	return tm
}

// within tells whether an event falls in a window of one of the names, its beginning
// included and its end not.
func (tm *timing) within(e *event.Event, names ...string) string {
	for _, w := range tm.windows {
		for _, n := range names {
			if w.Field == n && w.T <= e.T && e.T < w.Until && w.ID < e.ID {
				return n
			}
		}
	}
	return ""
}

// A tracked stimulus keeps the upper-rate interval; no stimulus comes in a window that
// forbids it; and the ventricles are never left longer than the settings allow.
func TestStimuliKeepTheirIntervals(t *testing.T) {
	counts := map[string]int{}
	devices(t, 400, func(d dice) object { return d.core("DDD", "DDD", "VDD", "VVI", "DDI") }, func(_ []byte, prog *plan.Program, o object) {
		l, err := Play(prog)
		if err != nil {
			t.Fatal(err)
		}
		tm := timings(l)
		bpm := func(name string) float64 { return 60000 / o[name].(float64) }
		ms := func(name string) float64 { return o[name].(float64) }
		last := 0.0
		for _, m := range append(tm.v, mark{ms: l.Span.MS()}) {
			if longest := longest(o); m.ms-last > longest+0.01 {
				t.Errorf("no ventricular event from %v to %v ms, longer than %v", last, m.ms, longest)
			}
			last = m.ms
		}
		for i, m := range tm.v {
			if m.e.Kind != event.Stimulus {
				continue
			}
			counts[m.e.Field]++
			by := l.At(m.e.Cause)
			tracked := (m.e.Field == "av_delay" || m.e.Field == "upper_rate") && by != nil && by.Kind == event.Sense
			if tracked && i > 0 && m.ms-tm.v[i-1].ms < bpm("max_tracking_rate_bpm")-0.01 {
				t.Errorf("tracked stimulus at %v ms, %v after the last ventricular event", m.ms, m.ms-tm.v[i-1].ms)
			}
			if tracked && m.ms-by.T.MS() < ms("sensed_av_ms")-0.01 {
				t.Errorf("tracked stimulus at %v ms, %v after its P", m.ms, m.ms-by.T.MS())
			}
			if w := tm.within(m.e, "pavb", "av_delay", "crosstalk"); w != "" {
				t.Errorf("ventricular stimulus at %v ms within %s", m.ms, w)
			}
			if w := tm.within(m.e, "upper_rate"); tracked && w != "" {
				t.Errorf("tracked stimulus at %v ms within %s", m.ms, w)
			}
		}
		for _, m := range tm.ap {
			counts["AP"]++
			if w := tm.within(m.e, "av_delay", "crosstalk", "atrial_escape"); w != "" {
				t.Errorf("atrial stimulus at %v ms within %s", m.ms, w)
			}
		}
	})
	t.Log(counts)
}

// longest is the longest time, in ms, that the settings leave the ventricles alone: in
// VVI and DDI the lower-rate interval. In DDD the atrial escape and then the longer AV
// delay, or the upper-rate interval; by atrial base the escape counts from the atrial
// event before. In VDD a late P is not tracked past the lower-rate interval.
func longest(o object) float64 {
	ms := func(name string) float64 { return o[name].(float64) }
	lri, av := 60000/ms("lower_rate_bpm"), max(ms("paced_av_ms"), ms("sensed_av_ms"))
	if o["mode"] != "DDD" {
		return lri
	}
	if o["base_timing"] == "ventricular" {
		return max(lri-ms("paced_av_ms")+av, 60000/ms("max_tracking_rate_bpm"))
	}
	return lri + av
}

// A setting that the mode or another setting puts out of use changes nothing.
func TestUnusedSettingsChangeNothing(t *testing.T) {
	unused := map[string][]string{
		"VVI": {"pvarp_ms", "pvab_ms", "paced_av_ms", "sensed_av_ms", "max_tracking_rate_bpm", "atrial_blanking_ms", "atrial_refractory_ms", "pavb_ms", "post_pvc_pvarp_ms", "leads.far_field_ms", "leads.atrial.amplitude_v", "leads.left.amplitude_v"},
		"AAI": {"pvarp_ms", "pvab_ms", "paced_av_ms", "sensed_av_ms", "ventricular_refractory_ms", "pavb_ms", "leads.t_wave_ms", "leads.ventricular.amplitude_v"},
		"VDD": {"pavb_ms", "atrial_refractory_ms", "leads.atrial.amplitude_v", "hysteresis.every"},
		"DDD": {"atrial_refractory_ms", "max_sensor_rate_bpm", "noise.inhibits", "mode_switch.short", "loop.margin_ms", "backup.retest_ms", "magnet.rate_bpm", "left.offset_ms", "stabilise.rate_bpm", "rate_fall.rate_bpm", "longer_av.every", "shorter_av.beats", "adaptive_av.shortest_ms", "leads.left.amplitude_v"},
		"DDI": {"sensed_av_ms", "atrial_refractory_ms", "max_tracking_rate_bpm"},
	}
	devices(t, 300, func(d dice) object { return d.core("VVI", "AAI", "VDD", "DDD", "DDI") }, func(file []byte, prog *plan.Program, o object) {
		names := unused[o["mode"].(string)]
		name := names[len(file)%len(names)]
		var whole object
		if err := json.Unmarshal(file, &whole); err != nil {
			t.Fatal(err)
		}
		at := whole["pacemaker"].(object)
		parts := strings.Split(name, ".")
		for _, part := range parts[:len(parts)-1] {
			if at[part] == nil {
				at[part] = object{}
			}
			at = at[part].(object)
		}
		at[parts[len(parts)-1]] = another(name)
		changed, _ := json.Marshal(whole)
		p, err := plan.Decode(changed)
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		other, err := p.Compile()
		if err != nil {
			return // another setting that does not go with the rest
		}
		got, err := Play(other)
		if err != nil {
			t.Fatal(err)
		}
		want, err := Play(prog)
		if err != nil {
			t.Fatal(err)
		}
		if d := difference(got.Text(), want.Text()); d != "" {
			t.Errorf("%s: %s", name, d)
		}
	})
}

func another(name string) any {
	switch {
	case strings.HasSuffix(name, "retest_ms"):
		return 2000
	case strings.HasSuffix(name, "inhibits"):
		return true
	case strings.HasSuffix(name, "_v"):
		return 0.1
	case strings.HasSuffix(name, "rate_bpm"):
		return 117
	case strings.HasSuffix(name, "_ms"):
		return 100
	}
	return 9
}

// BenchmarkTenSecondsDDD runs ten seconds of a device in an endless loop by retrograde
// conduction, with the plan compiled once. runs/s is what a search of settings does.
func BenchmarkTenSecondsDDD(b *testing.B) {
	prog := program(b, 10000, sinusAt(500, 1100)+","+conductsBack(300, 380), `"mode":"DDD","lower_rate_bpm":50`, stimulus(3300, "rv_apex"))
	events := 0
	b.ReportAllocs()
	for b.Loop() {
		l, err := Play(prog)
		if err != nil {
			b.Fatal(err)
		}
		events += len(l.Events)
	}
	seconds := b.Elapsed().Seconds()
	b.ReportMetric(float64(b.N)/seconds, "runs/s")
	b.ReportMetric(float64(events)/seconds, "events/s")
}

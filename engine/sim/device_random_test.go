package sim

import (
	"encoding/json"
	"strings"
	"testing"

	"escapement/engine/event"
	"escapement/engine/plan"
	"escapement/engine/tick"
)

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
	if testing.Short() {
		return // a tenth of the devices do not draw every window
	}
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

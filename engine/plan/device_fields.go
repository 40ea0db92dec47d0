package plan

import "strings"

// deviceFields describe the pacemaker. Usual ranges are from memory of textbooks
// where no source stands; they are not recommendations.
func deviceFields() []*Field {
	d := func(name string) string { return device + "." + name }
	mode := func(path, label, word string) *Field {
		return &Field{Path: path, Label: label, Kind: ModeCode, Word: word, Help: "NBG code (Bernstein et al., PACE 2002;25:260)."}
	}
	swtch := func(path, label string, on bool, help string) *Field {
		return &Field{Path: path, Label: label, Kind: Switch, On: on, Help: help, Advanced: true}
	}
	fs := []*Field{
		{Path: device, Label: "pacemaker", Kind: Group, Nullable: true, IsNull: true, Null: "no device", Help: "A generic device by the trade's definitions, no maker's."},
		mode(d("mode"), "mode", "DDD"),
		num(d("lower_rate_bpm"), "lower rate", "/min", 60, 30, 180),
		num(d("max_tracking_rate_bpm"), "upper tracking rate", "/min", 120, 80, 200),
		num(d("max_sensor_rate_bpm"), "upper sensor rate", "/min", 120, 80, 200).advanced(),
		num(d("paced_av_ms"), "paced AV delay", "ms", 200, 20, 400).normal(150, 200, "usual settings, from memory"),
		num(d("sensed_av_ms"), "sensed AV delay", "ms", 150, 20, 400).normal(100, 150, "usual settings, from memory"),
		num(d("pvarp_ms"), "PVARP", "ms", 250, 0, 600).normal(250, 300, "usual settings, from memory").help("Atrial signals so soon after a ventricular event are not tracked."),
		num(d("pvab_ms"), "PVAB", "ms", 100, 0, 300).help("The first part of PVARP, deaf to the atrium."),
		num(d("ventricular_refractory_ms"), "ventricular refractory period", "ms", 230, 100, 500),
		{Path: d("base_timing"), Label: "base timing", Kind: Choice, Word: "ventricular", Choices: []string{"ventricular", "atrial", "modified_atrial"}, Help: "What the lower rate is counted from."},
		num(d("atrial_blanking_ms"), "atrial blanking", "ms", 100, 0, 200).advanced(),
		num(d("atrial_refractory_ms"), "atrial refractory period", "ms", 250, 100, 600).advanced(),
		num(d("pavb_ms"), "PAVB", "ms", 30, 0, 120).help("The ventricular channel is deaf so long after an atrial stimulus.").advanced(),
		num(d("crosstalk_window_ms"), "crosstalk window", "ms", 110, 0, 150).help("A ventricular signal between PAVB and here is answered by a safety stimulus.").advanced(),
		swtch(d("safety_stimulus"), "safety stimulus", true, "Off: a signal in the crosstalk window inhibits like any other."),
		num(d("post_pvc_pvarp_ms"), "PVARP after a PVC", "ms", 0, 0, 600).help("0: as usual.").advanced(),
		swtch(d("refractory_p_counts"), "a refractory P counts", false, "A ventricular signal is no PVC where an atrial signal in a refractory period came before it."),
		swtch(d("av_past_lower_rate"), "AV past lower rate", false, "VDD: the AV delay of a late P may run past the lower-rate interval."),
		num(d("atrial_delay_ms"), "delay after a refractory P", "ms", 0, 0, 500).help("An atrial stimulus comes no sooner than this after an atrial signal in a refractory period; 0: off.").advanced(),
	}
	n := func(path, label, unit string, def, lo, hi float64) {
		fs = append(fs, num(d(path), label, unit, def, lo, hi).advanced())
	}
	n("adaptive_av.shortest_ms", "shortest AV delay", "ms", 0, 0, 400)
	n("adaptive_av.from_bpm", "AV shortens from", "/min", 0, 0, 200)
	n("adaptive_av.to_bpm", "to", "/min", 0, 0, 200)
	n("adaptive_pvarp.shortest_ms", "shortest PVARP", "ms", 0, 0, 600)
	n("adaptive_pvarp.from_bpm", "PVARP shortens from", "/min", 0, 0, 200)
	n("adaptive_pvarp.to_bpm", "to", "/min", 0, 0, 200)
	n("hysteresis.rate_bpm", "hysteresis rate", "/min", 0, 0, 180)
	n("hysteresis.every", "search every", "stimuli", 0, 0, 10000)
	n("hysteresis.cycles", "for cycles", "", 0, 0, 100)
	n("longer_av.by_ms", "AV longer by", "ms", 0, 0, 300)
	n("longer_av.longest_ms", "no longer than", "ms", 0, 0, 500)
	n("longer_av.every", "search every", "stimuli", 0, 0, 10000)
	n("longer_av.misses", "give up after", "stimuli", 0, 0, 100)
	n("shorter_av.by_ms", "AV shorter by", "ms", 0, 0, 150)
	n("shorter_av.shortest_ms", "no shorter than", "ms", 0, 0, 400)
	n("shorter_av.beats", "for stimuli", "", 0, 0, 10000)
	n("noise.window_ms", "noise window", "ms", 0, 0, 300)
	fs = append(fs, swtch(d("noise.inhibits"), "noise inhibits", false, "Off: while there is noise the device paces without listening."))
	n("sensor.slope_bpm", "sensor slope", "/min", 0, 0, 200)
	n("sensor.rise_s", "rise", "s", 0, 0, 600)
	n("sensor.fall_s", "fall", "s", 0, 0, 1200)
	fs = append(fs,
		&Field{Path: d("sensor.activity_at_ms"), Label: "activity at", Unit: "ms", Kind: List, Max: 86400000, Help: "Times at which the activity changes.", Advanced: true},
		&Field{Path: d("sensor.activity_level"), Label: "activity", Kind: List, Max: 1, Help: "Level from each of these times on, 0 to 1.", Advanced: true})
	n("change_limit.longer_percent", "next interval longer by", "%", 0, 0, 100)
	n("change_limit.shorter_percent", "or shorter by", "%", 0, 0, 100)
	n("night.rate_bpm", "night rate", "/min", 0, 0, 180)
	n("night.from_ms", "night from", "ms", 0, 0, 86400000)
	n("night.to_ms", "to", "ms", 0, 0, 86400000)
	n("mode_switch.rate_bpm", "switch above atrial rate", "/min", 0, 0, 400)
	n("mode_switch.short", "after short intervals", "", 5, 1, 32)
	n("mode_switch.of", "of", "", 8, 1, 32)
	fs = append(fs, mode(d("mode_switch.mode"), "switch to", "DDI").advanced())
	n("mode_switch.return", "back after long intervals", "", 5, 1, 100)
	n("mode_switch.ramp_ms", "fall by a beat", "ms", 0, 0, 500)
	n("loop.beats", "loop after stimuli", "", 0, 0, 32)
	n("loop.rate_margin_ms", "interval up to upper rate and", "ms", 20, 0, 500)
	n("loop.margin_ms", "VA constant within", "ms", 10, 0, 100)
	n("loop.pvarp_ms", "PVARP for one cycle", "ms", 500, 0, 800)
	fs = append(fs, swtch(d("loop.withhold"), "leave out a stimulus instead", false, ""))
	n("rate_fall.from_bpm", "rate fall from", "/min", 0, 0, 200)
	n("rate_fall.within_ms", "within", "ms", 10000, 0, 600000)
	n("rate_fall.beats", "confirmed by stimuli", "", 2, 1, 20)
	n("rate_fall.rate_bpm", "then pace at", "/min", 100, 30, 180)
	n("rate_fall.for_ms", "for", "ms", 60000, 0, 3600000)
	n("stabilise.by_ms", "next interval longer by at most", "ms", 0, 0, 500)
	n("stabilise.rate_bpm", "not faster than", "/min", 110, 30, 180)
	fs = append(fs, swtch(d("stabilise.only_switched"), "only while switched", false, ""))
	n("backup.misses", "backup after missed beats", "", 0, 0, 32)
	n("backup.of", "of", "", 4, 1, 32)
	n("backup.delay_ms", "backup delay", "ms", 80, 20, 300)
	n("backup.retest_ms", "test conduction after", "ms", 60000, 1000, 86400000)
	n("backup.retest_max_ms", "at most", "ms", 960000, 1000, 86400000)
	fs = append(fs, mode(d("magnet.mode"), "magnet mode", "").advanced())
	n("magnet.rate_bpm", "magnet rate", "/min", 85, 30, 120)
	n("magnet.av_ms", "magnet AV delay", "ms", 0, 0, 400)
	n("magnet.from_ms", "magnet from", "ms", 0, 0, 86400000)
	n("magnet.to_ms", "to", "ms", 0, 0, 86400000)
	n("left.offset_ms", "left after right", "ms", 0, -100, 100)
	fs = append(fs, swtch(d("left.only"), "left only", false, ""), swtch(d("left.av_to_right"), "AV delay ends at the right", false, ""))
	n("left.second_point_ms", "second left site after", "ms", 0, 0, 80)
	fs = append(fs, leadSite(d("left.second_site"), "lv_apex", ventricularSites))
	for _, l := range []struct {
		name, site    string
		sites         []string
		signal, sense float64
	}{{"atrial", "right_atrium", atrialSites, 3, 0.5}, {"ventricular", "rv_apex", ventricularSites, 9, 2}, {"left", "lv_lateral", ventricularSites, 9, 2}} {
		at := "leads." + l.name
		fs = append(fs, leadSite(d(at+".site"), l.site, l.sites))
		n(at+".amplitude_v", "amplitude", "V", 2.5, 0, 10)
		n(at+".width_ms", "pulse width", "ms", 0.4, 0.05, 2)
		n(at+".rheobase_v", "rheobase", "V", 0.35, 0, 10)
		n(at+".chronaxie_ms", "chronaxie", "ms", 0.4, 0, 2)
		n(at+".latency_ms", "latency", "ms", 0, 0, 100)
		if l.name != "atrial" {
			fs = append(fs, opt(d(at+".muscle_rheobase_v"), "rheobase of the muscle", "V", 0, 10, "For a lead on the conduction system: the muscle beside it, which it may capture too. Left out: never.").advanced())
		}
		n(at+".sensing_delay_ms", "sensed late by", "ms", 0, 0, 200)
		n(at+".signal_mv", "signal", "mV", l.signal, 0, 40)
		n(at+".sensitivity_mv", "sensitivity", "mV", l.sense, 0.1, 20)
	}
	n("leads.far_field_ms", "far field of the QRS after", "ms", 0, 0, 300)
	n("leads.t_wave_ms", "T wave sensed after", "ms", 0, 0, 600)
	n("leads.crosstalk_ms", "atrial stimulus sensed in the ventricle after", "ms", 0, 0, 150)
	for _, f := range fs {
		switch {
		case f.Unit == "stimuli":
			f.Unit, f.Whole = "", true
		case f.Kind == Number && f.Unit == "" && !strings.Contains(f.Path, "percent"):
			f.Whole = true
		}
	}
	return fs
}

func leadSite(path, word string, sites []string) *Field {
	return &Field{Path: path, Label: "site", Kind: Choice, Word: word, Choices: sites, Advanced: true}
}

package plan

import (
	"escapement/engine/event"
	"escapement/engine/heart"
	"escapement/engine/pacer"
	"escapement/engine/tick"
)

// Device is the pacemaker of a program: its timing and its leads.
type Device struct {
	Settings pacer.Settings
	Leads    [pacer.HisLead + 1]Lead // by pacer.Lead; unused ones have no site
	FarField tick.Dur                // a ventricular depolarisation is a signal on the atrial channel so much later; 0: it is not
	TWave    tick.Dur                // and one on the ventricular channel; 0: it is not
	Cross    tick.Dur                // an atrial stimulus is a signal on the ventricular channel so much later; 0: it is not
}

// Lead is where a device stimulates and senses.
type Lead struct {
	Site      event.SiteID // stimulated; event.None: no such lead
	Sensing   event.SiteID // whose depolarisation it senses
	Threshold float64      // V, at the programmed pulse width
	Amplitude float64      // V
	Senses    bool         // the signal there is above the programmed sensitivity
	Latency   tick.Dur     // from the stimulus to the depolarisation
	Delay     tick.Dur     // from the depolarisation to its signal, as in mechanical sensing

	// Muscle is the muscle beside a lead on the conduction system and MuscleThreshold
	// what captures it, by itself; event.None where it is never captured. Two tissues
	// under one tip have two thresholds and two refractory periods.
	Muscle          event.SiteID
	MuscleThreshold float64
}

// Captures tells whether the programmed output is above the threshold.
func (l *Lead) Captures() bool { return l.Amplitude >= l.Threshold }

const device = "pacemaker"

// atrialSites and ventricularSites are where a lead may lie.
var (
	atrialSites      = []string{"right_atrium", "left_atrium", "atrial_septum"}
	ventricularSites = []string{"rv_apex", "rv_septum", "rv_outflow", "rv_free_wall", "his", "right_bundle", "left_bundle", "left_septal",
		"lv_septum", "lv_apex", "lv_anterior", "lv_lateral", "lv_posterior"}
)

// settings gathers the device's numbers.
func (p *Plan) settings() pacer.Settings {
	const d = device + "." // paths are put together when the program is built: a sweep is here for every run
	ms := func(path string) tick.Dur { return tick.MS(p.number(path)) }
	bpm := func(path string) float64 { return p.number(path) }
	count := func(path string) int { return int(p.number(path)) }
	seconds := func(path string) tick.Dur { return tick.MS(1000 * p.number(path)) }
	at := func(path string) tick.Time { return tick.Time(ms(path)) }
	on := func(path string) bool { return p.on(path) }
	s := pacer.Settings{
		Mode: p.mode(d + "mode"), LowerRate: bpm(d + "lower_rate_bpm"), UpperRate: bpm(d + "max_tracking_rate_bpm"), Base: bases[p.word(device+".base_timing")],
		PacedAV: ms(d + "paced_av_ms"), SensedAV: ms(d + "sensed_av_ms"),
		PVARP: ms(d + "pvarp_ms"), PVAB: ms(d + "pvab_ms"), AtrialBlanking: ms(d + "atrial_blanking_ms"), AtrialRefractory: ms(d + "atrial_refractory_ms"),
		PAVB: ms(d + "pavb_ms"), Crosstalk: ms(d + "crosstalk_window_ms"), SafetyStimulus: on(d + "safety_stimulus"), VentricularRefractory: ms(d + "ventricular_refractory_ms"),
		PostPVC: ms(d + "post_pvc_pvarp_ms"), RefractoryCounts: on(d + "refractory_p_counts"), PastLowerRate: on(d + "av_past_lower_rate"), AtrialDelay: ms(d + "atrial_delay_ms"),
		AdaptiveAV:    pacer.Adaptive{From: bpm(d + "adaptive_av.from_bpm"), To: bpm(d + "adaptive_av.to_bpm"), Shortest: ms(d + "adaptive_av.shortest_ms")},
		AdaptivePVARP: pacer.Adaptive{From: bpm(d + "adaptive_pvarp.from_bpm"), To: bpm(d + "adaptive_pvarp.to_bpm"), Shortest: ms(d + "adaptive_pvarp.shortest_ms")},
		Hysteresis:    pacer.Hysteresis{Rate: bpm(d + "hysteresis.rate_bpm"), Every: count(d + "hysteresis.every"), Cycles: count(d + "hysteresis.cycles")},
		LongerAV:      pacer.LongerAV{By: ms(d + "longer_av.by_ms"), Longest: ms(d + "longer_av.longest_ms"), Every: count(d + "longer_av.every"), Misses: count(d + "longer_av.misses")},
		ShorterAV:     pacer.ShorterAV{By: ms(d + "shorter_av.by_ms"), Shortest: ms(d + "shorter_av.shortest_ms"), Beats: count(d + "shorter_av.beats")},
		Noise:         pacer.Noise{Window: ms(d + "noise.window_ms"), Inhibits: on(d + "noise.inhibits")},
		Sensor:        pacer.Sensor{Slope: bpm(d + "sensor.slope_bpm"), Limit: bpm(d + "max_sensor_rate_bpm"), Rise: seconds(d + "sensor.rise_s"), Fall: seconds(d + "sensor.fall_s"), Activity: p.activity()},
		ChangeLimit:   pacer.ChangeLimit{Longer: bpm(d + "change_limit.longer_percent"), Shorter: bpm(d + "change_limit.shorter_percent")},
		Night:         pacer.Night{Rate: bpm(d + "night.rate_bpm"), From: at(d + "night.from_ms"), To: at(d + "night.to_ms")},
		Switch: pacer.Switch{Rate: bpm(d + "mode_switch.rate_bpm"), Short: count(d + "mode_switch.short"), Of: count(d + "mode_switch.of"),
			Mode: p.mode(d + "mode_switch.mode"), Return: count(d + "mode_switch.return"), Ramp: ms(d + "mode_switch.ramp_ms")},
		Loop:      pacer.Loop{Beats: count(d + "loop.beats"), RateMargin: ms(d + "loop.rate_margin_ms"), Margin: ms(d + "loop.margin_ms"), PVARP: ms(d + "loop.pvarp_ms"), Withhold: on(d + "loop.withhold")},
		Fall:      pacer.Fall{From: bpm(d + "rate_fall.from_bpm"), Within: ms(d + "rate_fall.within_ms"), Beats: count(d + "rate_fall.beats"), Rate: bpm(d + "rate_fall.rate_bpm"), For: ms(d + "rate_fall.for_ms")},
		Stabilise: pacer.Stabilise{By: ms(d + "stabilise.by_ms"), Rate: bpm(d + "stabilise.rate_bpm"), OnlySwitched: on(d + "stabilise.only_switched")},
		Backup:    pacer.Backup{Misses: count(d + "backup.misses"), Of: count(d + "backup.of"), Delay: ms(d + "backup.delay_ms"), Retest: ms(d + "backup.retest_ms"), RetestMax: ms(d + "backup.retest_max_ms")},
		Magnet:    pacer.Magnet{Mode: p.mode(d + "magnet.mode"), Rate: bpm(d + "magnet.rate_bpm"), AV: ms(d + "magnet.av_ms"), From: at(d + "magnet.from_ms"), To: at(d + "magnet.to_ms")},
	}
	if p.word(device+".leads.ventricular.site") == "his" {
		s.Sites.Right = pacer.HisLead
	}
	if s.Mode.Multisite == 'V' {
		s.Sites.Left, s.Sites.Only, s.Sites.ToRV = true, on(d+"left.only"), on(d+"left.av_to_right")
		s.Sites.Offset, s.Sites.Point = ms(d+"left.offset_ms"), ms(d+"left.second_point_ms")
	}
	return s
}

var bases = map[string]pacer.Base{"ventricular": pacer.VentricularBase, "atrial": pacer.AtrialBase, "modified_atrial": pacer.ModifiedBase}

// mode is the mode at the path of a field of the device; the zero mode where there is none. The
// decoder has judged it.
func (p *Plan) mode(path string) pacer.Mode {
	code := p.word(path)
	if code == "" {
		return pacer.Mode{}
	}
	m, err := pacer.ParseMode(code)
	if err != nil {
		panic("plan: " + err.Error())
	}
	return m
}

// word is the text at a path or its default.
func (p *Plan) word(path string) string {
	if v, ok := p.values[path]; ok {
		return v.Text
	}
	return byPath[path].Word
}

// on is the switch at a path or its default.
func (p *Plan) on(path string) bool {
	if v, ok := p.values[path]; ok {
		return v.On
	}
	return byPath[path].On
}

func (p *Plan) activity() []pacer.Activity {
	times, levels := p.values[device+".sensor.activity_at_ms"].List, p.values[device+".sensor.activity_level"].List
	var out []pacer.Activity
	for i := range times {
		out = append(out, pacer.Activity{At: tick.Time(tick.MS(times[i])), Level: levels[i]})
	}
	return out
}

// device makes the device ready to run, or nil where the plan has none.
func (p *Plan) device(h *heart.Heart) *Device {
	if p.null(device) {
		return nil
	}
	d := &Device{Settings: p.settings(), FarField: tick.MS(p.number(device + ".leads.far_field_ms")), TWave: tick.MS(p.number(device + ".leads.t_wave_ms")),
		Cross: tick.MS(p.number(device + ".leads.crosstalk_ms"))}
	for i := range d.Leads {
		d.Leads[i].Site, d.Leads[i].Sensing = event.None, event.None
	}
	d.Leads[pacer.RA] = p.lead(h, "atrial")
	d.Leads[pacer.RV] = p.lead(h, "ventricular")
	d.Leads[pacer.HisLead] = d.Leads[pacer.RV]
	d.Leads[pacer.LV] = p.lead(h, "left")
	d.Leads[pacer.LV2] = d.Leads[pacer.LV]
	d.Leads[pacer.LV2].Site = h.Site(p.word(device + ".left.second_site"))
	return d
}

func (p *Plan) lead(h *heart.Heart, name string) Lead {
	at := leads[name]
	site := p.word(at.site)
	l := Lead{Site: h.Site(site), Muscle: event.None, Amplitude: p.number(at.amplitude), Latency: tick.MS(p.number(at.latency)), Delay: tick.MS(p.number(at.delay))}
	// Lapicque in volts: V(t) = b (1 + c/t), rheobase b and chronaxie c (Geddes, IEEE
	// TBME 2004).
	shape := 1 + p.number(at.chronaxie)/p.number(at.width)
	l.Threshold = p.number(at.rheobase) * shape
	l.Senses = p.number(at.signal) >= p.number(at.sensitivity)
	l.Sensing = l.Site
	if t := h.Sites[l.Site].Tissue; t != event.Atrium && t != event.Ventricle {
		// A lead on the conduction system senses the muscle beside it.
		l.Sensing = h.Site(beside[site])
		if p.given(at.muscle) {
			l.Muscle, l.MuscleThreshold = l.Sensing, p.number(at.muscle)*shape
		}
	}
	return l
}

// leadPaths are the paths of a lead's fields.
type leadPaths struct{ site, amplitude, latency, delay, chronaxie, width, rheobase, signal, sensitivity, muscle string }

func pathsOfLead(name string) leadPaths {
	at := device + ".leads." + name + "."
	return leadPaths{at + "site", at + "amplitude_v", at + "latency_ms", at + "sensing_delay_ms", at + "chronaxie_ms", at + "width_ms", at + "rheobase_v",
		at + "signal_mv", at + "sensitivity_mv", at + "muscle_rheobase_v"}
}

var leads = map[string]leadPaths{"atrial": pathsOfLead("atrial"), "ventricular": pathsOfLead("ventricular"), "left": pathsOfLead("left")}

var beside = map[string]string{"his": "rv_septum", "right_bundle": "rv_septum", "left_bundle": "lv_septum", "left_septal": "lv_septum"}

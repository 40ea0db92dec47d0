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
	ms := func(name string) tick.Dur { return tick.MS(p.number(device + "." + name)) }
	bpm := func(name string) float64 { return p.number(device + "." + name) }
	count := func(name string) int { return int(p.number(device + "." + name)) }
	seconds := func(name string) tick.Dur { return tick.MS(1000 * p.number(device+"."+name)) }
	at := func(name string) tick.Time { return tick.Time(ms(name)) }
	on := func(name string) bool { return p.on(device + "." + name) }
	s := pacer.Settings{
		Mode: p.mode("mode"), LowerRate: bpm("lower_rate_bpm"), UpperRate: bpm("max_tracking_rate_bpm"), Base: bases[p.word(device+".base_timing")],
		PacedAV: ms("paced_av_ms"), SensedAV: ms("sensed_av_ms"),
		PVARP: ms("pvarp_ms"), PVAB: ms("pvab_ms"), AtrialBlanking: ms("atrial_blanking_ms"), AtrialRefractory: ms("atrial_refractory_ms"),
		PAVB: ms("pavb_ms"), Crosstalk: ms("crosstalk_window_ms"), SafetyStimulus: on("safety_stimulus"), VentricularRefractory: ms("ventricular_refractory_ms"),
		PostPVC: ms("post_pvc_pvarp_ms"), RefractoryCounts: on("refractory_p_counts"), PastLowerRate: on("av_past_lower_rate"), AtrialDelay: ms("atrial_delay_ms"),
		AdaptiveAV:    pacer.Adaptive{From: bpm("adaptive_av.from_bpm"), To: bpm("adaptive_av.to_bpm"), Shortest: ms("adaptive_av.shortest_ms")},
		AdaptivePVARP: pacer.Adaptive{From: bpm("adaptive_pvarp.from_bpm"), To: bpm("adaptive_pvarp.to_bpm"), Shortest: ms("adaptive_pvarp.shortest_ms")},
		Hysteresis:    pacer.Hysteresis{Rate: bpm("hysteresis.rate_bpm"), Every: count("hysteresis.every"), Cycles: count("hysteresis.cycles")},
		LongerAV:      pacer.LongerAV{By: ms("longer_av.by_ms"), Longest: ms("longer_av.longest_ms"), Every: count("longer_av.every"), Misses: count("longer_av.misses")},
		ShorterAV:     pacer.ShorterAV{By: ms("shorter_av.by_ms"), Shortest: ms("shorter_av.shortest_ms"), Beats: count("shorter_av.beats")},
		Noise:         pacer.Noise{Window: ms("noise.window_ms"), Inhibits: on("noise.inhibits")},
		Sensor:        pacer.Sensor{Slope: bpm("sensor.slope_bpm"), Limit: bpm("max_sensor_rate_bpm"), Rise: seconds("sensor.rise_s"), Fall: seconds("sensor.fall_s"), Activity: p.activity()},
		ChangeLimit:   pacer.ChangeLimit{Longer: bpm("change_limit.longer_percent"), Shorter: bpm("change_limit.shorter_percent")},
		Night:         pacer.Night{Rate: bpm("night.rate_bpm"), From: at("night.from_ms"), To: at("night.to_ms")},
		Switch: pacer.Switch{Rate: bpm("mode_switch.rate_bpm"), Short: count("mode_switch.short"), Of: count("mode_switch.of"),
			Mode: p.mode("mode_switch.mode"), Return: count("mode_switch.return"), Ramp: ms("mode_switch.ramp_ms")},
		Loop:      pacer.Loop{Beats: count("loop.beats"), RateMargin: ms("loop.rate_margin_ms"), Margin: ms("loop.margin_ms"), PVARP: ms("loop.pvarp_ms"), Withhold: on("loop.withhold")},
		Fall:      pacer.Fall{From: bpm("rate_fall.from_bpm"), Within: ms("rate_fall.within_ms"), Beats: count("rate_fall.beats"), Rate: bpm("rate_fall.rate_bpm"), For: ms("rate_fall.for_ms")},
		Stabilise: pacer.Stabilise{By: ms("stabilise.by_ms"), Rate: bpm("stabilise.rate_bpm"), OnlySwitched: on("stabilise.only_switched")},
		Backup:    pacer.Backup{Misses: count("backup.misses"), Of: count("backup.of"), Delay: ms("backup.delay_ms"), Retest: ms("backup.retest_ms"), RetestMax: ms("backup.retest_max_ms")},
		Magnet:    pacer.Magnet{Mode: p.mode("magnet.mode"), Rate: bpm("magnet.rate_bpm"), AV: ms("magnet.av_ms"), From: at("magnet.from_ms"), To: at("magnet.to_ms")},
	}
	if p.word(device+".leads.ventricular.site") == "his" {
		s.Sites.Right = pacer.HisLead
	}
	if s.Mode.Multisite == 'V' {
		s.Sites.Left, s.Sites.Only, s.Sites.ToRV = true, on("left.only"), on("left.av_to_right")
		s.Sites.Offset, s.Sites.Point = ms("left.offset_ms"), ms("left.second_point_ms")
	}
	return s
}

var bases = map[string]pacer.Base{"ventricular": pacer.VentricularBase, "atrial": pacer.AtrialBase, "modified_atrial": pacer.ModifiedBase}

// mode is the mode at a field of the device; the zero mode where there is none. The
// decoder has judged it.
func (p *Plan) mode(name string) pacer.Mode {
	code := p.word(device + "." + name)
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
	at := device + ".leads." + name
	site := p.word(at + ".site")
	l := Lead{Site: h.Site(site), Muscle: event.None, Amplitude: p.number(at + ".amplitude_v"), Latency: tick.MS(p.number(at + ".latency_ms")), Delay: tick.MS(p.number(at + ".sensing_delay_ms"))}
	// Lapicque in volts: V(t) = b (1 + c/t), rheobase b and chronaxie c (Geddes, IEEE
	// TBME 2004).
	shape := 1 + p.number(at+".chronaxie_ms")/p.number(at+".width_ms")
	l.Threshold = p.number(at+".rheobase_v") * shape
	l.Senses = p.number(at+".signal_mv") >= p.number(at+".sensitivity_mv")
	l.Sensing = l.Site
	if t := h.Sites[l.Site].Tissue; t != event.Atrium && t != event.Ventricle {
		// A lead on the conduction system senses the muscle beside it.
		l.Sensing = h.Site(beside[site])
		if p.given(at + ".muscle_rheobase_v") {
			l.Muscle, l.MuscleThreshold = l.Sensing, p.number(at+".muscle_rheobase_v")*shape
		}
	}
	return l
}

var beside = map[string]string{"his": "rv_septum", "right_bundle": "rv_septum", "left_bundle": "lv_septum", "left_septal": "lv_septum"}

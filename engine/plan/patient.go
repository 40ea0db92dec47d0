package plan

import (
	"slices"

	"escapement/engine/heart"
	"escapement/engine/pacer"
	"escapement/engine/tick"
)

// flutterFrom is the slowest atrial rate, per minute, that a device's arithmetic takes
// for flutter: 240 to 350 is usual, less under drugs (common practice).
const flutterFrom = 200

// Patient is what a device's arithmetic asks of the heart, as far as the plan says it
// before anything changes: the sinus cycle, VA time and atrial refractory period, and
// the cycle of the fastest atrial focus or train that is as fast as flutter. What is
// unknown is 0: VA where there is no conduction back or it is given as a curve, and PR,
// which only a strip tells.
func (p *Plan) Patient() pacer.Patient {
	const va = "heart.av_node.fast.va_ms"
	out := pacer.Patient{PP: tick.PerMinute(p.number("heart.sinus.rate_bpm")), AtrialERP: tick.MS(p.number("heart.atria.erp_ms")),
		ERPSlope: p.number("heart.atria.erp_per_cycle"), ERPCycle: tick.MS(heart.DriveMS), ERPLongest: tick.MS(heart.MuscleCapMS)}
	if !p.null(device) {
		out.FarField, out.TWave, out.Cross = tick.MS(p.number(device+".leads.far_field_ms")), tick.MS(p.number(device+".leads.t_wave_ms")), tick.MS(p.number(device+".leads.crosstalk_ms"))
	}
	if !p.null(va) && !p.byCurve("heart.av_node.fast") {
		out.VA = tick.MS(p.number(va))
	}
	fast := func(site string, d tick.Dur) {
		if slices.Contains(atrialSites, site) && d <= tick.PerMinute(flutterFrom) && (out.Flutter == 0 || d < out.Flutter) {
			out.Flutter = d
		}
	}
	if r := p.rhythm(); r.Driver != 0 {
		fast("right_atrium", tick.MS(r.CycleMS))
	}
	for _, f := range p.Foci {
		fast(f["site"].Text, tick.PerMinute(f.number("heart.foci", "rate_bpm")))
	}
	for _, it := range p.Interventions {
		if it["do"].Text == "train" {
			fast(it["site"].Text, tick.MS(it["cycle_ms"].Number))
		}
	}
	return out
}

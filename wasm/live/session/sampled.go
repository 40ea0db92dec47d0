package session

import (
	"strings"

	"escapement/engine/field"
	"escapement/engine/membrane"
	"escapement/engine/pacer"
	"escapement/engine/plan"
	"escapement/engine/scene"
)

// The scale of electrograms where the view names none, mm a millivolt.
const egmGain = 10

// Recorders cut an electrogram off where it would run over its neighbours, and the
// His bundle's lanes are amplified more than the others (common practice).
const (
	egmClipMM = 9
	hisTimes  = 2
)

// membraneGain is the scale of action potentials, mm a millivolt: 14 mm for one.
const membraneGain = 0.12

// sampled computes the electrograms and action potentials among the lanes, and only
// those. What a lane needs is kept with the timeline, so that another view of
// it needs no new computation.
func (t *timeline) sampled(lanes []string, gain float64) []scene.Sampled {
	if !(gain > 0) {
		gain = egmGain
	}
	if t.record == nil {
		return nil
	}
	var out []scene.Sampled
	for _, name := range lanes {
		switch kind, which, _ := strings.Cut(name, ":"); kind {
		case "egm":
			label, pair := which, which
			if len(which) == 1 { // the device's own signal on a channel
				label, pair = "EGM "+which, t.channel(which)
			}
			if mv := t.electrogram(pair); mv != nil {
				scale := gain
				if strings.HasPrefix(pair, "HIS") {
					scale *= hisTimes
				}
				out = append(out, scene.Sampled{Name: name, Label: label, MV: mv, MMPerMV: scale, ClipMM: egmClipMM})
			}
		case "membrane":
			if m := t.potential(which); m != nil {
				out = append(out, t.membraneLane(name, which, m))
			}
		}
	}
	return out
}

func (t *timeline) membraneLane(name, site string, m *membrane.Trace) scene.Sampled {
	g := scene.Sampled{Name: name, Label: inMargin(site), MV: m.MV, MMPerMV: membraneGain, Levels: []scene.Level{{MV: 0, Text: "0"}}}
	if m.Focus {
		g.Levels = append(g.Levels, scene.Level{MV: m.Threshold})
	}
	for _, id := range m.Blocked {
		g.Arrows = append(g.Arrows, scene.Arrow{T: t.log.At(id).T, Event: id})
	}
	return g
}

// inMargin is a site's name for a margin: the trade's abbreviations.
func inMargin(site string) string {
	names := map[string]string{"sinus": "sinus", "right_atrium": "RA", "left_atrium": "LA", "atrial_septum": "septum A", "av_junction": "AV node", "his": "His",
		"right_bundle": "RBB", "left_bundle": "LBB", "left_anterior": "LAF", "left_posterior": "LPF", "left_septal": "LSF"}
	if n, ok := names[site]; ok {
		return n
	}
	return strings.ToUpper(site[:2]) + strings.ReplaceAll(site[2:], "_", " ")
}

// potential is the membrane of a site, or nil where there is no such site.
func (t *timeline) potential(site string) *membrane.Trace {
	if m, ok := t.membrane[site]; ok {
		return m
	}
	id := t.log.Site(site)
	if id < 0 {
		return nil
	}
	ventricles, atria := field.Shapes()
	m := membrane.Site(t.log, t.hearts, id, ventricles, atria)
	t.membrane[site] = m
	return m
}

// inForce lists the hearts of a program by the times at which they begin.
func inForce(prog *plan.Program) []membrane.InForce {
	out := []membrane.InForce{{Heart: prog.Heart}}
	for _, c := range prog.Changes {
		if c.Heart != nil {
			out = append(out, membrane.InForce{From: c.T, Heart: c.Heart})
		}
	}
	return out
}

func (t *timeline) electrogram(pair string) []float32 {
	mv, ok := t.signals[pair]
	if !ok {
		mv = t.field.Electrogram(t.log, pair)
		t.signals[pair] = mv
	}
	return mv
}

// channel is the pair of electrodes at the site of the device's lead of a channel, or "".
func (t *timeline) channel(c string) string {
	if t.pacer == nil {
		return ""
	}
	l := &t.pacer.Leads[pacer.RA]
	if c == "V" {
		l = &t.pacer.Leads[pacer.RV]
		if l.Sensing < 0 {
			l = &t.pacer.Leads[pacer.HisLead]
		}
	}
	if l.Sensing < 0 {
		return ""
	}
	for _, e := range field.Electrodes() {
		if e.Site == t.log.Sites[l.Sensing].Name {
			return e.Name
		}
	}
	return ""
}

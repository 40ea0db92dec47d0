package session

import (
	"strings"

	"escapement/engine/field"
	"escapement/engine/pacer"
	"escapement/engine/scene"
)

// The scale of electrograms where the view names none, mm a millivolt.
const egmGain = 10

// sampled computes the electrograms and action potentials among the lanes, and only
// those. What a lane needs is kept with the timeline, so that another view of
// it needs no new computation.
func (t *timeline) sampled(lanes []string, gain float64) []scene.Sampled {
	if !(gain > 0) {
		gain = egmGain
	}
	var out []scene.Sampled
	for _, name := range lanes {
		kind, which, _ := strings.Cut(name, ":")
		if kind != "egm" || t.record == nil {
			continue
		}
		label, pair := which, which
		if len(which) == 1 { // the device's own signal on a channel
			label, pair = "EGM "+which, t.channel(which)
		}
		if mv := t.electrogram(pair); mv != nil {
			out = append(out, scene.Sampled{Name: name, Label: label, MV: mv, MMPerMV: gain})
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

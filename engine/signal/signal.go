// Package signal computes the lanes of a sheet that are samples but no leads: the
// electrograms from within the heart ("egm:HISd"), the device's own on a channel
// ("egm:A") and the action potential of a site ("membrane:his"). It decides how large
// each is drawn and what stands before it; what they hold comes from packages field and
// membrane. The page and the prints both have them from here, so that a print shows
// what the page shows.
package signal

import (
	"slices"
	"strings"

	"escapement/engine/event"
	"escapement/engine/field"
	"escapement/engine/heart"
	"escapement/engine/lead"
	"escapement/engine/membrane"
	"escapement/engine/pacer"
	"escapement/engine/plan"
	"escapement/engine/scene"
)

// Source has the signals of one timeline. What was computed once is kept, so that
// another view of the same timeline needs no new computation. Use it from one goroutine.
type Source struct {
	log      *event.Log
	device   *plan.Device // nil: none
	field    *field.Field
	hearts   []membrane.InForce
	pairs    map[string][]float32
	membrane map[string]*membrane.Trace
}

// Of makes the signals of a program's log. f may know waves of it already.
func Of(prog *plan.Program, log *event.Log, f *field.Field) *Source {
	return &Source{log: log, device: prog.Device, field: f, hearts: inForce(prog), pairs: map[string][]float32{}, membrane: map[string]*membrane.Trace{}}
}

// Named tells whether a name can be that of a lane of some plan's sheet: of a signal, of
// a lead ("lead:II"), or "axis", "ladder", "device".
func Named(lane string) bool {
	switch kind, which, _ := strings.Cut(lane, ":"); kind {
	case "axis", "ladder", "device":
		return kind == lane
	case "lead":
		_, ok := lead.Parse(which)
		return ok
	case "egm":
		return which == "A" || which == "V" || slices.ContainsFunc(field.Electrodes(), func(e field.Electrode) bool { return e.Name == which })
	case "membrane":
		return slices.Contains(heart.SiteNames(), which)
	}
	return false
}

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

// Lanes computes the electrograms and action potentials among the lanes, and only
// those. Names of what the timeline does not have are passed over. gain is the scale of
// electrograms, mm a millivolt; 0 is 10.
func (s *Source) Lanes(lanes []string, gain float64) []scene.Sampled {
	if !(gain > 0) {
		gain = egmGain
	}
	var out []scene.Sampled
	for _, name := range lanes {
		switch kind, which, _ := strings.Cut(name, ":"); kind {
		case "egm":
			label, pair := which, which
			if len(which) == 1 { // the device's own signal on a channel
				label, pair = "EGM "+which, s.channel(which)
			}
			if mv := s.electrogram(pair); mv != nil {
				scale := gain
				if strings.HasPrefix(pair, "HIS") {
					scale *= hisTimes
				}
				out = append(out, scene.Sampled{Name: name, Label: label, MV: mv, MMPerMV: scale, ClipMM: egmClipMM})
			}
		case "membrane":
			if m := s.potential(which); m != nil {
				out = append(out, s.membraneLane(name, which, m))
			}
		}
	}
	return out
}

func (s *Source) membraneLane(name, site string, m *membrane.Trace) scene.Sampled {
	g := scene.Sampled{Name: name, Label: inMargin(site), MV: m.MV, MMPerMV: membraneGain, Levels: []scene.Level{{MV: 0, Text: "0"}}}
	if m.Focus {
		g.Levels = append(g.Levels, scene.Level{MV: m.Threshold})
	}
	for _, id := range m.Blocked {
		g.Arrows = append(g.Arrows, scene.Arrow{T: s.log.At(id).T, Event: id})
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
func (s *Source) potential(site string) *membrane.Trace {
	if m, ok := s.membrane[site]; ok {
		return m
	}
	id := s.log.Site(site)
	if id < 0 {
		return nil
	}
	ventricles, atria := field.Shapes()
	m := membrane.Site(s.log, s.hearts, id, ventricles, atria)
	s.membrane[site] = m
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

func (s *Source) electrogram(pair string) []float32 {
	mv, ok := s.pairs[pair]
	if !ok {
		mv = s.field.Electrogram(s.log, pair)
		s.pairs[pair] = mv
	}
	return mv
}

// channel is the pair of electrodes at the site of the device's lead of a channel, or "".
func (s *Source) channel(c string) string {
	if s.device == nil {
		return ""
	}
	l := &s.device.Leads[pacer.RA]
	if c == "V" {
		l = &s.device.Leads[pacer.RV]
		if l.Sensing < 0 {
			l = &s.device.Leads[pacer.HisLead]
		}
	}
	if l.Sensing < 0 {
		return ""
	}
	for _, e := range field.Electrodes() {
		if e.Site == s.log.Sites[l.Sensing].Name {
			return e.Name
		}
	}
	return ""
}

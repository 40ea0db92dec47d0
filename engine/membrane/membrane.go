// Package membrane draws what a site's events and numbers say about its membrane: the
// action potential over time, so that one sees in which phase a site is when an impulse
// comes.
//
// It is a picture of a computed timeline, not a simulation of ion currents. Times
// are the model's own; potentials are the usual ones of each tissue:
//
//   - Phase 0 comes when the log says that the site was depolarised.
//   - Phases 2 and 3 have the shape that the leads are computed with (field/tissue): a
//     plateau and a product of two logistic falls. It is placed so that three quarters
//     of the way back are done when the site is excitable again, which for working muscle
//     is about -60 mV; so it follows the cycle as the refractory period
//     does. Sinus and AV node are refractory for longer than their action
//     potential (from memory): there it lasts [nodalShare] of the refractory period.
//   - Where a path leads to the site whose own recovery takes longer than the site (the
//     AV node, the bundles), that counts as the site's.
//   - Phase 4 is flat, except at a focus: there the potential climbs from its lowest to the
//     threshold in step with the share of its cycle that the focus's rate has run
//     through, and reaches it at the next discharge. A cycle that was cut short climbs at
//     the focus's own rate; what overdrive suppression would have added to it is not known.
//
// Potentials are from memory of textbooks (sinus node about -60 and -40 mV: Hoffman and
// Cranefield; the others likewise) and are not to be read off. Not modelled: cell-to-cell
// differences within a site, graded responses, and what a concealed impulse leaves.
package membrane

import (
	"escapement/engine/event"
	"escapement/engine/field/tissue"
	"escapement/engine/heart"
	"escapement/engine/lead"
	"escapement/engine/portmath"
	"escapement/engine/tick"
)

// Potentials of a tissue in millivolts.
type Potentials struct {
	Rest      float64 // phase 4 begins here
	Threshold float64 // at which a focus discharges
	Plateau   float64 // phase 2
	Notch     float64 // by how much phase 0 goes beyond the plateau; phase 1 takes it back
	upstroke  float64 // rate of phase 0, 1/ms
	atrial    bool    // the atria's shape, not the ventricles'
	nodal     bool    // refractory beyond the action potential
}

// Of gives a tissue's usual potentials.
func Of(t event.Tissue) Potentials {
	switch t {
	case event.Sinus:
		return Potentials{Rest: -60, Threshold: -40, Plateau: 8, upstroke: 0.8, atrial: true, nodal: true}
	case event.Node:
		return Potentials{Rest: -65, Threshold: -45, Plateau: 10, upstroke: 0.8, atrial: true, nodal: true}
	case event.Atrium:
		return Potentials{Rest: -80, Threshold: -65, Plateau: 5, Notch: 18, upstroke: 3, atrial: true}
	case event.His, event.Purkinje:
		return Potentials{Rest: -90, Threshold: -70, Plateau: 5, Notch: 28, upstroke: 4}
	}
	return Potentials{Rest: -85, Threshold: -65, Plateau: 15, Notch: 14, upstroke: 3}
}

const (
	nodalShare = 0.75
	notchMS    = 7  // time constant of phase 1
	riseMS     = 14 // the upstroke is over this long after the site's time
	nearly     = 0.97
)

// Trace is a site's membrane over the strip.
type Trace struct {
	Potentials
	Focus   bool       // phase 4 climbs
	MV      []float32  // at the leads' sampling times
	Blocked []event.ID // impulses and stimuli that found the site, or the end of their way to it, refractory
}

// Site computes a site's trace. hearts are the parameters in force, the first from the
// start; ventricles and atria are the field's shapes of the action potential.
func Site(log *event.Log, hearts []InForce, site event.SiteID, ventricles, atria tissue.Shape) *Trace {
	t := &Trace{Potentials: Of(log.Sites[site].Tissue), MV: make([]float32, int(log.Span/tick.Time(lead.Step)))}
	shape := ventricles
	if t.atrial {
		shape = atria
	}
	p := painter{t: t, fall: fall(shape), climb: climbs(log, hearts, site)}
	t.Focus = p.climb != nil
	p.paint(activations(log, hearts, site))
	for i := range log.Events {
		if refused(log, &log.Events[i], site) {
			t.Blocked = append(t.Blocked, log.Events[i].ID)
		}
	}
	return t
}

// InForce is the heart from a time on.
type InForce struct {
	From  tick.Time
	Heart *heart.Heart
}

func at(hearts []InForce, t tick.Time) *heart.Heart {
	h := hearts[0].Heart
	for i := range hearts {
		if hearts[i].From <= t {
			h = hearts[i].Heart
		}
	}
	return h
}

// refused tells whether an event is an impulse or a stimulus that came too early for the site.
func refused(log *event.Log, e *event.Event, site event.SiteID) bool {
	switch {
	case e.Kind == event.Stimulus:
		return e.Site == site && !e.Captured && e.Outcome == 0 && e.Recovery < e.Needed
	case e.Kind != event.Block || e.Rule != event.SiteRefractory && e.Rule != event.PathRefractory:
		return false
	case e.Path < 0:
		return e.Site == site
	}
	return log.Paths[e.Path].Exit(e.Dir) == site
}

// activation of the site with the end of its refractory period.
type activation struct{ at, until tick.Time }

func activations(log *event.Log, hearts []InForce, site event.SiteID) (out []activation) {
	last := map[event.PathID]tick.Time{} // looked up, never ranged over
	for i := range log.Events {
		e := &log.Events[i]
		if e.Kind != event.Activate || e.Site != site {
			continue
		}
		a := activation{e.T, e.Until}
		if h := at(hearts, e.T); e.Path >= 0 && int(e.Path) < len(h.Paths) {
			p := &h.Paths[e.Path]
			if d := p.Dir(e.Dir); !p.Silent && p.To == site {
				cycle := h.Basic
				if before, ok := last[e.Path]; ok {
					cycle = e.T.Sub(before)
				}
				last[e.Path] = e.T
				a.until = max(a.until, e.T+tick.Time(d.Theta.At(cycle)))
			}
		}
		out = append(out, a)
	}
	return out
}

// fallReach is how far on either side of its middle repolarisation is tabled, ms.
const fallReach = 220

// fall is the share of the action potential that is left, by milliseconds from the
// moment at which the site is excitable again.
func fall(s tissue.Shape) []float64 {
	out := make([]float64, 2*fallReach+1)
	for i := range out {
		t := float64(i - fallReach)
		a := 1 + portmath.Exp(float64(float64(s.Fall)*t))
		b := 1 + portmath.Exp(float64(float64(s.Fall2)*t))
		out[i] = 1 / float64(a*b)
	}
	return out
}

package membrane

import (
	"escapement/engine/event"
	"escapement/engine/heart"
	"escapement/engine/tick"
)

// climb is the cycles of a focus.
type climb struct {
	rate   heart.Rate
	cycles []cycle
	now    int // of the cycle last asked for; instants are asked for in order
}

// cycle is a phase 4 from its beginning to its end, and by a discharge or cut short.
type cycle struct {
	from, to   tick.Time
	discharged bool
}

// climbs lists the cycles of the focus at a site, or gives nil where there is none.
func climbs(log *event.Log, hearts []InForce, site event.SiteID) *climb {
	h := hearts[0].Heart
	var f *heart.Focus
	for i := range h.Foci {
		if h.Foci[i].Site == site {
			f = &h.Foci[i]
			break
		}
	}
	if f == nil {
		return nil
	}
	c := &climb{rate: f.Rate}
	start := tick.Time(0)
	if f.First > 0 {
		start = tick.Time(f.First).Add(-tick.PerMinute(f.Rate.At(tick.Time(f.First))))
	}
	end := func(t tick.Time, discharged bool) {
		c.cycles = append(c.cycles, cycle{start, t, discharged})
		start = t
	}
	for i := range log.Events {
		e := &log.Events[i]
		switch {
		case e.Site != site:
		case e.Kind == event.Discharge:
			end(e.T, true)
		case e.Kind == event.Activate && e.Rule != event.Fired && !f.Protected:
			end(e.T, false)
		}
	}
	end(log.Span, false)
	return c
}

// share of the cycle that the focus has run through at an instant, 0 to 1. Instants
// may only go forward, but for a few steps back.
func (c *climb) share(t tick.Time) float64 {
	if c.now >= len(c.cycles) || t < c.cycles[c.now].from {
		c.now = 0
	}
	for c.now < len(c.cycles)-1 && t >= c.cycles[c.now].to {
		c.now++
	}
	y := &c.cycles[c.now]
	run := c.rate.Cycles(y.from, t)
	if y.discharged {
		if all := c.rate.Cycles(y.from, y.to); all > 0 {
			run /= all
		}
		return min(max(run, 0), 1)
	}
	return min(max(run, 0), nearly)
}

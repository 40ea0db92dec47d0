package field

import (
	"escapement/engine/event"
	"escapement/engine/field/tissue"
	"escapement/engine/portmath"
	"escapement/engine/tick"
)

// conduction adds the fronts in the His bundle and its two branches. The network
// has a site at the top of the His bundle and one in each branch; the way between
// is the His bundle and then the branch, so a front that goes down crosses the His
// bundle first, in [hisTime] or half of the way's time if that is shorter, and has the rest
// of the time for the branch. Going up it comes to the site as it leaves the bundle.
func conduction(out []float32, log *event.Log, b *tissue.Bipole) {
	his := log.Site("his")
	if his < 0 {
		return
	}
	for i := range log.Events {
		e := &log.Events[i]
		switch {
		case e.Kind == event.Block && e.Path >= 0:
			blocked(out, log, b, e, his)
		case e.Kind != event.Activate:
		case e.Site == his && up(log, e):
			rising(out, log, b, e)
			front(out, &b.Strands[0], e.T-tick.Time(hisTime), e.T, 1, 0)
		case e.Site == his:
			front(out, &b.Strands[0], e.T, e.T+tick.Time(hisTime), 0, 1)
		case e.Path >= 0 && e.Dir == event.Down && log.Paths[e.Path].From == his:
			falling(out, log, b, e)
		}
	}
}

// falling is a branch on the way down: from the fork to its site.
func falling(out []float32, log *event.Log, b *tissue.Bipole, e *event.Event) {
	from, side := log.At(e.Cause), sideOf(log.Sites[e.Site].Name)
	if from == nil || side == 0 {
		return
	}
	front(out, &b.Strands[side], from.T+tick.Time(trunk(e.T.Sub(from.T), log, from)), e.T, 0, 1)
}

// up tells whether an activation of the His bundle came from a branch.
func up(log *event.Log, e *event.Event) bool {
	return e.Path >= 0 && e.Dir == event.Up && log.Paths[e.Path].Tissue == event.Purkinje
}

// trunk is how much of the way from the His bundle to a branch is the bundle's. A
// front that came up turns into the other branch at the fork, where it already is.
func trunk(all tick.Dur, log *event.Log, from *event.Event) tick.Dur {
	if up(log, from) {
		return 0
	}
	return min(hisTime, all/2)
}

// rising is a branch on the way up: from its site to the fork.
func rising(out []float32, log *event.Log, b *tissue.Bipole, e *event.Event) {
	from, side := log.At(e.Cause), sideOf(log.Sites[log.Paths[e.Path].To].Name)
	if from == nil || side == 0 {
		return
	}
	all := e.T.Sub(from.T)
	front(out, &b.Strands[side], from.T, e.T-tick.Time(min(hisTime, all/2)), 1, 0)
}

// blocked is a front that stopped on its way: past the fork, in the branch; before
// it, the activation of the His bundle has already drawn it.
func blocked(out []float32, log *event.Log, b *tissue.Bipole, e *event.Event, his event.SiteID) {
	p := &log.Paths[e.Path]
	side := sideOf(log.Sites[p.To].Name)
	from := log.At(e.Cause)
	if p.From != his || side == 0 || e.Depth == 0 || from == nil || from.Kind != event.Activate {
		return
	}
	came := float64(e.Depth) / 1000
	all := tick.MS(e.T.Sub(from.T).MS() / came) // the whole way at this pace
	if e.Dir == event.Up {
		share := float64(min(hisTime, all/2)) / float64(all)
		stop := max(0, 1-came/(1-share))
		front(out, &b.Strands[side], from.T, min(e.T, from.T+tick.Time(tick.MS(all.MS()*(1-share)))), 1, stop)
		return
	}
	t := trunk(all, log, from)
	share := float64(t) / float64(all)
	if came > share {
		front(out, &b.Strands[side], from.T+tick.Time(t), e.T, 0, (came-share)/(1-share))
	}
}

// front adds a strand's signal while the front goes from one share of it to another
// between two instants, smoothed by the upstroke of the conduction system.
func front(out []float32, s *tissue.Strand, t0, t1 tick.Time, from, to float64) {
	if t1 <= t0 {
		return
	}
	sign := 1.0
	if to < from {
		sign = -1 // the dipole points the other way
	}
	const reach = 4 // ms on either side of an instant that the upstroke is over
	for k := max(int(floor(t0))-reach, 0); k < len(out) && tick.Time(k)*tickStep <= t1+reach*tickStep; k++ {
		sum := 0.0
		for i, w := range upstroke {
			// The integral of the strand's signal over the upstroke's steps of 0.25 ms.
			t := float64(tick.Time(k)*tickStep-t0) + float64((i-len(upstroke)/2)*250)
			x := t / float64(t1-t0)
			if x < 0 || x > 1 {
				continue
			}
			sum += float64(w * s.At(from+float64((to-from)*x)))
		}
		out[k] += float32(sign * sum)
	}
}

// purkinjeRise is the rate of the conduction system's upstroke, 1/ms: a tenth to
// nine tenths in 1.5 ms (from memory: Purkinje tissue has the fastest upstroke).
const purkinjeRise = 3

// upstroke is the derivative of the upstroke every 0.25 ms, summing to 1.
var upstroke = func() (w [25]float64) {
	sum := 0.0
	for i := range w {
		x := portmath.Exp(float64(-purkinjeRise * 0.25 * float64(i-len(w)/2)))
		w[i] = x / float64((1+x)*(1+x))
		sum += w[i]
	}
	for i := range w {
		w[i] /= sum
	}
	return w
}()

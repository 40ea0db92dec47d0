package sim

import (
	"escapement/engine/event"
	"escapement/engine/heart"
	"escapement/engine/tick"
)

// This file is the reference's view of a path: rules 3 to 7.

// enter offers the impulse of a depolarised site to a path.
func (r *reference) enter(id event.PathID, d event.Dir, cause event.ID) {
	p, h := &r.paths[id], &r.heart.Paths[id]
	if h.Tissue == event.Atrium && r.now >= r.heart.Apart.From && r.now < r.heart.Apart.Until { // rule 9
		return
	}
	c, same, other := h.Dir(d), &p.inside[d], &p.inside[event.Down+event.Up-d]
	e := event.Event{Kind: event.Block, Cause: cause, Dir: d, Site: h.Entry(d), Path: id}

	cycle := r.heart.Basic
	if n := len(p.letIn); n >= 2 {
		cycle = p.letIn[n-1].Sub(p.letIn[n-2])
	}
	recovery, theta := event.Unknown, r.up(c.Refractory(cycle))
	if p.used {
		recovery = r.now.Sub(p.left)
	}
	if same.inside {
		recovery = r.now.Sub(same.arrives)
	}
	recovered := recovery == event.Unknown || recovery >= theta
	var delay tick.Dur // rule 7
	switch {
	case recovery == event.Unknown:
		delay = r.up(c.First())
	case recovered:
		delay = r.up(c.Delay(recovery))
	}

	switch {
	case !c.Open && (c.Reach == 0 || !recovered): // rule 4
		e.Rule = event.OneWay
		r.stopAt(r.now, e)
	case !c.Open && other.inside:
		e.Recovery, e.Needed = recovery, theta
		r.meet(p, other, delay, c, e)
	case !c.Open:
		e.Rule, e.Depth = event.OneWay, c.Reach
		p.used, p.left = true, r.now.Add(r.up(delay*tick.Dur(c.Reach)/1000))
		r.stopAt(p.left, e)
	case !recovered: // rule 5
		e.Rule, e.Recovery, e.Needed = event.PathRefractory, recovery, theta
		inner := tick.Dur(c.Inner * float64(theta))
		if recovery <= inner || other.inside {
			r.stopAt(r.now, e)
			return
		}
		part, whole := recovery-inner, theta-inner
		e.Depth = uint16(min(max(1000*part/whole, 1), 999))
		p.used, p.left = true, r.now.Add(r.up(r.up(c.Delay(theta))*part/whole))
		r.stopAt(p.left, e)
	case d == event.Down && r.dropped(p, &h.Drop): // rule 6
		e.Rule = event.Dropped
		r.stopAt(r.now, e)
	default: // rule 7
		p.letIn = append(p.letIn, r.now)
		e.Recovery, e.Needed = recovery, theta
		if other.inside {
			r.meet(p, other, delay, c, e)
			return
		}
		e.Kind, e.Rule, e.Site = 0, event.Conducted, h.Exit(d)
		*same = refImpulse{true, r.now, r.now.Add(delay), r.setUp(), e, r.sites[h.Entry(d)].beat}
	}
}

// meet has an impulse that enters and an opposite one inside stop where they meet:
// each has covered a share of its way, and the shares make 1.
func (r *reference) meet(p *refPath, other *refImpulse, delay tick.Dur, c *heart.Conduct, e event.Event) {
	their, rest := other.arrives.Sub(other.entered), other.arrives.Sub(r.now)
	after := r.up(tick.Dur(float64(rest) * float64(delay) / float64(their+delay)))
	at, theirs := r.now.Add(after), r.now.Add(after)
	e.Rule, e.Depth = event.Collision, uint16(1000*after/delay)
	if reach := r.now.Add(r.up(delay * tick.Dur(c.Reach) / 1000)); !c.Open && reach < at { // rule 4
		at, theirs = reach, other.entered.Add(r.up(their*tick.Dur(1000-c.Reach)/1000))
		e.Rule, e.Depth, e.Recovery, e.Needed = event.OneWay, c.Reach, 0, 0
	}
	o := other.e
	o.Kind, o.Rule, o.Site = event.Block, event.Collision, r.log.Paths[o.Path].Entry(o.Dir)
	o.Depth = uint16(1000 * theirs.Sub(other.entered) / their)
	other.inside = false
	p.used, p.left = true, theirs
	r.stopAt(theirs, o)
	r.stopAt(at, e)
}

// stopAt has an impulse stop inside a path, now or later. Silent paths leave no
// trace.
func (r *reference) stopAt(at tick.Time, e event.Event) {
	switch {
	case r.heart.Paths[e.Path].Silent:
	case at == r.now:
		r.record(e)
	default:
		r.stops = append(r.stops, refStop{at, r.setUp(), e})
	}
}

// stop records that an impulse stopped inside a path.
func (r *reference) stop(i int) {
	e := r.stops[i].e
	r.stops = append(r.stops[:i], r.stops[i+1:]...)
	r.record(e)
}

// arrive brings an impulse to the far end of its path (rules 1 and 7).
func (r *reference) arrive(in *refImpulse) {
	e := in.e
	in.inside = false
	r.paths[e.Path].used, r.paths[e.Path].left = true, r.now // rule 7
	h, s := &r.heart.Paths[e.Path], &r.sites[e.Site]
	if h.Silent && s.used && s.beat >= in.beat { // rule 1
		return
	}
	if r.excitable(e.Site) {
		if in.beat < s.beat {
			in.beat = s.beat
		}
		if h.Dir(e.Dir).Anew {
			in.beat = r.now
		}
		r.depolarise(e, in.beat)
		return
	}
	b := event.Event{Kind: event.Block, Rule: event.SiteRefractory, Cause: e.Cause, Dir: e.Dir, Path: e.Path, Depth: 1000,
		Site: r.log.Paths[e.Path].Entry(e.Dir)}
	b.Recovery, b.Needed = r.sinceLast(e.Site)
	r.stopAt(r.now, b)
}

// dropped tells whether a drop pattern stops the impulse (rule 6).
func (r *reference) dropped(p *refPath, d *heart.Drop) bool {
	if d.Of > 0 {
		p.met++
		return (d.Phase+p.met-1)%d.Of >= d.Pass
	}
	return d.Chance > 0 && p.random.Float64() < d.Chance
}

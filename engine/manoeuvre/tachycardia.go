package manoeuvre

import (
	"slices"

	"escapement/engine/event"
	"escapement/engine/measure"
	"escapement/engine/plan"
	"escapement/engine/sim"
	"escapement/engine/tick"
)

// settle is how long after its induction a tachycardia is left alone.
const settle = 2500 * tick.Millisecond

// tachycardia is a plan that begins one by itself: its single stimuli are kept, its
// trains are left out.
type tachycardia struct {
	prog  plan.Program
	log   *event.Log // undisturbed
	from  tick.Time
	cycle tick.Dur
}

// induced plays a plan's own induction. It is nil where no regular tachycardia under
// 600 ms runs some seconds after the last single stimulus.
func induced(p *plan.Plan) (*tachycardia, error) {
	q := bare(p)
	last := tick.Time(0)
	for _, it := range p.Interventions {
		if do := it["do"].Text; do != "stimulate" && do != "set" {
			continue
		}
		q.Interventions = append(q.Interventions, it)
		last = max(last, tick.Time(tick.MS(it["at_ms"].Number)))
	}
	prog, err := q.Compile()
	if err != nil {
		return nil, err
	}
	t := &tachycardia{prog: *prog, from: last.Add(settle)}
	t.prog.Span = t.from.Add(after + 6*tick.Second)
	if t.log, err = sim.Play(&t.prog); err != nil {
		return nil, err
	}
	var at []tick.Time
	his := t.log.Site("his")
	for i := range t.log.Events {
		if e := &t.log.Events[i]; e.Kind == event.Activate && e.Site == his {
			at = append(at, e.T)
		}
	}
	n := 0
	for n < len(at) && at[n] < t.from {
		n++
	}
	// The last cycles before and the first after the place, all alike.
	if n < 4 || n+2 >= len(at) {
		return nil, nil
	}
	t.cycle = at[n].Sub(at[n-1])
	for k := n - 3; k <= n+2; k++ {
		if d := at[k].Sub(at[k-1]) - t.cycle; d > 20*tick.Millisecond || d < -20*tick.Millisecond {
			return nil, nil
		}
	}
	if t.cycle >= 600*tick.Millisecond {
		return nil, nil
	}
	t.from = at[n]
	return t, nil
}

// overdrive paces the right ventricular apex so much faster than the tachycardia.
func (t *tachycardia) overdrive(by tick.Dur) answer {
	prog := t.prog
	site := prog.Heart.Site("rv_apex")
	prog.Stimuli = slices.Clone(prog.Stimuli)
	at := t.from
	for range 16 {
		prog.Stimuli = append(prog.Stimuli, plan.Stimulus{T: at, Site: site, Rule: event.Train})
		at = at.Add(t.cycle - by)
	}
	prog.Span = at.Add(after / 2)
	log, err := sim.Play(&prog)
	if err != nil {
		return answer{slug: "too_long", refused: err.Error()}
	}
	r := measure.Of(log, nil)
	if len(r.Overdrive) == 0 {
		return answer{slug: "no_tachycardia"}
	}
	o := &r.Overdrive[0]
	slug := "not_entrained"
	switch {
	case o.Response != "":
		slug = o.Response
	case o.Entrained:
		slug = "entrained"
	}
	return answer{slug: slug, numbers: []Number{{"PPI - TCL", o.PPITCL}, {"SA - VA", o.SAVA}, {"corrected PPI - TCL", o.Corrected}}}
}

// premature gives one ventricular beat so long after a His deflection of the
// tachycardia, before it where that is negative, and reads by how much the next
// atrial beat comes early.
func (t *tachycardia) premature(after tick.Dur) answer {
	prog := t.prog
	site := prog.Heart.Site("rv_apex")
	at := t.from.Add(after)
	prog.Stimuli = append(slices.Clone(prog.Stimuli), plan.Stimulus{T: at, Site: site, Rule: event.Premature})
	log, err := sim.Play(&prog)
	if err != nil {
		return answer{slug: "too_long", refused: err.Error()}
	}
	a := extraAnswer(log, t.log, at, site)
	if a.slug == "no_capture" {
		return a
	}
	// The atrial beat that the same turn of the tachycardia makes without the stimulus is
	// the first one after the stimulus and the least time back.
	ra := log.Site("right_atrium")
	expected, there := next(t.log, ra, at.Add(leastVA))
	got, came := next(log, ra, at.Add(leastVA))
	a.numbers = append(a.numbers, number("next A early by", expected.Sub(got), there && came))
	return a
}

// leastVA is shorter than any way from the apex to the right atrium.
const leastVA = 40 * tick.Millisecond

func next(log *event.Log, site event.SiteID, from tick.Time) (tick.Time, bool) {
	for i := range log.Events {
		if e := &log.Events[i]; e.Kind == event.Activate && e.Site == site && e.T >= from {
			return e.T, true
		}
	}
	return 0, false
}

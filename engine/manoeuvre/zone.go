// Package manoeuvre does to a heart what is done in the laboratory to tell mechanisms
// apart, and finds which of it two hearts answer most differently.
//
// The families: extrastimuli to the atrium and to the ventricle after a drive, with
// maps of what comes of each coupling at each drive cycle ([Zone]); a ventricular train
// faster than a tachycardia; and a premature ventricular beat about the time at which
// the His bundle is refractory. Answers are those of packages study and measure: slugs
// of what came of an extra beat, return cycles, VA intervals.
package manoeuvre

import (
	"fmt"
	"slices"

	"escapement/engine/event"
	"escapement/engine/plan"
	"escapement/engine/sim"
	"escapement/engine/study"
	"escapement/engine/tick"
)

// stimuli of a drive; eight is common practice.
const driven = 8

// begin is when a drive begins on the strip, and after how long an answer is judged.
const (
	begin = 1500 * tick.Millisecond
	after = 6 * tick.Second
)

// Zone is a map of what comes of an extrastimulus over its coupling and the cycle of
// the drive before it.
type Zone struct {
	Site      string   `json:"site"`
	Drives    []int    `json:"drives_ms"`
	Couplings []int    `json:"couplings_ms"`
	Words     []string `json:"words"` // different outcomes, as they come up
	At        []int    `json:"at"`    // index into Words by coupling, then drive; -1: not below the drive's cycle
	answers   []answer
}

// answer is what came of one manoeuvre: a word for the kind, and intervals in ms.
type answer struct {
	slug    string
	text    string
	numbers []Number
	refused string
}

// Number is an interval that both hearts may have, ms; nil: this one has none.
type Number struct {
	Name  string   `json:"name"`
	Value *float64 `json:"ms"`
}

func number(name string, d tick.Dur, there bool) Number {
	if !there {
		return Number{Name: name}
	}
	v := d.MS()
	return Number{name, &v}
}

// bare is a plan without what it does to the heart.
func bare(p *plan.Plan) *plan.Plan {
	q := p.Clone()
	q.Interventions, q.Sweep, q.Goals = nil, nil, nil
	return q
}

// Map runs a drive with an extrastimulus at every coupling shorter than its cycle. What
// the plan does itself is left out. The error is a plan.Diagnoses of a plan that does
// not compile.
func Map(p *plan.Plan, site string, drives, couplings []int) (*Zone, error) {
	prog, err := bare(p).Compile()
	if err != nil {
		return nil, err
	}
	z := &Zone{Site: site, Drives: drives, Couplings: couplings, Words: []string{}}
	at := prog.Heart.Site(site)
	if at == event.None {
		return nil, plan.Diagnoses{{Path: "site", Found: fmt.Sprintf("%q", site), Allowed: "a site of the heart"}}
	}
	var player sim.Player
	for _, drive := range drives {
		d := driver{prog: *prog, site: at}
		d.train(tick.Dur(drive) * tick.Millisecond)
		without, err := sim.Play(&d.prog)
		if err != nil {
			return nil, err
		}
		for _, c := range couplings {
			if c >= drive {
				z.put(-1, answer{})
				continue
			}
			a := d.extra(&player, without, tick.Dur(c)*tick.Millisecond)
			k := slices.Index(z.Words, a.slug)
			if k < 0 {
				k = len(z.Words)
				z.Words = append(z.Words, a.slug)
			}
			z.put(k, a)
		}
	}
	return z, nil
}

func (z *Zone) put(word int, a answer) {
	z.At, z.answers = append(z.At, word), append(z.answers, a)
}

// driver is a program with a train.
type driver struct {
	prog plan.Program
	site event.SiteID
	last tick.Time
}

func (d *driver) train(cycle tick.Dur) {
	t := tick.Time(begin)
	d.prog.Stimuli = nil
	for range driven {
		d.prog.Stimuli = append(d.prog.Stimuli, plan.Stimulus{T: t, Site: d.site, Rule: event.Train})
		d.last, t = t, t.Add(cycle)
	}
	d.prog.Span = t.Add(after)
}

// extra plays the train with an extrastimulus behind it.
func (d *driver) extra(player *sim.Player, without *event.Log, coupling tick.Dur) answer {
	prog := d.prog
	at := d.last.Add(coupling)
	prog.Stimuli = append(slices.Clone(d.prog.Stimuli), plan.Stimulus{T: at, Site: d.site, Rule: event.Premature})
	log, err := player.Play(&prog)
	if err != nil {
		return answer{slug: "too_long", refused: err.Error()}
	}
	return extraAnswer(log, without, at, d.site)
}

func extraAnswer(log, without *event.Log, at tick.Time, site event.SiteID) answer {
	for i := range log.Events {
		e := &log.Events[i]
		if e.T != at || e.Kind != event.Stimulus || e.Rule != event.Premature || e.Site != site {
			continue
		}
		o := study.Extra(log, without, e.ID)
		return answer{slug: o.Slug, text: o.Text, numbers: []Number{
			number("to the other chamber", o.Passage, o.Passage > 0), number("AH", o.AH, o.AH > 0)}}
	}
	return answer{slug: "none"}
}

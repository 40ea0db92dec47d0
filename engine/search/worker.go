package search

import (
	"errors"
	"slices"

	"escapement/engine/event"
	"escapement/engine/measure"
	"escapement/engine/pacer"
	"escapement/engine/plan"
	"escapement/engine/sim"
	"escapement/engine/sweep"
	"escapement/engine/tick"
)

// worker tries combinations, one at a time, into memory of its own.
type worker struct {
	s        *Search
	variants []*plan.Variants // by room
	player   sim.Player
	reader   measure.Reader
	values   []plan.Value
}

func (s *Search) newWorker() *worker {
	w := &worker{s: s}
	for i := range s.rooms {
		w.variants = append(w.variants, plan.NewVariants(s.rooms[i].plan, s.rooms[i].fields...))
	}
	return w
}

// outcome is what one run came to.
type outcome struct {
	tally    measure.Tally
	findings []string
	warnings []string
}

// in are the values of a room's fields: the settings, and the value that varies.
func (w *worker) in(r *room, settings []plan.Value, k int) []plan.Value {
	w.values = append(w.values[:0], settings...)
	if v := r.at.Vary; v != nil && v.Field != "" {
		w.values = append(w.values, v.Values[k])
	}
	return w.values
}

// run plays a combination in a room, at value k of what varies there. anchor is when
// the beat that a premature one is coupled to comes, found with the first of them.
func (w *worker) run(room int, settings []plan.Value, k int, seed uint64, anchor *tick.Time) (*outcome, error) {
	r := &w.s.rooms[room]
	var extra plan.Item
	if v := r.at.Vary; v != nil && v.Premature != "" {
		if *anchor < 0 {
			t, err := w.anchor(room, settings, seed)
			if err != nil {
				return nil, err
			}
			*anchor = t
		}
		extra = plan.Extra(v.Premature, anchor.MS()+v.Values[k].Number)
	}
	prog, err := w.variants[room].Program(w.in(r, settings, k), seed, extra)
	if err != nil {
		return nil, err
	}
	log, err := w.player.Play(prog)
	if err != nil {
		return nil, err
	}
	o := &outcome{tally: w.reader.Tally(log)}
	if r.slow {
		o.findings = sweep.Slugs(measure.Of(log, nil))
	}
	if r.warns && prog.Device != nil {
		for _, x := range pacer.Warnings(&prog.Device.Settings, w.variants[room].Patient()) {
			o.warnings = append(o.warnings, x.Name)
		}
	}
	return o, nil
}

// errNoBeat is the refusal of a coupling to a beat that never comes.
var errNoBeat = errors.New("the site of the premature beat is never depolarised at or after after_ms, so there is nothing to couple it to")

func (w *worker) anchor(room int, settings []plan.Value, seed uint64) (tick.Time, error) {
	r := &w.s.rooms[room]
	prog, err := w.variants[room].Program(w.in(r, settings, 0), seed, nil)
	if err != nil {
		return 0, err
	}
	log, err := w.player.Play(prog)
	if err != nil {
		return 0, err
	}
	site, from := log.Site(r.at.Vary.Premature), tick.Time(tick.MS(r.at.Vary.AfterMS))
	for i := range log.Events {
		if e := &log.Events[i]; e.Kind == event.Activate && e.Site == site && e.T >= from {
			return e.T, nil
		}
	}
	return 0, errNoBeat
}

// verdict is a goal judged in one run: Margin is how far it is from failing, in the
// goal's unit and below 0 where it fails; for words it is 0 or -1.
type verdict struct {
	holds  bool
	none   bool // the run has no such number, which fails
	margin float64
	value  float64
	word   string
}

func judge(g *plan.Goal, o *outcome) verdict {
	switch {
	case g.AtLeast != nil || g.AtMost != nil:
		x, ok := sweep.Number(g.Outcome, &o.tally)
		if !ok {
			return verdict{none: true, word: "no such number"}
		}
		v := verdict{value: x}
		switch {
		case g.AtLeast == nil:
			v.margin = *g.AtMost - x
		case g.AtMost == nil:
			v.margin = x - *g.AtLeast
		default:
			v.margin = min(*g.AtMost-x, x-*g.AtLeast)
		}
		v.holds = v.margin >= 0
		return v
	case g.Outcome == "findings":
		return lacks(g.NoneOf, o.findings)
	case g.Outcome == "warnings":
		return lacks(g.NoneOf, o.warnings)
	}
	word := sweep.Word(g.Outcome, &o.tally)
	good := (len(g.Equal) == 0 || slices.Contains(g.Equal, word)) && !slices.Contains(g.NoneOf, word)
	return said(good, word)
}

// lacks holds where none of the unwanted words is there.
func lacks(unwanted, there []string) verdict {
	for _, u := range unwanted {
		if slices.Contains(there, u) {
			return said(false, u)
		}
	}
	return said(true, "none of them")
}

func said(good bool, word string) verdict {
	v := verdict{holds: good, word: word}
	if !good {
		v.margin = -1
	}
	return v
}

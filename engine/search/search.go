// Package search finds the settings of a device that reach goals, and which goals
// stand in each other's way.
//
// The goals of a plan ([plan.Goals]) name settings with their programmable steps,
// situations that the patient will be in, hard goals and what is better among settings
// that hold them. Every combination of the settings is tried: closed forms may exclude
// one (see forms.go: only what they prove), everything else is simulated, and what is
// returned has been run in every situation.
//
//	s, err := search.New(p)                       // a plan with goals
//	st := s.Begin()
//	err = s.Run(ctx, st, search.Settings{})       // in parts if need be: st is plain JSON
//	answer := s.Answer(st, 20)
//
// A combination's verdict depends on nothing but the plan and the combination, so the
// answer is the same for any number of workers, any budget and any interruption.
// Definitions of outcomes are those of package measure.
package search

import (
	"fmt"
	"hash/fnv"

	"escapement/engine/plan"
)

// Search is a plan with goals, made ready. It is not changed by running.
type Search struct {
	Plan  *plan.Plan
	Goals *plan.Goals

	// Simulate leaves out what closed forms exclude, so that all is simulated: slower,
	// with the same answer.
	Simulate bool

	rooms []room
	seeds []uint64
	total int
}

// room is a situation made ready.
type room struct {
	plan   *plan.Plan // in the situation
	at     *plan.Situation
	fields []string // the settings, and the value that varies
	must   []int    // goals for it
	prefer []int
	slow   bool // findings are asked for
	warns  bool
	steady bool // see plan.Steady
}

// New makes the search of a plan's goals. The error, a plan.Diagnoses, is that of a
// plan without any.
func New(p *plan.Plan) (*Search, error) {
	g := p.Goals
	if g == nil {
		return nil, plan.Diagnoses{{Path: "goals", Found: "nothing", Allowed: "an object with settings, situations, and must, prefer or both",
			Note: `such as "goals": {"settings": [{"field": "pacemaker.pvarp_ms", "from": 200, "to": 400, "step": 10}], "situations": [{"name": "rest"}], "must": [{"outcome": "longest_pause_ms", "at_most": 1500}]}`}}
	}
	s := &Search{Plan: p, Goals: g, seeds: g.Seeds, total: g.Combinations()}
	if len(s.seeds) == 0 {
		s.seeds = []uint64{p.Seed()}
	}
	for i := range g.Situations {
		s.rooms = append(s.rooms, s.room(&g.Situations[i]))
	}
	return s, nil
}

func (s *Search) room(at *plan.Situation) room {
	r := room{plan: s.Plan.In(at), at: at}
	for i := range s.Goals.Settings {
		r.fields = append(r.fields, s.Goals.Settings[i].Field)
	}
	if at.Vary != nil && at.Vary.Field != "" {
		r.fields = append(r.fields, at.Vary.Field)
	}
	asks := func(name string) {
		r.slow = r.slow || name == "findings"
		r.warns = r.warns || name == "warnings"
	}
	for k := range s.Goals.Must {
		if plan.For(s.Goals.Must[k].In, at.Name) {
			r.must = append(r.must, k)
			asks(s.Goals.Must[k].Outcome)
		}
	}
	for k := range s.Goals.Prefer {
		if w := &s.Goals.Prefer[k]; w.Setting == "" && plan.For(w.In, at.Name) {
			r.prefer = append(r.prefer, k)
		}
	}
	r.steady = r.plan.Steady()
	return r
}

// Len is how many combinations there are.
func (s *Search) Len() int { return s.total }

// At gives the values of a combination, in the order of the settings; the first
// setting varies fastest.
func (s *Search) At(combination int) []plan.Value {
	out := make([]plan.Value, len(s.Goals.Settings))
	for i := range s.Goals.Settings {
		n := len(s.Goals.Settings[i].Values)
		out[i] = s.Goals.Settings[i].Values[combination%n]
		combination /= n
	}
	return out
}

// Open is the plan of a combination, to be opened by itself; situation is the name of
// the one it is put in, or "" for the plan as it stands. Its goals are kept.
func (s *Search) Open(combination int, situation string) (*plan.Plan, error) {
	if combination < 0 || combination >= s.total {
		return nil, fmt.Errorf("combination %d; allowed: 0 to %d", combination, s.total-1)
	}
	q := s.Plan
	if situation != "" {
		q = nil
		for i := range s.rooms {
			if s.rooms[i].at.Name == situation {
				q = s.rooms[i].plan
			}
		}
		if q == nil {
			return nil, fmt.Errorf("there is no situation %q", situation)
		}
	}
	out := plan.NewVariants(q, s.rooms[0].fields[:len(s.Goals.Settings)]...).Plan(s.At(combination), s.seeds[0], nil).Clone()
	out.Goals = s.Plan.Goals
	if situation != "" {
		out.Goals = nil // its situations would be put on top of this one
	}
	return out, nil
}

// Fingerprint tells searches of different plans or goals apart.
func (s *Search) Fingerprint() string {
	h := fnv.New64a()
	h.Write(s.Plan.Encode())
	return fmt.Sprintf("%016x", h.Sum64())
}

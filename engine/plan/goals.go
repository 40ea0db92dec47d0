package plan

import (
	"encoding/json"
	"fmt"
	"slices"
	"strings"
)

// Bounds on goals; each is reported with its number.
const (
	MaxSettings   = 8
	MaxSituations = 16
	MaxGoals      = 16
)

// Goals are what a search of settings is to reach: every combination of the values of
// Settings is tried in every situation; what holds all of Must is ranked by Prefer. It
// is part of a plan, as its "goals".
type Goals struct {
	Settings   []Axis      // what may be programmed, with its steps; never a premature beat
	Situations []Situation // one at least
	Must       []Goal
	Prefer     []Wish   // the first decides, the next ones between equals
	Seeds      []uint64 // of every run; empty: the plan's own
}

// Situation is something that the settings must stand: the plan with other values and
// with more done to it, perhaps at every value of one more axis, such as a premature
// beat at every coupling.
type Situation struct {
	Name string
	Set  []Assigned // in the order of their paths
	Then []Item     // interventions besides those of the plan
	Vary *Axis      // nil: one run
}

// Assigned is a value at a path.
type Assigned struct {
	Field string
	Value Value
}

// Goal is a hard limit on an outcome, in every run of the situations it is for. Of the
// conditions one at least is there, and they suit the kind of the outcome.
type Goal struct {
	Name    string   // for people; "": made of the rest
	Outcome string   // of [Outcomes]
	In      []string // names of situations; empty: all
	AtLeast *float64 // of a number, in its unit
	AtMost  *float64
	Equal   []string // of a word: any of these
	NoneOf  []string // of words: none of these
}

// Wish is what is better among settings that hold every goal: the mean of an outcome
// over all runs of its situations, or a setting's own value.
type Wish struct {
	Outcome string // a number of [Outcomes], or
	Setting string // the path of a numeric setting
	In      []string
	Highest bool // else the lowest is best
}

// Text says what a goal asks, in the words of the outcome: "longest without QRS at
// most 1500 ms".
func (g *Goal) Text() string {
	o := OutcomeNamed(g.Outcome)
	unit := o.Unit
	if unit != "" && !strings.HasPrefix(unit, "/") {
		unit = " " + unit
	}
	var parts []string
	switch {
	case g.AtLeast != nil && g.AtMost != nil && *g.AtLeast == *g.AtMost:
		parts = append(parts, "exactly "+plainNumber(*g.AtLeast)+unit)
	default:
		if g.AtLeast != nil {
			parts = append(parts, "at least "+plainNumber(*g.AtLeast)+unit)
		}
		if g.AtMost != nil {
			parts = append(parts, "at most "+plainNumber(*g.AtMost)+unit)
		}
	}
	if len(g.Equal) > 0 {
		parts = append(parts, strings.Join(g.Equal, " or "))
	}
	if len(g.NoneOf) > 0 {
		parts = append(parts, "without "+strings.Join(g.NoneOf, ", "))
	}
	s := o.Label + " " + strings.Join(parts, ", ")
	if len(g.In) > 0 {
		s += " (" + strings.Join(g.In, ", ") + ")"
	}
	if g.Name != "" {
		return g.Name + ": " + s
	}
	return s
}

// Text says what a wish prefers.
func (w *Wish) Text() string {
	best, what := "lowest ", ""
	if w.Highest {
		best = "highest "
	}
	if w.Setting != "" {
		f := byPath[general(w.Setting)]
		what = f.Label
	} else {
		what = OutcomeNamed(w.Outcome).Label
	}
	if len(w.In) > 0 {
		what += " (" + strings.Join(w.In, ", ") + ")"
	}
	return best + what
}

// OutcomeNamed is an outcome by its name, or the zero Outcome.
func OutcomeNamed(name string) Outcome {
	for _, o := range Outcomes() {
		if o.Name == name {
			return o
		}
	}
	return Outcome{}
}

// For tells whether a list of names of situations takes one in: an empty list does all.
func For(in []string, situation string) bool {
	return len(in) == 0 || slices.Contains(in, situation)
}

// Combinations is how many settings there are to try, Runs how many runs all of them
// take in all situations.
func (g *Goals) Combinations() int {
	n := 1
	for i := range g.Settings {
		n *= len(g.Settings[i].Values)
	}
	return n
}

// Runs is how many runs one combination takes in all situations.
func (g *Goals) Runs() int {
	n := 0
	for i := range g.Situations {
		n += g.Situations[i].Runs()
	}
	return n * max(1, len(g.Seeds))
}

// Runs is how many values of its axis a situation has, 1 without one.
func (s *Situation) Runs() int {
	if s.Vary == nil {
		return 1
	}
	return len(s.Vary.Values)
}

// In is the plan in a situation: its values set and its interventions added.
func (p *Plan) In(s *Situation) *Plan {
	q := p.Clone()
	q.Sweep, q.Goals = nil, nil
	for _, a := range s.Set {
		field, item := itemPath(a.Field)
		q.set(field, item, a.Value)
	}
	q.Interventions = append(q.Interventions, cloneItems(s.Then)...)
	return q
}

// section is the goals as they are written.
func (g *Goals) section() *object {
	o := &object{}
	var settings, situations, must, prefer []*object
	for i := range g.Settings {
		settings = append(settings, g.Settings[i].section())
	}
	for i := range g.Situations {
		situations = append(situations, g.Situations[i].section())
	}
	for i := range g.Must {
		must = append(must, g.Must[i].section())
	}
	for i := range g.Prefer {
		prefer = append(prefer, g.Prefer[i].section())
	}
	o.put("settings", settings)
	o.put("situations", situations)
	if must != nil {
		o.put("must", must)
	}
	if prefer != nil {
		o.put("prefer", prefer)
	}
	if len(g.Seeds) > 0 {
		o.put("seeds", g.Seeds)
	}
	return o
}

func (s *Situation) section() *object {
	o := &object{}
	o.put("name", s.Name)
	if len(s.Set) > 0 {
		set := &object{}
		for _, a := range s.Set {
			axis := Axis{Field: a.Field}
			set.put(a.Field, axis.Raw(a.Value))
		}
		o.put("set", set)
	}
	if len(s.Then) > 0 {
		o.put("interventions", encodeItems("interventions[]", s.Then))
	}
	if s.Vary != nil {
		o.put("vary", s.Vary.section())
	}
	return o
}

func (g *Goal) section() *object {
	o := &object{}
	if g.Name != "" {
		o.put("name", g.Name)
	}
	o.put("outcome", g.Outcome)
	if len(g.In) > 0 {
		o.put("in", g.In)
	}
	if g.AtLeast != nil {
		o.put("at_least", *g.AtLeast)
	}
	if g.AtMost != nil {
		o.put("at_most", *g.AtMost)
	}
	if len(g.Equal) > 0 {
		o.put("equal", g.Equal)
	}
	if len(g.NoneOf) > 0 {
		o.put("none_of", g.NoneOf)
	}
	return o
}

func (w *Wish) section() *object {
	o := &object{}
	if w.Setting != "" {
		o.put("setting", w.Setting)
	} else {
		o.put("outcome", w.Outcome)
	}
	if len(w.In) > 0 {
		o.put("in", w.In)
	}
	o.put("best", map[bool]string{false: "lowest", true: "highest"}[w.Highest])
	return o
}

// Encode is the goals as they stand under "goals" in a plan file.
func (g *Goals) Encode() []byte {
	b, err := json.Marshal(g.section())
	if err != nil {
		panic(fmt.Sprintf("plan: goals that do not encode: %v", err))
	}
	return b
}

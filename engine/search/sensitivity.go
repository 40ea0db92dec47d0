package search

import (
	"context"
	"fmt"
	"math"
	"slices"
	"strings"

	"escapement/engine/plan"
	"escapement/engine/tick"
)

// Probe is a number of the heart in a situation, to be moved while all else stays.
type Probe struct {
	Field     string  `json:"field"`
	Label     string  `json:"label"`
	Unit      string  `json:"unit"`
	Situation string  `json:"situation"`
	Value     float64 `json:"value"`

	room int
}

// Sensed says how far a number can be moved before a goal changes sides.
type Sensed struct {
	Probe
	Step float64 `json:"step"` // what comes and goes within one step from the value is not seen
	From float64 `json:"from"` // how far it was looked, both ways
	To   float64 `json:"to"`
	Down *Edge   `json:"down"` // null: nothing changes down to From
	Up   *Edge   `json:"up"`
	Runs int     `json:"runs"`
}

// Edge is where something changes: Last is the furthest value found with all as it is,
// First the nearest with the change; they lie within 1 ms, or 0.1/min.
type Edge struct {
	Last    float64  `json:"last"`
	First   float64  `json:"first"`
	Becomes []string `json:"becomes"` // what changes, in sentences
}

// senseNumbers are the numbers of the heart that are moved where no others are asked for.
var senseNumbers = []string{
	"heart.sinus.rate_bpm", "heart.atria.erp_ms", "heart.av_node.fast.ah_ms", "heart.av_node.fast.erp_ms", "heart.av_node.fast.wenckebach_cl_ms",
	"heart.av_node.fast.va_ms", "heart.av_node.fast.va_wenckebach_cl_ms", "heart.av_node.fast.min_ms", "heart.av_node.fast.alpha_ms", "heart.av_node.fast.tau_ms", "heart.av_node.fast.theta_ms",
	"heart.his_purkinje.hv_ms", "heart.his_purkinje.right_bundle.erp_ms", "heart.his_purkinje.left_bundle.erp_ms", "heart.ventricles.erp_ms",
}

// Probes lists what [Search.Sense] can move: numbers that the heart of a situation has
// and that nothing else in it moves. numbers are their paths; none: the usual ones.
func (s *Search) Probes(numbers []string) []Probe {
	if len(numbers) == 0 {
		numbers = senseNumbers
	}
	var out []Probe
	for _, path := range numbers {
		for i := range s.rooms {
			r := &s.rooms[i]
			v, ok := r.plan.Amount(path)
			moved := r.at.Vary != nil && r.at.Vary.Field == path || slices.ContainsFunc(r.plan.Interventions, func(it plan.Item) bool {
				return it["do"].Text == "set" && it["field"].Text == path
			})
			if !ok || moved || len(r.must) == 0 || !strings.HasPrefix(path, "heart.") || slices.Contains(r.fields, path) {
				continue
			}
			f, _ := plan.FieldAt(path)
			if part, ok := plan.FieldAt(path[:strings.LastIndexByte(path, '.')]); ok {
				f.Label = part.Label + " " + f.Label // "right bundle branch ERP"
			}
			out = append(out, Probe{Field: path, Label: f.Label, Unit: f.Unit, Situation: r.at.Name, Value: v, room: i})
		}
	}
	return out
}

// reach and stride are how far and by which steps a number is moved before halving.
func reach(unit string) (most, stride, tolerance float64) {
	if unit == "/min" {
		return 60, 2, 0.1
	}
	return 200, 10, 1
}

// Sense moves a number down and up from its value, with the settings of a combination,
// or with the plan's own where that is -1. It steps outwards until a goal of the
// situation holds that did not, or no longer does, and then halves. The error is the
// context's, whose end leaves nothing.
func (s *Search) Sense(ctx context.Context, p Probe, combination int) (*Sensed, error) {
	m := s.mover(p, combination)
	f, _ := plan.FieldAt(p.Field)
	most, stride, tolerance := reach(p.Unit)
	out := &Sensed{Probe: p, Step: stride, From: max(f.Min, p.Value-most), To: min(f.Max, p.Value+most)}
	for _, way := range []struct {
		edge *(*Edge)
		sign float64
		end  float64
	}{{&out.Down, -1, out.From}, {&out.Up, 1, out.To}} {
		last := p.Value
		for last != way.end {
			next := last + way.sign*stride
			if (next-way.end)*way.sign > 0 {
				next = way.end
			}
			if err := ctx.Err(); err != nil {
				return nil, err
			}
			if m.at(next) != m.at(p.Value) {
				*way.edge = m.halve(p.Value, last, next, tolerance)
				break
			}
			last = next
		}
	}
	out.Runs = m.runs
	return out, nil
}

// mover plays one situation with one number moved.
type mover struct {
	s        *Search
	w        *worker
	settings []plan.Value
	known    map[float64]string // looked up only
	runs     int
}

func (s *Search) mover(p Probe, combination int) *mover {
	sub := *s
	r := s.rooms[p.room]
	m := &mover{known: map[float64]string{}}
	r.fields = nil
	if combination >= 0 {
		for i := range s.Goals.Settings {
			r.fields = append(r.fields, s.Goals.Settings[i].Field)
		}
		m.settings = s.At(combination)
	}
	r.fields = append(r.fields, p.Field)
	if v := r.at.Vary; v != nil && v.Field != "" {
		r.fields = append(r.fields, v.Field)
	}
	sub.rooms = []room{r}
	m.s, m.w = &sub, sub.newWorker()
	return m
}

// at is what becomes of the goals at a value: a letter for each, or a refusal.
func (m *mover) at(x float64) string {
	if word, met := m.known[x]; met {
		return word
	}
	r := &m.s.rooms[0]
	word := make([]byte, len(r.must))
	for i := range word {
		word[i] = '+'
	}
	settings := append(slices.Clone(m.settings), plan.Value{Number: x})
	for _, seed := range m.s.seeds {
		anchor := tick.Time(-1)
		for k := range r.at.Runs() {
			o, err := m.w.run(0, settings, k, seed, &anchor)
			if err != nil {
				m.known[x] = "refused: " + err.Error()
				return m.known[x]
			}
			m.runs++
			for i, g := range r.must {
				if v := judge(&m.s.Goals.Must[g], o); !v.holds {
					word[i] = '-'
				}
			}
		}
	}
	m.known[x] = string(word)
	return m.known[x]
}

// halve closes in on a change between two values.
func (m *mover) halve(value, last, first, tolerance float64) *Edge {
	for math.Abs(first-last) > tolerance {
		middle := math.Round((last+(first-last)/2)*1000) / 1000
		if m.at(middle) == m.at(value) {
			last = middle
		} else {
			first = middle
		}
	}
	e := &Edge{Last: last, First: first, Becomes: []string{}}
	before, after := m.at(value), m.at(first)
	if strings.HasPrefix(before, "refused") || strings.HasPrefix(after, "refused") {
		e.Becomes = append(e.Becomes, "the plan cannot be: "+strings.TrimPrefix(after, "refused: "))
		return e
	}
	for i, g := range m.s.rooms[0].must {
		if before[i] != after[i] {
			how := "no longer holds"
			if after[i] == '+' {
				how = "holds"
			}
			e.Becomes = append(e.Becomes, fmt.Sprintf("%s %s", m.s.Goals.Must[g].Text(), how))
		}
	}
	return e
}

// Near is by what part of its value a number must move for the first change, and 1 or
// more where nothing changes in reach.
func (x *Sensed) Near() float64 {
	near := 1.0
	for _, e := range []*Edge{x.Down, x.Up} {
		if e != nil && x.Value != 0 {
			near = min(near, math.Abs(e.First-x.Value)/math.Abs(x.Value))
		}
	}
	return near
}

// Sensitivity is a set of probes with the one that changes something first in front.
type Sensitivity struct {
	Combination int       `json:"combination"` // -1: the settings of the plan as it stands
	Settings    string    `json:"settings"`
	Text        string    `json:"text"`
	Numbers     []*Sensed `json:"numbers"` // by what part of its value each must move
	Runs        int       `json:"runs"`
}

// Sensitivity puts probes in order.
func (s *Search) Sensitivity(rows []*Sensed, combination int) *Sensitivity {
	out := &Sensitivity{Combination: combination, Settings: "the plan as it stands", Numbers: slices.Clone(rows)}
	if combination >= 0 {
		out.Settings = s.describe(combination)
	}
	slices.SortStableFunc(out.Numbers, func(a, b *Sensed) int {
		switch x, y := a.Near(), b.Near(); {
		case x < y:
			return -1
		case x > y:
			return 1
		}
		return 0
	})
	for _, r := range out.Numbers {
		out.Runs += r.Runs
	}
	out.Text = "No number of the heart that was moved changes a goal within reach."
	if len(out.Numbers) > 0 {
		x := out.Numbers[0]
		e := x.Up
		if e == nil || x.Down != nil && math.Abs(x.Down.First-x.Value) < math.Abs(e.First-x.Value) {
			e = x.Down
		}
		if e != nil {
			unit := x.Unit
			if !strings.HasPrefix(unit, "/") {
				unit = " " + unit
			}
			out.Text = fmt.Sprintf("First, by part of its value: %s (%s) from %s to %s%s, and %s. Looked for by steps of %s%s, then by halving.",
				x.Label, x.Situation, num(x.Value), num(e.First), unit, strings.Join(e.Becomes, "; "), num(x.Step), unit)
		}
	}
	return out
}

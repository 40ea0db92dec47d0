// Package sweep runs a plan over a grid: one or two of its values varied, each point
// with every seed, each run reduced to outcomes.
//
// A [Grid] is the grid of a plan's sweep; its points are numbered, x fastest. A
// [Worker] runs one point at a time into memory of its own and gives a [Cell]. A cell
// depends on nothing but the plan and the number of the point, so points may be run in
// any order, by any number of workers, in parts and on other machines; a [Table] takes
// the cells in and writes the same bytes however they came.
//
//	g, err := sweep.New(p)                     // a plan with a sweep
//	t := sweep.NewTable(g)
//	_, err = g.Run(ctx, sweep.Settings{Each: t.Put})
//	err = t.WriteJSON(w)
//
// [Grid.Boundaries] finds where along an axis one behaviour gives way to another.
// Definitions of outcomes are those of package measure, names and meanings stand in
// [plan.Outcomes].
package sweep

import (
	"fmt"
	"hash/fnv"

	"escapement/engine/plan"
)

// Grid is a plan with its sweep, ready to run. It is not changed by running.
type Grid struct {
	Plan     *plan.Plan
	Sweep    *plan.Sweep
	outcomes []plan.Outcome
	slow     bool // one of them needs the whole report
	warns    bool
	seeds    []uint64
}

// New makes the grid of a plan's sweep. The error, a plan.Diagnoses, is that of a plan
// without one.
func New(p *plan.Plan) (*Grid, error) {
	if p.Sweep == nil {
		return nil, plan.Diagnoses{{Path: "sweep", Found: "nothing", Allowed: "an object with x, and perhaps y, seeds and outcomes",
			Note: `such as "sweep": {"x": {"field": "heart.sinus.rate_bpm", "from": 60, "to": 180, "step": 2}}`}}
	}
	g := &Grid{Plan: p, Sweep: p.Sweep, seeds: p.Sweep.Seeds}
	if len(g.seeds) == 0 {
		g.seeds = []uint64{p.Seed()}
	}
	asked := p.Sweep.Outcomes
	if len(asked) == 0 {
		asked = plan.DefaultOutcomes()
	}
	for _, name := range asked {
		g.outcomes = append(g.outcomes, outcome(name))
		g.slow = g.slow || name == "findings"
		g.warns = g.warns || name == "warnings"
	}
	return g, nil
}

func outcome(name string) plan.Outcome {
	for _, o := range plan.Outcomes() {
		if o.Name == name {
			return o
		}
	}
	panic("sweep: no outcome " + name) // the decoder has judged it
}

// Len is how many points the grid has.
func (g *Grid) Len() int {
	n := len(g.Sweep.X.Values)
	if g.Sweep.Y != nil {
		n *= len(g.Sweep.Y.Values)
	}
	return n
}

// Seeds are the seeds of every point.
func (g *Grid) Seeds() []uint64 { return g.seeds }

// Outcomes are those of every cell, in their order.
func (g *Grid) Outcomes() []plan.Outcome { return g.outcomes }

// axes are x, and y where there is one.
func (g *Grid) axes() []*plan.Axis {
	if g.Sweep.Y == nil {
		return []*plan.Axis{g.Sweep.X}
	}
	return []*plan.Axis{g.Sweep.X, g.Sweep.Y}
}

// At gives the values of a point, x and then y.
func (g *Grid) At(point int) []plan.Value {
	nx := len(g.Sweep.X.Values)
	out := []plan.Value{g.Sweep.X.Values[point%nx]}
	if g.Sweep.Y != nil {
		out = append(out, g.Sweep.Y.Values[point/nx])
	}
	return out
}

// Part are the points of part i of n, i from 1: every n-th, so that parts take as
// long as each other.
func (g *Grid) Part(i, n int) []int {
	var out []int
	for k := i - 1; k < g.Len(); k += n {
		out = append(out, k)
	}
	return out
}

// Fingerprint tells grids of different plans or sweeps apart.
func (g *Grid) Fingerprint() string {
	h := fnv.New64a()
	h.Write(g.Plan.Encode())
	return fmt.Sprintf("%016x", h.Sum64())
}

// Package tissue is heart muscle as numbers: where it is, how long an impulse
// takes from node to node, how long each node stays depolarised, and what every
// bit of its surface contributes to the leads.
//
// Muscle is a net of nodes and a closed surface of triangles on those nodes. By
// the equivalent double layer (uniform anisotropy ratio; Geselowitz 1989, from
// memory) the potential at an electrode is a weighted sum of the transmembrane
// potentials on the surface alone, so the weights can be computed beforehand
// and the nodes within the wall only carry the impulse.
//
// Nothing here knows sites, events or a clock. Times are whole microseconds
// after an instant the caller chooses; amplitudes are millivolts.
package tissue

import "math"

// Leads is the number of leads a surface has weights for: I, II and V1 to V6.
// The other four follow from I and II.
const Leads = 8

// Part is one piece of muscle: both ventricles, or both atria.
type Part struct {
	Name    string
	Graph   Graph
	X       [][3]float32   // position of each node, mm: left, back, up
	Kind    []Kind         // layer or chamber of each node
	APD     []int32        // duration of each node's action potential at the reference cycle, microseconds
	Tri     [][3]uint16    // closed surface
	Weights [Leads][]int16 // per triangle, in steps; each lead's sum to zero
	Step    [Leads]float32 // millivolts per step, for one full depolarisation
	Shape   Shape
	Entries []Entry
}

// Kind is where in a part a node lies. The zero value is invalid.
type Kind uint8

const (
	_           Kind = iota
	LeftInner        // left endocardium
	LeftMiddle       // middle of the left wall and septum
	LeftOuter        // left epicardium
	RightInner       // right free wall, endocardium
	RightOuter       // right free wall, epicardium
	RightSeptum      // right side of the septum
	RightAtrium
	LeftAtrium
)

// Shape is the transmembrane potential of a node: a logistic upstroke and a
// repolarisation that is the product of two logistic falls, rates in 1/ms.
type Shape struct {
	Rise, Fall, Fall2 float32
}

// Entry is how an impulse gets into the part from a site of the network: nodes
// and the time from the site to each.
type Entry struct {
	Site  string
	After int32 // fascicles: microseconds from the His bundle to the site in the normal beat; 0 for others
	Ports []Seed
}

// Entry finds an entry by its site, or nil.
func (p *Part) Entry(site string) *Entry {
	for i := range p.Entries {
		if p.Entries[i].Site == site {
			return &p.Entries[i]
		}
	}
	return nil
}

// Travel is the time between two entries: the shortest way out of one and in by
// the other. It is the same in both directions.
func (p *Part) Travel(s *Solver, from, to *Entry) int32 {
	at := s.Arrivals(&p.Graph, from.Ports)
	best := Far
	for _, port := range to.Ports {
		best = min(best, at[port.Node]+port.At)
	}
	return best
}

// SetWeights stores the contribution of every triangle to a lead, millivolts per
// full depolarisation. Rounding is carried on from one triangle to the next so
// that weights that sum to zero still do, exactly: a closed surface that is
// depolarised all over makes no potential.
func (p *Part) SetWeights(l int, mv []float64) {
	largest := 0.0
	for _, w := range mv {
		largest = max(largest, math.Abs(w))
	}
	step := float32(largest / 32000)
	p.Step[l], p.Weights[l] = step, make([]int16, len(mv))
	sum, before := 0.0, 0.0
	for k, w := range mv {
		sum += w / float64(step)
		now := math.Round(sum)
		p.Weights[l][k] = int16(now - before)
		before = now
	}
}

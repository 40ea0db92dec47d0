package main

import (
	"fmt"
	"math"
	"sort"

	"escapement/engine/field/tissue"

	"gonum.org/v1/gonum/spatial/r3"
)

// fascicleLead is the time from a fascicle's site to its earliest terminal, ms.
// It is a choice: the field knows only when terminals fire, and a site some way
// up the fascicle lets an impulse be blocked or turned back before it.
const fascicleLead = 15

// leftBundleAt is when the left bundle's division is reached after the His
// bundle, ms (a choice; the fascicles' times after it are fitted).
const leftBundleAt = 15

// microseconds rounds a time of the model.
func microseconds(ms float64) int32 { return int32(math.Round(ms * 1000)) }

// spread places a terminal between nodes: the up to four nodes around it, each
// later by its distance at the endocardium's speed.
func (v *ventricles) spread(l Layer, theta, height float64) (nodes []int, late []float64) {
	nt, nj := v.p.Ventricles.Columns, v.p.Ventricles.Rings
	u, w := (theta+180)/360*float64(nt), height*float64(nj-1)
	i, j := int(math.Floor(u)), min(int(math.Floor(w)), nj-2)
	fu, fw := u-float64(i), w-float64(j)
	var at r3.Vec
	for a := 0; a < 2; a++ {
		for b := 0; b < 2; b++ {
			n := v.node(l, (i+a)%nt, j+b)
			weight := math.Abs(1-float64(a)-fu) * math.Abs(1-float64(b)-fw)
			at = r3.Add(at, r3.Scale(weight, v.x[n]))
			nodes = append(nodes, n)
		}
	}
	speed := v.p.Speeds.InnerRight
	if l == LeftInner {
		speed = v.p.Speeds.Inner
	}
	for _, n := range nodes {
		late = append(late, r3.Norm(r3.Sub(v.x[n], at))/speed)
	}
	return nodes, late
}

// node of a layer at a column and ring; the septum stands in where the right
// ventricle has none. Ring -1 is the apex.
func (v *ventricles) node(l Layer, column, ring int) int {
	if ring < 0 {
		return v.apex[l]
	}
	if n := v.grid[l][column][ring]; n != none {
		return n
	}
	return v.grid[LeftOuter][column][ring]
}

// fascicleAt is when a fascicle's site depolarises after the His bundle, ms.
func (p *Parameters) fascicleAt(site string) float64 {
	first := math.Inf(1)
	for _, t := range p.Terminals {
		if t.Fascicle == site {
			first = math.Min(first, t.At)
		}
	}
	return first - fascicleLead
}

// fascicles in the order of the terminals.
func (p *Parameters) fascicles() []string {
	var names []string
	for _, t := range p.Terminals {
		if len(names) == 0 || names[len(names)-1] != t.Fascicle {
			names = append(names, t.Fascicle)
		}
	}
	return names
}

// entries are the fascicles with their terminals, then the regions.
func (v *ventricles) entries() []tissue.Entry {
	var out []tissue.Entry
	for _, site := range v.p.fascicles() {
		at := v.p.fascicleAt(site)
		e := tissue.Entry{Site: site, After: microseconds(at)}
		for _, t := range v.p.Terminals {
			if t.Fascicle != site {
				continue
			}
			nodes, late := v.spread(t.Layer, t.Theta, t.Height)
			for k, n := range nodes {
				e.Ports = append(e.Ports, tissue.Seed{Node: uint16(n), At: microseconds(t.At - at + late[k])})
			}
		}
		out = append(out, e)
	}
	for _, r := range v.p.Regions {
		column := int(math.Round((r.Theta+180)/360*float64(v.p.Ventricles.Columns))) % v.p.Ventricles.Columns
		n := v.node(r.Layer, column, r.Ring)
		if v.layer[n] != r.Layer {
			panic(fmt.Sprintf("region %s: no node in layer %d at theta %v, ring %d", r.Name, r.Layer, r.Theta, r.Ring))
		}
		out = append(out, tissue.Entry{Site: r.Name, Ports: []tissue.Seed{{Node: uint16(n)}}})
	}
	return out
}

// atrialSites is how many of the atria's entries are sites of the network; the
// others are places where atrial foci are usually found.
const atrialSites = 3

func (a *atria) entries() []tissue.Entry {
	s := &a.p.Atria
	at := func(n int, ms float64) tissue.Seed { return tissue.Seed{Node: uint16(n), At: microseconds(ms)} }
	focus := func(site string, chamber int, x, y, z float64) tissue.Entry {
		return tissue.Entry{Site: site, Ports: []tissue.Seed{at(a.near(chamber, r3.Vec{X: x, Y: y, Z: z}), 0)}}
	}
	return []tissue.Entry{
		{Site: "right_atrium", Ports: []tissue.Seed{at(a.near(rightAtrium, s.Exit), 0)}},
		{Site: "left_atrium", Ports: []tissue.Seed{at(a.near(leftAtrium, s.Lateral), 0)}},
		{Site: "atrial_septum", Ports: []tissue.Seed{at(a.near(rightAtrium, s.Septum), 0), at(a.sinusMouth(), s.SinusInput)}},
		{Site: "coronary_sinus", Ports: []tissue.Seed{at(a.sinusMouth(), 0)}},
		focus("left_pulmonary_veins", leftAtrium, 0.85, 0.3, 0.4),
		focus("right_pulmonary_veins", leftAtrium, -0.5, 0.8, -0.2),
		focus("right_appendage", rightAtrium, -0.2, -0.8, 0.55),
	}
}

// links turns the generator's edges into the model's, in order. Edges that are
// slower than a way round are left out: they can never carry an impulse first.
func links(n int, edges map[[2]int]float64) []tissue.Link { return used(n, allLinks(edges)) }

func allLinks(edges map[[2]int]float64) []tissue.Link {
	out := make([]tissue.Link, 0, len(edges))
	for e, ms := range edges {
		us := min(microseconds(ms), math.MaxUint16)
		out = append(out, tissue.Link{A: uint16(e[0]), B: uint16(e[1]), Time: uint16(us)})
	}
	sort.Slice(out, func(i, j int) bool {
		if out[i].A != out[j].A {
			return out[i].A < out[j].A
		}
		return out[i].B < out[j].B
	})
	return out
}

func used(n int, out []tissue.Link) []tissue.Link {
	g, s := tissue.NewGraph(n, out), tissue.Solver{}
	kept := out[:0]
	for i := 0; i < len(out); {
		from := out[i].A
		at := s.Arrivals(&g, []tissue.Seed{{Node: from}})
		for ; i < len(out) && out[i].A == from; i++ {
			switch {
			case at[out[i].B] < int32(out[i].Time):
			case out[i].Time == math.MaxUint16:
				panic(fmt.Sprintf("edge %v takes longer than the model can hold", out[i]))
			default:
				kept = append(kept, out[i])
			}
		}
	}
	return kept
}

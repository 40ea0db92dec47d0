package main

import (
	"fmt"
	"math"

	"escapement/engine/field/criteria"
	"escapement/engine/field/tissue"
)

// ventricularKnobs are the terminals, the speeds and the durations; the shape of
// the ventricles and with it the transfer stay. Limits of the speeds: muscle
// 0.3-0.75 m/s, Purkinje-coupled endocardium 0.6-2 (textbook ranges, from memory).
func ventricularKnobs(p *Parameters) []knob {
	c, r := &p.Speeds, &p.Recovery
	k := []knob{
		{"Along", &c.Along, 0.5, 0.75}, {"Across", &c.Across, 0.28, 0.45}, {"Through", &c.Through, 0.28, 0.5},
		{"Inner", &c.Inner, 0.7, 1.6}, {"InnerAround", &c.InnerAround, 0.5, 1}, {"InnerRight", &c.InnerRight, 0.7, 2},
		{"InnerBase", &c.InnerBase, 0.6, 1.5}, {"BaseFrom", &c.BaseFrom, 0.55, 0.88},
		{"Outer", &r.Outer, -40, -8}, {"Base", &r.Base, -35, 35}, {"PerMS", &r.PerMS, -0.4, 0}, {"Right", &r.Right, -35, 15},
		{"Amplitude", &p.Conductor.Amplitude, 0.2, 0.45},
	}
	for i := range p.Terminals {
		t := &p.Terminals[i]
		k = append(k,
			knob{t.Name + ".Theta", &t.Theta, t.Theta - 30, t.Theta + 30},
			knob{t.Name + ".Height", &t.Height, max(t.Height-0.3, 0.05), min(t.Height+0.3, 0.98)},
			knob{t.Name + ".At", &t.At, 40, 62})
	}
	return k
}

// extraTerminals are added by the search to those of [fitted].
var extraTerminals = []Terminal{
	{"RB4", "right_bundle", RightInner, 0, 0.35, 50},
	{"RB5", "right_bundle", RightInner, 0, 0.75, 58},
}

// fitVentricles looks for terminals and speeds that meet more of the criteria,
// by [evolve], always the same for a seed. It prints the best set whenever it has met another criterion.
func fitVentricles(p *Parameters, seed uint64, tries int, extra bool) error {
	m, err := build(p)
	if err != nil {
		return err
	}
	if extra {
		p.Terminals = withExtra(p.Terminals)
	}
	knobs := ventricularKnobs(p)
	amplitude := p.Conductor.Amplitude
	judge := func() []criteria.Verdict {
		v := m.v
		v.p = p
		v.addEdges()
		part := *m.ventricles
		part.Graph = tissue.NewGraph(len(v.x), allLinks(v.edges))
		part.Entries = v.entries()
		part.APD = nil
		for l := range part.Step {
			part.Step[l] = m.ventricles.Step[l] * float32(p.Conductor.Amplitude/amplitude)
		}
		for _, ms := range v.recovery(&part) {
			part.APD = append(part.APD, microseconds(ms))
		}
		return criteria.NewSet(&part, m.atria, limits).Verdicts()
	}
	best, most := math.Inf(1), 0
	objective := func(x []float64) float64 {
		set(knobs, x)
		verdicts := judge()
		s := criteria.Score(verdicts) + criteria.Score(common(verdicts))
		if n := passed(verdicts); s < best || n > most {
			best, most = min(s, best), max(n, most)
			report(s, verdicts, knobs)
		}
		return s
	}
	start := make([]float64, len(knobs))
	for i, k := range knobs {
		start[i] = (*k.value - k.low) / (k.high - k.low)
	}
	evolve(objective, start, 0.05, tries, seed)
	return nil
}

// common are the conditions seen most; they count twice.
func common(verdicts []criteria.Verdict) []criteria.Verdict {
	var out []criteria.Verdict
	for _, v := range verdicts {
		switch v.Condition {
		case "normal", "LBBB", "RBBB", "LAFB", "LPFB":
			out = append(out, v)
		}
	}
	return out
}

// withExtra puts the additional terminals beside their fascicles' others.
func withExtra(terminals []Terminal) []Terminal {
	var out []Terminal
	for i, t := range terminals {
		out = append(out, t)
		if i+1 < len(terminals) && terminals[i+1].Fascicle == t.Fascicle {
			continue
		}
		for _, e := range extraTerminals {
			if e.Fascicle == t.Fascicle {
				out = append(out, e)
			}
		}
	}
	return out
}

// set turns the knobs to points of a unit cube; outside of it they are reflected.
func set(knobs []knob, x []float64) {
	for i, k := range knobs {
		u := math.Mod(math.Abs(x[i]), 2)
		if u > 1 {
			u = 2 - u
		}
		*k.value = k.low + u*(k.high-k.low)
	}
}

func report(score float64, verdicts []criteria.Verdict, knobs []knob) {
	fmt.Printf("score %.3f: %d of %d criteria\n", score, passed(verdicts), len(verdicts))
	for i := range verdicts {
		if !verdicts[i].Passed() {
			fmt.Printf("  missed %s: %s\n", verdicts[i].Name(), verdicts[i].Reached())
		}
	}
	for _, k := range knobs {
		fmt.Printf("  %s = %v\n", k.name, *k.value)
	}
}

func passed(verdicts []criteria.Verdict) int {
	n := 0
	for i := range verdicts {
		if verdicts[i].Passed() {
			n++
		}
	}
	return n
}

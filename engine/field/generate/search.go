package main

import (
	"fmt"
	"math"
	"math/rand/v2"

	"escapement/engine/field/criteria"
	"escapement/engine/field/tissue"

	"gonum.org/v1/gonum/spatial/r3"
)

// knob is one number that a search may turn, between two limits.
type knob struct {
	name      string
	value     *float64
	low, high float64
}

// atrialKnobs and their limits. Speeds: atrial walls up to 1 m/s, the crest, the
// internodal band and Bachmann's bundle up to about 1.5 (textbook ranges, from
// memory); places within a centimetre, sizes within 3 mm.
func atrialKnobs(a *Atria) []knob {
	k := []knob{
		{"Speed", &a.Speed, 0.75, 1.0}, {"SpeedBachmann", &a.SpeedBachmann, 1.0, 1.7},
		{"SpeedCrista", &a.SpeedCrista, 1.0, 1.4}, {"SpeedInternodal", &a.SpeedInternodal, 1.0, 1.5},
		{"Amplitude", &a.Amplitude, 0.7, 1.3}, {"SinusInput", &a.SinusInput, 3, 12},
		{"Fossa", &a.Fossa, 2, 15}, {"Sinus", &a.Sinus, 2, 15},
	}
	place := func(name string, v *r3.Vec, by float64) {
		k = append(k, knob{name + ".X", &v.X, v.X - by, v.X + by}, knob{name + ".Y", &v.Y, v.Y - by, v.Y + by}, knob{name + ".Z", &v.Z, v.Z - by, v.Z + by})
	}
	place("RightFrom", &a.RightFrom, 8)
	place("LeftFrom", &a.LeftFrom, 8)
	place("RightHalf", &a.RightHalf, 3)
	place("LeftHalf", &a.LeftHalf, 1.5)
	place("Exit", &a.Exit, 0.35)
	place("Septum", &a.Septum, 0.15)
	return k
}

// overlap is the share of nodes that lie inside the other chamber.
func (a *atria) overlap() float64 {
	inside := 0
	for n, x := range a.x {
		other := &a.p.Atria.RightHalf
		if a.chamber[n] == rightAtrium {
			other = &a.p.Atria.LeftHalf
		}
		d := r3.Sub(x, a.centre[1-a.chamber[n]])
		if r3.Norm(r3.Vec{X: d.X / other.X, Y: d.Y / other.Y, Z: d.Z / other.Z}) < 1 {
			inside++
		}
	}
	return float64(inside) / float64(len(a.x))
}

// fitAtria looks for atria that meet the P wave criteria with an impulse that
// comes down to the AV node in 40 to 48 ms: random steps of shrinking size from
// the best so far, always the same for a seed.
func fitAtria(p *Parameters, seed uint64, tries int) (*Parameters, error) {
	v := buildVentricles(p)
	c, err := newConductor(append([]shell{p.torso()}, v.bloodShells()...), p.electrodes())
	if err != nil {
		return nil, err
	}
	vp := &tissue.Part{Name: "ventricles", Graph: tissue.NewGraph(0, nil)}
	score := func(q *Parameters) float64 {
		a := buildAtria(q, v)
		set := criteria.NewSet(vp, atrialPart(q, a, c), limits)
		return criteria.Score(set.Atrial()) + criteria.Score(set.AtrialTargets()) + 10*max(0, a.overlap()-0.03)
	}
	rng := rand.New(rand.NewPCG(seed, 0))
	knobs := atrialKnobs(&p.Atria)
	for _, k := range knobs { // the limits may be tighter than where the search begins
		*k.value = min(max(*k.value, k.low), k.high)
	}
	best, kept := score(p), make([]float64, len(knobs))
	fmt.Printf("start %.3f, overlap %.3f\n", best, buildAtria(p, v).overlap())
	for try := 0; try < tries && best > 0; try++ {
		size := 0.25 * math.Pow(0.05, float64(try)/float64(tries))
		for i, k := range knobs {
			kept[i] = *k.value
			if rng.Float64() < 0.4 {
				*k.value = min(max(*k.value+rng.NormFloat64()*size*(k.high-k.low), k.low), k.high)
			}
		}
		if s := score(p); s <= best {
			if s < best {
				fmt.Printf("try %d: %.3f\n", try, s)
			}
			best = s
			continue
		}
		for i, k := range knobs {
			*k.value = kept[i]
		}
	}
	for _, k := range knobs {
		fmt.Printf("%s: %v,\n", k.name, *k.value)
	}
	return p, nil
}

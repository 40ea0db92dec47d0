package criteria

import (
	"fmt"
	"math"

	"escapement/engine/field/tissue"
	"escapement/engine/lead"
)

// Limits are the thresholds by which waves are marked for the criteria.
type Limits struct {
	Ventricles, Atria tissue.Thresholds
}

// Set is the waves of one model under all conditions.
type Set struct {
	Ventricles, Atria *tissue.Part
	v, a              *tissue.Muscle
	beats             map[string]Beat
	septumAt          float64 // ms from the sinus exit to the septal atrium
	hisAt             float64 // ms from the sinus exit to the His bundle
}

// nodeTime is from the septal atrium to the His bundle (AH) for the conditions
// that need one: the mean of healthy adults is 83 ms (Alboni et al., Eur Heart J
// 1985;6:602).
const nodeTime = 80

// pathwayTime is what an accessory pathway adds, ms (a choice within the usual range).
const pathwayTime = 25

// source is an impulse entering at a site, ms after the His bundle's depolarisation.
type source struct {
	site string
	at   float64
}

// NewSet computes nothing yet: waves are made when asked for.
func NewSet(ventricles, atria *tissue.Part, limits Limits) *Set {
	s := &Set{Ventricles: ventricles, Atria: atria, v: tissue.NewMuscle(ventricles, limits.Ventricles), a: tissue.NewMuscle(atria, limits.Atria), beats: map[string]Beat{}}
	var solver tissue.Solver
	s.septumAt = float64(atria.Travel(&solver, atria.Entry("right_atrium"), atria.Entry("atrial_septum"))) / 1000
	s.hisAt = s.septumAt + nodeTime
	return s
}

// fascicles that fire from above when the bundles in without are blocked, each
// later by late.
func (s *Set) fascicles(late map[string]float64, without ...string) []source {
	var out []source
	for i := range s.Ventricles.Entries {
		e := &s.Ventricles.Entries[i]
		if e.After == 0 {
			continue
		}
		blocked := false
		for _, w := range without {
			blocked = blocked || w == e.Site
		}
		if !blocked {
			out = append(out, source{e.Site, float64(e.After)/1000 + late[e.Site]})
		}
	}
	return out
}

// left are the three fascicles of the left bundle.
var left = []string{"left_anterior", "left_septal", "left_posterior"}

func leftLater(ms float64) map[string]float64 {
	return map[string]float64{"left_anterior": ms, "left_septal": ms, "left_posterior": ms}
}

// ventricular lists what fires in each condition.
func (s *Set) ventricular(condition string) []source {
	all := s.fascicles(nil)
	switch condition {
	case "normal":
		return all
	case "LBBB":
		return s.fascicles(nil, left...)
	case "RBBB":
		return s.fascicles(nil, "right_bundle")
	case "LAFB":
		return s.fascicles(nil, "left_anterior")
	case "LPFB":
		return s.fascicles(nil, "left_posterior")
	case "RBBB and LAFB":
		return s.fascicles(nil, "right_bundle", "left_anterior")
	case "RBBB and LPFB":
		return s.fascicles(nil, "right_bundle", "left_posterior")
	case "incomplete LBBB":
		return s.fascicles(leftLater(15))
	case "incomplete RBBB":
		return s.fascicles(map[string]float64{"right_bundle": 20})
	case "RV apex paced":
		return []source{{"rv_apex", 0}}
	case "RV outflow beat":
		return []source{{"rv_outflow", 0}}
	case "LV lateral beat":
		return []source{{"lv_lateral", 0}}
	case "LV apex beat":
		return []source{{"lv_apex", 0}}
	case "biventricular paced":
		return []source{{"rv_apex", 0}, {"lv_lateral", 0}}
	case "His paced with septum":
		return append(all, source{"rv_septum", 0})
	case "left bundle paced":
		return s.fascicles(map[string]float64{"right_bundle": 38})
	case "WPW left lateral":
		return append(all, s.pathway("lv_lateral", tissue.LeftAtrium))
	case "WPW left lateral alone":
		return []source{s.pathway("lv_lateral", tissue.LeftAtrium)}
	case "WPW posteroseptal":
		return append(all, s.pathway("lv_posterior", tissue.LeftAtrium))
	case "WPW posteroseptal alone":
		return []source{s.pathway("lv_posterior", tissue.LeftAtrium)}
	case "WPW right free wall":
		return append(all, s.pathway("rv_free_wall", tissue.RightAtrium))
	case "WPW right free wall alone":
		return []source{s.pathway("rv_free_wall", tissue.RightAtrium)}
	}
	panic("criteria: no condition is called " + condition)
}

// pathway enters at a region after the sinus beat has reached the atrial node of
// the chamber that lies nearest to it.
func (s *Set) pathway(region string, chamber tissue.Kind) source {
	at := s.a.Activation(s.Atria.Entry("right_atrium").Ports)
	to := s.Ventricles.X[s.Ventricles.Entry(region).Ports[0].Node]
	best, arrive := math.Inf(1), int32(0)
	for n, x := range s.Atria.X {
		d := 0.0
		for k := range x {
			d += float64(x[k]-to[k]) * float64(x[k]-to[k])
		}
		if s.Atria.Kind[n] == chamber && d < best {
			best, arrive = d, at[n]
		}
	}
	return source{region, float64(arrive)/1000 + pathwayTime - s.hisAt}
}

// beat is the wave of a condition, computed on first use.
func (s *Set) beat(condition string) Beat {
	if _, ok := s.beats[condition]; !ok {
		s.beats[condition] = Beat{s.v.Wave(s.Seeds(condition), 0)}
	}
	return s.beats[condition]
}

// Complex is the wave of a ventricular condition.
func (s *Set) Complex(condition string) *lead.Complex { return s.beat(condition).Complex }

// Seeds are a condition's impulses into ventricular muscle, the first source at 0.
func (s *Set) Seeds(condition string) []tissue.Seed {
	sources := s.ventricular(condition)
	first := math.Inf(1)
	for _, x := range sources {
		first = min(first, x.at)
	}
	var seeds []tissue.Seed
	for _, x := range sources {
		for _, p := range s.Ventricles.Entry(x.site).Ports {
			seeds = append(seeds, tissue.Seed{Node: p.Node, At: p.At + int32(math.Round((x.at-first)*1000))})
		}
	}
	return seeds
}

// firstSource is when the earliest source fires, ms after the His bundle.
func (s *Set) firstSource(condition string) float64 {
	first := math.Inf(1)
	for _, x := range s.ventricular(condition) {
		first = min(first, x.at)
	}
	return first
}

// rightAfterLeft is by how much the right endocardium is later than the left one
// in the normal beat, ms.
func (s *Set) rightAfterLeft() float64 {
	left, right := tissue.Far, tissue.Far
	at := s.v.Activation(s.Seeds("normal"))
	for n, k := range s.Ventricles.Kind {
		switch k {
		case tissue.LeftInner:
			left = min(left, at[n])
		case tissue.RightInner, tissue.RightSeptum:
			right = min(right, at[n])
		}
	}
	return float64(right-left) / 1000
}

// epicardium is when the first node of the right and the last node of the whole
// epicardium is depolarised in the normal beat, and when the right apex is, ms
// after the QRS onset.
func (s *Set) epicardium() (firstRight, last, rightApex float64) {
	onset := int32(s.beat("normal").On-tissue.LeadIn) * 1000
	first, end := tissue.Far, int32(0)
	at := s.v.Activation(s.Seeds("normal"))
	for n, k := range s.Ventricles.Kind {
		switch k {
		case tissue.RightOuter:
			first, end = min(first, at[n]), max(end, at[n])
		case tissue.LeftOuter:
			end = max(end, at[n])
		}
	}
	apex := at[s.Ventricles.Entry("rv_apex").Ports[0].Node]
	return float64(first-onset) / 1000, float64(end-onset) / 1000, float64(apex-onset) / 1000
}

// pr is from the sinus exit to the QRS onset.
func (s *Set) pr(condition string) float64 {
	return s.hisAt + s.firstSource(condition) + float64(s.beat(condition).On-tissue.LeadIn)
}

// atrial is the P wave that begins at a site of the network, or at the atrial
// node that lies most in a direction.
func (s *Set) atrial(from string) Beat {
	name := "P " + from
	if _, ok := s.beats[name]; !ok {
		e := s.Atria.Entry(from)
		if e == nil {
			panic(fmt.Sprintf("criteria: the atria have no site %q", from))
		}
		s.beats[name] = Beat{s.a.Wave(e.Ports, 0)}
	}
	return s.beats[name]
}

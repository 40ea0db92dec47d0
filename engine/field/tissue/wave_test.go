package tissue

import (
	"math"
	"testing"

	"escapement/engine/lead"
)

func sum(x []float64) float64 {
	s := 0.0
	for _, v := range x {
		s += v
	}
	return s
}

func TestKernelsRiseByOneAndFallByOne(t *testing.T) {
	s := Shape{0.9, 0.045, 0.1}
	if got := sum(s.riseSteps()); math.Abs(got-1) > 1e-12 {
		t.Errorf("the upstroke rises by %v, want 1", got)
	}
	if got := sum(s.fallSteps()); math.Abs(got+1) > 1e-12 {
		t.Errorf("repolarisation falls by %v, want -1", -got)
	}
}

// A closed surface that is all at plateau, or all at rest, makes no potential.
func TestPlateauAndRestAreFlat(t *testing.T) {
	m := NewMuscle(tetrahedron(), Thresholds{Depol: 0.01})
	c := m.Wave([]Seed{{0, 0}}, 0)
	flat := func(what string, from, to int) {
		for l := range c.MV {
			for i := from; i < to; i++ {
				if v := math.Abs(float64(c.MV[l][i])); v > 2e-4 {
					t.Fatalf("%s: %v mV in %s at sample %d", what, v, lead.Name(l), i)
				}
			}
		}
	}
	flat("before", 0, LeadIn-10)
	flat("after", len(c.MV[0])-20, len(c.MV[0]))
	for l := range c.Depol {
		for i := LeadIn + 100; i < len(c.Depol[l]); i++ {
			if v := math.Abs(float64(c.Depol[l][i])); v > 1e-6 {
				t.Fatalf("depolarisation part: %v mV in %s at sample %d", v, lead.Name(l), i)
			}
		}
	}
}

// The straightforward way: every sampling place's potential at every
// millisecond, from the formula and its own time, without histograms.
func TestWaveEqualsTheDirectSum(t *testing.T) {
	p := tetrahedron()
	m := NewMuscle(p, Thresholds{Depol: 0.01})
	seeds := []Seed{{0, 0}, {2, 3000}}
	c := m.Wave(seeds, 7000)
	at := m.Activation(seeds)
	logistic := func(x float64) float64 { return 1 / (1 + math.Exp(-x)) }
	s := Shape{0.9, 0.045, 0.1}
	worst := 0.0
	for i := range c.MV[0] {
		now := float64(i - LeadIn)
		v := 0.0
		for k, t := range p.Tri {
			for _, b := range twelfths {
				rise, fall := 0.0, 0.0
				for q := range b {
					rise += float64(b[q]) / 12 * float64(at[t[q]]) / 1000
					fall += float64(b[q]) / 12 * float64(at[t[q]]+p.APD[t[q]]+7000) / 1000
				}
				// Times between two milliseconds are shared between them, so is the direct value.
				up := lerp(rise, func(r float64) float64 { return logistic(float64(s.Rise) * (now - r + 0)) })
				down := lerp(fall, func(r float64) float64 {
					return logistic(-float64(s.Fall)*(now-r)) * logistic(-float64(s.Fall2)*(now-r))
				})
				v += float64(p.Weights[1][k]) * float64(p.Step[1]) / 16 * (up + down - 1)
			}
		}
		worst = max(worst, math.Abs(v-float64(c.MV[lead.II][i])))
	}
	if worst > 1e-3 {
		t.Errorf("lead II is up to %.2g mV off the direct sum", worst)
	}
}

// lerp shares a time between the two whole milliseconds around it.
func lerp(t float64, f func(float64) float64) float64 {
	k := math.Floor(t)
	return f(k)*(1-(t-k)) + f(k+1)*(t-k)
}

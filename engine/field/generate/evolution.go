package main

import (
	"math"
	"math/rand/v2"
	"sort"
)

// evolve makes f smaller by an evolution strategy that adapts a step for every
// coordinate (separable CMA-ES: Ros and Hansen, PPSN 2008, from memory), for a
// number of evaluations. The same seed gives the same search.
func evolve(f func([]float64) float64, mean []float64, step float64, evaluations int, seed uint64) {
	n := len(mean)
	dim := float64(n)
	lambda := 4 + int(3*math.Log(dim))
	mu := lambda / 2
	weights, sum, squares := make([]float64, mu), 0.0, 0.0
	for i := range weights {
		weights[i] = math.Log(float64(mu)+0.5) - math.Log(float64(i+1))
		sum += weights[i]
	}
	for i := range weights {
		weights[i] /= sum
		squares += weights[i] * weights[i]
	}
	effective := 1 / squares
	cc, cs := 4/(dim+4), (effective+2)/(dim+effective+5)
	faster := (dim + 2) / 3 // a diagonal is learnt that much sooner than a matrix
	c1 := 2 / ((dim+1.3)*(dim+1.3) + effective) * faster
	cmu := min(1-c1, 2*(effective-2+1/effective)/((dim+2)*(dim+2)+effective)*faster)
	damping := 1 + cs
	expected := math.Sqrt(dim) * (1 - 1/(4*dim) + 1/(21*dim*dim))
	variance, pathS, pathC := make([]float64, n), make([]float64, n), make([]float64, n)
	for i := range variance {
		variance[i] = 1
	}
	type sample struct {
		x, y []float64
		f    float64
	}
	rng := rand.New(rand.NewPCG(seed, 0))
	for done, round := 0, 1; done+lambda <= evaluations; round++ {
		samples := make([]sample, lambda)
		for k := range samples {
			s := &samples[k]
			s.x, s.y = make([]float64, n), make([]float64, n)
			for i := range s.x {
				s.y[i] = rng.NormFloat64() * math.Sqrt(variance[i])
				s.x[i] = mean[i] + step*s.y[i]
			}
			s.f = f(s.x)
			done++
		}
		sort.SliceStable(samples, func(i, j int) bool { return samples[i].f < samples[j].f })
		length := 0.0
		for i := range mean {
			y, second := 0.0, 0.0
			for k, w := range weights {
				y += w * samples[k].y[i]
				second += w * samples[k].y[i] * samples[k].y[i]
			}
			mean[i] += step * y
			pathS[i] = (1-cs)*pathS[i] + math.Sqrt(cs*(2-cs)*effective)*y/math.Sqrt(variance[i])
			pathC[i] = (1-cc)*pathC[i] + math.Sqrt(cc*(2-cc)*effective)*y
			variance[i] = (1-c1-cmu)*variance[i] + c1*pathC[i]*pathC[i] + cmu*second
			length += pathS[i] * pathS[i]
		}
		step *= math.Exp(cs / damping * (math.Sqrt(length)/expected - 1))
	}
}

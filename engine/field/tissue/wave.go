package tissue

import (
	"escapement/engine/lead"
)

// LeadIn is how many milliseconds a wave's samples begin before its time zero.
const LeadIn = 60

// Thresholds of a wave in millivolts.
type Thresholds struct {
	Depol float64 // the depolarisation part passes it in any lead from onset to offset
	Repol float64 // the repolarisation part passes it in any lead until the end; 0: the end is the offset
}

// The thresholds in use. The QRS begins and ends where the depolarisation part
// first and last passes 0.04 mV in any lead, the T wave ends where the
// repolarisation part last does; a P wave is about a tenth of a QRS and has a
// threshold to match. All three are choices.
var (
	VentricularLimits = Thresholds{Depol: 0.04, Repol: 0.04}
	AtrialLimits      = Thresholds{Depol: 0.015}
)

// Muscle turns seeds into the leads of one wave over a part. It keeps its
// memory between waves; it is not safe for use by two goroutines at once.
type Muscle struct {
	Part       *Part
	limits     Thresholds
	solver     Solver
	weights    [][Leads]int64 // by triangle
	rise, fall []float64
	at, until  []int32
	depol      [][Leads]int64 // by millisecond: weight that is depolarised then
	repol      [][Leads]int64
	sum        [2][]float64 // by sample: depolarisation, repolarisation
}

// NewMuscle prepares a part.
func NewMuscle(p *Part, limits Thresholds) *Muscle {
	m := &Muscle{Part: p, limits: limits, rise: p.Shape.riseSteps(), fall: p.Shape.fallSteps(), until: make([]int32, len(p.APD))}
	m.weights = make([][Leads]int64, len(p.Tri))
	for l := range p.Weights {
		for k, w := range p.Weights[l] {
			m.weights[k][l] = int64(w)
		}
	}
	return m
}

// twelfths are the places at which a triangle is sampled, the centroids of
// sixteen equal triangles that divide it, in barycentric coordinates over 12.
var twelfths = func() (out [16][3]int32) {
	n := 0
	for i := int32(0); i < 4; i++ {
		for j := int32(0); i+j < 4; j++ {
			out[n] = [3]int32{3*i + 1, 3*j + 1, 10 - 3*i - 3*j}
			n++
			if i+j < 3 {
				out[n] = [3]int32{3*i + 2, 3*j + 2, 8 - 3*i - 3*j}
				n++
			}
		}
	}
	return out
}()

// share is the denominator of a weight in the histograms: a twelfth of a
// microsecond over a millisecond.
const share = 12000

// deposit adds each triangle's weights to the milliseconds at which its
// sampling places have their time, linearly split between the two nearest. All
// of it is whole numbers, so the order of summing cannot matter.
func (m *Muscle) deposit(h [][Leads]int64, at []int32) {
	for k, t := range m.Part.Tri {
		a, b, c := at[t[0]], at[t[1]], at[t[2]]
		w := &m.weights[k]
		for i := range twelfths {
			p := &twelfths[i]
			x := p[0]*a + p[1]*b + p[2]*c
			bin := x / share
			late := int64(x - bin*share)
			h0, h1 := &h[bin], &h[bin+1]
			for l := range w {
				v := w[l] * late
				h0[l] += w[l]*share - v
				h1[l] += v
			}
		}
	}
}

// Activation is when each node is depolarised by the seeds. The slice holds
// until the next call.
func (m *Muscle) Activation(seeds []Seed) []int32 {
	m.at = append(m.at[:0], m.solver.Arrivals(&m.Part.Graph, seeds)...)
	return m.at
}

// Wave is the twelve leads of one wave that the seeds start, with every action
// potential longer by stretch microseconds than at the reference cycle. Seeds
// must not be earlier than 0; sample LeadIn is time 0.
func (m *Muscle) Wave(seeds []Seed, stretch int32) *lead.Complex {
	at := m.Activation(seeds)
	latest, latestEnd := int32(0), int32(0)
	for n, t := range at {
		// A node cannot repolarise before it depolarises, however short the cycle.
		m.until[n] = t + max(m.Part.APD[n]+stretch, 50000)
		latest, latestEnd = max(latest, t), max(latestEnd, m.until[n])
	}
	m.depol, m.repol = clearBins(m.depol, latest), clearBins(m.repol, latestEnd)
	m.deposit(m.depol, at)
	m.deposit(m.repol, m.until)
	n := LeadIn + len(m.repol) + fallAfter
	c := &lead.Complex{}
	for l := 0; l < Leads; l++ {
		scale := float64(m.Part.Step[l]) / (16 * share)
		for i := range m.sum {
			m.sum[i] = append(m.sum[i][:0], make([]float64, n)...)
		}
		spread(m.sum[0], m.depol, l, scale, m.rise, LeadIn-riseReach)
		spread(m.sum[1], m.repol, l, scale, m.fall, LeadIn-fallBefore)
		c.MV[eight[l]], c.Depol[eight[l]] = m.trace(n)
	}
	limbLeads(&c.MV)
	limbLeads(&c.Depol)
	m.mark(c)
	return c
}

// eight are the leads that weights are kept for.
var eight = [Leads]lead.Name{lead.I, lead.II, lead.V1, lead.V2, lead.V3, lead.V4, lead.V5, lead.V6}

func clearBins(h [][Leads]int64, latest int32) [][Leads]int64 {
	n := int(latest/1000) + 2
	if cap(h) < n {
		return make([][Leads]int64, n)
	}
	h = h[:n]
	clear(h)
	return h
}

// spread adds each bin's weight, drawn out over the steps of the kernel, to the
// samples; bin 0's first step falls on sample first.
func spread(out []float64, h [][Leads]int64, l int, scale float64, kernel []float64, first int) {
	for k := range h {
		if h[k][l] == 0 {
			continue
		}
		w := float64(h[k][l]) * scale
		for j := range kernel {
			if i := k + j + first; i >= 0 {
				out[i] += float64(w * kernel[j])
			}
		}
	}
}

// trace sums the steps up to each sample.
func (m *Muscle) trace(n int) (all, depol []float32) {
	both := make([]float32, 2*n)
	all, depol = both[:n:n], both[n:]
	d, r := 0.0, 0.0
	for i := range all {
		d += m.sum[0][i]
		r += m.sum[1][i]
		depol[i], all[i] = float32(d), float32(d+r)
	}
	return all, depol
}

// limbLeads derives III and the augmented leads from I and II.
func limbLeads(mv *[lead.Count][]float32) {
	one, two := mv[lead.I], mv[lead.II]
	n := len(one)
	four := make([]float32, 4*n)
	for k, name := range []lead.Name{lead.III, lead.AVR, lead.AVL, lead.AVF} {
		mv[name] = four[k*n : (k+1)*n : (k+1)*n]
	}
	for i := range one {
		a, b := one[i], two[i]
		mv[lead.III][i], mv[lead.AVR][i] = b-a, -(a+b)/2
		mv[lead.AVL][i], mv[lead.AVF][i] = a-b/2, b-a/2
	}
}

// mark finds onset, offset and end. A wave that stays below the threshold has
// its onset and offset at time zero.
func (m *Muscle) mark(c *lead.Complex) {
	c.On, c.Off, c.End = LeadIn, LeadIn, LeadIn
	found := false
	for i := range c.Depol[0] {
		depol, repol := float32(0), float32(0)
		for l := range c.Depol {
			depol = max(depol, abs(c.Depol[l][i]))
			repol = max(repol, abs(c.MV[l][i]-c.Depol[l][i]))
		}
		if float64(depol) > m.limits.Depol {
			if !found {
				c.On, found = i, true
			}
			c.Off = i
		}
		if m.limits.Repol > 0 && float64(repol) > m.limits.Repol {
			c.End = i
		}
	}
	c.End = max(c.End, c.Off)
}

func abs(x float32) float32 { return max(x, -x) }

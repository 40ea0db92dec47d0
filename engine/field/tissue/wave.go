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
	depol      [][Leads]int64 // by bin: weight that is depolarised then
	repol      [][Leads]int64
	local      []int64      // of one triangle, by bin
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

// Bins of the two histograms in milliseconds. Repolarisation is slow enough for
// wide ones: sharing a time between two bins 4 ms apart blurs it by under 2 ms,
// against the 20 that it takes (standard deviations).
const (
	riseBin = 1
	fallBin = 4
)

// deposit adds each triangle's weights to the bins at which its sampling places
// have their time, linearly split between the two nearest. All of it is whole
// numbers, so the order of summing cannot matter. One bin is a share of
// 12000 width: a twelfth of a microsecond each.
func (m *Muscle) deposit(h [][Leads]int64, at []int32, width int32) {
	share := 12000 * width
	for k, t := range m.Part.Tri {
		a, b, c := at[t[0]], at[t[1]], at[t[2]]
		first := int(min(a, b, c) / (1000 * width))
		count := int(max(a, b, c)/(1000*width)) + 2 - first
		// How much of the triangle falls into each bin, before any weight.
		if cap(m.local) < count {
			m.local = make([]int64, count)
		}
		local := m.local[:count]
		clear(local)
		for i := range twelfths {
			p := &twelfths[i]
			x := p[0]*a + p[1]*b + p[2]*c
			bin := x / share
			late := x - bin*share
			local[int(bin)-first] += int64(share - late)
			local[int(bin)-first+1] += int64(late)
		}
		w := &m.weights[k]
		for i, n := range local {
			if n != 0 {
				to := &h[first+i]
				for l := range to {
					to[l] += w[l] * n
				}
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
		m.until[n] = t + max(m.Part.APD[n]+stretch, shortestAPD)
		latest, latestEnd = max(latest, t), max(latestEnd, m.until[n])
	}
	m.depol, m.repol = clearBins(m.depol, latest/(1000*riseBin)), clearBins(m.repol, latestEnd/(1000*fallBin))
	m.deposit(m.depol, at, riseBin)
	m.deposit(m.repol, m.until, fallBin)
	n := LeadIn + fallBin*len(m.repol) + fallAfter
	c := &lead.Complex{}
	for l := 0; l < Leads; l++ {
		scale := float64(m.Part.Step[l]) / (16 * 12000)
		for i := range m.sum {
			m.sum[i] = append(m.sum[i][:0], make([]float64, n)...)
		}
		spread(m.sum[0], m.depol, l, scale/riseBin, m.rise, LeadIn-riseReach, riseBin)
		spread(m.sum[1], m.repol, l, scale/fallBin, m.fall, LeadIn-fallBefore, fallBin)
		c.MV[Independent[l]], c.Depol[Independent[l]] = m.trace(n)
	}
	LimbLeads(&c.MV)
	LimbLeads(&c.Depol)
	m.mark(c)
	return c
}

// Independent are the leads that weights are kept for; [LimbLeads] derives the others.
var Independent = [Leads]lead.Name{lead.I, lead.II, lead.V1, lead.V2, lead.V3, lead.V4, lead.V5, lead.V6}

// clearBins makes room for bins up to the last one and the one after it.
func clearBins(h [][Leads]int64, last int32) [][Leads]int64 {
	n := int(last) + 2
	if cap(h) < n {
		return make([][Leads]int64, n)
	}
	h = h[:n]
	clear(h)
	return h
}

// spread adds each bin's weight, drawn out over the steps of the kernel, to the
// samples; bin 0's first step falls on sample first, and bins lie width samples
// apart.
func spread(out []float64, h [][Leads]int64, l int, scale float64, kernel []float64, first, width int) {
	for k := range h {
		if h[k][l] == 0 {
			continue
		}
		w := float64(h[k][l]) * scale
		steps, at := kernel, first+k*width
		if at < 0 {
			steps, at = steps[-at:], 0
		}
		to := out[at:]
		if len(steps) > len(to) {
			steps = steps[:len(to)]
		}
		to = to[:len(steps)]
		for j, s := range steps {
			to[j] += float64(w * s)
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

// LimbLeads derives III and the augmented leads from I and II.
func LimbLeads(mv *[lead.Count][]float32) {
	one, two := mv[lead.I], mv[lead.II]
	n := len(one)
	two = two[:n]
	four := make([]float32, 4*n)
	three, avr, avl, avf := four[:n:n], four[n:2*n:2*n], four[2*n:3*n:3*n], four[3*n:]
	for i, a := range one {
		b := two[i]
		three[i], avr[i], avl[i], avf[i] = b-a, -(a+b)/2, a-b/2, b-a/2
	}
	mv[lead.III], mv[lead.AVR], mv[lead.AVL], mv[lead.AVF] = three, avr, avl, avf
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

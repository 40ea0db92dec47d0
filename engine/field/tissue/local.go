package tissue

// Row is what one piece of muscle contributes to the signal between two
// electrodes within the heart. A surface lead sees a triangle as a whole; an
// electrode 2 mm from the wall does not, so the triangles next to it have a weight for
// every one of their small parts.
type Row struct {
	Step float32 // millivolts per unit of weight, for one full depolarisation
	Far  []int16 // by triangle; 0 for those in Near
	Near []Near
}

// Near is a triangle divided into N*N equal ones with a weight each.
type Near struct {
	Tri uint16
	N   uint8
	W   []int16
}

// Parts are the centroids of the N*N triangles that divide one, in barycentric
// coordinates over 3N. Their order is that of [Near.W].
func Parts(n int) [][3]int32 {
	out := make([][3]int32, 0, n*n)
	three := int32(3 * n)
	for i := int32(0); i < int32(n); i++ {
		for j := int32(0); i+j < int32(n); j++ {
			p, q := 3*i+1, 3*j+1
			out = append(out, [3]int32{p, q, three - p - q})
			if i+j < int32(n)-1 {
				p, q = p+1, q+1
				out = append(out, [3]int32{p, q, three - p - q})
			}
		}
	}
	return out
}

// farParts is into how many by how many parts a distant triangle is divided.
const farParts = 4

// localShare is what one part of weight counts in a bin.
const localShare = 4096

// Local turns arrival times into the signals of rows. It keeps its memory; it is
// not safe for use by two goroutines at once.
type Local struct {
	rise, fall   []float64
	parts        map[uint8][][3]int32
	depol, repol []int64
	sum          []float64
}

// LocalRise is the rate of the upstroke in electrograms, 1/ms: a tenth to nine
// tenths in 2.4 ms. The leads' is slower to hide how coarse their surface is; next to
// an electrode the surface is divided finely enough. From memory of usual upstrokes.
const LocalRise = 1.8

// NewLocal prepares for a part's action potential.
func NewLocal(p *Part) *Local {
	s := p.Shape
	s.Rise = LocalRise
	return &Local{rise: s.riseSteps(), fall: p.Shape.fallSteps(), parts: map[uint8][][3]int32{farParts: Parts(farParts)}}
}

// deposit is like that of [Muscle], for one row.
func (l *Local) deposit(h []int64, tri [][3]uint16, row *Row, at []int32, width int64) {
	put := func(t [3]uint16, p [3]int32, sum int64, w int64) {
		x := int64(p[0])*int64(at[t[0]]) + int64(p[1])*int64(at[t[1]]) + int64(p[2])*int64(at[t[2]])
		bin := sum * 1000 * width
		k := x / bin
		late := (x - k*bin) * localShare / bin
		h[k] += w * (localShare - late)
		h[k+1] += w * late
	}
	for k, w := range row.Far {
		if w != 0 {
			for _, p := range l.parts[farParts] {
				put(tri[k], p, 3*farParts, int64(w))
			}
		}
	}
	for i := range row.Near {
		n := &row.Near[i]
		parts, ok := l.parts[n.N]
		if !ok {
			parts = Parts(int(n.N))
			l.parts[n.N] = parts
		}
		for k, w := range n.W {
			put(tri[n.Tri], parts[k], 3*int64(n.N), farParts*farParts*int64(w))
		}
	}
}

// Signal is what a row makes of muscle that is depolarised and repolarised at the
// given times, microseconds by node. Sample [LeadIn] is time 0; millivolts.
func (l *Local) Signal(p *Part, row *Row, at, until []int32) []float32 {
	latest, latestEnd := int32(0), int32(0)
	for n := range at {
		latest, latestEnd = max(latest, at[n]), max(latestEnd, until[n])
	}
	l.depol, l.repol = zeroed(l.depol, int(latest/(1000*riseBin))+2), zeroed(l.repol, int(latestEnd/(1000*fallBin))+2)
	l.deposit(l.depol, p.Tri, row, at, riseBin)
	l.deposit(l.repol, p.Tri, row, until, fallBin)
	n := LeadIn + fallBin*len(l.repol) + fallAfter
	l.sum = append(l.sum[:0], make([]float64, n)...)
	scale := float64(row.Step) / (farParts * farParts * localShare)
	spreadOne(l.sum, l.depol, scale, l.rise, LeadIn-riseReach, riseBin)
	spreadOne(l.sum, l.repol, scale, l.fall, LeadIn-fallBefore, fallBin)
	out := make([]float32, n)
	v := 0.0
	for i, d := range l.sum {
		v += d
		out[i] = float32(v)
	}
	return out
}

func zeroed(h []int64, n int) []int64 {
	if cap(h) < n {
		return make([]int64, n)
	}
	h = h[:n]
	clear(h)
	return h
}

// spreadOne is [spread] for a single row.
func spreadOne(out []float64, h []int64, scale float64, kernel []float64, first, width int) {
	for k, n := range h {
		if n == 0 {
			continue
		}
		w := float64(n) * scale
		for j, s := range kernel {
			if i := first + k*width + j; i >= 0 && i < len(out) {
				out[i] += float64(w * s)
			}
		}
	}
}

// Until is when each node is repolarised if it is depolarised at the given time and
// its action potential is longer by stretch microseconds than at the reference cycle.
func (p *Part) Until(into, at []int32, stretch int32) []int32 {
	into = append(into[:0], at...)
	for n := range into {
		into[n] += max(p.APD[n]+stretch, shortestAPD)
	}
	return into
}

// shortestAPD: a node cannot repolarise before it depolarises, however short the
// cycle; microseconds.
const shortestAPD = 50000

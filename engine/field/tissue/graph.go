package tissue

// Graph is the undirected net of travel times between nodes. The neighbours of
// node n are To[First[n]:First[n+1]], each Time microseconds away.
type Graph struct {
	First []int32
	To    []uint16
	Time  []uint16
}

// Link is one edge of a graph.
type Link struct {
	A, B uint16
	Time uint16 // microseconds
}

// NewGraph lays out links between n nodes; each link is passable both ways.
func NewGraph(n int, links []Link) Graph {
	g := Graph{First: make([]int32, n+1), To: make([]uint16, 2*len(links)), Time: make([]uint16, 2*len(links))}
	for _, l := range links {
		g.First[l.A+1]++
		g.First[l.B+1]++
	}
	for i := 0; i < n; i++ {
		g.First[i+1] += g.First[i]
	}
	next := append([]int32(nil), g.First[:n]...)
	put := func(from, to, t uint16) {
		g.To[next[from]], g.Time[next[from]] = to, t
		next[from]++
	}
	for _, l := range links {
		put(l.A, l.B, l.Time)
		put(l.B, l.A, l.Time)
	}
	return g
}

// Nodes is how many nodes the graph has.
func (g *Graph) Nodes() int { return len(g.First) - 1 }

// Seed is a node that an impulse reaches from outside, at a time in microseconds.
type Seed struct {
	Node uint16
	At   int32
}

// Far is the arrival time at a node that no seed reaches.
const Far int32 = 1 << 30

// Solver finds arrival times. It keeps its memory between runs, so a run
// allocates nothing; it is not safe for use by two goroutines at once.
type Solver struct {
	at   []int32
	heap []uint16 // nodes, earliest first
	slot []int32  // where a node stands in heap, -1 if it does not
}

// Arrivals is the earliest time at which an impulse from any of the seeds
// reaches each node (Dijkstra's algorithm, in whole microseconds and therefore
// the same on every machine). The slice is the solver's own and holds until the
// next call.
func (s *Solver) Arrivals(g *Graph, seeds []Seed) []int32 {
	s.reset(g.Nodes())
	for _, sd := range seeds {
		if sd.At < s.at[sd.Node] {
			s.lower(sd.Node, sd.At)
		}
	}
	for len(s.heap) > 0 {
		n := s.pop()
		t := s.at[n]
		for k := g.First[n]; k < g.First[n+1]; k++ {
			if m, arrive := g.To[k], t+int32(g.Time[k]); arrive < s.at[m] {
				s.lower(m, arrive)
			}
		}
	}
	return s.at
}

func (s *Solver) reset(n int) {
	if cap(s.at) < n {
		s.at, s.slot, s.heap = make([]int32, n), make([]int32, n), make([]uint16, 0, n)
	}
	s.at, s.slot, s.heap = s.at[:n], s.slot[:n], s.heap[:0]
	for i := range s.at {
		s.at[i], s.slot[i] = Far, -1
	}
}

// lower gives a node an earlier time and moves it up the heap.
func (s *Solver) lower(n uint16, t int32) {
	s.at[n] = t
	i := s.slot[n]
	if i < 0 {
		i = int32(len(s.heap))
		s.heap = append(s.heap, n)
	}
	for i > 0 {
		up := (i - 1) / 2
		if p := s.heap[up]; s.at[p] > t {
			s.heap[i], s.slot[p] = p, i
			i = up
			continue
		}
		break
	}
	s.heap[i], s.slot[n] = n, i
}

// pop takes the earliest node off the heap.
func (s *Solver) pop() uint16 {
	first := s.heap[0]
	s.slot[first] = -1
	last := s.heap[len(s.heap)-1]
	s.heap = s.heap[:len(s.heap)-1]
	n, i := int32(len(s.heap)), int32(0)
	if n == 0 {
		return first
	}
	for {
		c := 2*i + 1
		if c >= n {
			break
		}
		if c+1 < n && s.at[s.heap[c+1]] < s.at[s.heap[c]] {
			c++
		}
		if s.at[s.heap[c]] >= s.at[last] {
			break
		}
		s.heap[i] = s.heap[c]
		s.slot[s.heap[i]] = i
		i = c
	}
	s.heap[i], s.slot[last] = last, i
	return first
}

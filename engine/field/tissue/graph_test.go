package tissue

import (
	"testing"

	"pgregory.net/rapid"
)

// drawGraph makes a graph of up to twenty nodes.
func drawGraph(t *rapid.T) (Graph, []Link) {
	n := rapid.IntRange(1, 20).Draw(t, "nodes")
	node := rapid.Uint16Range(0, uint16(n-1))
	links := rapid.SliceOfN(rapid.Custom(func(t *rapid.T) Link {
		return Link{node.Draw(t, "a"), node.Draw(t, "b"), rapid.Uint16Range(1, 9).Draw(t, "time")}
	}), 0, 60).Draw(t, "links")
	return NewGraph(n, links), links
}

// The reference relaxes all links until nothing changes (Bellman-Ford).
func TestArrivalsAreTheShortestTimes(t *testing.T) {
	var s Solver // one for all graphs: what it keeps must not show
	rapid.Check(t, func(t *rapid.T) {
		g, links := drawGraph(t)
		seeds := rapid.SliceOfN(rapid.Custom(func(t *rapid.T) Seed {
			return Seed{rapid.Uint16Range(0, uint16(g.Nodes()-1)).Draw(t, "node"), rapid.Int32Range(0, 30).Draw(t, "at")}
		}), 1, 4).Draw(t, "seeds")
		want := make([]int32, g.Nodes())
		for i := range want {
			want[i] = Far
		}
		for _, sd := range seeds {
			want[sd.Node] = min(want[sd.Node], sd.At)
		}
		for changed := true; changed; {
			changed = false
			for _, l := range links {
				for _, e := range [2][2]uint16{{l.A, l.B}, {l.B, l.A}} {
					if d := want[e[0]] + int32(l.Time); want[e[0]] < Far && d < want[e[1]] {
						want[e[1]], changed = d, true
					}
				}
			}
		}
		got := s.Arrivals(&g, seeds)
		for i := range want {
			if got[i] != want[i] {
				t.Fatalf("node %d is reached at %d, want %d", i, got[i], want[i])
			}
		}
	})
}

func TestArrivalsKeepTheirMemory(t *testing.T) {
	g := NewGraph(3, []Link{{0, 1, 5}, {1, 2, 5}})
	var s Solver
	seeds := []Seed{{0, 0}}
	s.Arrivals(&g, seeds)
	if got := testing.AllocsPerRun(10, func() { s.Arrivals(&g, seeds) }); got != 0 {
		t.Errorf("%v allocations a run, want none", got)
	}
}

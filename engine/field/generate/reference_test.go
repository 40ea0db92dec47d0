package main

import (
	"encoding/json"
	"math"
	"os"
	"testing"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/spatial/r3"
)

// The reference is an independent implementation of the same recipe, kept apart
// from the repository. Its numbers are rounded: positions to 0.01 mm, times to a
// microsecond (durations 0.01 ms), weights to a microvolt.
const referenceFile = "../../../../shared/reference/forward_ecg/model_export.json"

type referenceChamber struct {
	Nodes     [][3]float64   `json:"nodes"`
	Layer     []int          `json:"layer"`
	Tri       [][3]int       `json:"tri"`
	Edge      [][2]int       `json:"edge"`
	EdgeMS    []float64      `json:"edge_ms"`
	Transfer  [][]float64    `json:"transfer_mV_per_unit"`
	Sites     map[string]int `json:"sites"`
	Terminals map[string]struct {
		Nodes [][2]float64 `json:"nodes"`
	} `json:"terminals"`
}

type reference struct {
	Vent struct {
		referenceChamber
		APD []float64 `json:"apd"`
	} `json:"vent"`
	Atria struct {
		referenceChamber
		APD float64 `json:"apd"`
	} `json:"atria"`
}

func loadReference(t *testing.T) *reference {
	data, err := os.ReadFile(referenceFile)
	if err != nil {
		t.Skip("the reference implementation's export is not here; testdata/digest.json is checked instead")
	}
	var r reference
	if err := json.Unmarshal(data, &r); err != nil {
		t.Fatal(err)
	}
	return &r
}

func compareChamber(t *testing.T, r *referenceChamber, x []r3.Vec, tri [][3]int, edges map[[2]int]float64, leads *mat.Dense) {
	t.Helper()
	if len(x) != len(r.Nodes) || len(tri) != len(r.Tri) || len(edges) != len(r.Edge) {
		t.Fatalf("%d nodes, %d triangles, %d edges; want %d, %d, %d", len(x), len(tri), len(edges), len(r.Nodes), len(r.Tri), len(r.Edge))
	}
	worst := 0.0
	for i, q := range r.Nodes {
		worst = math.Max(worst, r3.Norm(r3.Sub(x[i], r3.Vec{X: q[0], Y: q[1], Z: q[2]})))
	}
	if worst > 0.01 {
		t.Errorf("a node is %.4f mm off", worst)
	}
	for i, q := range r.Tri {
		for k := range q {
			if tri[i][k]%len(x) != q[k] {
				t.Fatalf("triangle %d is %v, want %v", i, tri[i], q)
			}
		}
	}
	worst = 0
	for i, e := range r.Edge {
		ms, ok := edges[sorted(e[0], e[1])]
		if !ok {
			t.Fatalf("edge %v is missing", e)
		}
		worst = math.Max(worst, math.Abs(ms-r.EdgeMS[i]))
	}
	if worst > 0.00051 {
		t.Errorf("an edge's time is %.5f ms off", worst)
	}
	worst = 0
	for l, row := range r.Transfer {
		for j, w := range row {
			worst = math.Max(worst, math.Abs(leads.At(l, j)-w))
		}
	}
	if worst > 1e-6 {
		t.Errorf("a weight is %.3g mV off", worst)
	}
	t.Logf("weights within %.2g mV", worst)
}

func TestModelEqualsTheReference(t *testing.T) {
	r := loadReference(t)
	m, err := build(first())
	if err != nil {
		t.Fatal(err)
	}
	compareChamber(t, &r.Vent.referenceChamber, m.v.x, m.v.tri, m.v.edges, m.leadsV)
	compareChamber(t, &r.Atria.referenceChamber, m.a.x, m.a.tri, m.a.edges, atrialLeads(m.p, m.a, m.c))
	worst, at := 0.0, 0
	for n, want := range r.Vent.APD {
		if d := math.Abs(m.recoveryV[n] - want); d > worst {
			worst, at = d, n
		}
	}
	if worst > 0.011 {
		t.Errorf("node %d (layer %d, column %d, ring %d) keeps depolarised for %.3f ms, want %.3f", at, m.v.layer[at], m.v.column[at], m.v.ring[at], m.recoveryV[at], r.Vent.APD[at])
	}
	for _, term := range m.p.Terminals {
		nodes, late := m.v.spread(term.Layer, term.Theta, term.Height)
		for k, want := range r.Vent.Terminals[term.Name].Nodes {
			if nodes[k] != int(want[0]) || math.Abs(term.At+late[k]-want[1]) > 1e-9 {
				t.Errorf("%s enters at node %d after %.6f ms, want %v", term.Name, nodes[k], term.At+late[k], want)
			}
		}
	}
}

package main

import (
	"bytes"
	"encoding/json"
	"flag"
	"math"
	"os"
	"testing"

	"escapement/engine/field/tissue"
)

// What is committed is what the generator makes.
func TestCommittedFilesAreCurrent(t *testing.T) {
	m, err := build(fitted())
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range []struct {
		path string
		want []byte
	}{
		{"../muscle.bin", tissue.Encode(m.ventricles, m.atria)},
		{"../../heart/anatomy_table.go", anatomyTable(m.p, m.ventricles, m.atria)},
	} {
		got, err := os.ReadFile(f.path)
		if err != nil {
			t.Fatal(err)
		}
		if !bytes.Equal(got, f.want) {
			t.Errorf("%s is not what the generator makes now: run go generate ./engine/field", f.path)
		}
	}
}

// The network's shortest times, over the pruned table, are the field's.
func TestPrunedTableKeepsTheFieldsTimes(t *testing.T) {
	m, err := build(fitted())
	if err != nil {
		t.Fatal(err)
	}
	all := travels(m.ventricles, len(m.ventricles.Entries), len(m.p.fascicles()))
	kept := prune(all, m.p.regions())
	for _, d := range all {
		if got := shortest(kept, d.From, d.To, m.p.regions()); got > d.Time+redundant || got < d.Time-redundant {
			t.Errorf("%s to %s takes %d us over the table, %d in the field", d.From, d.To, got, d.Time)
		}
	}
	t.Logf("%d of %d paths kept", len(kept), len(all))
}

var update = flag.Bool("update", false, "rewrite testdata/digest.json from the reference")

// digest is every 97th number of the reference, so that something is checked
// where the reference is not.
type digest struct {
	Nodes   map[int][3]float64 `json:"ventricular_nodes_mm"`
	Edges   map[int][3]float64 `json:"ventricular_edges_ms"`
	APD     map[int]float64    `json:"apd_ms"`
	Weights map[int][8]float64 `json:"ventricular_weights_mv"`
	Atrial  map[int][8]float64 `json:"atrial_weights_mv"`
}

func TestModelEqualsTheDigest(t *testing.T) {
	const file = "testdata/digest.json"
	if *update {
		r := loadReference(t)
		d := digest{map[int][3]float64{}, map[int][3]float64{}, map[int]float64{}, map[int][8]float64{}, map[int][8]float64{}}
		for i := 0; i < len(r.Vent.Nodes); i += 97 {
			d.Nodes[i], d.APD[i] = [3]float64(r.Vent.Nodes[i]), r.Vent.APD[i]
		}
		for i := 0; i < len(r.Vent.Edge); i += 970 {
			d.Edges[i] = [3]float64{float64(r.Vent.Edge[i][0]), float64(r.Vent.Edge[i][1]), r.Vent.EdgeMS[i]}
		}
		column := func(w [][]float64, j int) (out [8]float64) {
			for l := range out {
				out[l] = w[l][j]
			}
			return out
		}
		for j := 0; j < len(r.Vent.Tri); j += 97 {
			d.Weights[j] = column(r.Vent.Transfer, j)
		}
		for j := 0; j < len(r.Atria.Tri); j += 97 {
			d.Atrial[j] = column(r.Atria.Transfer, j)
		}
		data, _ := json.MarshalIndent(d, "", " ")
		if err := os.WriteFile(file, append(data, '\n'), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	data, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	var d digest
	if err := json.Unmarshal(data, &d); err != nil {
		t.Fatal(err)
	}
	m, err := build(first())
	if err != nil {
		t.Fatal(err)
	}
	near := func(what string, i int, got, want, tol float64) {
		if math.Abs(got-want) > tol {
			t.Errorf("%s %d is %v, want %v", what, i, got, want)
		}
	}
	for i, x := range d.Nodes {
		near("node x", i, m.v.x[i].X, x[0], 0.006)
		near("node y", i, m.v.x[i].Y, x[1], 0.006)
		near("node z", i, m.v.x[i].Z, x[2], 0.006)
		near("duration", i, m.recoveryV[i], d.APD[i], 0.011)
	}
	for i, e := range d.Edges {
		near("edge", i, m.v.edges[sorted(int(e[0]), int(e[1]))], e[2], 0.00051)
	}
	atrial := atrialLeads(m.p, m.a, m.c)
	for l := range 8 {
		for j, w := range d.Weights {
			near("ventricular weight", j, m.leadsV.At(l, j), w[l], 1e-6)
		}
		for j, w := range d.Atrial {
			near("atrial weight", j, atrial.At(l, j), w[l], 1e-6)
		}
	}
}

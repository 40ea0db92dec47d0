package tissue

import (
	"reflect"
	"testing"
)

// tetrahedron is the smallest closed surface.
func tetrahedron() *Part {
	p := &Part{
		Name:    "tetrahedron",
		Graph:   NewGraph(4, []Link{{0, 1, 4000}, {0, 2, 5000}, {1, 3, 65535}}),
		X:       [][3]float32{{0, 0, 0}, {1.5, 0, 0}, {0, -2.25, 0}, {0, 0, 300}},
		Kind:    []Kind{LeftInner, LeftOuter, RightInner, RightSeptum},
		APD:     []int32{200000, 210000, 220000, 230010},
		Tri:     [][3]uint16{{0, 2, 1}, {0, 1, 3}, {1, 2, 3}, {0, 3, 2}},
		Shape:   Shape{0.9, 0.045, 0.1},
		Entries: []Entry{{"here", 0, []Seed{{0, 0}}}, {"there", 25000, []Seed{{1, 15000}, {3, 16000}}}},
	}
	for l := range p.Weights {
		p.SetWeights(l, []float64{0.3, -0.1, float64(l) / 7, -0.2 - float64(l)/7})
	}
	return p
}

func TestEncodeAndDecodeRoundTrip(t *testing.T) {
	want := []*Part{tetrahedron(), tetrahedron()}
	want[1].Name = "other"
	got, err := Decode(Encode(want...))
	if err != nil {
		t.Fatal(err)
	}
	if !reflect.DeepEqual(got, want) {
		t.Errorf("got %+v, want %+v", got[0], want[0])
	}
}

func TestWeightsSumToZero(t *testing.T) {
	p := tetrahedron()
	for l := range p.Weights {
		sum := 0
		for _, w := range p.Weights[l] {
			sum += int(w)
		}
		if sum != 0 {
			t.Errorf("lead %d: steps sum to %d, want 0", l, sum)
		}
	}
}

// FuzzDecode: any data is read or refused; what is read can be used and written again.
func FuzzDecode(f *testing.F) {
	whole := Encode(tetrahedron())
	f.Add(whole)
	f.Add(whole[:len(whole)/2])
	f.Add([]byte(magic + "\x01"))
	f.Fuzz(func(t *testing.T, data []byte) {
		parts, err := Decode(data)
		if err != nil {
			return
		}
		var s Solver
		for _, p := range parts {
			for i := range p.Entries {
				s.Arrivals(&p.Graph, p.Entries[i].Ports)
			}
		}
	})
}

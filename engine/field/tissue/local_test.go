package tissue

import (
	"math"
	"reflect"
	"testing"

	"escapement/engine/lead"
)

// With a lead's weights and a lead's upstroke an electrode far away sees the lead; a
// triangle cut into equal parts of equal weight is the same triangle.
func TestLocalSignalOfALeadsWeightsIsTheLead(t *testing.T) {
	p := tetrahedron()
	p.Shape.Rise = LocalRise
	seeds := []Seed{{0, 1500}}
	m := NewMuscle(p, VentricularLimits)
	want := m.Wave(seeds, 0).MV[lead.I]
	at := m.Activation(seeds)
	until := p.Until(nil, at, 0)
	whole := Row{Step: p.Step[0], Far: p.Weights[0]}
	cut := Row{Step: p.Step[0] / 16, Far: make([]int16, len(p.Tri))}
	for k, w := range p.Weights[0] {
		n := Near{Tri: uint16(k), N: 4}
		for range 16 {
			n.W = append(n.W, w)
		}
		cut.Near = append(cut.Near, n)
	}
	for _, row := range []Row{whole, cut} {
		got := NewLocal(p).Signal(p, &row, at, until)
		if len(got) != len(want) {
			t.Fatalf("%d samples, want %d", len(got), len(want))
		}
		for k := range got {
			if d := math.Abs(float64(got[k] - want[k])); d > 2e-3 {
				t.Fatalf("sample %d is %v mV, want %v", k, got[k], want[k])
			}
		}
	}
}

func TestPartsOfATriangleHaveItsCentre(t *testing.T) {
	for _, n := range []int{1, 2, 4, 12} {
		var sum [3]int32
		parts := Parts(n)
		for _, p := range parts {
			if p[0]+p[1]+p[2] != int32(3*n) {
				t.Fatalf("%d: %v does not sum to %d", n, p, 3*n)
			}
			for i := range sum {
				sum[i] += p[i]
			}
		}
		if len(parts) != n*n || sum[0] != sum[1] || sum[1] != sum[2] {
			t.Errorf("%d: %d parts about %v, want %d about the centre", n, len(parts), sum, n*n)
		}
	}
}

func somePair(p *Part) []Bipole {
	b := Bipole{Name: "here", Rows: []Row{{Step: 0.5, Far: []int16{1, 0, -3, 2}, Near: []Near{{Tri: 1, N: 2, W: []int16{1, -1, 2, -2}}}}}}
	s := Strand{0: 1, StrandPlaces - 1: -2}
	b.Strands = append(b.Strands, s)
	return []Bipole{b, {Name: "there", Rows: []Row{{Far: make([]int16, len(p.Tri))}}}}
}

func TestBipolesRoundTrip(t *testing.T) {
	p := tetrahedron()
	want := somePair(p)
	got, err := DecodeBipoles(EncodeBipoles(want), []*Part{p})
	if err != nil || !reflect.DeepEqual(got, want) {
		t.Errorf("got %+v, %v; want %+v", got, err, want)
	}
}

func TestBipolesThatDoNotFitAreRefused(t *testing.T) {
	p := tetrahedron()
	whole := EncodeBipoles(somePair(p))
	smaller := tetrahedron()
	smaller.Tri = smaller.Tri[:3]
	for _, c := range []struct {
		name  string
		data  []byte
		parts []*Part
	}{
		{"cut short", whole[:len(whole)-3], []*Part{p}},
		{"goes on", append(whole[:len(whole):len(whole)], 0), []*Part{p}},
		{"another form", Encode(p), []*Part{p}},
		{"other parts", whole, []*Part{p, p}},
		{"another surface", whole, []*Part{smaller}},
	} {
		if _, err := DecodeBipoles(c.data, c.parts); err == nil {
			t.Errorf("%s: read without an error", c.name)
		}
	}
}

func TestStrandBetweenItsPlacesAndBeyond(t *testing.T) {
	s := Strand{0: 1, 1: 3}
	for _, c := range []struct{ at, want float64 }{{0, 1}, {0.5 / (StrandPlaces - 1), 2}, {-0.01, 0}, {1.01, 0}, {math.NaN(), 0}} {
		if got := s.At(c.at); math.Abs(got-c.want) > 1e-9 {
			t.Errorf("at %v: %v, want %v", c.at, got, c.want)
		}
	}
}

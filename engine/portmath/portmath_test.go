package portmath

import (
	"hash/fnv"
	"math"
	"testing"
)

// The standard library is the independent reference: general mathematics, no source needed.
func TestAgainstTheStandardLibrary(t *testing.T) {
	rel := func(got, want float64) float64 {
		if want == 0 {
			return math.Abs(got)
		}
		return math.Abs(got-want) / math.Abs(want)
	}
	for i := -40000; i <= 40000; i++ {
		x := float64(i) * 0.0007311
		for _, c := range []struct {
			name      string
			got, want float64
			tol       float64
		}{
			{"exp", Exp(x), math.Exp(x), 5e-16},
			{"tanh", Tanh(x), math.Tanh(x), 2e-11},
			{"log", Log(math.Abs(x) + 1e-9), math.Log(math.Abs(x) + 1e-9), 1e-15},
			{"pow", Pow(math.Abs(x)+0.1, 0.37), math.Pow(math.Abs(x)+0.1, 0.37), 2e-15},
		} {
			// Near log 1 = 0 a relative error means nothing; 1e-16 absolute is half an ulp of 1.
			if rel(c.got, c.want) > c.tol && math.Abs(c.got-c.want) > 2e-16 {
				t.Fatalf("%s(%v) = %v, want %v", c.name, x, c.got, c.want)
			}
		}
	}
}

func TestEdges(t *testing.T) {
	for _, c := range []struct {
		name      string
		got, want float64
	}{
		{"exp 0", Exp(0), 1}, {"exp far below", Exp(-1e6), 0}, {"exp far above", Exp(1e6), math.Inf(1)},
		{"log 1", Log(1), 0}, {"log 0", Log(0), math.Inf(-1)}, {"pow 0", Pow(0, 2), 0}, {"pow to 0", Pow(7, 0), 1},
		{"tanh far", Tanh(100), 1},
	} {
		if c.got != c.want {
			t.Errorf("%s = %v, want %v", c.name, c.got, c.want)
		}
	}
	if !math.IsNaN(Log(-1)) || !math.IsNaN(Exp(math.NaN())) {
		t.Error("NaN must stay NaN")
	}
}

// The bits themselves, hashed: the same number must come out on every machine
// (the WebAssembly tests run this file too).
func TestBitsAreTheSameEverywhere(t *testing.T) {
	h := fnv.New64a()
	for i := -5000; i <= 5000; i++ {
		x := float64(i) * 0.00317
		for _, v := range []float64{Exp(x), Log(math.Abs(x) + 0.01), Tanh(x), Pow(math.Abs(x)+0.1, 1.7)} {
			b := math.Float64bits(v)
			for k := 0; k < 8; k++ {
				h.Write([]byte{byte(b >> (8 * k))})
			}
		}
	}
	if got, want := h.Sum64(), uint64(bitsFingerprint); got != want {
		t.Errorf("fingerprint of the bits is %#x, want %#x", got, want)
	}
}

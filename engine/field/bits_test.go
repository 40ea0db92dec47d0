package field

import (
	"hash/fnv"
	"math"
	"testing"
)

// bitsFingerprint is what TestBitsAreTheSameEverywhere found on linux/amd64.
const bitsFingerprint = 0x129ccc67f1a8105a

// The samples themselves, hashed: the same number must come out natively and in
// WebAssembly. Change it with the model.
func TestBitsAreTheSameEverywhere(t *testing.T) {
	s := newStrip(5000000)
	s.sinus(300123)
	s.capture(1000777, "rv_apex")
	s.capture(1024000, "lv_lateral")
	s.sinus(1700001)
	s.conduct(2600500, "av_fast", "up", "atrial_septum")
	s.fascicles(2700000)
	s.sinus(4000000)
	r := Record(s.log(t))
	h := fnv.New64a()
	for l := range r.MV {
		for _, v := range r.MV[l] {
			b := math.Float32bits(v)
			h.Write([]byte{byte(b), byte(b >> 8), byte(b >> 16), byte(b >> 24)})
		}
	}
	for _, w := range r.Waves {
		h.Write([]byte(w.Onset.String() + w.Offset.String() + w.End.String()))
	}
	if got, want := h.Sum64(), uint64(bitsFingerprint); got != want {
		t.Errorf("fingerprint of the bits is %#x, want %#x", got, want)
	}
}

package field

import (
	"hash/fnv"
	"math"
	"testing"

	"escapement/engine/event"
	"escapement/engine/sim/simtest"
	"escapement/engine/tick"
)

// electrogramsFingerprint is what TestElectrogramBits found on linux/amd64.
const electrogramsFingerprint = 0xf89520f8b110540e

func played(t *testing.T, file string) *event.Log { return simtest.Play(t, file).Log }

// first is when a signal first leaves zero by more than mv between two instants, in ms;
// -1 where it does not.
func first(x []float32, from, to tick.Time, mv float64) float64 {
	for k := int(from / tickStep); k < min(int(to/tickStep), len(x)); k++ {
		if math.Abs(float64(x[k])) > mv {
			return float64(k)
		}
	}
	return -1
}

// steepest is when a signal changes fastest between two instants, in ms: what is called
// the local, rapid deflection.
func steepest(x []float32, from, to tick.Time) float64 {
	best, at := 0.0, -1.0
	for k := max(int(from/tickStep), 1); k < min(int(to/tickStep), len(x)); k++ {
		if d := math.Abs(float64(x[k] - x[k-1])); d > best {
			best, at = d, float64(k)
		}
	}
	return at
}

func activated(log *event.Log, site string, n int) tick.Time {
	for i := range log.Events {
		if e := &log.Events[i]; e.Kind == event.Activate && log.Sites[e.Site].Name == site {
			if n == 0 {
				return e.T
			}
			n--
		}
	}
	return -1
}

// What is measured on the signals is what the log says, for short and long AH and HV: A
// at the first rapid deflection and H at the onset in the distal His lane, V where
// the first ventricular signal begins in any lane (Josephson's way of measuring; common
// practice).
func TestMeasuredOnTheElectrogramsAHAndHVAreThoseOfTheLog(t *testing.T) {
	for _, c := range []struct {
		name, file string
		ah, hv     float64
	}{
		{"usual", `{"format":"escapement-plan/1"}`, 80, 45},
		{"long AH", `{"format":"escapement-plan/1","heart":{"av_node":{"fast":{"ah_ms":160}}}}`, 160, 45},
		{"long HV", `{"format":"escapement-plan/1","heart":{"his_purkinje":{"hv_ms":80}}}`, 80, 80},
	} {
		log := played(t, c.file)
		f := New()
		at := activated(log, "right_atrium", 1)
		until := at + 500000
		h := activated(log, "his", 1)
		his := f.Electrogram(log, "HISd")
		a := steepest(his, at, h-30000)
		onset := first(his, h-20000, until, 0.02)
		v := math.Inf(1)
		for _, e := range Electrodes() {
			if x := first(f.Electrogram(log, e.Name), h+22000, until, 0.03); x >= 0 {
				v = min(v, x)
			}
		}
		if got := onset - a; math.Abs(got-c.ah) > 6 {
			t.Errorf("%s: AH %v ms on the signals, want %v within 6", c.name, got, c.ah)
		}
		if got := v - onset; math.Abs(got-c.hv) > 5 {
			t.Errorf("%s: HV %v ms on the signals, want %v within 5", c.name, got, c.hv)
		}
	}
}

func TestEveryLaneShowsItsChambersInOrder(t *testing.T) {
	log := played(t, `{"format":"escapement-plan/1"}`)
	f := New()
	at := activated(log, "right_atrium", 1)
	last := 0.0
	for _, name := range []string{"HRA", "HISp", "CS9-10", "CS7-8", "CS5-6", "CS3-4"} {
		x := steepest(f.Electrogram(log, name), at-20000, at+110000)
		if x < last {
			t.Errorf("%s comes at %v ms, before the one before it at %v, in sinus rhythm", name, x, last)
		}
		last = x
	}
	// Usual sizes of signals between close electrodes: atrium 0.5 to 5, ventricle 1 to
	// 15, His bundle 0.1 to 0.5 mV (from memory).
	for _, c := range []struct {
		name      string
		from, to  tick.Time
		low, high float64
	}{{"HRA", 0, 100000, 0.5, 5}, {"RVA", 150000, 300000, 1, 15}, {"HISd", 115000, 145000, 0.1, 0.5}, {"CS5-6", 0, 130000, 0.5, 5}} {
		x := f.Electrogram(log, c.name)[(at+c.from)/tickStep : (at+c.to)/tickStep]
		low, high := extremes(x)
		if size := high - low; size < c.low || size > c.high {
			t.Errorf("%s: %.2f mV from peak to peak, want %v to %v", c.name, size, c.low, c.high)
		}
	}
}

func extremes(x []float32) (low, high float64) {
	for _, v := range x {
		low, high = min(low, float64(v)), max(high, float64(v))
	}
	return low, high
}

// A lateral left atrial impulse reaches the coronary sinus from its far end; a beat
// from the apex is at the apex first.
func TestEarliestLaneIsWhereTheImpulseBegan(t *testing.T) {
	for _, c := range []struct {
		site  string
		lanes []string // in order
	}{
		{"left_atrium", []string{"CS1-2", "CS5-6", "CS9-10", "HRA"}},
		{"right_atrium", []string{"HRA", "CS9-10", "CS5-6", "CS3-4"}},
		{"rv_apex", []string{"RVA", "RVS", "RVOT"}},
		{"lv_lateral", []string{"LV", "RVS", "RVOT"}},
	} {
		s := newStrip(1500000)
		s.capture(500000, c.site)
		log := s.log(t)
		f := New()
		last := 0.0
		for _, name := range c.lanes {
			x := steepest(f.Electrogram(log, name), 480000, 800000)
			if x <= last {
				t.Errorf("from %s: %s at %v ms is not after the lane before it at %v", c.site, name, x, last)
			}
			last = x
		}
	}
}

// Blocked below the His bundle there is an H and no V; blocked in the node neither.
func TestHisSignalTellsTheLevelOfBlock(t *testing.T) {
	s := newStrip(1500000)
	s.conduct(500000, "av_fast", "down", "av_junction")
	s.capture(520000, "his")
	f := New()
	x := f.Electrogram(s.log(t), "HISd")
	if first(x, 510000, 540000, 0.02) < 0 || first(x, 545000, 900000, 0.02) >= 0 {
		t.Errorf("a His bundle that fires alone: H at %v, something after it at %v; want H alone", first(x, 510000, 540000, 0.02), first(x, 545000, 900000, 0.02))
	}
	s = newStrip(1500000)
	s.conduct(500000, "sinoatrial", "down", "right_atrium")
	if got := first(f.Electrogram(s.log(t), "HISd"), 600000, 900000, 0.02); got >= 0 {
		t.Errorf("without an activation of the His bundle there is a signal at %v ms", got)
	}
}

// Going up the front passes the electrodes the other way: the signal is turned over
// and about in time.
func TestRetrogradeHisSignalIsTurnedOver(t *testing.T) {
	make := func(dir string) []float32 {
		s := newStrip(1500000)
		if dir == "down" {
			s.conduct(500000, "av_fast", "down", "av_junction")
			s.capture(513000, "his")
		} else {
			s.capture(500000, "right_bundle")
			s.conduct(526000, "his_right", "up", "his")
		}
		out := make([]float32, 1500)
		conduction(out, s.log(t), &bipoles()[mustBipole(t, "HISd")])
		return out
	}
	down, up := make("down"), make("up")
	for k := 505; k < 535; k++ {
		if a, b := float64(down[k]), -float64(up[2*519+1-k]); math.Abs(a-b) > 0.05 {
			t.Fatalf("at %d ms %.3f mV going down, %.3f expected from going up", k, a, b)
		}
	}
}

func mustBipole(t *testing.T, name string) int {
	t.Helper()
	k, ok := bipoleIndex(name)
	if !ok {
		t.Fatalf("no electrodes %q", name)
	}
	return k
}

func TestElectrogramRowsSumToZero(t *testing.T) {
	for _, b := range bipoles() {
		for p, r := range b.Rows {
			sum := 0
			for _, w := range r.Far {
				sum += int(w)
			}
			for _, n := range r.Near {
				if r.Far[n.Tri] != 0 {
					t.Errorf("%s: triangle %d is counted twice", b.Name, n.Tri)
				}
				for _, w := range n.W {
					sum += int(w)
				}
			}
			if sum != 0 {
				t.Errorf("%s, %s: weights sum to %d", b.Name, parts()[p].Name, sum)
			}
		}
	}
}

func TestElectrodesAndTheirTableNameTheSamePairs(t *testing.T) {
	if len(electrodes) != len(bipoles()) {
		t.Fatalf("%d pairs are named, %d computed", len(electrodes), len(bipoles()))
	}
	for _, e := range electrodes {
		mustBipole(t, e.Name)
	}
	if New().Electrogram(newStrip(1000000).log(t), "nowhere") != nil {
		t.Error("electrodes that do not exist have a signal")
	}
}

// Asked for first or last, alone or with others, a signal is the same.
func TestRememberedElectrogramsChangeNothing(t *testing.T) {
	log := played(t, `{"format":"escapement-plan/1"}`)
	f := New()
	f.Record(log)
	for _, e := range electrodes {
		f.Electrogram(log, e.Name)
	}
	for _, name := range []string{"HISd", "RVA"} {
		a, b := f.Electrogram(log, name), New().Electrogram(log, name)
		for k := range a {
			if a[k] != b[k] {
				t.Fatalf("%s differs at %d ms", name, k)
			}
		}
	}
}

func TestElectrogramBits(t *testing.T) {
	s := newStrip(3000000)
	s.sinus(300123)
	s.capture(1000777, "rv_apex")
	s.conduct(1300777, "his_right", "up", "his")
	s.capture(2024000, "his")
	log, f, h := s.log(t), New(), fnv.New64a()
	for _, e := range electrodes {
		for _, v := range f.Electrogram(log, e.Name) {
			b := math.Float32bits(v)
			h.Write([]byte{byte(b), byte(b >> 8), byte(b >> 16), byte(b >> 24)})
		}
	}
	if got := h.Sum64(); got != electrogramsFingerprint {
		t.Errorf("fingerprint of the bits is %#x, want %#x", got, uint64(electrogramsFingerprint))
	}
}

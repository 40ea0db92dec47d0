package numbers

import (
	"math"
	"strings"
	"testing"

	"escapement/engine/field"
	"escapement/engine/measure"
	"escapement/engine/sim/simtest"
)

// beside gives what stands beside a preset, changed, and what was found on its strip.
func beside(t *testing.T, preset, old, changed string) (*Device, *measure.Report) {
	t.Helper()
	p := simtest.Changed(t, preset, old, changed)
	r := measure.Of(p.Log, field.Record(p.Log))
	return OfDevice(p.Plan, p.Program.Device, r), r
}

func (d *Device) sum(t *testing.T, name string) Sum {
	t.Helper()
	for _, s := range d.Arithmetic {
		if s.Name == name {
			return s
		}
	}
	t.Fatalf("no %s in %+v", name, d.Arithmetic)
	return Sum{}
}

func (d *Device) warns(part string) bool {
	for _, w := range d.Warnings {
		if strings.Contains(w, part) {
			return true
		}
	}
	return false
}

// The sum took PR from the surface, 233 ms, where the device has 270: PP 555 stood
// beside "may lock below 553" on a strip of locked P waves, and no warning came.
func TestLockedPWavesAreJudgedByThePRThatTheDeviceHas(t *testing.T) {
	d, r := beside(t, "dual-locked-p-waves", "", "")
	if got := *r.Device.LeadPR; math.Abs(got-270) > 1 || *r.Summary.PR > got-20 {
		t.Fatalf("PR %v at the leads, %v at the surface", got, *r.Summary.PR)
	}
	if s := d.sum(t, "locked_below"); s.Text != "589.9" {
		t.Errorf("locked below %s ms, want 589.9, above the PP of 555", s.Text)
	}
	if !d.warns("P waves can stay in PVARP") {
		t.Errorf("no warning in %q", d.Warnings)
	}
}

// TARP at rest, 380 ms, was given as the end of 1:1 at 157.9 although the AV delay had
// shortened to 80 ms long before.
func TestShorteningAVDelayMovesThe2To1Point(t *testing.T) {
	d, _ := beside(t, "dual-one-to-one-to-140", "", "")
	if s := d.sum(t, "two_to_one"); s.Text != "187.5" || s.Numbers != "60000 / (80 + 240) = 187.5 /min" {
		t.Errorf("2:1 at %s, %s", s.Text, s.Numbers)
	}
}

// The atrial ERP is typed at 600 ms; at a lower-rate interval of 750 it is longer, and
// a gap between the two was called safe while stimuli were lost.
func TestSynchronyIsJudgedByTheERPAtTheLowerRate(t *testing.T) {
	d, r := beside(t, "dual-va-synchrony", `"paced_av_ms": 280`, `"paced_av_ms": 250`) // gap 260
	if !strings.Contains(r.Statement, "VA synchrony") || !d.warns("less than the atrial refractory period of 273.2 ms") {
		t.Errorf("%s\nwarnings %q", r.Statement, d.Warnings)
	}
	d, r = beside(t, "dual-va-synchrony", `"paced_av_ms": 280`, `"paced_av_ms": 236`) // gap 274
	if strings.Contains(r.Statement, "VA synchrony") || d.warns("atrial refractory period") {
		t.Errorf("%s\nwarnings %q", r.Statement, d.Warnings)
	}
}

// A paced rate is the device's: with the QRS of a conducted beat beginning before its
// signal, the surface interval made 64 of a lower rate of 65 and 55 of 57.
func TestPacedRateIsTheDevices(t *testing.T) {
	for _, c := range []struct{ preset, want string }{
		{"vvi-fusion", "ventricular pacing 65/min"},
		{"dual-atrial-base-long-interval", "AV sequential pacing 57/min"}, // check 12: 1050 ms, 57.1
		{"dual-t-wave-long-pvarp", "AV sequential pacing 44/min"},
		{"aai-far-field", "atrial pacing 52/min"},
		{"dual-flutter-switch", "atrial rhythm 240/min tracked 2:1"}, // was: sinus 70/min
	} {
		if _, r := beside(t, c.preset, "", ""); !strings.Contains(r.Statement, c.want) {
			t.Errorf("%s: %s, want %s", c.preset, r.Statement, c.want)
		}
	}
}

// Task: which stimuli of an undersensing or asynchronous device fall about the T wave.
func TestVulnerableStimuliAreFound(t *testing.T) {
	_, r := beside(t, "magnet-asynchronous", "", "")
	for _, f := range r.Findings {
		if f.Slug == "stimulus_in_vulnerable_time" {
			if f.Count != 2 || len(f.Evidence) != 4 || !strings.Contains(f.Text, "about the T wave") {
				t.Errorf("%+v", f)
			}
			return
		}
	}
	t.Errorf("not found: %s", r.Statement)
}

// The preset's threshold is 1.125 V at 0.2 ms: b (1 + c / t) = 0.375 (1 + 0.4 / 0.2). Law:
// Geddes 2004, read; a margin of two: common practice.
func TestMarginsAreJudged(t *testing.T) {
	for _, c := range []struct {
		name, old, changed string
		warns              string
	}{
		{"1.0 V at 0.2 ms", "", "", "below the threshold"},
		{"1.2 V at 0.2 ms, threshold 1.125", `"amplitude_v": 1`, `"amplitude_v": 1.2`, "1.1 times the threshold"},
		{"2.25 V", `"amplitude_v": 1`, `"amplitude_v": 2.25`, ""},
		{"signal 9 mV at a sensitivity of 5", `"amplitude_v": 1`, `"sensitivity_mv": 5, "amplitude_v": 2.25`, "1.8 times the sensitivity"},
	} {
		d, _ := beside(t, "vvi-output-below-threshold", c.old, c.changed)
		if c.warns == "" && d.warns("times the") || !d.warns(c.warns) && c.warns != "" {
			t.Errorf("%s: %q", c.name, d.Warnings)
		}
	}
}

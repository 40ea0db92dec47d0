package sim

import (
	"fmt"
	"testing"

	"escapement/engine/event"
)

// given lists the device's stimuli of a channel.
func (s strip) given(channel byte) []*event.Event {
	var out []*event.Event
	for i := range s.Events {
		if e := &s.Events[i]; e.Kind == event.Stimulus && e.Rule == event.Timed && e.Channel == channel {
			out = append(out, e)
		}
	}
	return out
}

const blocked = `"sinus":{"rate_bpm":40,"first_ms":50000},"av_node":{"fast":{"ah_ms":null,"va_ms":null}}`

// Pacing at the His bundle. Selective: the QRS comes after HV. Not selective: the
// muscle beside the lead begins at once. Loss of the His bundle: the muscle alone.
// (Table 3 of the 2023 HRS/APHRS/LAHRS guideline: S-QRS equals H-QRS, or is shorter,
// usually 0.) Two thresholds, two outcomes: output decides.
func TestHisPacingHasTwoThresholds(t *testing.T) {
	// Thresholds at 0.4 ms, chronaxie 0.4: twice the rheobase: His 1.0 V, muscle 2.0 V.
	const lead = `"mode":"VVI","leads":{"ventricular":{"site":"his","rheobase_v":%v,"muscle_rheobase_v":%v,"amplitude_v":%v}}`
	for _, c := range []struct {
		name                   string
		his, muscle, amplitude float64
		outcome                event.Outcome
		sv                     float64 // stimulus to first ventricular depolarisation; -1: none
		captured               bool
	}{
		{"both", 0.5, 1, 2.5, 0, 0, true},
		{"selective", 0.5, 1, 1.5, event.ConductionOnly, 45, true},
		{"muscle only", 1.5, 0.5, 2, event.MuscleOnly, 0, true},
		{"neither", 0.5, 1, 0.9, event.BelowThreshold, -1, false},
	} {
		t.Run(c.name, func(t *testing.T) {
			s := withDevice(t, 5000, blocked, fmt.Sprintf(lead, c.his, c.muscle, c.amplitude))
			stim := s.given('V')[1]
			if stim.Captured != c.captured || stim.Outcome != c.outcome {
				t.Errorf("captured %v (%s), want %v (%s)", stim.Captured, stim.Outcome, c.captured, c.outcome)
			}
			got := firstVentricular(s, stim.T.MS()-0.001) - stim.T.MS()
			if c.sv >= 0 {
				near(t, "stimulus to ventricle", got, c.sv, exact)
			}
		})
	}
}

// A stimulus with latency depolarises later; a beat that comes in between is not
// stimulated a second time.
func TestLatencyOfCapture(t *testing.T) {
	s := withDevice(t, 5000, blocked, `"mode":"VVI","leads":{"ventricular":{"latency_ms":30}}`)
	stim := s.given('V')[1]
	near(t, "latency", firstVentricular(s, stim.T.MS())-stim.T.MS(), 30, exact)
}

// Mechanical sensing: the atrial signal of a leadless ventricular device comes late
// after the depolarisation (80 to 120 ms, from memory), and the AV delay from there.
func TestMechanicalAtrialSensing(t *testing.T) {
	s := withDevice(t, 8000, `"sinus":{"rate_bpm":75},"av_node":{"fast":{"ah_ms":null,"va_ms":null}}`,
		`"mode":"VDD","sensed_av_ms":40,"leads":{"atrial":{"sensing_delay_ms":100}}`)
	a := s.times("right_atrium")
	v := s.given('V')
	near(t, "P to stimulus", v[4].T.MS()-a[4], 140, exact)
}

// Crosstalk: the atrial stimulus is sensed in the ventricle 40 ms later. With the
// safety stimulus the ventricle is paced at the end of the window; without it there
// is no ventricular stimulus at all. (Definition; the numbers are ours.)
func TestCrosstalk(t *testing.T) {
	const device = `"mode":"DDD","pavb_ms":30,"leads":{"crosstalk_ms":40},"safety_stimulus":%v`
	s := withDevice(t, 6000, blocked, fmt.Sprintf(device, true))
	a, v := s.given('A'), s.given('V')
	near(t, "safety stimulus", v[1].T.Sub(a[1].T).MS(), 110, exact)
	if s = withDevice(t, 6000, blocked, fmt.Sprintf(device, false)); len(s.given('V')) != 0 {
		t.Errorf("%d ventricular stimuli, want none: crosstalk inhibits", len(s.given('V')))
	}
}

// A broken lead neither senses nor captures while it lasts; a dislodged one works
// from where it lies now.
func TestBrokenAndDislodgedLeads(t *testing.T) {
	s := withDevice(t, 9000, blocked, `"mode":"VVI"`, `{"at_ms":2500,"do":"fracture","channel":"V","for_ms":3000}`)
	for _, e := range s.given('V') {
		if want := e.T.MS() < 2500 || e.T.MS() >= 5500; e.Captured != want {
			t.Errorf("stimulus at %v ms captured %v, want %v (%s)", e.T, e.Captured, want, e.Outcome)
		}
	}
	s = withDevice(t, 6000, blocked, `"mode":"VVI"`, `{"at_ms":2500,"do":"dislodge","channel":"V","site":"rv_outflow"}`)
	v := s.given('V')
	if got := s.Sites[v[0].Site].Name + " " + s.Sites[v[len(v)-1].Site].Name; got != "rv_apex rv_outflow" {
		t.Errorf("paced %s", got)
	}
}

// A lead at the His bundle can be dislodged too: it is the ventricular lead.
func TestADislodgedHisLeadPacesFromWhereItLies(t *testing.T) {
	s := withDevice(t, 6000, blocked, `"mode":"VVI","leads":{"ventricular":{"site":"his"}}`, `{"at_ms":2500,"do":"dislodge","channel":"V","site":"rv_apex"}`)
	v := s.given('V')
	if got := s.Sites[v[0].Site].Name + " " + s.Sites[v[len(v)-1].Site].Name; got != "his rv_apex" {
		t.Errorf("paced %s, want his rv_apex", got)
	}
}

// A broken lead passes on nothing of the heart, the far field neither.
func TestABrokenLeadHasNoFarField(t *testing.T) {
	s := withDevice(t, 6000, `"sinus":{"rate_bpm":75}`, `"mode":"DDD","leads":{"far_field_ms":120}`, `{"at_ms":0,"do":"fracture","channel":"A","for_ms":6000}`)
	for i := range s.Events {
		if e := &s.Events[i]; e.Kind == event.Sense && e.Channel == 'A' {
			t.Fatalf("atrial signal at %v ms on a broken lead", e.T)
		}
	}
}

// A beat that reaches the lead's site while a stimulus has not yet taken effect comes
// first: the stimulus did not capture, and says so.
func TestABeatOvertakesAStimulusWithLatency(t *testing.T) {
	s := withDevice(t, 5000, blocked, `"mode":"VVI","leads":{"ventricular":{"latency_ms":60}}`, stimulus(1030, "rv_apex"))
	stim := s.given('V')[0]
	near(t, "first stimulus", stim.T.MS(), 1000, exact)
	if stim.Captured || stim.Outcome != event.Overtaken {
		t.Errorf("captured %v (%s), but another beat came first", stim.Captured, stim.Outcome)
	}
}

// A number of the device changed in the middle of the strip acts from then on.
func TestReprogrammingInTheStrip(t *testing.T) {
	s := withDevice(t, 12000, blocked, `"mode":"VVI","lower_rate_bpm":60`, `{"at_ms":5100,"do":"set","field":"pacemaker.lower_rate_bpm","to":80}`)
	v := s.given('V')
	near(t, "before", v[2].T.Sub(v[1].T).MS(), 1000, exact)
	near(t, "after", v[len(v)-1].T.Sub(v[len(v)-2].T).MS(), 750, exact)
}

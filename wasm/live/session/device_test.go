package session

import (
	"encoding/json"
	"slices"
	"strings"
	"testing"

	"escapement/engine/event"
	"escapement/engine/numbers"
)

// block is a heart that conducts neither way, so that the device alone decides.
const block = `"heart":{"sinus":{"rate_bpm":130},"av_node":{"fast":{"ah_ms":null,"va_ms":null}}}`

func computed(t *testing.T, s *Session, plan string) *answer {
	t.Helper()
	r, _ := reply[computeReply](t, s, "compute", asked{Plan: json.RawMessage(`{"format":"escapement-plan/1",` + plan + `}`), View: usual()})
	if !r.OK {
		t.Fatalf("%s: %v", plan, r.Diagnoses)
	}
	return r.Answer
}

func TestADevicesArithmeticStandsBesideTheStrip(t *testing.T) {
	s := New()
	if a := computed(t, s, `"heart":{}`); a.Device != nil {
		t.Fatalf("a plan without a device has %+v", a.Device)
	}
	for _, c := range []struct {
		name, plan string
		sum, text  string // one of the sums
		warning    string // the beginning of one; empty: none
	}{
		{"TARP 150 + 250", block + `,"pacemaker":{}`, "tarp", "400", ""},
		{"2:1 at 60000 / (150 + 400) = 109.1", block + `,"pacemaker":{"pvarp_ms":400}`, "two_to_one", "109.1", "TARP of 550 ms is longer"},
		{"loop max(500, 300 + 150)", `"heart":{"av_node":{"fast":{"va_ms":300}}},"pacemaker":{}`, "loop_cycle", "500", "PVARP of 250 ms does not cover the VA time of 300 ms"},
		{"flutter 250 - 150 - 150", block + `,"interventions":[{"at_ms":2000,"do":"train","site":"right_atrium","cycle_ms":250,"count":20}],"pacemaker":{"pvab_ms":150}`,
			"flutter_margin", "-50", "AV delay and PVAB of 300 ms"},
		{"threshold 0.35 (1 + 0.4/0.4)", block + `,"pacemaker":{"mode":"VVI"}`, "ventricular_threshold", "0.70", ""},
		{"no capture", block + `,"pacemaker":{"mode":"VVI","leads":{"ventricular":{"amplitude_v":0.5}}}`, "ventricular_safety_margin", "0.7:1", "The ventricular output of 0.50 V is below the threshold of 0.70 V"},
		{"no sensing", block + `,"pacemaker":{"leads":{"atrial":{"signal_mv":0.3}}}`, "atrial_safety_margin", "3.6:1", "The atrial signal of 0.3 mV is below the sensitivity of 0.5 mV"},
	} {
		d := computed(t, s, c.plan).Device
		if d == nil {
			t.Fatalf("%s: no device", c.name)
		}
		at := slices.IndexFunc(d.Arithmetic, func(v numbers.Sum) bool { return v.Name == c.sum })
		if at < 0 || d.Arithmetic[at].Text != c.text {
			t.Errorf("%s: got %+v, want %s of %s", c.name, d.Arithmetic, c.sum, c.text)
		}
		if c.warning == "" && len(d.Warnings) > 0 || c.warning != "" && !slices.ContainsFunc(d.Warnings, func(w string) bool { return strings.HasPrefix(w, c.warning) && strings.HasSuffix(w, ".") }) {
			t.Errorf("%s: warnings %q, want %q", c.name, d.Warnings, c.warning)
		}
	}
}

func TestWhatADeviceDidIsCountedOfTheChambersItKnows(t *testing.T) {
	s := New()
	names := func(a *answer) (out []string) {
		for _, n := range a.Device.Counted {
			out = append(out, n.Name)
		}
		return
	}
	a := computed(t, s, block+`,"pacemaker":{"mode":"VVI"}`)
	if got := names(a); slices.Contains(got, "as_count") || !slices.Contains(got, "vp_count") {
		t.Errorf("VVI counts %v", got)
	}
	if len(a.Overview.PacedA) != 0 || len(a.Overview.PacedV) != 12 || len(a.Overview.Stimuli) != 0 { // at 1, 2 ... 12 s
		t.Errorf("VVI at 60 for 12 s: overview has %v and %v", a.Overview.PacedA, a.Overview.PacedV)
	}
	a = computed(t, s, block+`,"interventions":[{"at_ms":0,"do":"lose_capture","channel":"V","for_ms":5500},{"at_ms":9300,"do":"stimulate","site":"rv_apex"}],"pacemaker":{"mode":"VOO"}`)
	if o := a.Overview; len(o.Lost) != 5 || len(o.Stimuli) != 1 {
		t.Errorf("capture lost to 5.5 s: %v lost; %v by intervention", o.Lost, o.Stimuli)
	}
}

func TestTheDevicesLaneCanBeLeftOut(t *testing.T) {
	s := New()
	computed(t, s, block+`,"pacemaker":{}`)
	for _, hidden := range []bool{false, true} {
		v := usual()
		v["no_device"] = hidden
		d, _ := reply[struct{ Lanes []struct{ Name string } }](t, s, "layout", asked{View: v})
		has := slices.ContainsFunc(d.Lanes, func(l struct{ Name string }) bool { return l.Name == "device" })
		if has == hidden {
			t.Errorf("no_device %v: lanes %v", hidden, d.Lanes)
		}
	}
}

func TestAPressOnAQRSSelectsTheFirstMuscle(t *testing.T) {
	s := New()
	for _, plan := range []string{`"heart":{}`, `"heart":{"his_purkinje":{"left_bundle":null}}`, block + `,"pacemaker":{}`} {
		computed(t, s, plan)
		log := s.current.Log
		d, numbers := reply[struct {
			Marks   int
			Classes []string
		}](t, s, "layout", asked{View: usual()})
		n := 0
		for m := range slices.Chunk(numbers[:11*d.Marks], 11) { // the wire form of engine/scene
			if d.Classes[int(m[1])] != "wave" {
				continue
			}
			e := log.At(event.ID(m[9]))
			tissue := log.Sites[e.Site].Tissue
			if tissue != event.Atrium && tissue != event.Ventricle {
				t.Fatalf("%s: a wave selects %s", plan, log.Sites[e.Site].Name)
			}
			if tissue == event.Ventricle {
				n++
			}
		}
		if n == 0 {
			t.Errorf("%s: no QRS", plan)
		}
	}
}

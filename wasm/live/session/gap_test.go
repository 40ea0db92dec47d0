package session

import (
	"strings"
	"testing"
)

// A gap of 1.2 s at a lower rate of 60: hysteresis ran, and a sensed R had begun it.
func TestTheGapOfAHysteresisNamesItsIntervalAndNothingBeforeIt(t *testing.T) {
	s := New()
	reply[computeReply](t, s, "compute", asked{Plan: presetPlan(t, "vvi-hysteresis"), View: usual()})
	g, _ := reply[gapReply](t, s, "gap", map[string]any{"t_ms": 4200})
	if !g.Long || len(g.Sentences) != 1 || !strings.Contains(g.Sentences[0], "hysteresis") || !strings.Contains(g.Sentences[0], "sensed R") {
		t.Errorf("%+v", g)
	}
	if len(g.Settings) == 0 || g.Settings[0].Path != "pacemaker.hysteresis.rate_bpm" {
		t.Errorf("settings %+v", g.Settings)
	}
	if text, _ := s.Call("gap", []byte(`{"t_ms":0}`)); string(text) != "null" {
		t.Errorf("before the first beat: %s", text)
	}
}

func TestTheOutcomeOfAnExtraBeatAndItsScan(t *testing.T) {
	s := New()
	plan := `{"format":"escapement-plan/1","interventions":[{"at_ms":3900,"do":"stimulate","site":"right_atrium"}]}`
	reply[computeReply](t, s, "compute", asked{Plan: []byte(plan), View: usual()})
	var id int
	for i := range s.current.Log.Events {
		if e := &s.current.Log.Events[i]; e.Kind.String() == "stimulus" {
			id = int(e.ID)
		}
	}
	x, _ := reply[extraReply](t, s, "extra", map[string]any{"event": id})
	if x.Item != 0 || !x.Single || x.Text == "" || len(x.Lines) == 0 {
		t.Errorf("%+v", x)
	}
	r, _ := reply[scanReply](t, s, "scan", map[string]any{"item": 0, "start": true, "tries": 5})
	for n := 0; !r.Finished && n < 200; n++ {
		r, _ = reply[scanReply](t, s, "scan", map[string]any{"item": 0, "tries": 5})
	}
	if !r.Finished || len(r.Segments) < 3 || r.Done != r.Of {
		t.Errorf("%+v", r)
	}
	if bad, _ := reply[scanReply](t, s, "scan", map[string]any{"item": 7, "start": true, "tries": 1}); bad.Fault == "" {
		t.Error("a scan of nothing is taken")
	}
}

func TestAFlipIsFoundToAStep(t *testing.T) {
	r, _ := reply[flipReply](t, New(), "flip", map[string]any{"plan": presetPlan(t, "dual-treadmill-two-to-one"), "path": "pacemaker.pvarp_ms", "low": 250, "high": 300, "step": 1})
	if r.High-r.Low != 1 || r.Low < 250 || r.High > 300 {
		t.Errorf("%+v", r)
	}
	r, _ = reply[flipReply](t, New(), "flip", map[string]any{"plan": presetPlan(t, "normal"), "path": "heart.sinus.rate_bpm", "low": 75, "high": 76, "step": 1})
	if r.Low != 75 || r.High != 76 {
		t.Errorf("nothing flips here: %+v", r)
	}
}

package session

import (
	"encoding/json"
	"fmt"
	"strings"
	"testing"

	"escapement/presets"
)

func slice(t *testing.T, s *Session, args string) searched {
	t.Helper()
	b, _ := s.Call("search", []byte(args))
	var r searched
	if err := json.Unmarshal(b, &r); err != nil {
		t.Fatal(err)
	}
	return r
}

// Slices of a search come to what one call comes to; the state may be carried over to
// another session between them.
func TestASearchInSlices(t *testing.T) {
	file, _ := presets.Read("goals-treadmill-conflict")
	whole := slice(t, New(), fmt.Sprintf(`{"plan":%s,"budget":1000000}`, file))
	if !whole.OK || !whole.Finished || len(whole.Answer.Conflicts) != 1 {
		t.Fatalf("%+v", whole)
	}
	s, n := New(), 0
	state := "null"
	for {
		r := slice(t, s, fmt.Sprintf(`{"plan":%s,"budget":200,"most":3,"keep":true,"state":%s}`, file, state))
		if !r.OK || r.Answer == nil || n > 100 {
			t.Fatalf("%+v", r)
		}
		b, err := json.Marshal(r.State)
		if err != nil {
			t.Fatal(err)
		}
		state = string(b)
		if n++; r.Finished {
			if got, want := r.Answer.Text, whole.Answer.Text; got != want {
				t.Errorf("got %s\nwant %s", got, want)
			}
			break
		}
		if n%2 == 0 {
			s = New()
		}
	}
	if n < 4 {
		t.Errorf("%d slices", n)
	}
	if r := slice(t, s, fmt.Sprintf(`{"plan":%s,"budget":1,"again":true}`, file)); r.Phase != 1 || r.Done != 1 {
		t.Errorf("begun anew: %+v", r)
	}
}

func TestThePlanOfACombinationOpens(t *testing.T) {
	file, _ := presets.Read("goals-treadmill-shorter-av")
	s := New()
	for _, c := range []struct{ situation, want string }{{"", `"goals"`}, {"treadmill", `"over_ms": 15000`}} {
		b, _ := s.Call("search_plan", []byte(fmt.Sprintf(`{"plan":%s,"combination":3,"situation":%q}`, file, c.situation)))
		var r struct {
			OK   bool            `json:"ok"`
			Plan json.RawMessage `json:"plan"`
		}
		if err := json.Unmarshal(b, &r); err != nil || !r.OK {
			t.Fatalf("%s (%v)", b, err)
		}
		flat := strings.ReplaceAll(strings.ReplaceAll(string(r.Plan), " ", ""), "\n", "")
		if !strings.Contains(flat, strings.ReplaceAll(c.want, " ", "")) || !strings.Contains(flat, `"shortest_ms":110`) {
			t.Errorf("%q: %s", c.situation, flat)
		}
	}
}

func TestASearchThatCannotBeIsDiagnosed(t *testing.T) {
	file, _ := presets.Read("goals-treadmill-conflict")
	for _, c := range []struct{ name, args, want string }{
		{"no goals", `{"plan":{"format":"escapement-plan/1"},"budget":1}`, "goals: nothing; allowed: an object with settings"},
		{"wrong goals", `{"plan":{"format":"escapement-plan/1","goals":{"settings":[],"situations":[{"name":"a"}]}},"budget":1}`, "goals.settings: 0 items"},
		{"a state of another plan", fmt.Sprintf(`{"plan":%s,"budget":1,"state":{"format":"escapement-search-state/1","fingerprint":"x"}}`, file), "a state of another plan"},
	} {
		t.Run(c.name, func(t *testing.T) {
			r := slice(t, New(), c.args)
			if r.OK || len(r.Diagnoses) == 0 || !strings.Contains(r.Diagnoses[0].Text, c.want) {
				t.Errorf("got %+v, want %s", r.Diagnoses, c.want)
			}
		})
	}
}

// A sensitivity in parts is that of one call.
func TestASensitivityInParts(t *testing.T) {
	file, _ := presets.Read("goals-treadmill-shorter-av")
	ask := func(s *Session, count int) sensedReply {
		b, _ := s.Call("sense", []byte(fmt.Sprintf(`{"plan":%s,"combination":27,"count":%d,"numbers":["heart.av_node.fast.va_ms","heart.sinus.rate_bpm","heart.atria.erp_ms"]}`, file, count)))
		var r sensedReply
		if err := json.Unmarshal(b, &r); err != nil || !r.OK {
			t.Fatalf("%s (%v)", b, err)
		}
		return r
	}
	whole := ask(New(), 100)
	s, n := New(), 0
	for {
		r := ask(s, 2)
		if n++; r.Done < r.Of {
			continue
		}
		a, _ := json.Marshal(r)
		b, _ := json.Marshal(whole)
		if string(a) != string(b) || n < 2 {
			t.Errorf("in %d parts\n%s\nin one\n%s", n, a, b)
		}
		return
	}
}

func TestTwoHeartsAreCompared(t *testing.T) {
	a, _ := presets.Read("avnrt-overdrive")
	b, _ := presets.Read("avrt-overdrive")
	reply, _ := New().Call("against", []byte(fmt.Sprintf(`{"plan":%s,"other":%s,"most":3,"protocol":{"faster_ms":[30],"drives_ms":[400],"couplings_ms":[300]}}`, a, b)))
	if s := string(reply); !strings.Contains(s, `"ok":true`) || !strings.Contains(s, `"family":"ventricular_overdrive"`) {
		t.Errorf("%s", s)
	}
	reply, _ = New().Call("against", []byte(`{"plan":{},"other":{}}`))
	if s := string(reply); !strings.Contains(s, "format: nothing") {
		t.Errorf("%s", s)
	}
}

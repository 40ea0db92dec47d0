package session

import (
	"encoding/json"
	"flag"
	"fmt"
	"hash/fnv"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"escapement/engine/event"
	"escapement/engine/measure"
	"escapement/presets"
)

var update = flag.Bool("update", false, "rewrite the goldens")

// reply calls the session as the page does and reads the answer.
func reply[T any](t *testing.T, s *Session, op string, args any) (out T, points []float32) {
	t.Helper()
	in, err := json.Marshal(args)
	if err != nil {
		t.Fatal(err)
	}
	text, points := s.Call(op, in)
	if err := json.Unmarshal(text, &out); err != nil {
		t.Fatalf("%s answered %.200s: %v", op, text, err)
	}
	return out, points
}

type asked struct {
	Plan json.RawMessage `json:"plan,omitempty"`
	View map[string]any  `json:"view"`
}

func usual() map[string]any {
	return map[string]any{"t0_ms": 0, "width_mm": 170, "height_mm": 150, "mm_per_s": 25, "mm_per_mv": 10, "leads": []string{"I", "II", "V1", "V6"}, "ladder": "full"}
}

func presetPlan(t *testing.T, name string) json.RawMessage {
	t.Helper()
	file, ok := presets.Read(name)
	if !ok {
		t.Fatalf("no preset %q", name)
	}
	return file
}

// One line a preset: its name, the fingerprint of its timeline, and a hash of all
// it draws. The same file is checked natively and in WebAssembly
// (GOOS=js GOARCH=wasm go test), so that both give the same bits.
func TestFingerprints(t *testing.T) {
	const golden = "testdata/fingerprints.txt"
	var b strings.Builder
	s := New()
	for _, e := range presets.List() {
		r, points := reply[computeReply](t, s, "compute", asked{Plan: presetPlan(t, e.Name), View: usual()})
		if !r.OK {
			t.Errorf("%s: %v", e.Name, r.Diagnoses)
			continue
		}
		h := fnv.New64a()
		h.Write(r.Scene)
		for _, p := range points {
			bits := math.Float32bits(p)
			h.Write([]byte{byte(bits), byte(bits >> 8), byte(bits >> 16), byte(bits >> 24)})
		}
		fmt.Fprintf(&b, "%-26s %s %016x\n", e.Name, r.Answer.Fingerprint, h.Sum64())
	}
	if *update {
		if err := os.MkdirAll(filepath.Dir(golden), 0o755); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(golden, []byte(b.String()), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(golden)
	if err != nil {
		t.Fatal(err)
	}
	got, wanted := strings.Split(b.String(), "\n"), strings.Split(string(want), "\n")
	for i := range max(len(got), len(wanted)) {
		line := func(s []string) string {
			if i < len(s) {
				return s[i]
			}
			return ""
		}
		if line(got) != line(wanted) {
			t.Errorf("got  %s\nwant %s", line(got), line(wanted))
		}
	}
}

func TestNothingIsShownBeforeAPlanWasComputed(t *testing.T) {
	s := New()
	for _, op := range []string{"layout", "account", "listing"} {
		if text, points := s.Call(op, []byte(`{}`)); string(text) != "null" || points != nil {
			t.Errorf("%s answered %s", op, text)
		}
	}
}

func TestAWrongPlanIsRefusedInThePlansOwnWordsAndTheLastTimelineStays(t *testing.T) {
	s := New()
	reply[computeReply](t, s, "compute", asked{Plan: presetPlan(t, "normal"), View: usual()})
	before := s.current
	r, _ := reply[computeReply](t, s, "compute", asked{Plan: []byte(`{"format":"escapement-plan/1","heart":{"sinus":{"rate_bpm":"x"},"atria":{"erp_ms":1}}}`), View: usual()})
	if r.OK || len(r.Diagnoses) != 2 {
		t.Fatalf("got %+v, want two diagnoses", r)
	}
	for _, d := range r.Diagnoses {
		if d.Text != d.Diagnosis.String() || d.Path == "" || d.Allowed == "" {
			t.Errorf("diagnosis %+v", d)
		}
	}
	if s.current != before {
		t.Error("the last timeline is gone")
	}
}

func TestTheLadderFillsTheRoomAndTheViewIsKept(t *testing.T) {
	s := New()
	reply[computeReply](t, s, "compute", asked{Plan: presetPlan(t, "normal"), View: usual()})
	type drawn struct {
		Height float64
		Width  float64
		Times  [][3]float64
	}
	for _, room := range []float64{10, 170, 200} {
		v := usual()
		v["height_mm"], v["t0_ms"] = room, 4000
		d, points := reply[drawn](t, s, "layout", asked{View: v})
		if room >= 170 && math.Abs(d.Height-room) > 0.01 {
			t.Errorf("room of %v mm: a scene of %v mm", room, d.Height)
		}
		if len(points) == 0 || len(d.Times) == 0 {
			t.Errorf("room of %v mm: nothing drawn", room)
		}
		for _, at := range d.Times {
			if at[1] < 2000 {
				t.Errorf("event %v at %v ms is drawn in a view from 4000 ms", at[0], at[1])
			}
		}
	}
}

func TestALongStripHasItsLadderAndSaysWhyItHasNoLeads(t *testing.T) {
	s := New()
	r, _ := reply[computeReply](t, s, "compute", asked{Plan: []byte(`{"format":"escapement-plan/1","span_ms":1800000}`), View: usual()})
	if !r.OK || len(r.Answer.Warnings) != 1 || !strings.Contains(r.Answer.Warnings[0], "15 min") {
		t.Fatalf("got %+v, want one warning", r.Diagnoses)
	}
	r, _ = reply[computeReply](t, s, "compute", asked{Plan: []byte(`{"format":"escapement-plan/1","span_ms":86400000}`), View: usual()})
	if r.OK || len(r.Diagnoses) != 1 || !strings.Contains(r.Diagnoses[0].Text, "shorten span_ms") {
		t.Errorf("got %+v, want the limit on events with its numbers", r.Diagnoses)
	}
}

func TestSentenceKeepsEveryLetter(t *testing.T) {
	ids := []event.ID{4}
	for _, c := range []struct {
		name    string
		text    string
		clauses []string
		want    int // pieces
	}{
		{"two clauses", "Sinus 95/min, 4:3 AV block.", []string{"sinus 95/min", "4:3 AV block"}, 4},
		{"none", "No rhythm can be named.", nil, 1},
		{"one that is not in it", "Sinus 95/min.", []string{"junctional"}, 1},
		{"empty", "", nil, 0},
	} {
		var clauses []measure.Clause
		for _, text := range c.clauses {
			clauses = append(clauses, measure.Clause{Text: text, Evidence: ids})
		}
		got := ""
		pieces := sentence(c.text, clauses)
		for _, p := range pieces {
			got += p.Text
		}
		if got != c.text || len(pieces) != c.want {
			t.Errorf("%s: %q in %d pieces, want %q in %d", c.name, got, len(pieces), c.text, c.want)
		}
	}
}

func TestABugOfThePagePanics(t *testing.T) {
	defer func() {
		if recover() == nil {
			t.Error("an operation that does not exist is taken")
		}
	}()
	New().Call("nonsense", nil)
}

func BenchmarkCompute(b *testing.B) {
	file, _ := presets.Read("wenckebach-4-3")
	in, err := json.Marshal(asked{Plan: file, View: usual()})
	if err != nil {
		b.Fatal(err)
	}
	s := New()
	for b.Loop() {
		s.Call("compute", in)
	}
}

func BenchmarkLayout(b *testing.B) {
	file, _ := presets.Read("wenckebach-4-3")
	in, err := json.Marshal(asked{Plan: file, View: usual()})
	if err != nil {
		b.Fatal(err)
	}
	s := New()
	s.Call("compute", in)
	for b.Loop() {
		s.Call("layout", in)
	}
}

package session

import (
	"encoding/json"
	"testing"

	"escapement/engine/numbers"
	"escapement/presets"
)

// Over all presets, nothing is shown whose meaning and source cannot be asked for.
func TestEveryNumberShownHasAMeaningAndASource(t *testing.T) {
	known := map[string]numbers.Meaning{}
	for _, m := range numbers.Meanings() {
		if _, twice := known[m.Name]; twice || m.Text == "" {
			t.Errorf("%s stands twice, or says nothing", m.Name)
		}
		known[m.Name] = m
	}
	has := func(preset, name, source string) {
		m, ok := known[name]
		if !ok || m.Source == "" && source == "" {
			t.Errorf("%s: nothing says what %q means, or who says so", preset, name)
			known[name] = numbers.Meaning{Source: "told"} // once is enough
		}
	}
	s := New()
	for _, e := range presets.List() {
		file, _ := presets.Read(e.Name)
		r, _ := reply[computeReply](t, s, "compute", asked{Plan: file, View: usual()})
		if !r.OK {
			t.Fatalf("%s: %v", e.Name, r.Diagnoses)
		}
		all := r.Answer.Measured
		if d := r.Answer.Device; d != nil {
			all = append(all, d.Counted...)
			for _, v := range d.Arithmetic {
				has(e.Name, "sum:"+v.Name, v.Source)
			}
			for _, i := range d.Intervals {
				has(e.Name, "interval:"+i.Name, "")
			}
		}
		for _, n := range all {
			if n.Help == "" || n.Source == "" {
				t.Errorf("%s: %s has help %q of %q", e.Name, n.Name, n.Help, n.Source)
			}
		}
		for _, f := range r.Answer.Findings {
			has(e.Name, "finding:"+f.Slug, "")
		}
	}
}

// The rows of a comparison are named as the numbers are, or have a meaning of their own.
func TestEveryRowOfAComparisonHasAMeaning(t *testing.T) {
	known := map[string]bool{}
	for _, m := range numbers.Meanings() {
		known[m.Name] = true
	}
	s := New()
	plan := func(more string) json.RawMessage {
		return json.RawMessage(`{"format":"escapement-plan/1","pacemaker":{}` + more + `}`)
	}
	r, _ := reply[computeReply](t, s, "compute", asked{Plan: plan(""), View: usual()})
	for _, n := range append(r.Answer.Measured, r.Answer.Device.Counted...) {
		known["row:"+n.Label] = true
	}
	reply[computeReply](t, s, "compute", struct {
		asked
		Before json.RawMessage `json:"before"`
	}{asked{Plan: plan(""), View: usual()}, plan(`,"heart":{"sinus":{"rate_bpm":120}}`)})
	c, _ := reply[struct{ Rows []struct{ Part, Name string } }](t, s, "contrast", struct{}{})
	if len(c.Rows) < 10 {
		t.Fatalf("the comparison has %d rows", len(c.Rows))
	}
	for _, row := range c.Rows {
		if row.Part == "Settings" || row.Part == "Findings" || row.Part == "Warnings" {
			continue // told in full, or by the settings' own help
		}
		if !known["row:"+row.Name] && !known["interval:"+row.Name] {
			t.Errorf("nothing says what the row %q means", row.Name)
		}
	}
}

package session

import (
	"encoding/json"
	"testing"
)

// BenchmarkThirtySecondsTwelveLeads computes and lays out a strip of 30 s with all
// leads and the full ladder, a setting having changed: what one step of a drag costs
// the engine. Aim of the design: under one frame of 16.7 ms, with painting.
func BenchmarkThirtySecondsTwelveLeads(b *testing.B) {
	view := usual()
	view["width_mm"] = 750
	view["leads"] = []string{"I", "II", "III", "aVR", "aVL", "aVF", "V1", "V2", "V3", "V4", "V5", "V6"}
	s := New()
	rates := [2][]byte{}
	for i, bpm := range []string{"75", "76"} {
		in, err := json.Marshal(asked{Plan: json.RawMessage(`{"format":"escapement-plan/1","span_ms":30000,"heart":{"sinus":{"rate_bpm":` + bpm + `}}}`), View: view})
		if err != nil {
			b.Fatal(err)
		}
		rates[i] = in
	}
	for i := 0; b.Loop(); i++ {
		s.Call("compute", rates[i%2])
	}
}

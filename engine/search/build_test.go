package search

import (
	"context"
	"encoding/json"
	"fmt"
	"testing"

	"escapement/engine/plan"
	"escapement/presets"

	"pgregory.net/rapid"
)

// problem makes the search of a plan given in parts, as JSON.
func problem(t testing.TB, spanMS float64, heart, device, goals string) *Search {
	t.Helper()
	return searchOf(t, fmt.Appendf(nil, `{"format":"escapement-plan/1","span_ms":%g,"heart":{%s},"pacemaker":{%s},"goals":{%s}}`, spanMS, heart, device, goals))
}

func searchOf(t testing.TB, file []byte) *Search {
	t.Helper()
	p, err := plan.Decode(file)
	if err != nil {
		t.Fatal(err)
	}
	s, err := New(p)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func preset(t testing.TB, name string) *Search {
	t.Helper()
	b, ok := presets.Read(name)
	if !ok {
		t.Fatal("no preset " + name)
	}
	return searchOf(t, b)
}

// solve runs a search to its end.
func solve(t testing.TB, s *Search, set Settings) (*Answer, *State) {
	t.Helper()
	st := s.Begin()
	if err := s.Run(context.Background(), st, set); err != nil || !st.Done() {
		t.Fatalf("phase %d (%v)", st.Phase, err)
	}
	return s.Answer(st, 0), st
}

func text(t testing.TB, v any) string {
	t.Helper()
	b, err := json.MarshalIndent(v, "", " ")
	if err != nil {
		t.Fatal(err)
	}
	return string(b)
}

// blocked is a heart that conducts neither way.
const blocked = `"sinus":{"rate_bpm":65,"first_ms":440,"exit":{"theta_ms":200}},"av_node":{"fast":{"ah_ms":null,"va_ms":null}}`

func rapidSearch(t *rapid.T, file []byte) *Search {
	p, err := plan.Decode(file)
	if err != nil {
		t.Fatal(err)
	}
	s, err := New(p)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

package main

import (
	"encoding/json"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// A search stopped by its budget goes on from the file of its state and comes to what
// one without a bound comes to.
func TestSearchGoesOnFromItsState(t *testing.T) {
	whole, err := call(t, "", "search", "goals-treadmill-conflict")
	if err != nil {
		t.Fatal(err)
	}
	if !strings.Contains(whole, "SAV + PVARP = 120 + 305 = 425 ms is longer than P-P = 60000 / 150 = 400 ms") {
		t.Errorf("%s", whole)
	}
	state := filepath.Join(t.TempDir(), "state.json")
	for range 20 {
		out, err := call(t, "", "search", "goals-treadmill-conflict", "-budget", "300", "-state", state)
		if err != nil {
			t.Fatal(err)
		}
		if out == whole {
			return
		}
	}
	t.Error("twenty parts of 300 runs do not come to the answer of the whole")
}

func TestSearchOpensACombinationAndTakesOtherGoals(t *testing.T) {
	out, err := call(t, "", "search", "goals-treadmill-shorter-av", "-plan", "3", "-in", "treadmill")
	if err != nil || !strings.Contains(out, `"shortest_ms": 110`) || !strings.Contains(out, `"over_ms": 15000`) {
		t.Errorf("%s (%v)", out, err)
	}
	goals := filepath.Join(t.TempDir(), "goals.json")
	if err := os.WriteFile(goals, []byte(`{"settings":[{"field":"pacemaker.lower_rate_bpm","values":[45,55,65]}],"situations":[{"name":"arrest","set":{"heart.sinus.rate_bpm":10}}],"must":[{"outcome":"longest_pause_ms","at_most":1200}]}`), 0o600); err != nil {
		t.Fatal(err)
	}
	out, err = call(t, "", "search", "goals-treadmill-shorter-av", "-goals", goals)
	var a struct {
		Found []struct{ Values []float64 }
	}
	if e := json.Unmarshal([]byte(out), &a); err != nil || e != nil || len(a.Found) != 2 || a.Found[0].Values[0] != 55 {
		t.Errorf("%s (%v)", out, err)
	}
}

func TestSearchRefusesWhatItCannotDo(t *testing.T) {
	for _, c := range []struct {
		name string
		args []string
		want string
	}{
		{"no plan", nil, "search takes a plan"},
		{"no goals", []string{"normal"}, "goals: nothing; allowed: an object with settings"},
		{"an unknown flag", []string{"normal", "-x"}, "not defined: -x"},
		{"a combination out of range", []string{"goals-treadmill-conflict", "-plan", "84"}, "combination 84; allowed: 0 to 83"},
		{"an unknown situation", []string{"goals-treadmill-conflict", "-plan", "3", "-in", "night"}, `there is no situation "night"`},
		{"a sensitivity out of range", []string{"goals-treadmill-conflict", "-sensitivity", "x"}, "allowed: a combination from 0 to 83, or -1"},
		{"an unknown plan to compare with", []string{"normal", "-against", "nobody"}, "nobody"},
	} {
		t.Run(c.name, func(t *testing.T) {
			if _, err := call(t, "", append([]string{"search"}, c.args...)...); err == nil || !strings.Contains(err.Error(), c.want) {
				t.Errorf("got %v, want %s", err, c.want)
			}
		})
	}
}

package search

import (
	"context"
	"math"
	"strings"
	"testing"
)

func sensed(t *testing.T, s *Search, field, situation string, combination int) *Sensed {
	t.Helper()
	for _, p := range s.Probes([]string{field}) {
		if p.Situation == situation {
			x, err := s.Sense(context.Background(), p, combination)
			if err != nil {
				t.Fatal(err)
			}
			return x
		}
	}
	t.Fatalf("%s cannot be moved in %s", field, situation)
	return nil
}

// How far the heart may move, by the arithmetic: with SAV 120 and PVARP 250 TARP is
// 370, so 1:1 ends above 60000/400 = 150, the upper rate; an endless loop needs VA of
// 250 and more; the lower rate of 50 keeps any sinus rate from a pause over 1.5 s.
func TestSensitivityFindsWhatTheArithmeticGives(t *testing.T) {
	heart := `"sinus":{"rate_bpm":65,"first_ms":440,"exit":{"theta_ms":200}},"av_node":{"fast":{"ah_ms":null,"erp_ms":250,"va_ms":null,"concealed_from":1}},
		"his_purkinje":{"right_bundle":{"erp_ms":200,"erp_per_cycle":0},"left_bundle":{"erp_ms":200,"erp_per_cycle":0}}`
	s := problem(t, 16000, heart, `"lower_rate_bpm":50,"max_tracking_rate_bpm":150,"paced_av_ms":150,"sensed_av_ms":120`,
		`"settings":[{"field":"pacemaker.pvarp_ms","values":[250,300]}],
		"situations":[{"name":"rest"},{"name":"exercise","set":{"heart.sinus.rate_bpm":140}},
		{"name":"beats","set":{"span_ms":9000,"heart.av_node.fast.va_ms":220},"vary":{"premature":"rv_apex","after_ms":3000,"from":440,"to":640,"step":100}}],
		"must":[{"outcome":"pattern","in":["exercise"],"equal":"1:1"},{"outcome":"endless_loop","in":["beats"],"none_of":["ended","sustained"]},{"outcome":"longest_pause_ms","at_most":1500}]`)
	up := sensed(t, s, "heart.sinus.rate_bpm", "exercise", 0)
	// A row of a hundred P waves does not fit the strip just above 150: it is seen a little later.
	if up.Up == nil || up.Up.Last < 150 || up.Up.First > 152.5 || up.Up.First-up.Up.Last > 0.1+1e-9 || !strings.Contains(up.Up.Becomes[0], "1:1 (exercise) no longer holds") {
		t.Errorf("sinus rate at exercise: %s", text(t, up))
	}
	if up.Down != nil {
		t.Errorf("a slower sinus changes something: %s", text(t, up.Down))
	}
	for combination, want := range []float64{250, 300} {
		va := sensed(t, s, "heart.av_node.fast.va_ms", "beats", combination)
		if va.Up == nil || va.Up.Last >= want || va.Up.First < want || math.Abs(va.Up.First-want) > 1 || !strings.Contains(va.Up.Becomes[0], "endless loop") {
			t.Errorf("VA with combination %d: %s; want the loop from %v on", combination, text(t, va), want)
		}
	}
	if rest := sensed(t, s, "heart.sinus.rate_bpm", "rest", 0); rest.Down != nil {
		t.Errorf("at rest: %s", text(t, rest))
	}
	all := s.Sensitivity([]*Sensed{sensed(t, s, "heart.sinus.rate_bpm", "rest", 0), up}, 0)
	if all.Numbers[0].Situation != "exercise" || !strings.Contains(all.Text, "sinus rate (exercise) from 140 to 15") {
		t.Errorf("%s", text(t, all))
	}
}

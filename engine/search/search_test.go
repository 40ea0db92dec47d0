package search

import (
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// Found by hand from the facts on pacing, sections 2c, 2d and 3.
func TestSettingsThatTheArithmeticGives(t *testing.T) {
	const exercise = `"situations":[{"name":"exercise","set":{"heart.sinus.rate_bpm":%s}}],"must":[{"outcome":"pattern","equal":"1:1"}]`
	loop := `"sinus":{"rate_bpm":60,"first_ms":440},"av_node":{"fast":{"ah_ms":null,"erp_ms":370,"va_ms":300,"concealed_from":1}},
		"his_purkinje":{"right_bundle":{"erp_ms":200,"erp_per_cycle":0},"left_bundle":{"erp_ms":200,"erp_per_cycle":0}}`
	for _, c := range []struct {
		name          string
		heart, device string
		goals         string
		want          string // values of what is found, best first
	}{
		// TARP = 125 + PVARP <= 60000/140 = 428.6: PVARP up to 303 (W5: MTR 140, PVARP 300, AV 125, 2:1 at 141).
		{"PVARP up to the 2:1 point at 140", blocked, `"max_tracking_rate_bpm":140,"sensed_av_ms":125`,
			`"settings":[{"field":"pacemaker.pvarp_ms","values":[280,300,303,304,320]}],` + fmt.Sprintf(exercise, "140") + `,"prefer":[{"setting":"pacemaker.pvarp_ms","best":"highest"}]`, "[303] [300] [280]"},
		// W3: SAV 150, PVARP 250: 1:1 up to the upper rate while TARP 400 fits.
		{"the upper rate", blocked, `"sensed_av_ms":150,"pvarp_ms":250`,
			`"settings":[{"field":"pacemaker.max_tracking_rate_bpm","values":[120,130,140,149,150]}],` + fmt.Sprintf(exercise, "140"), "[140] [149] [150]"},
		// PVARP 280 must end before the P at 400: SAV at 150/min up to 120. PAV 200 and SAV
		// 160 lose 200 - shortest: 160 - 40 = 120 with a shortest paced delay of 160 (2 ms off: the ramp comes to 150 within a rounding).
		{"the upper rate with an AV delay that shortens", blocked, `"max_tracking_rate_bpm":150,"sensed_av_ms":160,"pvarp_ms":280,"adaptive_av":{"from_bpm":90,"to_bpm":150,"shortest_ms":100}`,
			`"settings":[{"field":"pacemaker.adaptive_av.shortest_ms","values":[120,150,158,162,180]}],
			"situations":[{"name":"exercise","set":{"span_ms":36000},"interventions":[{"at_ms":3000,"do":"set","field":"heart.sinus.rate_bpm","to":150,"over_ms":15000}]}],
			"must":[{"outcome":"pattern","equal":"1:1"}],"prefer":[{"setting":"pacemaker.adaptive_av.shortest_ms","best":"highest"}]`, "[158] [150] [120]"},
		// A loop needs VA >= PVARP: a P exactly at the end of PVARP is sensed.
		{"PVARP over VA", loop, `"lower_rate_bpm":50,"max_tracking_rate_bpm":100,"sensed_av_ms":200`,
			`"settings":[{"field":"pacemaker.pvarp_ms","values":[250,299,300,301,350]}],"situations":[{"name":"premature beat","vary":{"premature":"rv_apex","after_ms":2000,"from":440,"to":640,"step":100}}],
			"must":[{"outcome":"endless_loop","none_of":["ended","sustained"]}]`, "[301] [350]"},
		// LRI <= 1300: 46.2/min and more.
		{"no long pause", blocked, `"paced_av_ms":150`,
			`"settings":[{"field":"pacemaker.lower_rate_bpm","values":[45,46,47,50]}],"situations":[{"name":"arrest","set":{"heart.sinus.rate_bpm":10}}],
			"must":[{"outcome":"longest_pause_ms","at_most":1300}]`, "[47] [50]"},
	} {
		t.Run(c.name, func(t *testing.T) {
			a, _ := solve(t, problem(t, 16000, c.heart, c.device, c.goals), Settings{})
			var got []string
			for _, f := range a.Found {
				got = append(got, fmt.Sprint(f.Values))
			}
			if s := strings.Join(got, " "); s != c.want {
				t.Errorf("got %s, want %s\n%s", s, c.want, a.Text)
			}
		})
	}
}

// 120 + 305 = 425 ms is longer than 60000 / 150 = 400 ms.
func TestAConflictIsToldWithItsNumbers(t *testing.T) {
	a, _ := solve(t, preset(t, "goals-treadmill-conflict"), Settings{})
	if len(a.Conflicts) != 1 || !a.Conflicts[0].Forms || len(a.Conflicts[0].Goals) != 3 {
		t.Fatalf("%+v", a.Conflicts)
	}
	for _, want := range []string{"cannot hold together", "SAV + PVARP = 120 + 305 = 425 ms is longer than P-P = 60000 / 150 = 400 ms", "PVARP, 265 ms, is not longer than the VA time of 300 ms",
		"the sensed AV delay at 65/min, 90 ms, is shorter than 120 ms"} {
		if !strings.Contains(a.Conflicts[0].Text, want) {
			t.Errorf("%q is not in: %s", want, a.Conflicts[0].Text)
		}
	}
	if r := a.Conflicts[0].Reach[2]; r.Margin.Margin == nil || *r.Margin.Margin != -30 {
		t.Errorf("the AV delay comes to %+v; 90 - 120 = -30 ms", r)
	}
}

// Without a closed form the best that was simulated is told: the rate at rest is the
// sinus rate or the lower rate, 70 at most, less than the 80 asked for.
func TestAConflictWithoutClosedFormTellsTheBest(t *testing.T) {
	a, _ := solve(t, problem(t, 12000, blocked, ``, `"settings":[{"field":"pacemaker.lower_rate_bpm","values":[50,70]}],"situations":[{"name":"rest"}],
		"must":[{"outcome":"v_interval_max_ms","at_most":750},{"outcome":"longest_pause_ms","at_most":3000}]`), Settings{})
	if len(a.Conflicts) != 1 || a.Conflicts[0].Forms || !slices.Equal(a.Conflicts[0].Goals, []int{0}) {
		t.Fatalf("%s", text(t, a.Conflicts))
	}
	// 60000/70 = 857.143, 107.143 over.
	if r := a.Conflicts[0].Reach[0]; r.Value == nil || *r.Value < 857 || *r.Value > 858 || fmt.Sprint(r.Values) != "[70]" || !strings.Contains(r.Text, "At best longest V-V is 857.1 ms, with lower rate 70/min") {
		t.Errorf("%s", text(t, r))
	}
}

// A closed form that excludes never changes what is found or what conflicts.
func TestExclusionByClosedFormsNeverChangesTheAnswer(t *testing.T) {
	excluded, found := 0, 0
	rapid.Check(t, func(t *rapid.T) {
		pick := func(name string, from, to, step int) int {
			return from + step*rapid.IntRange(0, (to-from)/step).Draw(t, name)
		}
		at := pick("sinus", 60, 190, 1)
		device := fmt.Sprintf(`"lower_rate_bpm":%d,"paced_av_ms":%d,"pvab_ms":100`, pick("lower", 40, 100, 10), pick("pav", 100, 250, 10))
		if rapid.Bool().Draw(t, "adaptive") {
			device += fmt.Sprintf(`,"adaptive_av":{"from_bpm":80,"to_bpm":%d,"shortest_ms":%d}`, pick("to", 100, 160, 10), pick("shortest", 40, 200, 10))
		}
		sinus := fmt.Sprintf(`"sinus":{"rate_bpm":%d,"first_ms":%d,"exit":{"theta_ms":200}},"av_node":{"fast":{"ah_ms":null,"va_ms":null}}`, at, pick("first", 100, 900, 37))
		// One goal or two: with more, hardly any combination would be found at all.
		must := []string{`{"outcome":"pattern","in":["as it is"],"equal":"1:1"}`, fmt.Sprintf(`{"outcome":"v_rate_bpm","in":["as it is"],"at_least":%d}`, pick("rate", at-10, at, 1)), `{"outcome":"pattern","equal":"1:1"}`}
		if k := rapid.IntRange(0, 3).Draw(t, "goals"); k < 3 {
			must = must[k : k+1]
		}
		goals := fmt.Sprintf(`"settings":[{"field":"pacemaker.max_tracking_rate_bpm","values":[%d,%d]},{"field":"pacemaker.sensed_av_ms","values":[90,%d]},{"field":"pacemaker.pvarp_ms","values":[150,%d]}],
			"situations":[{"name":"as it is"},{"name":"faster","set":{"heart.sinus.rate_bpm":%d}}],"must":[%s]`,
			max(80, min(198, at+pick("upper", -10, 10, 1))), pick("upper2", 199, 200, 1), pick("sav", 100, 250, 10), pick("pvarp", 200, 400, 10), pick("faster", 100, 200, 3), strings.Join(must, ","))
		file := []byte(fmt.Sprintf(`{"format":"escapement-plan/1","span_ms":%d,"heart":{%s},"pacemaker":{%s},"goals":{%s}}`, pick("span", 2000, 14000, 500), sinus, device, goals))
		answer := func(simulate bool) (*Answer, string) {
			s := rapidSearch(t, file)
			s.Simulate = simulate
			st := s.Begin()
			if err := s.Run(context.Background(), st, Settings{Workers: 1}); err != nil {
				t.Fatal(err)
			}
			a := s.Answer(st, 0)
			b, err := json.Marshal([]any{a.Found, a.Conflicts})
			if err != nil {
				t.Fatal(err)
			}
			return a, string(b)
		}
		a, with := answer(false)
		_, without := answer(true)
		excluded += len(a.Work.Excluded)
		found += a.FoundCount
		if with != without {
			t.Fatalf("%s\nwith    %s\nwithout %s", file, with, without)
		}
	})
	if excluded < 20 || found < 100 {
		t.Errorf("%d bounds applied and %d combinations found: too few to tell", excluded, found)
	}
}

// One worker and eight, budgets of any size, and a state that went through JSON come to
// the same answer.
func TestTheAnswerDoesNotDependOnHowItWasRun(t *testing.T) {
	for _, name := range []string{"goals-treadmill-conflict", "goals-least-ventricular-pacing"} {
		s := preset(t, name)
		a, _ := solve(t, s, Settings{Workers: 1})
		want := text(t, a)
		if a, _ = solve(t, s, Settings{Workers: 8}); text(t, a) != want {
			t.Errorf("%s: eight workers come to\n%s\none to\n%s", name, text(t, a), want)
		}
		st, parts := s.Begin(), 0
		for ; !st.Done(); parts++ {
			if err := s.Run(context.Background(), st, Settings{Workers: 2, Budget: 50}); err != nil {
				t.Fatal(err)
			}
			kept := &State{}
			if err := json.Unmarshal([]byte(text(t, st)), kept); err != nil {
				t.Fatal(err)
			}
			if err := s.Continue(kept); err != nil {
				t.Fatal(err)
			}
			st = kept
		}
		if got := text(t, s.Answer(st, 0)); got != want || parts < 5 {
			t.Errorf("%s: in %d parts\n%s\nin one\n%s", name, parts, got, want)
		}
	}
}

// What is there when the context ends stands, and the rest is run later.
func TestAnInterruptedSearchGoesOn(t *testing.T) {
	s := preset(t, "goals-treadmill-conflict")
	ctx, stop := context.WithCancel(context.Background())
	st := s.Begin()
	err := s.Run(ctx, st, Settings{Workers: 2, Progress: func(done, of int) {
		if done == 20 {
			stop()
		}
	}})
	done, of := st.Progress()
	if !errors.Is(err, context.Canceled) || done < 20 || done > 24 || of != s.Len() {
		t.Fatalf("%d of %d (%v)", done, of, err)
	}
	if err := s.Run(context.Background(), st, Settings{}); err != nil {
		t.Fatal(err)
	}
	want, _ := solve(t, s, Settings{})
	if got := s.Answer(st, 0); text(t, got) != text(t, want) {
		t.Errorf("got\n%s\nwant\n%s", text(t, got), text(t, want))
	}
}

func TestStatesOfOtherSearchesAreRefused(t *testing.T) {
	s := preset(t, "goals-treadmill-conflict")
	other := preset(t, "goals-least-ventricular-pacing").Begin()
	short := s.Begin()
	short.Rows = short.Rows[1:]
	format := s.Begin()
	format.Format = "x"
	row := s.Begin()
	row.Rows[3] = &Row{Combination: 3, Failed: []int{9}}
	for _, c := range []struct {
		name string
		st   *State
		want string
	}{{"another plan", other, "another plan or other goals"}, {"too few rows", short, "83 combinations; allowed: phase 1 to 3 with 84"}, {"another format", format, `format is "x"`}, {"a goal that is not there", row, "goal 9; allowed: 0 to 3"}} {
		t.Run(c.name, func(t *testing.T) {
			if err := s.Continue(c.st); err == nil || !strings.Contains(err.Error(), c.want) {
				t.Errorf("got %v, want %s", err, c.want)
			}
		})
	}
}

// Settings that exclude each other are neither found nor held against the goals.
func TestCombinationsWhosePlanCannotBeAreRefused(t *testing.T) {
	a, _ := solve(t, problem(t, 6000, blocked, ``, `"settings":[{"field":"pacemaker.pvab_ms","values":[100,300]},{"field":"pacemaker.pvarp_ms","values":[250,310]}],
		"situations":[{"name":"rest"}],"must":[{"outcome":"longest_pause_ms","at_most":1500}]`), Settings{})
	var got []string
	for _, f := range a.Found {
		got = append(got, fmt.Sprint(f.Values))
	}
	if s := strings.Join(got, " "); a.Work.Refused != 1 || s != "[100 250] [100 310] [300 310]" {
		t.Errorf("%d refused, found %s", a.Work.Refused, s)
	}
}

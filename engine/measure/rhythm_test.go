package measure

import (
	"encoding/json"
	"slices"
	"strings"
	"testing"

	"escapement/engine/event"
)

// conducts makes a strip with one P a cycle and conducts each with the PR given; 0 drops it in the node, -1 below the His.
func conducts(cycle float64, prs ...float64) *heart {
	h := newHeart(500 + cycle*float64(len(prs)) + 200)
	for i, pr := range prs {
		p := h.p(500 + cycle*float64(i))
		switch {
		case pr > 0:
			h.conduct(p, pr)
		case pr == 0:
			h.dropNode(p)
		default:
			h.dropBelow(p)
		}
	}
	return h
}

// Expected findings follow the 2018 ACC/AHA/HRS definitions (facts read where
// the package says so) and, for alternating Wenckebach, Amat-y-Leon et al. 1975.
func TestRhythm(t *testing.T) {
	for _, c := range []struct {
		name  string
		h     *heart
		want  []string
		level string // of the first AV block finding
		says  string // part of the statement
	}{
		{"normal", conducts(800, 160, 160, 160, 160, 160), []string{"sinus_rhythm"}, "", "Sinus 75/min."},
		{"sinus 50 is no bradycardia", conducts(1200, 160, 160, 160, 160), []string{"sinus_rhythm"}, "", ""},
		{"sinus 49", conducts(1224.5, 160, 160, 160, 160), []string{"sinus_bradycardia"}, "", ""},
		{"sinus 120", conducts(500, 160, 160, 160, 160, 160), []string{"sinus_tachycardia"}, "", ""},
		{"PR 200 is normal", conducts(800, 200, 200, 200, 200), []string{"sinus_rhythm"}, "", ""},
		{"PR 201", conducts(800, 201, 201, 201, 201), []string{"sinus_rhythm", "first_degree_av_block"}, "", ""},
		{"4:3 Wenckebach", conducts(632, 180, 260, 300, 0, 180, 260, 300, 0, 180, 260, 300, 0), []string{"sinus_rhythm", "mobitz_1"}, Nodal,
			"Sinus 95/min, 4:3 AV block with growing PR (180, 260, 300 ms), at the AV node."},
		{"Wenckebach 5:4, 4:3 and 2:1", conducts(700, 180, 260, 300, 320, 0, 180, 260, 300, 0, 180, 0, 180, 260, 300, 0, 180), []string{"sinus_rhythm", "mobitz_1"}, Nodal, ""},
		{"Mobitz II", conducts(800, 160, 160, 160, -1, 160, 160, 160, -1, 160, 160), []string{"sinus_rhythm", "mobitz_2"}, Infranodal, ", below the AV node."},
		{"2:1 below", conducts(800, 160, -1, 160, -1, 160, -1, 160, -1), []string{"sinus_rhythm", "two_to_one_av_block"}, Infranodal, ""},
		{"2:1 in the node", conducts(800, 160, 0, 160, 0, 160, 0, 160, 0), []string{"sinus_rhythm", "two_to_one_av_block"}, Nodal, ""},
		{"3:1", conducts(700, 160, -1, -1, 160, -1, -1, 160, -1, -1), []string{"sinus_rhythm", "advanced_av_block"}, Infranodal, ""},
		{"Wenckebach at 130/min is functional", conducts(461, 180, 260, 300, 0, 180, 260, 300, 0, 180), []string{"sinus_tachycardia", "functional_av_block"}, Nodal, ""},
		{"no conduction at all", conducts(800, 0, 0, 0, 0, 0, 0), []string{"sinus_rhythm", "complete_av_block"}, Nodal, ""},
		{"alternating, two blocked", conducts(700, 160, 0, 200, 0, 240, 0, 0, 160, 0, 200, 0, 240, 0, 0, 160), []string{"sinus_rhythm", "alternating_wenckebach"}, Nodal, ""},
		{"alternating, three blocked", conducts(700, 160, 0, 200, 0, 240, 0, 0, 0, 160, 0, 200, 0, 240, 0, 0, 0, 160), []string{"sinus_rhythm", "alternating_wenckebach"}, Nodal, ""},
		{"first Mobitz I, then 2:1", conducts(700, 180, 260, 300, 0, 180, 260, 300, 0, 180, 0, 180, 0, 180, 0, 180, 0), []string{"sinus_rhythm", "mobitz_1", "two_to_one_av_block"}, Nodal, ""},
		{"conduction ceases", conducts(700, 160, 160, 160, -1, -1, -1, -1, -1), []string{"sinus_rhythm", "complete_av_block"}, Infranodal, ""},
	} {
		r := Of(c.h.log(t), nil)
		if got := slugs(r); !slices.Equal(got, c.want) {
			t.Errorf("%s: got %v, want %v", c.name, got, c.want)
			continue
		}
		if c.says != "" && !strings.HasSuffix(r.Statement, c.says) {
			t.Errorf("%s: got %q, want %q", c.name, r.Statement, c.says)
		}
		for _, f := range r.Findings {
			if len(f.Evidence) == 0 || !strings.Contains(f.Text, "consistent with") {
				t.Errorf("%s: %s has no evidence or does not say consistent with: %q", c.name, f.Slug, f.Text)
			}
			if c.level != "" && f.order == orderBlock && f.Level != c.level {
				t.Errorf("%s: level got %q, want %q", c.name, f.Level, c.level)
			}
		}
	}
}

func TestTwoToOneIsNotTyped(t *testing.T) {
	f := Of(conducts(800, 160, -1, 160, -1, 160, -1, 160, -1).log(t), nil).finding("two_to_one_av_block")
	if f == nil || f.Surface != "undetermined" || f.Level != Infranodal || len(f.Rivals) != 2 {
		t.Errorf("got %+v, want the model's level, no level from the surface and two rivals", f)
	}
}

// Complete block with an escape; the level comes from the blocks, the escape's name from its rate.
func TestEscape(t *testing.T) {
	for _, c := range []struct {
		name     string
		interval float64
		junction bool
		want     string
	}{
		{"junctional 45", 1333, true, "junctional_escape"},
		{"junctional 75", 800, true, "accelerated_junctional_rhythm"},
		{"ventricular 35", 1714, false, "ventricular_escape"},
		{"ventricular 80", 750, false, "accelerated_ventricular_rhythm"},
	} {
		h := newHeart(12000)
		for i := range 14 {
			h.stop(h.p(400+830*float64(i)), "av_fast", event.OneWay, 0)
		}
		for at := 900.0; at < 11500; at += c.interval {
			if c.junction {
				h.escapeJunction(at)
			} else {
				h.pvc(at, false)
			}
		}
		got := slugs(Of(h.log(t), nil))
		want := []string{"sinus_rhythm", "complete_av_block", c.want, "av_dissociation"}
		if !slices.Equal(got, want) {
			t.Errorf("%s: got %v, want %v", c.name, got, want)
		}
	}
}

// A P that meets what an escape left in the node had no opportunity: dissociation, no block.
func TestInterferenceIsNotBlock(t *testing.T) {
	h := newHeart(12000)
	for i := range 11 {
		at := 500 + 1000*float64(i)
		p := h.p(at)
		j := h.fire(at-20, "av_junction")
		h.ventricles(h.along(j, "lower_node", 10))
		h.stop(j, "av_fast", event.PathRefractory, 5)
		h.stop(p, "av_fast", event.PathRefractory, 0)
	}
	got := slugs(Of(h.log(t), nil))
	for _, slug := range []string{"complete_av_block", "advanced_av_block"} {
		if slices.Contains(got, slug) {
			t.Errorf("got %v: %s without opportunity", got, slug)
		}
	}
	if !slices.Contains(got, "av_dissociation") {
		t.Errorf("got %v, want av_dissociation", got)
	}
}

// A sinus P whose wave meets one from the junction inside the atria never comes
// to the node: nothing is blocked there.
func TestWaveMetInTheAtriaIsNotBlock(t *testing.T) {
	h := newHeart(4500)
	for _, at := range []float64{500, 2000, 3500} {
		p := h.along(h.fire(at-60, "sinus"), "sinoatrial", 60)
		if at != 2000 {
			h.conduct(h.along(p, "internodal", 30), 160)
			continue
		}
		j := h.fire(at-60, "av_junction")
		h.ventricles(h.along(j, "lower_node", 10))
		h.along(j, "av_fast", 65)
	}
	if got, want := slugs(Of(h.log(t), nil)), []string{"sinus_bradycardia", "junctional_escape"}; !slices.Equal(got, want) {
		t.Errorf("got %v, want %v", got, want)
	}
}

// Pauses after premature beats (arithmetic of two teaching pages read for the facts).
func TestPrematureBeats(t *testing.T) {
	sinus := func(h *heart, at ...float64) {
		for _, t := range at {
			h.conduct(h.p(t), 160)
		}
	}
	full := newHeart(5000)
	sinus(full, 500, 1300, 2100, 3700, 4500)
	full.pvc(2760, true)
	full.dropNode(full.p(2900))

	reset := newHeart(5000)
	sinus(reset, 500, 1300, 2100, 3600, 4400)
	reset.retro(reset.pvc(2650, false), 150)

	between := newHeart(5000)
	sinus(between, 500, 1300, 2100)
	between.pvc(2500, true)
	between.conduct(between.p(2900), 240)
	sinus(between, 3700, 4500)

	apc := newHeart(5000)
	sinus(apc, 500, 1300, 2100)
	apc.conduct(apc.atrialBeat(2500), 200)
	sinus(apc, 3460, 4260)

	blocked := newHeart(5000)
	sinus(blocked, 500, 1300, 2100)
	blocked.dropNode(blocked.atrialBeat(2420))
	sinus(blocked, 3380, 4180)

	for _, c := range []struct {
		name string
		h    *heart
		want []string
	}{
		{"full", full, []string{"sinus_rhythm", "premature_ventricular", "full_compensatory_pause", "concealed_conduction"}},
		{"reset by retrograde conduction", reset, []string{"sinus_rhythm", "premature_ventricular", "less_than_full_compensatory_pause", "retrograde_conduction"}},
		{"interpolated with concealment", between, []string{"sinus_rhythm", "premature_ventricular", "interpolated_ventricular", "concealed_conduction"}},
		{"atrial", apc, []string{"sinus_rhythm", "premature_atrial"}},
		{"atrial, blocked, no AV block", blocked, []string{"sinus_rhythm", "premature_atrial", "blocked_premature_atrial"}},
	} {
		if got := slugs(Of(c.h.log(t), nil)); !slices.Equal(got, c.want) {
			t.Errorf("%s: got %v, want %v", c.name, got, c.want)
		}
	}
}

// Sinoatrial block by its PP intervals (2018 ACC/AHA/HRS) and pauses above 3 s.
func TestSinoatrial(t *testing.T) {
	exit := func(out ...float64) *heart { // a sinus discharge every 800 ms; time out to the atrium, 0 is blocked
		h := newHeart(700 + 800*float64(len(out)))
		for i, d := range out {
			node := h.fire(440+800*float64(i), "sinus")
			if d == 0 {
				h.stop(node, "sinoatrial", event.PathRefractory, 0)
				continue
			}
			h.conduct(h.along(h.along(node, "sinoatrial", d), "internodal", 30), 160)
		}
		return h
	}
	silent := newHeart(9000)
	for _, at := range []float64{500, 1300, 2100, 5400, 6200, 7000} {
		silent.conduct(silent.p(at), 160)
	}
	gone := newHeart(9000)
	for _, at := range []float64{500, 1300, 2100} {
		gone.conduct(gone.p(at), 160)
	}
	for _, at := range []float64{3400, 4700, 6000, 7300, 8600} {
		gone.escapeJunction(at)
	}
	for _, c := range []struct {
		name string
		h    *heart
		want string
	}{
		{"type I", exit(60, 160, 210, 0, 60, 160, 210, 0, 60, 160), "sa_exit_block_1"},
		{"type II", exit(60, 60, 60, 60, 0, 60, 60, 60), "sa_exit_block_2"},
		{"silent node", silent, "sinus_pause"},
		{"arrest with escape", gone, "sinus_arrest"},
	} {
		got := slugs(Of(c.h.log(t), nil))
		if !slices.Contains(got, c.want) {
			t.Errorf("%s: got %v, want %s among them", c.name, got, c.want)
		}
		for _, s := range []string{"sa_exit_block_1", "sa_exit_block_2", "sinus_pause", "sinus_arrest"} {
			if s != c.want && slices.Contains(got, s) {
				t.Errorf("%s: got %v, %s is wrong", c.name, got, s)
			}
		}
	}
}

func TestIntervals(t *testing.T) {
	h := newHeart(3000)
	h.conduct(h.p(500), 160)
	h.retro(h.pvc(1100, false), 150)
	r := Of(h.log(t), nil)
	get := func(p *float64) float64 {
		if p == nil {
			return -1
		}
		return *p
	}
	// PR 160 = PA 30 + AH 85 + HV 45; H to the bundles 25.
	q := r.Beats[1]
	for _, c := range []struct {
		name      string
		got, want float64
	}{
		{"PR", get(q.PR), 160}, {"AH", get(q.AH), 85}, {"HV", get(q.HV), 45}, {"PA", get(q.PA), 30}, {"H", get(q.H), 25},
		{"RR", get(r.Beats[2].RR), 440}, {"VA", get(r.Beats[3].VA), 150}, {"QRS", get(q.QRS), -1},
	} {
		if c.got != c.want {
			t.Errorf("%s: got %v, want %v", c.name, c.got, c.want)
		}
	}
	if !r.Beats[3].Retrograde || r.Beats[3].From != r.Beats[2].ID || r.Beats[2].To != r.Beats[3].ID {
		t.Errorf("retrograde P: got %+v", r.Beats[3])
	}
}

// Field names that other programs read.
func TestJSONNames(t *testing.T) {
	b, err := json.Marshal(Of(conducts(800, 160, 160, 160).log(t), nil))
	if err != nil {
		t.Fatal(err)
	}
	for _, name := range []string{"beats", "summary", "findings", "statement", "clauses", "t_us", "kind", "pp_ms", "pr_ms", "rr_ms", "pa_ms", "ah_ms", "h_ms", "hv_ms", "va_ms", "qrs_ms", "qt_ms",
		"p_rate_bpm", "v_rate_bpm", "qrs_axis_deg", "p_axis_deg", "p_count", "qrs_count", "conducted_count", "qtc_bazett_ms", "qtc_fridericia_ms", "qtc_framingham_ms", "qtc_hodges_ms", "slug", "text", "evidence"} {
		if !strings.Contains(string(b), `"`+name+`":`) {
			t.Errorf("no field %q", name)
		}
	}
	if !strings.Contains(string(b), `"qrs_ms":null`) {
		t.Error("QRS without leads is not null")
	}
}

func TestEdges(t *testing.T) {
	for _, c := range []struct {
		name string
		h    *heart
	}{
		{"nothing", newHeart(5000)},
		{"one P", func() *heart { h := newHeart(5000); h.p(500); return h }()},
		{"one QRS", func() *heart { h := newHeart(5000); h.pvc(500, false); return h }()},
		{"no P", func() *heart { h := newHeart(9000); h.pvc(500, false); h.pvc(2300, false); h.pvc(4100, true); return h }()},
		{"one beat", conducts(800, 160)},
	} {
		r := Of(c.h.log(t), nil)
		if b, err := json.Marshal(r); err != nil || strings.Contains(string(b), `"evidence":null`) {
			t.Errorf("%s: %v %s", c.name, err, b)
		}
		t.Logf("%s: %s", c.name, r.Statement)
	}
	if r := Of(&event.Log{}, nil); r.Statement == "" {
		t.Error("an empty log says nothing at all")
	}
}

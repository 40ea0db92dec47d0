package measure

import (
	"slices"
	"testing"

	"escapement/engine/event"
	"escapement/engine/field"
	"escapement/engine/sim/simtest"
	"escapement/presets"
)

func preset(t testing.TB, name string) *event.Log { return simtest.Preset(t, name).Log }

// expected is everything that may be said of each preset, in order: a finding
// too many is as wrong as one too few. Definitions as in report.go.
var expected = map[string][]string{
	"normal":                 {"sinus_rhythm"},
	"sinus-bradycardia":      {"sinus_bradycardia"},
	"first-degree-nodal":     {"sinus_rhythm", "first_degree_av_block"},
	"first-degree-long-hv":   {"sinus_rhythm", "first_degree_av_block"},
	"wenckebach-4-3":         {"sinus_rhythm", "mobitz_1"},
	"wenckebach-long":        {"sinus_rhythm", "mobitz_1"},
	"alternating-wenckebach": {"sinus_tachycardia", "alternating_wenckebach"},
	"two-to-one-infra-his":   {"sinus_rhythm", "two_to_one_av_block", RBBB},
	"mobitz-2":               {"sinus_rhythm", "mobitz_2", RBBB},
	"advanced":               {"sinus_rhythm", "advanced_av_block", RBBB},
	"complete-junctional":    {"sinus_rhythm", "complete_av_block", "junctional_escape", "av_dissociation"},
	"complete-ventricular":   {"sinus_rhythm", "complete_av_block", "ventricular_escape", "av_dissociation"},
	"sa-exit-1":              {"sinus_rhythm", "sa_exit_block_1"},
	"sa-exit-2":              {"sinus_rhythm", "sa_exit_block_2"},
	"sinus-arrest":           {"sinus_rhythm", "sinus_arrest", "junctional_escape", "retrograde_conduction"},
	"blocked-apbs":           {"sinus_rhythm", "premature_atrial", "blocked_premature_atrial"},
	"pvc-full-pause":         {"sinus_rhythm", "premature_ventricular", "full_compensatory_pause"},
	"pvc-interpolated":       {"sinus_rhythm", "premature_ventricular", "interpolated_ventricular", "concealed_conduction"},
	"pvc-retrograde":         {"sinus_rhythm", "premature_ventricular", "less_than_full_compensatory_pause", "retrograde_conduction"},
	"rbbb":                   {"sinus_rhythm", RBBB},
	"lbbb":                   {"sinus_rhythm", LBBB},
	"lafb":                   {"sinus_rhythm", LAFB},
	"alternating-bbb":        {"sinus_rhythm", RBBB, LBBB, "alternating_bundle_branch_block"},
	"long-short":             {"sinus_rhythm", "premature_atrial", "aberrant_conduction"},

	// Re-entry.
	"avnrt-typical":       {"av_nodal_reentry", "sinus_rhythm", "premature_atrial"},
	"avrt-orthodromic":    {"orthodromic_reentry", "sinus_rhythm", "premature_atrial"},
	"wpw-sinus":           {"sinus_rhythm", "pre_excitation"},
	"avrt-antidromic":     {"antidromic_reentry", "sinus_rhythm", "premature_atrial", "pre_excitation"},
	"avnrt-overdrive":     {"av_nodal_reentry", "ventricular_overdrive", "sinus_rhythm", "ventricular_stimulation", "premature_atrial", "retrograde_conduction", "fusion_beat"},
	"avrt-overdrive":      {"orthodromic_reentry", "ventricular_overdrive", "sinus_rhythm", "ventricular_stimulation", "premature_atrial", "retrograde_conduction", "fusion_beat"},
	"flutter-2-1":         {"atrial_flutter", "functional_av_block"},
	"atrial-fibrillation": {"atrial_fibrillation", "aberrant_conduction"},
	"wpw-fibrillation":    {"atrial_fibrillation", "pre_excited_fibrillation", "av_reentrant_beat", "concealed_conduction", "pre_excitation"},

	// With a device.
	"vvi-atrial-fibrillation":         {"ventricular_pacing", "atrial_fibrillation", "fusion_beat"},
	"dual-treadmill-two-to-one":       {"upper_rate_two_to_one", "p_synchronous_pacing", "sinus_tachycardia"},
	"dual-one-to-one-to-140":          {"upper_rate_wenckebach", "p_synchronous_pacing", "sinus_tachycardia"},
	"dual-upper-rate-wenckebach":      {"upper_rate_wenckebach", "p_synchronous_pacing", "sinus_tachycardia"},
	"dual-endless-loop":               {"endless_loop_tachycardia", "p_synchronous_pacing", "sinus_rhythm", "premature_ventricular", "retrograde_conduction"},
	"dual-tracked-atrial-tachycardia": {"p_synchronous_pacing", "sinus_rhythm", "atrial_stimulation", "premature_atrial"},
	"dual-sensor-rate":                {"av_sequential_pacing"},
	"dual-loop-kept-off":              {"upper_rate_wenckebach", "upper_rate_two_to_one", "p_synchronous_pacing", "sinus_tachycardia", "retrograde_conduction"},
	"dual-slow-loop":                  {"endless_loop_tachycardia", "p_synchronous_pacing", "sinus_rhythm", "premature_ventricular", "retrograde_conduction"},
	"dual-loop-found":                 {"endless_loop_tachycardia", "p_synchronous_pacing", "sinus_rhythm", "premature_ventricular", "retrograde_conduction"},
	"dual-va-synchrony":               {"repetitive_nonreentrant_va_synchrony", "av_sequential_pacing", "retrograde_conduction", "loss_of_capture"},
	"dual-va-synchrony-night":         {"repetitive_nonreentrant_va_synchrony", "av_sequential_pacing", "retrograde_conduction", "loss_of_capture"},
	"dual-va-synchrony-delayed":       {"av_sequential_pacing", "retrograde_conduction", "loss_of_capture"},
	"dual-locked-p-waves":             {"p_synchronous_pacing", "sinus_tachycardia", "first_degree_av_block", "fusion_beat", "refractory_p_locked"},
	"dual-p-scan":                     {"p_synchronous_pacing", "sinus_rhythm", "premature_atrial"},
	"dual-crosstalk-safety":           {"av_sequential_pacing", "safety_stimulus"},
	"dual-crosstalk-pause":            {"av_sequential_pacing", "complete_av_block", "oversensing", "crosstalk_inhibition"},
	"dual-pvc-after-atrial-stimulus":  {"av_sequential_pacing", "complete_av_block", "premature_ventricular", "functional_non_capture", "pseudofusion", "safety_stimulus"},
	"dual-paced-rate-63":              {"atrial_pacing", "fusion_beat"},
	"dual-atrial-base-long-interval":  {"av_sequential_pacing", "atrial_pacing", "mobitz_2", "fusion_beat"},
	"vvi-hysteresis":                  {"ventricular_pacing", "sinus_rhythm", "advanced_av_block", "av_dissociation", "hysteresis_pause"},
	"vvi-t-wave-sensed":               {"ventricular_pacing", "sinus_rhythm", "complete_av_block", "av_dissociation", "oversensing"},
	"aai-far-field":                   {"atrial_pacing", "oversensing"},
	"dual-far-field-switch":           {"p_synchronous_pacing", "av_sequential_pacing", "ventricular_pacing", "sinus_rhythm", "complete_av_block", "av_dissociation", "mode_switch"},
	"dual-far-field-hidden":           {"p_synchronous_pacing", "sinus_rhythm"},
	"dual-flutter-lock-in":            {"upper_rate_two_to_one", "p_synchronous_pacing", "sinus_rhythm", "atrial_stimulation"},
	"dual-fibrillation-switch":        {"tracked_fibrillation", "p_synchronous_pacing", "ventricular_pacing", "sinus_rhythm", "atrial_fibrillation", "mode_switch"},
	"dual-flutter-switch":             {"upper_rate_two_to_one", "p_synchronous_pacing", "ventricular_pacing", "sinus_rhythm", "atrial_stimulation", "complete_av_block", "av_dissociation", "mode_switch"},
	"vvi-undersensing":                {"ventricular_pacing", "sinus_rhythm", "fusion_beat", "functional_non_capture", "undersensing"},
	"vvi-fusion":                      {"ventricular_pacing", "sinus_rhythm", RBBB, "fusion_beat"},
	"ddi-wandering-pr":                {"av_sequential_pacing", "ventricular_pacing", "sinus_rhythm", "complete_av_block", "av_dissociation"},
	"vdd-slow-sinus":                  {"p_synchronous_pacing", "ventricular_pacing", "sinus_rhythm", "av_dissociation"},
	"magnet-asynchronous":             {"av_sequential_pacing", "sinus_rhythm", "fusion_beat", "mode_switch", "functional_non_capture", "functional_non_capture", "pseudofusion", "stimulus_in_vulnerable_time"},
	"biventricular-lost":              {"p_synchronous_pacing", "sinus_tachycardia", LBBB, "fusion_beat"},
	"dual-longer-av-search":           {"p_synchronous_pacing", "atrial_pacing", "sinus_rhythm", "second_degree_av_block", "fusion_beat"},
	"atrial-pacing-with-backup":       {"av_sequential_pacing", "atrial_pacing", "first_degree_av_block", "second_degree_av_block", "mode_switch"},
	"dual-sensor-above-limit":         {"atrial_pacing", "fusion_beat"},
	"vvi-output-below-threshold":      {"ventricular_pacing", "sinus_rhythm", "complete_av_block", "ventricular_escape", "av_dissociation", "loss_of_capture"},
	"dual-atrial-capture-lost":        {"endless_loop_tachycardia", "av_sequential_pacing", "retrograde_conduction", "loss_of_capture"},
	"vvi-noise-paces":                 {"ventricular_pacing", "sinus_rhythm", "complete_av_block", "av_dissociation", "oversensing", "noise_reversion"},
	"vvi-noise-inhibits":              {"ventricular_pacing", "sinus_rhythm", "complete_av_block", "junctional_escape", "av_dissociation", "oversensing", "noise_reversion"},
	"dual-t-wave-long-pvarp":          {"av_sequential_pacing", "sinus_rhythm", "complete_av_block", "oversensing"},
	"his-pacing":                      {"p_synchronous_pacing", "sinus_rhythm"},
	"left-fascicle-pacing":            {"p_synchronous_pacing", "sinus_rhythm"},
	"his-output-steps":                {"ventricular_pacing", "sinus_rhythm", "complete_av_block", "av_dissociation", "loss_of_capture"},
	"vdd-mechanical-sensing":          {"upper_rate_wenckebach", "upper_rate_two_to_one", "p_synchronous_pacing", "sinus_tachycardia", "complete_av_block"},

	// With a sweep: the strip is one point of it.
	"map-upper-rate":       {"upper_rate_wenckebach", "p_synchronous_pacing", "sinus_tachycardia"},
	"map-endless-loop":     {"endless_loop_tachycardia", "p_synchronous_pacing", "sinus_rhythm", "premature_ventricular", "retrograde_conduction"},
	"map-premature-beat":   {"p_synchronous_pacing", "sinus_rhythm"},
	"map-pacing-site":      {"p_synchronous_pacing", "sinus_rhythm", "fusion_beat"},
	"map-wenckebach-steps": {"atrial_stimulation", "functional_av_block"},

	// With goals: the strip is the plan as it stands.
	"goals-treadmill-conflict":       {"p_synchronous_pacing", "sinus_rhythm"},
	"goals-treadmill-shorter-av":     {"p_synchronous_pacing", "sinus_rhythm"},
	"goals-least-ventricular-pacing": {"av_sequential_pacing"},

	// Whether the definitions apply depends on the rate the preset is given: from
	// 100/min the finding is functional block.
	"two-to-one-nodal": nil,
	// Failing: the criteria of 2009 part III ask for an axis of at least +90 and
	// the model reaches 84.5 degrees, so the preset does not get its name.
	"lpfb": nil,
}

// either lists what is right for the presets without a single answer.
var either = map[string][][]string{
	"two-to-one-nodal": {{"sinus_tachycardia", "functional_av_block"}, {"sinus_rhythm", "two_to_one_av_block"}},
	"lpfb":             {{"sinus_rhythm"}, {"sinus_rhythm", LPFB}},
}

func TestPresets(t *testing.T) {
	leads := field.New()
	for _, e := range presets.List() {
		want, ok := expected[e.Name]
		if !ok {
			t.Errorf("%s: no expected findings are listed for this preset", e.Name)
			continue
		}
		l := preset(t, e.Name)
		r := Of(l, leads.Record(l))
		checkReport(t, l, r)
		got := slugs(r)
		right := slices.Equal(got, want)
		for _, other := range either[e.Name] {
			right = right || slices.Equal(got, other)
		}
		if !right {
			t.Errorf("%s: got %v, want %v\n%s", e.Name, got, want, r.Statement)
		}
	}
}

// The level that the model knows, against the plan that made the block.
func TestPresetLevels(t *testing.T) {
	for _, c := range []struct{ name, slug, want string }{
		{"first-degree-nodal", "first_degree_av_block", Nodal},
		{"first-degree-long-hv", "first_degree_av_block", Infranodal},
		{"wenckebach-4-3", "mobitz_1", Nodal},
		{"wenckebach-long", "mobitz_1", Nodal},
		{"two-to-one-infra-his", "two_to_one_av_block", Infranodal},
		{"mobitz-2", "mobitz_2", Infranodal},
		{"advanced", "advanced_av_block", Infranodal},
		{"complete-junctional", "complete_av_block", Nodal},
		{"complete-ventricular", "complete_av_block", Infranodal},
	} {
		f := Of(preset(t, c.name), nil).finding(c.slug)
		if f == nil || f.Level != c.want {
			t.Errorf("%s: got %+v, want level %s", c.name, f, c.want)
		}
	}
}

// The arithmetic of the group holds on a computed strip: the pauses of the 4:3
// preset are twice P less the increments, to the microsecond, wherever the next
// group begins with the same PR (Friedman et al. 1975).
func TestPresetWenckebachArithmetic(t *testing.T) {
	s := read(preset(t, "wenckebach-4-3"))
	s.judge()
	n := 0
	for _, g := range s.avGroups() {
		if g.open || g.next < 0 || len(g.b) != 1 {
			continue
		}
		n++
		cycle := s.pp(g.b[0])
		group := Group{cycle, s.prs(g.c)}
		pause := s.rr(int(s.p[g.next].to))
		if got, want := pause, group.Pause()+s.pr(g.next)-group.PR[0]; abs(float64(got-want)) > 1 {
			t.Errorf("pause got %v, want %v", got, want)
		}
	}
	if n == 0 {
		t.Error("no whole group on the strip")
	}
}

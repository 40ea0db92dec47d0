package measure

import (
	"slices"
	"strings"
	"testing"

	"escapement/engine/field"
)

// The sentences of the tachycardias, whole: what matters first, nothing twice, and a
// number for what can be counted.
func TestTachycardiaIsSaidFirst(t *testing.T) {
	leads := field.New()
	for _, c := range []struct{ name, want string }{
		{"avnrt-typical", "Typical AV-nodal re-entry 162/min, sinus 75/min, 1 atrial premature beat."},
		{"avrt-orthodromic", "Orthodromic AV re-entry 179/min, sinus 75/min, 1 atrial premature beat."},
		{"avrt-antidromic", "Antidromic AV re-entry 177/min, sinus 75/min, 1 atrial premature beat, pre-excitation."},
		{"wpw-sinus", "Sinus 70/min, pre-excitation."},
		{"avnrt-overdrive", "Typical AV-nodal re-entry 184/min, ventricular train at 295 ms (PPI - TCL 188 ms, SA - VA 147 ms), sinus 90/min, 1 atrial premature beat."},
		{"avrt-overdrive", "Orthodromic AV re-entry 187/min, ventricular train at 295 ms (PPI - TCL 90 ms, SA - VA 49 ms), sinus 90/min, 1 atrial premature beat."},
		{"flutter-2-1", "Atrial flutter 250/min conducted 2:1, ventricles 125/min."},
		{"atrial-fibrillation", "Atrial fibrillation, ventricles 92/min, aberrant conduction in 1 beat."},
		{"wpw-fibrillation", "Atrial fibrillation, ventricles 196/min, pre-excited with a shortest RR of 212 ms."},
		{"dual-fibrillation-switch", "DDD: atrial fibrillation tracked up to the upper rate (V-V 500 to 558 ms), sinus 70/min tracked 1:1 (AV 150 ms), ventricular pacing 60/min, atrial fibrillation, ventricles 77/min, mode change DDD to DDI at 9.0 s (fast atrium)."},
		{"vvi-atrial-fibrillation", "VVI: ventricular pacing 60/min, atrial fibrillation, ventricles 70/min, 3 fusion beats."},
	} {
		l := preset(t, c.name)
		if got := Of(l, leads.Record(l)).Statement; got != c.want {
			t.Errorf("%s:\n got %s\nwant %s", c.name, got, c.want)
		}
	}
}

// The median PR of a re-entrant tachycardia was 365 ms, "high", from P waves that had
// come up: PR is that of P waves from above, so of the sinus beats before it, and a
// flutter or fibrillation wave has none.
func TestPROfATachycardiaIsNotThatOfItsReturningP(t *testing.T) {
	for _, c := range []struct {
		name   string
		lo, hi float64 // 0, 0: none
	}{
		{"avnrt-typical", 155, 170}, {"avnrt-overdrive", 155, 170}, {"avrt-orthodromic", 190, 200}, {"avrt-antidromic", 55, 65},
		{"flutter-2-1", 0, 0}, {"atrial-fibrillation", 0, 0}, {"wpw-fibrillation", 0, 0}, {"vvi-atrial-fibrillation", 0, 0},
	} {
		pr := Of(preset(t, c.name), nil).Summary.PR
		switch {
		case c.hi == 0 && pr != nil:
			t.Errorf("%s: PR %v, want none", c.name, *pr)
		case c.hi > 0 && (pr == nil || *pr < c.lo || *pr > c.hi):
			t.Errorf("%s: PR %v, want %v to %v", c.name, pr, c.lo, c.hi)
		}
	}
}

// HV of antidromic beats was 207 ms, counted from the retrograde His activation of the
// beat before: a His activation before the P does not lead to its QRS.
func TestHVIsNotCountedFromTheBeatBefore(t *testing.T) {
	for _, name := range []string{"avrt-antidromic", "wpw-fibrillation"} {
		for _, b := range Of(preset(t, name), nil).Beats {
			if b.HV != nil && *b.HV > 100 {
				t.Errorf("%s: HV %.0f ms at %v", name, *b.HV, b.T)
			}
		}
	}
}

// P duration and axis of waves of fibrillation, and a QRS rate of 112 beside a
// sentence that said 92: fibrillation has no P wave, and its rate is the mean one.
func TestFibrillationHasNoPWaveAndAMeanRate(t *testing.T) {
	l := preset(t, "atrial-fibrillation")
	r := Of(l, field.New().Record(l))
	s := r.Summary
	if s.P != nil || s.PAxis != nil || s.AH != nil {
		t.Errorf("P %v, axis %v, AH %v; want none", s.P, s.PAxis, s.AH)
	}
	if s.VRate == nil || *s.VRate < 91 || *s.VRate > 93 {
		t.Errorf("QRS rate %v, want 92 as in %q", s.VRate, r.Statement)
	}
	for _, b := range r.Beats {
		if b.PR != nil {
			t.Fatalf("PR %.0f ms of a wave of fibrillation", *b.PR)
		}
	}
}

// What the surface cannot tell apart is named.
func TestRivalsOfTheTachycardias(t *testing.T) {
	for _, c := range []struct{ name, slug, rival string }{
		{"avnrt-typical", "av_nodal_reentry", "junctional tachycardia"},
		{"avrt-orthodromic", "orthodromic_reentry", "atypical re-entry in the AV node"},
		{"avrt-antidromic", "antidromic_reentry", "ventricular tachycardia"},
		{"flutter-2-1", "atrial_flutter", "re-entry in the AV node or over an accessory pathway"},
		{"atrial-fibrillation", "atrial_fibrillation", "atrial flutter with variable conduction"},
		{"wpw-fibrillation", "pre_excited_fibrillation", "atrial fibrillation with bundle branch block"},
	} {
		f := Of(preset(t, c.name), nil).finding(c.slug)
		if f == nil || !slices.Contains(f.Rivals, c.rival) {
			t.Errorf("%s: %+v, want the rival %q", c.name, f, c.rival)
		}
	}
}

// Pre-excitation counted the beats of the antidromic tachycardia and gave a PR of
// fibrillation: it is read in beats from above, and in fibrillation without a PR.
func TestPreExcitationIsReadInBeatsFromAbove(t *testing.T) {
	if f := Of(preset(t, "avrt-antidromic"), nil).finding("pre_excitation"); f == nil || f.Count != 4 || !strings.Contains(f.Text, "PR 60 ms") {
		t.Errorf("antidromic: %+v", f)
	}
	l := preset(t, "wpw-fibrillation")
	if f := Of(l, field.New().Record(l)).finding("pre_excitation"); f == nil || strings.Contains(f.Text+f.Note, "PR under") || strings.Contains(f.Text, "PR ") {
		t.Errorf("fibrillation: %+v", f)
	}
}

// Fibrillation that a device tracked was called Wenckebach behaviour and 2:1 at the
// upper rate: there is no atrial rate to have a ratio with.
func TestTrackedFibrillationHasNoRatio(t *testing.T) {
	r := measured(t, "dual-fibrillation-switch", `"rate_bpm": 170`, `"rate_bpm": 0`)
	if got, want := slugs(r), []string{"tracked_fibrillation", "p_synchronous_pacing", "sinus_rhythm", "atrial_fibrillation"}; !slices.Equal(got, want) {
		t.Errorf("without the switch: got %v, want %v\n%s", got, want, r.Statement)
	}
}

package measure

import (
	"fmt"
	"slices"
	"strings"
	"testing"

	"escapement/engine/field"
	"escapement/engine/plan"
	"escapement/engine/sim"
	"escapement/engine/sim/simtest"
	"escapement/presets"
)

// measured runs a preset, changed by one replacement of its text where old is given.
func measured(t *testing.T, name, old, with string) *Report {
	t.Helper()
	return Of(simtest.Changed(t, name, old, with).Log, nil)
}

// The same ventricular train in two tachycardias, read off the log. PPI - TCL over 115
// and SA - VA over 85 ms in all 30 atypical AV-nodal re-entries and none of 44
// orthodromic ones over septal pathways, trains 10 to 40 ms faster (Michaud et al.,
// JACC 2001;38:1163); corrected for AH under 110 in orthodromic ones
// (Gonzalez-Torrecilla et al. 2006: all but one, and no AV-nodal one). V-A-V in both
// (Knight 1999, from memory).
func TestVentricularOverdriveSeparatesTheCircuits(t *testing.T) {
	for _, c := range []struct {
		preset string
		nodal  bool
	}{{"avnrt-overdrive", true}, {"avrt-overdrive", false}} {
		for _, cycle := range []string{"290", "295", "300"} {
			r := measured(t, c.preset, `"cycle_ms": 295`, `"cycle_ms": `+cycle)
			if len(r.Overdrive) != 1 {
				t.Fatalf("%s: %d trains in a tachycardia", c.preset, len(r.Overdrive))
			}
			o := r.Overdrive[0]
			if faster := *o.TCL - o.CycleMS; faster < 10 || faster > 40 {
				t.Errorf("%s: the train is %.0f ms faster, want 10 to 40", c.preset, faster)
			}
			if !o.Entrained || o.Response != "V-A-V" || o.PPITCL == nil || o.SAVA == nil || o.Corrected == nil {
				t.Fatalf("%s at %s: not entrained: %+v", c.preset, cycle, o)
			}
			if (*o.PPITCL > 115) != c.nodal || (*o.SAVA > 85) != c.nodal || (*o.Corrected >= 110) != c.nodal {
				t.Errorf("%s at %s: PPI - TCL %.0f, SA - VA %.0f, corrected %.0f, nodal %v", c.preset, cycle, *o.PPITCL, *o.SAVA, *o.Corrected, c.nodal)
			}
			if got := strings.Contains(r.finding("ventricular_overdrive").Text, "re-entry in the AV node"); got != c.nodal {
				t.Errorf("%s: %s", c.preset, r.finding("ventricular_overdrive").Text)
			}
		}
	}
}

// A pathway far from the paced site gives a long PPI too: the finding then names it as
// the rival of re-entry in the node.
func TestAFarPathwayIsNamedAsARival(t *testing.T) {
	b, _ := presets.Read("avrt-orthodromic")
	p, err := plan.Decode([]byte(strings.Replace(string(b), `"interventions": [`, `"interventions": [{"at_ms":3600,"do":"train","site":"rv_apex","cycle_ms":316,"count":12},`, 1)))
	if err != nil {
		t.Fatal(err)
	}
	for at := 3600.0; at < 3940; at += 10 {
		p.Interventions[0]["at_ms"] = plan.Value{Number: at}
		l, err := sim.Run(p)
		if err != nil {
			t.Fatal(err)
		}
		r := Of(l, nil)
		if len(r.Overdrive) != 1 || !r.Overdrive[0].Entrained {
			continue
		}
		if o, x := r.Overdrive[0], r.finding("ventricular_overdrive"); *o.PPITCL <= 115 || len(x.Rivals) == 0 {
			t.Errorf("PPI - TCL %.0f, rivals %v", *o.PPITCL, x.Rivals)
		}
		return
	}
	t.Error("no train entrains")
}

// Time from the QRS to the earliest atrial activation: under 70 ms in typical
// AV-nodal re-entry, over it in orthodromic re-entry (70 as in a modern methods section;
// Coumel and Attuel 1974 from memory), and what the surface cannot exclude.
func TestTimesOfTheCircuits(t *testing.T) {
	for _, c := range []struct {
		preset, slug, shows string
		rival               string
	}{
		{"avnrt-typical", "av_nodal_reentry", "hidden in the QRS", "junctional tachycardia"},
		{"avrt-orthodromic", "orthodromic_reentry", "a short-RP tachycardia", "atypical re-entry in the AV node"},
		{"avrt-antidromic", "antidromic_reentry", "", "ventricular tachycardia"},
	} {
		x := measured(t, c.preset, "", "").finding(c.slug)
		if x == nil || !strings.Contains(x.Note, c.shows) || !slices.Contains(x.Rivals, c.rival) {
			t.Errorf("%s: %+v", c.preset, x)
		}
	}
	s := read(preset(t, "avnrt-typical"))
	for i := range s.p {
		if j := s.sister(i); j >= 0 {
			if d := s.p[i].t.Sub(s.v[j].t); d >= throughVentricles {
				t.Errorf("AV-nodal re-entry: earliest atrial activation %v ms after the QRS", d)
			}
		}
	}
	s = read(preset(t, "avrt-orthodromic"))
	for i := range s.p {
		if s.roundBy(i) == orthodromic {
			if d := s.p[i].t.Sub(s.v[s.p[i].from].t); d < throughVentricles {
				t.Errorf("orthodromic re-entry: earliest atrial activation %v ms after the QRS", d)
			}
		}
	}
}

// Pre-excitation on the surface: PR under 120 ms and QRS of 120 ms or more (AHA 2009
// part III, from memory). A left lateral pathway, far from the sinus node, does not
// get there with the same numbers, and the finding says so.
func TestPreExcitationOnTheSurface(t *testing.T) {
	leads := field.New()
	for _, c := range []struct {
		name, heart string
		all         bool
	}{
		{"posteroseptal", `{"atrium":"atrial_septum","ventricle":"lv_posterior"}`, true},
		{"right free wall", `{"atrium":"right_atrium","ventricle":"rv_free_wall","down_ms":60}`, true},
		{"left lateral", `{"atrium":"left_atrium","ventricle":"lv_lateral"}`, false},
	} {
		p, err := plan.Decode(fmt.Appendf(nil, `{"format":"escapement-plan/1","span_ms":5000,"heart":{"pathways":[%s]}}`, c.heart))
		if err != nil {
			t.Fatal(err)
		}
		l, err := sim.Run(p)
		if err != nil {
			t.Fatal(err)
		}
		x := Of(l, leads.Record(l)).finding("pre_excitation")
		if x == nil || x.Count < 5 || (len(x.Rivals) == 0) != c.all {
			t.Errorf("%s: %+v", c.name, x)
		}
	}
}

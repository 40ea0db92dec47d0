package study

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"escapement/engine/event"
	"escapement/engine/plan"
	"escapement/engine/sim"
	"escapement/engine/tick"
)

// plans of a heart driven by its sinus node at 600 ms, the drive at which refractory
// periods are typed, with an extra beat after the sixth P.
const (
	atrial = `{"format":"escapement-plan/1","heart":{"sinus":{"rate_bpm":100},%s"atria":{"erp_ms":%d},"av_node":{"fast":{"erp_ms":%d,"wenckebach_cl_ms":420}%s},"his_purkinje":{"right_bundle":{"erp_ms":200},"left_bundle":{"erp_ms":200}}},"interventions":[{"at_ms":3700,"do":"stimulate","site":"right_atrium"}]}`
	below  = `{"format":"escapement-plan/1","heart":{"sinus":{"rate_bpm":%v},"av_node":{"fast":{"va_ms":%s}}},"interventions":[{"at_ms":%d,"do":"stimulate","site":"rv_apex"}]}`
)

func decode(t *testing.T, file string) *plan.Plan {
	t.Helper()
	p, err := plan.Decode([]byte(file))
	if err != nil {
		t.Fatal(err)
	}
	return p
}

func scan(t *testing.T, file string) *Scan {
	t.Helper()
	s, err := NewScan(decode(t, file), 0)
	if err != nil {
		t.Fatal(err)
	}
	for !s.Run(7) {
	}
	if done, of := s.Progress(); done != of {
		t.Errorf("done %d of %d", done, of)
	}
	return s
}

func first(slug string) string {
	head, _, _ := strings.Cut(slug, "+")
	return head
}

// limit is the coupling from which the outcome's first part is another one.
func limit(t *testing.T, s *Scan, from, to string) int {
	t.Helper()
	var got []string
	all := s.Segments()
	for i, g := range all {
		got = append(got, fmt.Sprintf("%d-%d %s", g.From, g.To, g.Outcome.Slug))
		if i > 0 && first(all[i-1].Outcome.Slug) == from && first(g.Outcome.Slug) == to {
			if g.From-all[i-1].To != 1 {
				t.Errorf("the limit lies between %d and %d, not within 1 ms", all[i-1].To, g.From)
			}
			return g.From
		}
	}
	t.Errorf("no change from %s to %s in %s", from, to, strings.Join(got, ", "))
	return 0
}

// The refractory periods come back as typed: the atrium captures again at its ERP, and
// the longest coupling that does not reach the His bundle is the node's.
func TestScanFindsTheRefractoryPeriodsAsTyped(t *testing.T) {
	for _, c := range []struct {
		name         string
		atrium, node int
	}{
		{"default", 220, 270},
		{"long node", 220, 340},
		{"short atrium", 190, 300},
	} {
		s := scan(t, fmt.Sprintf(atrial, "", c.atrium, c.node, ""))
		if got := limit(t, s, "no_capture", "blocked_node"); got != c.atrium {
			t.Errorf("%s: captures from %d ms, want %d", c.name, got, c.atrium)
		}
		if got := limit(t, s, "blocked_node", "conducted"); math.Abs(float64(got-1-c.node)) > 1 {
			t.Errorf("%s: blocked to %d ms, want the ERP of %d", c.name, got-1, c.node)
		}
	}
}

// A beat that was blocked by so many milliseconds conducts when it comes so much later:
// the limit found is the arithmetic of every blocked beat.
func TestScanAgreesWithWhatEachBlockMissedBy(t *testing.T) {
	// A node that needs 700 ms of recovery upwards, at a sinus cycle of 1200 ms.
	s := scan(t, `{"format":"escapement-plan/1","heart":{"sinus":{"rate_bpm":50},"av_node":{"fast":{"min_ms":70,"alpha_ms":0,"tau_ms":100,"theta_ms":200,
		"up":{"min_ms":90,"alpha_ms":0,"tau_ms":100,"theta_ms":700}}}},"interventions":[{"at_ms":4700,"do":"stimulate","site":"rv_apex"}]}`)
	at := limit(t, s, "blocked_node_up", "conducted_back")
	tried := 0
	for _, p := range s.points {
		// At shorter couplings the right bundle is refractory, and the impulse comes
		// round by the left one, 42 ms later.
		if !strings.HasPrefix(p.o.Slug, "blocked_node_up") || p.ms < 400 {
			continue
		}
		tried++
		if want := p.ms + int(math.Ceil(p.o.MissedBy.MS())); want != at {
			t.Errorf("at %d ms missed by %v: it would conduct from %d, found %d", p.ms, p.o.MissedBy.MS(), want, at)
		}
	}
	if tried < 8 {
		t.Errorf("only %d blocked beats", tried)
	}
}

// Two pathways: at the ERP of the fast one AH jumps by more than 50 ms.
func TestScanShowsTheJumpOfADualPathway(t *testing.T) {
	s := scan(t, fmt.Sprintf(atrial, "", 220, 340, `,"slow":{"min_ms":200,"alpha_ms":150,"tau_ms":150,"theta_ms":150}`))
	fast := limit(t, s, "conducted_slow", "conducted")
	if math.Abs(float64(fast-1-340)) > 1 {
		t.Errorf("the fast pathway conducts from %d ms, its ERP is 340", fast)
	}
	at, by, ok := s.Jump()
	if !ok || at != 330 || by < 50*tick.Millisecond {
		t.Errorf("jump of %v ms at %d ms (%v), want at least 50 from 340 to 330", by.MS(), at, ok)
	}
	if _, _, ok := scan(t, fmt.Sprintf(atrial, "", 220, 340, "")).Jump(); ok {
		t.Error("one pathway shows a jump")
	}
}

// Sinus cycle 720 ms, 80 ms each way through the sinoatrial path, coupling 360: the
// return cycle is 720+160 = 880 and the beats around stand 1240 apart (worked example,
// understandingecg.org/node/779). The node is not reset from 720-160 = 560 on (zone I:
// Strauss et al., Circulation 1973;47:86, from memory).
func TestReturnCycleAndZones(t *testing.T) {
	file := `{"format":"escapement-plan/1","heart":{"sinus":{"rate_bpm":83.33333333,"first_ms":300,"exit":{"min_ms":80}}},"interventions":[{"at_ms":%d,"do":"stimulate","site":"right_atrium"}]}`
	p := 300 + 80 + 3*720 // the fourth P
	o := extra(t, fmt.Sprintf(file, p+360))
	if o.Slug != "conducted+reset" || !strings.Contains(strings.Join(o.Sentences, " "), "comes 880 ms after the extra one") ||
		!strings.Contains(strings.Join(o.Sentences, " "), "200 ms short") { // 1440-1240
		t.Errorf("coupling 360: %s %q", o.Slug, o.Sentences)
	}
	s := scan(t, fmt.Sprintf(file, p+360))
	if got := s.Segments()[len(s.Segments())-2]; !strings.HasSuffix(got.Outcome.Slug, "compensatory") || got.From != 561 {
		t.Errorf("%s from %d ms, want compensatory above 560", got.Outcome.Slug, got.From)
	}
}

func extra(t *testing.T, file string) *Outcome {
	t.Helper()
	p := decode(t, file)
	with, err := sim.Run(p)
	if err != nil {
		t.Fatal(err)
	}
	p.Interventions = nil
	without, err := sim.Run(p)
	if err != nil {
		t.Fatal(err)
	}
	for i := range with.Events {
		if e := &with.Events[i]; e.Kind == event.Stimulus && e.Rule == event.Premature {
			return Extra(with, without, e.ID)
		}
	}
	t.Fatal("no stimulus")
	return nil
}

func TestOutcomesOfAnExtraBeat(t *testing.T) {
	for _, c := range []struct{ name, file, slug string }{
		{"too early in the atrium", fmt.Sprintf(strings.Replace(atrial, "3700", "3460", 1), "", 220, 270, ""), "no_capture"},
		{"a ventricular beat that stays below, slow sinus", fmt.Sprintf(below, 50, "null", 4700), "interpolated"},
		{"a ventricular beat, late", fmt.Sprintf(below, 75, "null", 3330), "compensatory"},
		{"a ventricular beat conducted back", fmt.Sprintf(below, 60, "150", 3900), "conducted_back+reset"},
	} {
		if o := extra(t, c.file); !strings.Contains(o.Slug, c.slug) || o.Text == "" || len(o.Sentences) == 0 || len(o.Events) == 0 {
			t.Errorf("%s: %s, %q, %q", c.name, o.Slug, o.Text, o.Sentences)
		}
	}
}

// An extra beat that a device follows round and round.
func TestAnExtraBeatStartsAnEndlessLoop(t *testing.T) {
	file := `{"format":"escapement-plan/1","heart":{"sinus":{"rate_bpm":58},"av_node":{"fast":{"ah_ms":null,"erp_ms":320,"va_ms":320,"concealed_from":1}}},
	"pacemaker":{"mode":"DDD","lower_rate_bpm":50,"max_tracking_rate_bpm":125,"pvarp_ms":260},"interventions":[{"at_ms":4115,"do":"stimulate","site":"rv_apex"}]}`
	o := extra(t, file)
	if !strings.HasSuffix(o.Slug, "started_loop") {
		t.Errorf("%s: %q", o.Slug, o.Sentences)
	}
}

func TestAPlanWithoutASingleStimulusIsNotScanned(t *testing.T) {
	p := decode(t, `{"format":"escapement-plan/1","interventions":[{"at_ms":3000,"do":"train","site":"his","cycle_ms":400,"count":3}]}`)
	for _, place := range []int{-1, 0, 1} {
		if _, err := NewScan(p, place); err == nil || !strings.Contains(err.Error(), "single stimulus") {
			t.Errorf("place %d: %v", place, err)
		}
	}
}

package sim

import (
	"fmt"
	"testing"

	"escapement/engine/event"
)

// Accessory pathways: what was typed is measured back, and re-entry, its cycle and
// its end come out of sites and paths.

const (
	orthodromic = `"sinus":{"rate_bpm":75},"av_node":{"fast":{"ah_ms":110,"erp_ms":260,"wenckebach_cl_ms":330}}`
	lateral     = `"pathways":[{"atrium":"left_atrium","ventricle":"lv_lateral","down_ms":null,"up_ms":40}]`
	starts      = 300 + 60 + 2*800 + 400 // an atrial premature beat at a coupling of 400
)

// by counts the depolarisations that came over a path in a direction.
func (s strip) by(path string, d event.Dir) int {
	id, n := s.Path(path), 0
	for i := range s.Events {
		if e := &s.Events[i]; e.Kind == event.Activate && e.Path == id && e.Dir == d {
			n++
		}
	}
	return n
}

// Numbers in, numbers out: conduction time and ERP of both directions, by
// extrastimuli at the two ends after a drive of 600 ms.
func TestPathwayNumbersAreMeasuredBack(t *testing.T) {
	const heart = quiet + `,"atria":{"erp_ms":150},"ventricles":{"erp_ms":220},"av_node":{"fast":{"ah_ms":null,"va_ms":null}},` +
		`"pathways":[{"atrium":"left_atrium","ventricle":"lv_lateral","down_ms":45,"down_erp_ms":310,"up_ms":35,"up_erp_ms":270}]`
	for _, c := range []struct {
		from, to    string
		dir         event.Dir
		time, limit float64
	}{
		{"left_atrium", "lv_lateral", event.Down, 45, 310},
		{"lv_lateral", "left_atrium", event.Up, 35, 270},
	} {
		driven := func(extra float64) strip { return play(t, 9000, heart, train(500, c.from, 600, 8, extra)) }
		s := driven(400)
		near(t, c.from+" conduction time", s.times(c.to)[3]-s.times(c.from)[3], c.time, exact)
		erp := threshold(230, 400, 0.1, func(x float64) bool { return driven(x).by("pathway_1", c.dir) == 9 })
		near(t, c.from+" ERP", erp, c.limit, exact)
	}
}

// Null closes one direction: a concealed pathway leaves the sinus beat as it is, and
// one that conducts only downwards brings no impulse back.
func TestAPathwayMayConductOneWay(t *testing.T) {
	const end = `"pathways":[{"atrium":"left_atrium","ventricle":"lv_lateral",%s}]`
	for _, c := range []struct {
		name, field string
		down, up    bool
	}{{"both", `"down_ms":30`, true, true}, {"concealed", `"down_ms":null`, false, true}, {"down only", `"up_ms":null`, true, false}} {
		s := play(t, 3000, `"sinus":{"rate_bpm":60},`+fmt.Sprintf(end, c.field))
		if got := s.by("pathway_1", event.Down) > 0; got != c.down {
			t.Errorf("%s: conducts down %v, want %v", c.name, got, c.down)
		}
		s = play(t, 3000, quiet+`,"av_node":{"fast":{"ah_ms":null,"va_ms":null}},`+fmt.Sprintf(end, c.field), stimulus(1000, "rv_apex"))
		if got := s.by("pathway_1", event.Up) > 0; got != c.up {
			t.Errorf("%s: conducts up %v, want %v", c.name, got, c.up)
		}
	}
}

// tachycardia is the cycle of a sustained tachycardia, in ms: the last whole cycles
// of a site must be equal and short.
func (s strip) tachycardia(site string) float64 {
	s.t.Helper()
	d := diffs(s.times(site))
	n := len(d)
	if n < 8 || d[n-1] > 500 || d[n-1]-d[n-4] > 2 || d[n-4]-d[n-1] > 2 {
		s.t.Fatalf("no sustained tachycardia at %s: %.0f", site, d)
	}
	return d[n-1]
}

// A premature atrial beat starts orthodromic re-entry over a concealed left lateral
// pathway. Block of the left bundle, on the pathway's side, lengthens its cycle by
// 35 ms or more, block of the right one does not (Coumel and Attuel 1974, Kerr 1983,
// from memory).
func TestIpsilateralBundleBlockLengthensOrthodromicReentry(t *testing.T) {
	cycle := func(bundle string) float64 {
		s := play(t, 10000, orthodromic+","+lateral+`,"his_purkinje":{`+bundle+`}`, stimulus(starts, "right_atrium"))
		if s.by("pathway_1", event.Up) < 15 {
			t.Fatalf("%s: %d impulses over the pathway", bundle, s.by("pathway_1", event.Up))
		}
		return s.tachycardia("his")
	}
	plain, left, right := cycle(""), cycle(`"left_bundle":null`), cycle(`"right_bundle":null`)
	if left-plain < 35 {
		t.Errorf("left bundle branch block lengthens the cycle by %.1f ms, want at least 35", left-plain)
	}
	near(t, "cycle with right bundle branch block", right, plain, exact)
}

// Block of the AV node (as by adenosine) ends the tachycardia with a P that does not
// conduct; a ventricular beat that finds the pathway in time ends it too.
func TestOrthodromicReentryEnds(t *testing.T) {
	heart := orthodromic + "," + lateral
	s := play(t, 9000, heart, stimulus(starts, "right_atrium"), `{"at_ms":5000,"do":"set","field":"heart.av_node.fast.ah_ms","to":null}`, `{"at_ms":5800,"do":"set","field":"heart.av_node.fast.ah_ms","to":110}`)
	if n := s.by("pathway_1", event.Up); n < 5 {
		t.Fatalf("%d turns only", n)
	}
	for _, x := range s.times("his") {
		if x > 5100 && x < 5800 {
			t.Errorf("a His activation at %.0f although the node is blocked", x)
		}
	}
	if d := diffs(s.times("his")); d[len(d)-1] < 600 {
		t.Errorf("the tachycardia goes on: %.0f", d)
	}
	ended := 0
	for at := 5000.0; at < 5340; at += 10 {
		d := diffs(play(t, 9000, heart, stimulus(starts, "right_atrium"), stimulus(at, "lv_lateral")).times("his"))
		if d[len(d)-1] > 600 {
			ended++
		}
	}
	if ended == 0 || ended > 25 {
		t.Errorf("%d of 34 ventricular beats over one cycle end the tachycardia, want some", ended)
	}
}

// The pathway taken away by an intervention (both directions null) ends it as well.
func TestASetMayCloseAPathway(t *testing.T) {
	s := play(t, 9000, orthodromic+","+lateral, stimulus(starts, "right_atrium"), `{"at_ms":5000,"do":"set","field":"heart.pathways[0].up_ms","to":null}`)
	before, after := 0, 0
	id := s.Path("pathway_1")
	for i := range s.Events {
		if e := &s.Events[i]; e.Kind == event.Activate && e.Path == id {
			if e.T.MS() < 5050 {
				before++
			} else {
				after++
			}
		}
	}
	if before < 5 || after > 0 {
		t.Errorf("%d turns before, %d after the pathway was closed", before, after)
	}
}

// A pathway that conducts down takes the beat before the node: the QRS begins one
// conduction time after the atrial end, and the impulse of the node meets it.
func TestPreExcitation(t *testing.T) {
	s := play(t, 4000, `"sinus":{"rate_bpm":70},"pathways":[{"atrium":"atrial_septum","ventricle":"lv_posterior"}]`)
	for i, x := range s.times("atrial_septum") {
		near(t, "septum to posterior wall", s.times("lv_posterior")[i]-x, 30, exact)
	}
	if n := s.by("pathway_1", event.Up); n != 0 {
		t.Errorf("%d beats came back over the pathway in sinus rhythm", n)
	}
}

// A bystander sets nothing: with a pathway that only conducts down, AV-nodal re-entry
// goes on at the same cycle, and what comes over the pathway finds the ventricles
// depolarised already, because the atria are reached at the same time as they.
func TestABystanderDoesNotSetTheCycle(t *testing.T) {
	run := func(more string) strip {
		return play(t, 10000, nodal+more, stimulus(300+60+2*800+290, "right_atrium"))
	}
	plain := run("")
	with := run(`,"pathways":[{"atrium":"right_atrium","ventricle":"rv_free_wall","down_ms":60,"down_erp_ms":260,"up_ms":null}]`)
	near(t, "cycle", with.tachycardia("atrial_septum"), plain.tachycardia("atrial_septum"), exact)
	if n := with.blocks("pathway_1", event.Down, event.SiteRefractory); n < 10 {
		t.Errorf("%d beats over the bystander meet a refractory ventricle", n)
	}
}

// nodal has two pathways in the node and re-entry between them.
const nodal = `"sinus":{"rate_bpm":75},"av_node":{"fast":{"ah_ms":80,"erp_ms":360,"wenckebach_cl_ms":420,"va_ms":190,"concealed_from":1},"slow":{"min_ms":260,"alpha_ms":120,"tau_ms":150,"theta_ms":50}}`

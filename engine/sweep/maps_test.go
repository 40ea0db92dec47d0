package sweep

import (
	"fmt"
	"math"
	"testing"
)

// The map of endless loops, PVARP by VA time: a loop runs where the P that comes up is
// not in PVARP, VA >= PVARP (Alasti 2018, read), with the cycle of the longer of MTRI
// and VA + SAV (cases of loops below the upper rate, abstract read; derived, stepped).
// A signal exactly at the end of a window is sensed. Complete block downwards; one
// ventricular premature beat begins the loop. SAV 200 and an upper rate of 100/min put
// the change from the upper rate to below it at a VA of 400.
func TestLoopMap(t *testing.T) {
	g := grid(t, 12000, `"sinus":{"rate_bpm":60,"first_ms":440},"av_node":{"fast":{"ah_ms":null,"erp_ms":370,"concealed_from":1}},
		"his_purkinje":{"right_bundle":{"erp_ms":200,"erp_per_cycle":0},"left_bundle":{"erp_ms":200,"erp_per_cycle":0}}`,
		`{"mode":"DDD","lower_rate_bpm":50,"max_tracking_rate_bpm":100,"sensed_av_ms":200,"pvab_ms":100}`, `{"at_ms":3050,"do":"stimulate","site":"rv_apex"}`,
		`"x":{"field":"pacemaker.pvarp_ms","from":200,"to":445,"step":5},"y":{"field":"heart.av_node.fast.va_ms","from":200,"to":440,"step":10},"outcomes":["endless_loop","loop_cycle_ms"]`)
	table := all(t, g, Settings{})
	loops, below := 0, 0
	for p := range g.Len() {
		at := g.At(p)
		pvarp, va := at[0].Number, at[1].Number
		want := "none"
		if va >= pvarp {
			want = "sustained"
		}
		if got := table.get(t, p, "endless_loop").Word(); got != want {
			t.Errorf("PVARP %v, VA %v: loop %s, want %s", pvarp, va, got, want)
			continue
		}
		if want == "none" {
			continue
		}
		loops++
		cycle := max(600, va+200)
		if cycle > 600 {
			below++
		}
		if got := table.get(t, p, "loop_cycle_ms").Mean; math.Abs(got-cycle) > 0.01 {
			t.Errorf("PVARP %v, VA %v: cycle %v, want %v", pvarp, va, got, cycle)
		}
	}
	if loops < 300 || below < 50 {
		t.Errorf("%d loops, %d below the upper rate: too few to tell", loops, below)
	}
}

// The map of non-reentrant VA synchrony, lower rate by VA time: it runs where the P
// that comes up is in PVARP, VA < PVARP, and the atrial stimulus meets the atrium
// before it has recovered, LRI - PAV - VA < atrial ERP (Heart Rhythm 2016;13:1739,
// read; inequality derived, stepped). A stimulus at the very end of the refractory
// period captures.
func TestSynchronyMap(t *testing.T) {
	const pav, erp = 300.0, 230.0
	for _, pvarp := range []float64{260, 300} {
		g := grid(t, 16000, still+`,"atria":{"erp_ms":230,"erp_per_cycle":0},"av_node":{"fast":{"ah_ms":null,"erp_ms":500,"concealed_from":1}}`,
			fmt.Sprintf(`{"mode":"DDD","paced_av_ms":%g,"pvarp_ms":%g}`, pav, pvarp), `{"at_ms":3500,"do":"lose_capture","channel":"A","for_ms":1000}`,
			`"x":{"field":"pacemaker.lower_rate_bpm","from":60,"to":90,"step":1},"y":{"field":"heart.av_node.fast.va_ms","from":200,"to":300,"step":5},"outcomes":["va_synchrony"]`)
		table := all(t, g, Settings{})
		seen := map[string]int{} // counted only
		for p := range g.Len() {
			at := g.At(p)
			rate, va := at[0].Number, at[1].Number
			want := "none"
			if va < pvarp && 60000/rate-pav-va < erp {
				want = "sustained"
			}
			seen[want]++
			if got := table.get(t, p, "va_synchrony").Word(); got != want {
				t.Errorf("PVARP %v, lower rate %v, VA %v: %s, want %s", pvarp, rate, va, got, want)
			}
		}
		if seen["none"] < 100 || seen["sustained"] < 100 {
			t.Errorf("PVARP %v: %v: too few to tell", pvarp, seen)
		}
	}
}

// The map of 2:1 lock-in, AV delay by PVAB at a flutter of 240 ms: no mode switch where
// AV + PVAB is longer than the cycle (Goethals 2003, read; Strohmer 2006, read).
func TestFlutterMap(t *testing.T) {
	g := grid(t, 24000, still+`,"atria":{"erp_ms":160},`+noAV,
		`{"mode":"DDD","max_tracking_rate_bpm":130,"pvarp_ms":300,"mode_switch":{"rate_bpm":170}}`, `{"at_ms":2000,"do":"train","site":"right_atrium","cycle_ms":240,"count":90}`,
		`"x":{"field":"pacemaker.sensed_av_ms","from":80,"to":180,"step":5},"y":{"field":"pacemaker.pvab_ms","from":50,"to":200,"step":5},"outcomes":["mode_switches","v_rate_bpm"]`)
	table := all(t, g, Settings{})
	locked := 0
	for p := range g.Len() {
		at := g.At(p)
		av, pvab := at[0].Number, at[1].Number
		got := table.get(t, p, "mode_switches").Mean
		if av+pvab > 240 {
			locked++
		}
		if want := av+pvab > 240; (got == 0) != want {
			t.Errorf("AV %v, PVAB %v: %v mode switches; lock-in: %v", av, pvab, got, want)
		}
	}
	if locked < 100 || locked > g.Len()-100 {
		t.Errorf("%d of %d points are locked in: too few to tell", locked, g.Len())
	}
}

// The staircase of the exponential curve AV = 100 + 300 exp(-r/120), theta 150
// (parameters illustrative, consequences exact; form: Shrier et al., Circulation
// 1987;76:1196): going down, each ratio is first seen at the cycle of the table, on a
// grid of 0.25 ms.
func TestWenckebachStaircase(t *testing.T) {
	if testing.Short() {
		t.Skip("a thousand strips of a minute")
	}
	g := grid(t, 60000, still+`,"atria":{"erp_ms":20,"erp_per_cycle":0},"av_node":{"fast":{"min_ms":100,"alpha_ms":300,"tau_ms":120,"theta_ms":150,"up":null}},
		"his_purkinje":{"right_bundle":{"erp_ms":50,"erp_per_cycle":0},"left_bundle":{"erp_ms":50,"erp_per_cycle":0}},"ventricles":{"erp_ms":50,"erp_per_cycle":0}`,
		`null`, `{"at_ms":500,"do":"train","site":"right_atrium","cycle_ms":300,"count":500}`,
		`"x":{"field":"interventions[0].cycle_ms","from":138,"to":337,"step":0.25},"outcomes":["pattern"]`)
	table := all(t, g, Settings{})
	first := map[string]float64{} // looked up only
	for p := range g.Len() {
		first[settledRatio(t, table, p)] = g.At(p)[0].Number // later ones are longer
	}
	for _, c := range []struct {
		ratio string
		cycle float64
	}{{"14:13", 335.75}, {"9:8", 334.5}, {"7:6", 332.75}, {"6:5", 331}, {"5:4", 328}, {"4:3", 321.5}, {"3:2", 306.5}, {"7:5", 307},
		{"8:5", 266.5}, {"5:3", 266}, {"7:4", 260.25}, {"2:1", 259.75}, {"5:2", 156}, {"3:1", 138.5}} {
		if got := first[c.ratio]; got != c.cycle {
			t.Errorf("%s is first seen at %v, want %v", c.ratio, got, c.cycle)
		}
	}
	if got := settledRatio(t, table, g.Len()-1); got != "1:1" {
		t.Errorf("at 337 ms: %s, want 1:1", got)
	}
}

package sweep

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"escapement/engine/plan"
)

const quickExit = `"exit":{"theta_ms":100}`

// Every boundary that halving finds lies within its tolerance of the closed form, and
// no closed form is left without one. Sources stand with the forms in package pacer.
func TestBoundariesLieOnTheirClosedForms(t *testing.T) {
	loop := `"sinus":{"rate_bpm":60,"first_ms":440},"av_node":{"fast":{"ah_ms":null,"erp_ms":370,"va_ms":300,"concealed_from":1}},
		"his_purkinje":{"right_bundle":{"erp_ms":200,"erp_per_cycle":0},"left_bundle":{"erp_ms":200,"erp_per_cycle":0}}`
	const ddd = `{"mode":"DDD","lower_rate_bpm":50,"max_tracking_rate_bpm":100,"sensed_av_ms":200}`
	synchrony := still + `,"atria":{"erp_ms":230,"erp_per_cycle":0},"av_node":{"fast":{"ah_ms":null,"erp_ms":500,"va_ms":250,"concealed_from":1}}`
	const pvc, lost = `{"at_ms":3050,"do":"stimulate","site":"rv_apex"}`, `{"at_ms":3500,"do":"lose_capture","channel":"A","for_ms":1000}`
	const train = `{"at_ms":2000,"do":"train","site":"right_atrium","cycle_ms":240,"count":90}`
	const flutter = `{"mode":"DDD","max_tracking_rate_bpm":130,"pvarp_ms":300,"sensed_av_ms":126,"mode_switch":{"rate_bpm":170}}`
	half := 0.5
	for _, c := range []struct {
		name                   string
		span                   float64
		heart, device, then, x string
		q                      Question
		want                   map[string]float64
	}{
		{"the upper rate: 1:1, the band by its steps, 2:1", 120000, `"sinus":{` + quickExit + `},"atria":{"erp_ms":100,"erp_per_cycle":0},` + noAV, `{}`, ``,
			`"field":"heart.sinus.rate_bpm","from":100,"to":170,"step":1`, Question{Outcome: "pattern", Tolerance: 0.05},
			// TARP 400, MTRI 500: 60000 (k+1) / (400 + 500 k).
			map[string]float64{"two_to_one": 150, "wenckebach_4:3": 133.333, "wenckebach_5:4": 128.571, "wenckebach_6:5": 126.316, "wenckebach_7:6": 125}},
		// A row of a hundred P waves and more does not repeat on a strip; the AV delay grows all the same.
		{"the end of 1:1 by the AV delay", 20000, `"sinus":{` + quickExit + `},` + noAV, `{}`, ``,
			`"field":"heart.sinus.rate_bpm","from":100,"to":130,"step":5`, Question{Outcome: "av_max_ms", From: ptr(150.01)}, map[string]float64{"one_to_one": 120}},
		{"the loop by PVARP", 12000, loop, ddd, pvc, `"field":"pacemaker.pvarp_ms","from":200,"to":400,"step":20`, Question{Outcome: "endless_loop", Tolerance: 0.1}, map[string]float64{"loop": 300}},
		{"the loop by VA", 12000, loop, ddd, pvc, `"field":"heart.av_node.fast.va_ms","from":200,"to":400,"step":20`, Question{Outcome: "endless_loop"}, map[string]float64{"loop": 250}},
		{"2:1 by PVARP", 20000, `"sinus":{"rate_bpm":125},` + noAV, `{"max_tracking_rate_bpm":120}`, ``, `"field":"pacemaker.pvarp_ms","from":300,"to":400,"step":10`, Question{Outcome: "pattern"}, map[string]float64{"two_to_one": 330}},
		{"2:1 by AV delay", 20000, `"sinus":{"rate_bpm":125},` + noAV, `{"max_tracking_rate_bpm":120,"pvarp_ms":300}`, ``, `"field":"pacemaker.sensed_av_ms","from":150,"to":250,"step":10`, Question{Outcome: "pattern"}, map[string]float64{"two_to_one": 180}},
		{"1:1 by the upper rate", 40000, `"sinus":{"rate_bpm":125},` + noAV, `{}`, ``, `"field":"pacemaker.max_tracking_rate_bpm","from":121,"to":130,"step":1`, Question{Outcome: "v_interval_max_ms", From: ptr(480.01)}, map[string]float64{"one_to_one": 125}},
		{"synchrony by the lower rate", 16000, synchrony, `{"mode":"DDD","paced_av_ms":300,"pvarp_ms":300}`, lost, `"field":"pacemaker.lower_rate_bpm","from":60,"to":90,"step":5`, Question{Outcome: "va_synchrony"}, map[string]float64{"synchrony": 76.923}},
		{"synchrony by the AV delay", 16000, synchrony, `{"mode":"DDD","lower_rate_bpm":75,"pvarp_ms":300}`, lost, `"field":"pacemaker.paced_av_ms","from":300,"to":360,"step":10`, Question{Outcome: "va_synchrony"}, map[string]float64{"synchrony": 320}},
		{"flutter by PVAB", 24000, still + `,"atria":{"erp_ms":160},` + noAV, flutter, train, `"field":"pacemaker.pvab_ms","from":50,"to":200,"step":25`, Question{Outcome: "mode_switches", From: &half}, map[string]float64{"flutter_hidden": 114}},
	} {
		t.Run(c.name, func(t *testing.T) {
			g := grid(t, c.span, c.heart, c.device, c.then, `"x":{`+c.x+`}`)
			found, alone, err := g.NewWorker().Boundaries(context.Background(), c.q)
			if err != nil {
				t.Fatal(err)
			}
			got := map[string]float64{} // looked up only
			for _, b := range found {
				if b.Form != nil {
					got[b.Form.Name] = b.Form.Value
					if b.Form.Off > 0.001 {
						t.Errorf("%s to %s at %v to %v: %v off %s", b.Before, b.After, b.Low, b.High, b.Form.Off, b.Form.Name)
					}
				}
			}
			for _, f := range alone {
				if _, wanted := c.want[f.Name]; wanted {
					t.Errorf("%s at %v: no boundary there; found %+v", f.Name, f.Value, found)
				}
			}
			for name, want := range c.want {
				if math.Abs(got[name]-want) > 0.001 {
					t.Errorf("%s: boundary at %v, want %v; found %+v", name, got[name], want, found)
				}
			}
		})
	}
}

func ptr(x float64) *float64 { return &x }

// The edge of the 1:1 band of the exponential curve: theta + f(theta) = 335.95 (facts
// derived from Shrier 1987), and 2:1 to 0.25 ms of the table, by halving. There is no
// device, so no closed form stands beside them.
func TestBoundariesOfTheCurve(t *testing.T) {
	g := grid(t, 90000, still+`,"atria":{"erp_ms":20,"erp_per_cycle":0},"av_node":{"fast":{"min_ms":100,"alpha_ms":300,"tau_ms":120,"theta_ms":150,"up":null}},
		"his_purkinje":{"right_bundle":{"erp_ms":50,"erp_per_cycle":0},"left_bundle":{"erp_ms":50,"erp_per_cycle":0}},"ventricles":{"erp_ms":50,"erp_per_cycle":0}`,
		`null`, `{"at_ms":500,"do":"train","site":"right_atrium","cycle_ms":300,"count":500}`,
		`"x":{"field":"interventions[0].cycle_ms","values":[200,258,262,337]}`)
	found, _, err := g.NewWorker().Boundaries(context.Background(), Question{Outcome: "pattern", Tolerance: 0.05})
	if err != nil || len(found) < 4 {
		t.Fatalf("%+v (%v)", found, err)
	}
	if b := found[0]; b.Before != "2:1" || b.Low < 259.75-0.25 || b.High > 260 {
		t.Errorf("2:1 ends at %+v, want 259.75 to 260", b)
	}
	if b := found[len(found)-1]; b.After != "1:1" || math.Abs(b.High-335.95) > 0.25 {
		t.Errorf("1:1 begins at %+v, want 335.95", b)
	}
}

func TestQuestionsThatCannotBeAnswered(t *testing.T) {
	g := grid(t, 2000, noAV, `{}`, ``, `"x":{"field":"pacemaker.mode","values":["DDD","VVI"]},"y":{"field":"pacemaker.pvarp_ms","values":[200,300]},"outcomes":["pattern","v_rate_bpm","findings"]`)
	for _, c := range []struct {
		name string
		q    Question
		want string
	}{
		{"an outcome that was not asked for", Question{Outcome: "endless_loop", Along: 1}, `sweep.outcomes: "endless_loop"`},
		{"a number without a limit", Question{Outcome: "v_rate_bpm", Along: 1}, `sweep.outcomes: "v_rate_bpm"`},
		{"many words", Question{Outcome: "findings", Along: 1}, `sweep.outcomes: "findings"`},
		{"along words", Question{Outcome: "pattern"}, "sweep.x: pacemaker.mode; allowed: a number"},
		{"a third axis", Question{Outcome: "pattern", Along: 2}, "an axis to look along"},
		{"a value too far", Question{Outcome: "pattern", Along: 1, At: 2}, "sweep.x: value 2; allowed: 0 to 1"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, _, err := g.NewWorker().Boundaries(context.Background(), c.q)
			var ds plan.Diagnoses
			if !errors.As(err, &ds) || !strings.Contains(err.Error(), c.want) {
				t.Errorf("got  %v\nwant %s", err, c.want)
			}
		})
	}
}

package plan

import (
	"testing"

	"escapement/engine/pacer"
	"escapement/engine/tick"
)

func TestPatientIsWhatThePlanSays(t *testing.T) {
	for _, c := range []struct {
		name, plan string
		want       pacer.Patient
	}{
		{"healthy", `}`, pacer.Patient{PP: 800 * tick.Millisecond, VA: 210 * tick.Millisecond, AtrialERP: 220 * tick.Millisecond}},
		{"no conduction back", `,"heart":{"sinus":{"rate_bpm":100},"av_node":{"fast":{"va_ms":null}}}}`,
			pacer.Patient{PP: 600 * tick.Millisecond, AtrialERP: 220 * tick.Millisecond}},
		{"VA by a curve is not known", `,"heart":{"av_node":{"fast":{"min_ms":70,"alpha_ms":100,"tau_ms":120,"theta_ms":250}}}}`,
			pacer.Patient{PP: 800 * tick.Millisecond, AtrialERP: 220 * tick.Millisecond}},
		{"flutter by the faster of a focus and a train", `,"heart":{"atria":{"erp_ms":150},"foci":[{"site":"left_atrium","rate_bpm":240},{"site":"rv_apex","rate_bpm":300},{"site":"right_atrium","rate_bpm":150}]},
			"interventions":[{"at_ms":0,"do":"train","site":"right_atrium","cycle_ms":240,"count":9}]}`,
			pacer.Patient{PP: 800 * tick.Millisecond, VA: 210 * tick.Millisecond, AtrialERP: 150 * tick.Millisecond, Flutter: 240 * tick.Millisecond}},
		{"signals of the leads", `,"pacemaker":{"leads":{"far_field_ms":110,"t_wave_ms":330,"crosstalk_ms":40}}}`,
			pacer.Patient{PP: 800 * tick.Millisecond, VA: 210 * tick.Millisecond, AtrialERP: 220 * tick.Millisecond, FarField: 110 * tick.Millisecond, TWave: 330 * tick.Millisecond, Cross: 40 * tick.Millisecond}},
	} {
		p, err := Decode([]byte(head + c.plan))
		if err != nil {
			t.Fatalf("%s: %v", c.name, err)
		}
		c.want.ERPSlope, c.want.ERPCycle, c.want.ERPLongest = 0.155, 600*tick.Millisecond, tick.Second
		if got := p.Patient(); got != c.want {
			t.Errorf("%s: got %+v, want %+v", c.name, got, c.want)
		}
	}
}

package plan

import (
	"strings"
	"testing"
)

const swept = head + `,"heart":{"foci":[{"site":"his"}]},"pacemaker":{},"interventions":[{"at_ms":900,"do":"stimulate","site":"rv_apex"},{"at_ms":10,"do":"set","field":"heart.sinus.rate_bpm","to":90}],"sweep":`

func TestASweepIsReadAndWritten(t *testing.T) {
	for _, c := range []struct{ name, sweep, want string }{
		{"a range", `{"x":{"field":"heart.sinus.rate_bpm","from":60,"to":60.35,"step":0.1}}`, "60 60.1 60.2 60.3"},
		{"the last step falls on the end", `{"x":{"field":"pacemaker.pvarp_ms","from":200,"to":201,"step":0.1}}`, "200 200.1 200.2 200.3 200.4 200.5 200.6 200.7 200.8 200.9 201"},
		{"a list of words", `{"x":{"field":"pacemaker.leads.ventricular.site","values":["rv_apex","his"]},"seeds":3}`, "rv_apex his"},
		{"modes", `{"x":{"field":"pacemaker.mode","values":["DDD","VVI"]},"seeds":[7,9]}`, "DDD VVI"},
		{"null among numbers", `{"x":{"field":"heart.av_node.fast.ah_ms","values":[80,null]}}`, "80 null"},
		{"a part of the heart", `{"x":{"field":"heart.his_purkinje.right_bundle","values":["default",null]}}`, "default null"},
		{"a switch", `{"x":{"field":"pacemaker.safety_stimulus","values":[true,false]}}`, "true false"},
		{"a drop pattern", `{"x":{"field":"heart.av_node.fast.drop","values":["3:2","10%"]}}`, "3:2 10%"},
		{"an item", `{"x":{"field":"interventions[0].at_ms","from":1,"to":3,"step":1},"y":{"field":"heart.foci[0].rate_bpm","values":[40]}}`, "1 2 3"},
		{"what an intervention sets", `{"x":{"field":"interventions[1].to","from":60,"to":62,"step":1}}`, "60 61 62"},
		{"an extra stimulus", `{"x":{"premature":"rv_apex","after_ms":2000,"from":300,"to":310,"step":5},"outcomes":["pattern","findings"]}`, "300 305 310"},
	} {
		t.Run(c.name, func(t *testing.T) {
			p, err := Decode([]byte(swept + c.sweep + `}`))
			if err != nil {
				t.Fatal(err)
			}
			var got []string
			for _, v := range p.Sweep.X.Values {
				got = append(got, p.Sweep.X.Text(v))
			}
			if strings.Join(got, " ") != c.want {
				t.Errorf("values %v, want %s", got, c.want)
			}
			if got := string(p.Sweep.Encode()); got != c.sweep && c.name != "a list of words" {
				t.Errorf("written as %s", got)
			}
			q, err := Decode(p.Encode())
			if err != nil || string(q.Encode()) != string(p.Encode()) || string(q.Sweep.Encode()) != string(p.Sweep.Encode()) {
				t.Errorf("read back: %s (%v)", q.Encode(), err)
			}
		})
	}
}

func TestASweepThatIsWrongIsExplained(t *testing.T) {
	for _, c := range []struct{ name, sweep, want string }{
		{"no object", `5`, "sweep: 5; allowed: an object with x, and perhaps y, seeds and outcomes"},
		{"null", `null`, "sweep: null; allowed: an object"},
		{"empty", `{}`, "sweep.x: nothing; allowed: an axis\n  note: such as"},
		{"misspelt", `{"x":{"field":"seed","values":[1]},"seed":3}`, "sweep.seed: a field that is not known\n  note: did you mean \"seeds\"?"},
		{"misspelt in an axis", `{"x":{"feild":"seed","values":[1]}}`, "sweep.x.feild: a field that is not known\n  note: did you mean \"field\"?"},
		{"no field", `{"x":{"values":[1]}}`, "sweep.x.field: null; allowed: the path of a field of the plan"},
		{"unknown field", `{"x":{"field":"heart.sinus.rate_bp","values":[1]}}`, "sweep.x.field: \"heart.sinus.rate_bp\"; allowed: the path of a field of the plan, such as heart.sinus.rate_bpm or interventions[0].at_ms\n  note: did you mean \"heart.sinus.rate_bpm\"?"},
		{"an item that is not there", `{"x":{"field":"heart.foci[1].rate_bpm","values":[40]}}`, "sweep.x.field: \"heart.foci[1].rate_bpm\"; allowed: one of the 1 foci of this plan"},
		{"an intervention that is not there", `{"x":{"field":"interventions[2].at_ms","values":[40]}}`, "allowed: one of the 2 interventions of this plan"},
		{"an item without a number", `{"x":{"field":"heart.foci[].rate_bpm","values":[40]}}`, "sweep.x.field: \"heart.foci[].rate_bpm\"; allowed: the path"},
		{"a list", `{"x":{"field":"pacemaker.sensor.activity_level","values":[1]}}`, "sweep.x.field"},
		{"range and list", `{"x":{"field":"seed","values":[1],"step":1}}`, "sweep.x.step: 1; allowed: values, or from, to and step, not both"},
		{"no values", `{"x":{"field":"seed","values":[]}}`, "sweep.x.values: 0 values; allowed: a list of 1 to 2000 values"},
		{"a value out of range", `{"x":{"field":"heart.sinus.rate_bpm","values":[60,1]}}`, "sweep.x.values[1]: 1; allowed: a number from 10 to 220 /min"},
		{"a word that is none", `{"x":{"field":"pacemaker.mode","values":["DDX"]}}`, `sweep.x.values[0]: "DDX"; allowed: `},
		{"a part of the heart with a number", `{"x":{"field":"heart.his_purkinje.right_bundle","values":[1]}}`, `sweep.x.values[0]: 1; allowed: null, or "default"`},
		{"a range of words", `{"x":{"field":"pacemaker.mode","from":1,"to":2,"step":1}}`, "sweep.x.values: nothing; allowed: a list of values: a range is for numbers"},
		{"from out of range", `{"x":{"field":"heart.sinus.rate_bpm","from":1,"to":90,"step":1}}`, "sweep.x.from: 1; allowed: a number from 10 to 220 /min"},
		{"no end", `{"x":{"field":"heart.sinus.rate_bpm","from":60,"step":1}}`, "sweep.x.to: null; allowed: a number from 10 to 220 /min"},
		{"backwards", `{"x":{"field":"heart.sinus.rate_bpm","from":90,"to":60,"step":1}}`, "sweep.x.to: 60; allowed: from (90) or more"},
		{"no step", `{"x":{"field":"heart.sinus.rate_bpm","from":60,"to":90,"step":0}}`, "sweep.x.step: 0; allowed: a number above 0"},
		{"half a seed", `{"x":{"field":"seed","from":1,"to":9,"step":0.5}}`, "sweep.x.step: 0.5; allowed: a whole number above 0"},
		{"too many values", `{"x":{"field":"heart.sinus.rate_bpm","from":60,"to":90,"step":0.001}}`, "sweep.x.step: 0.001, which gives 30001 values; allowed: up to 2000 values"},
		{"null at the end of a range", `{"x":{"field":"heart.av_node.fast.ah_ms","from":60,"to":null,"step":1}}`, "sweep.x.to: null; allowed: a number"},
		{"twice the same", `{"x":{"field":"seed","values":[1]},"y":{"field":"seed","values":[2]}}`, `sweep.y.field: "seed"; allowed: another field than that of x`},
		{"two extra stimuli", `{"x":{"premature":"his","values":[300]},"y":{"premature":"rv_apex","values":[300]}}`, `sweep.y.premature: "rv_apex"; allowed: one extra stimulus in a sweep`},
		{"extra stimulus at no site", `{"x":{"premature":"rv_apx","values":[300]}}`, "sweep.x.premature: \"rv_apx\"; allowed: one of sinus"},
		{"extra stimulus and a field", `{"x":{"premature":"his","field":"seed","values":[300]}}`, "sweep.x.field: \"seed\"; allowed: field or premature, not both"},
		{"a time without a stimulus", `{"x":{"field":"seed","after_ms":3,"values":[300]}}`, "sweep.x.after_ms: 3; allowed: with premature only"},
		{"no seeds", `{"x":{"field":"heart.sinus.rate_bpm","values":[60]},"seeds":[]}`, "sweep.seeds: []; allowed: a list of 1 to 1000 seeds, or how many from 1 on"},
		{"half seeds", `{"x":{"field":"heart.sinus.rate_bpm","values":[60]},"seeds":1.5}`, "sweep.seeds: 1.5; allowed: a list of seeds, or how many from 1 on: 1 to 1000"},
		{"unknown outcome", `{"x":{"field":"seed","values":[1]},"outcomes":["patern"]}`, "sweep.outcomes[0]: \"patern\"; allowed: each once of pattern, v_rate_bpm"},
		{"outcome twice", `{"x":{"field":"seed","values":[1]},"outcomes":["pattern","pattern"]}`, "sweep.outcomes[1]: \"pattern\"; allowed: each once of"},
		{"too many runs", `{"x":{"field":"heart.sinus.rate_bpm","from":60,"to":160,"step":0.1},"y":{"field":"pacemaker.pvarp_ms","from":200,"to":300,"step":0.1}}`, "sweep: 1002001 runs; allowed: up to 1000000"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := Decode([]byte(swept + c.sweep + `}`))
			if err == nil || !strings.Contains(err.Error(), c.want) {
				t.Errorf("got  %v\nwant %s", err, c.want)
			}
		})
	}
	_, err := Decode([]byte(head + `,"sweep":{"x":{"field":"pacemaker.pvarp_ms","values":[300]}}}`))
	if err == nil || !strings.Contains(err.Error(), "a field of the heart: this plan has no pacemaker") {
		t.Errorf("a device's number without a device: %v", err)
	}
}

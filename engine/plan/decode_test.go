package plan

import (
	"errors"
	"fmt"
	"strings"
	"testing"

	"escapement/presets"
)

const head = `{"format":"escapement-plan/1"`

func TestTheEmptyPlanIsAHealthyAdult(t *testing.T) {
	p, err := Decode([]byte(head + `}`))
	if err != nil {
		t.Fatal(err)
	}
	prog, err := p.Compile()
	if err != nil {
		t.Fatal(err)
	}
	if got := prog.Heart.Basic.BPM(); got != 75 {
		t.Errorf("sinus rate %v, want 75", got)
	}
}

// Every default lies in its own range, and every normal range too.
func TestTheCatalogueAgreesWithItself(t *testing.T) {
	seen := map[string]bool{}
	for _, f := range Catalogue() {
		if seen[f.Path] {
			t.Errorf("%s stands twice", f.Path)
		}
		seen[f.Path] = true
		if f.Label == "" || f.Kind == "" {
			t.Errorf("%s has no label or kind", f.Path)
		}
		if f.Default != nil && (*f.Default < f.Min || *f.Default > f.Max) {
			t.Errorf("%s: default %v outside %v to %v", f.Path, *f.Default, f.Min, f.Max)
		}
		if f.Normal != nil && (f.Normal.Low < f.Min || f.Normal.High > f.Max || f.Normal.Low >= f.Normal.High || f.Source == "") {
			t.Errorf("%s: normal range %v to %v, source %q, range %v to %v", f.Path, f.Normal.Low, f.Normal.High, f.Source, f.Min, f.Max)
		}
		if strings.Contains(f.Path, "patient") || strings.Contains(f.Path, "name") {
			t.Errorf("%s looks like a field for a person", f.Path)
		}
	}
}

func TestDiagnosesNameThePlaceTheValueAndWhatIsAllowed(t *testing.T) {
	for _, c := range []struct{ name, plan, want string }{
		{"not JSON", "{\n \"format\": x}", "not JSON: invalid character 'x' looking for beginning of value (line 2, column 12); allowed: one JSON object"},
		{"two objects", head + `}{}`, "not JSON: something after the end of the plan; allowed: one JSON object"},
		{"a list", `[]`, `[]; allowed: an object such as {"format":"escapement-plan/1"}`},
		{"no format", `{}`, "format: nothing; allowed: \"escapement-plan/1\"\n  note: add \"format\": \"escapement-plan/1\""},
		{"another format", `{"format":"escapement-plan/9"}`, `format: "escapement-plan/9"; allowed: "escapement-plan/1"`},
		{"misspelt", head + `,"heart":{"sinus":{"rate_bmp":70}}}`, "heart.sinus.rate_bmp: a field that is not known\n  note: did you mean \"rate_bpm\"?"},
		{"out of range", head + `,"heart":{"sinus":{"rate_bpm":7000}}}`, "heart.sinus.rate_bpm: 7000; allowed: a number from 10 to 220 /min"},
		{"text for a number", head + `,"heart":{"sinus":{"rate_bpm":"fast"}}}`, `heart.sinus.rate_bpm: "fast"; allowed: a number from 10 to 220 /min`},
		{"infinite", head + `,"heart":{"sinus":{"rate_bpm":1e999}}}`, "heart.sinus.rate_bpm: 1e999; allowed: a number from 10 to 220 /min"},
		{"null where it means nothing", head + `,"heart":{"sinus":{"rate_bpm":null}}}`, "heart.sinus.rate_bpm: null; allowed: a number from 10 to 220 /min"},
		{"a number for an object", head + `,"heart":5}`, "heart: 5; allowed: an object"},
		{"unknown site", head + `,"heart":{"foci":[{"site":"rv_apx"}]}}`, "heart.foci[0].site: \"rv_apx\"; allowed: one of sinus, "},
		{"site left out", head + `,"heart":{"foci":[{"rate_bpm":40}]}}`, "heart.foci[0].site: nothing; allowed: one of sinus, "},
		{"train without a count", head + `,"interventions":[{"at_ms":1,"do":"train","site":"his","cycle_ms":500}]}`, "interventions[0].count: nothing; allowed: a whole number from 1 to 20000"},
		{"a burst without a cycle", head + `,"interventions":[{"at_ms":1,"do":"signal","channel":"V","count":4}]}`, "interventions[0].cycle_ms: nothing; allowed: a number from 20 to 10000 ms"},
		{"half a stimulus", head + `,"interventions":[{"at_ms":1,"do":"train","site":"his","cycle_ms":500,"count":1.5}]}`, "interventions[0].count: 1.5; allowed: a whole number from 1 to 20000"},
		{"wrong field of a stimulus", head + `,"interventions":[{"at_ms":1,"do":"stimulate","site":"his","count":2}]}`, "interventions[0].count: a field that stimulate does not take; allowed: at_ms, site"},
		{"set of an unknown field", head + `,"interventions":[{"at_ms":1,"do":"set","field":"heart.sinus.rate_bp","to":2}]}`, "interventions[0].field: \"heart.sinus.rate_bp\"; allowed: the path of a number in heart or pacemaker, such as heart.sinus.rate_bpm\n  note: did you mean \"heart.sinus.rate_bpm\"?"},
		{"set out of range", head + `,"interventions":[{"at_ms":1,"do":"set","field":"heart.sinus.rate_bpm","to":2}]}`, "interventions[0].to: 2; allowed: a number from 10 to 220 /min"},
		{"set of a focus that is not there", head + `,"interventions":[{"at_ms":1,"do":"set","field":"heart.foci[0].rate_bpm","to":20}]}`, "interventions[0].field: \"heart.foci[0].rate_bpm\"; allowed: one of the 0 foci of this plan"},
		{"set of no focus in particular", head + `,"interventions":[{"at_ms":1,"do":"set","field":"heart.foci[].rate_bpm","to":20}]}`, "interventions[0].field: \"heart.foci[].rate_bpm\"; allowed: one of the 0 foci of this plan"},
		{"set of a pathway that is not there", head + `,"heart":{"pathways":[{"atrium":"left_atrium","ventricle":"lv_lateral"}]},"interventions":[{"at_ms":1,"do":"set","field":"heart.pathways[1].up_ms","to":null}]}`, "interventions[0].field: \"heart.pathways[1].up_ms\"; allowed: one of the 1 accessory pathways of this plan"},
		{"a ramp from null", head + `,"heart":{"pathways":[{"atrium":"left_atrium","ventricle":"lv_lateral","up_ms":null}]},"interventions":[{"at_ms":1,"do":"set","field":"heart.pathways[0].up_ms","to":40,"over_ms":500}]}`, "interventions[0].over_ms: a gradual change from or to null"},
		{"pathway to nowhere", head + `,"heart":{"pathways":[{"atrium":"left_atrium"}]}}`, "heart.pathways[0].ventricle: nothing; allowed: one of rv_septum, "},
		{"pathway from the wrong chamber", head + `,"heart":{"pathways":[{"atrium":"rv_apex","ventricle":"lv_lateral"}]}}`, "heart.pathways[0].atrium: \"rv_apex\"; allowed: one of right_atrium, left_atrium, atrial_septum"},
		{"pathway out of range", head + `,"heart":{"pathways":[{"atrium":"left_atrium","ventricle":"lv_lateral","down_ms":0}]}}`, "heart.pathways[0].down_ms: 0; allowed: a number from 1 to 500 ms, or null (does not conduct to the ventricles: concealed)"},
		{"clinical numbers and a curve", head + `,"heart":{"av_node":{"fast":{"ah_ms":80,"min_ms":60,"alpha_ms":0,"tau_ms":1,"theta_ms":200}}}}`, "heart.av_node.fast.ah_ms: a clinical number beside a curve given outright; allowed: one or the other"},
		{"half a curve", head + `,"heart":{"av_node":{"fast":{"min_ms":60}}}}`, "heart.av_node.fast.alpha_ms: nothing; allowed: a number"},
		{"a drop pattern", head + `,"heart":{"av_node":{"fast":{"drop":"2:3"}}}}`, `heart.av_node.fast.drop: "2:3"; allowed: "3:2" (two of three conducted)`},
		{"a person's name", head + `,"patient":"x"}`, "patient: a field that is not known"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := Decode([]byte(c.plan))
			if err == nil || !strings.Contains(err.Error(), c.want) {
				t.Errorf("got  %v\nwant %s", err, c.want)
			}
		})
	}
}

func TestAllDiagnosesComeAtOnce(t *testing.T) {
	_, err := Decode([]byte(head + `,"span_ms":0,"heart":{"sinus":{"rate_bpm":-1},"atria":{"erp":2}}}`))
	var ds Diagnoses
	if !errors.As(err, &ds) || len(ds) != 3 {
		t.Errorf("got %d diagnoses, want 3: %v", len(ds), err)
	}
}

// Numbers that cannot hold together are named with their values.
func TestConflictsNameTheNumbers(t *testing.T) {
	for _, c := range []struct{ name, node, want string }{
		{"Wenckebach at the basic cycle", `"fast":{"wenckebach_cl_ms":900,"erp_ms":600}`, "ah_ms 80 cannot be measured at a cycle of 800 ms: 1:1 conduction ends at wenckebach_cl_ms 900"},
		{"Wenckebach shorter than the ERP", `"fast":{"wenckebach_cl_ms":250,"erp_ms":330}`, "ah_ms 80, erp_ms 330 and wenckebach_cl_ms 250 do not fit one recovery curve"},
		{"AH shorter than the way below", `"fast":{"ah_ms":9}`, "ah_ms 9 is not longer than the 10 ms below the node"},
		{"VA shorter than the way outside", `"fast":{"va_ms":60}`, "va_ms 60 is not longer than the way outside the node"},
		{"FRP out of reach", `"fast":{"frp_ms":2000}`, "gives frp_ms 2000 with ah_ms 80"},
		{"pathway slower than its ERP", `},"pathways":[{"atrium":"left_atrium","ventricle":"lv_lateral","down_ms":90,"down_erp_ms":80}],"sinus":{`, "down_erp_ms 80 is not longer than down_ms 90"},
	} {
		t.Run(c.name, func(t *testing.T) {
			p, err := Decode([]byte(head + `,"heart":{"av_node":{` + c.node + `}}}`))
			if err != nil {
				t.Fatal(err)
			}
			_, err = p.Compile()
			var ds Diagnoses
			if !errors.As(err, &ds) || !strings.Contains(err.Error(), c.want) || !strings.HasPrefix(ds[0].Path, "heart.av_node.fast") && ds[0].Path != "heart.pathways[0].down_erp_ms" {
				t.Errorf("got  %v\nwant %s", err, c.want)
			}
		})
	}
}

// A hostile plan ends in a diagnosis that names the limit, soon.
func TestHostilePlans(t *testing.T) {
	foci := strings.Repeat(`{"site":"his"},`, 100000) + `{"site":"his"}`
	deep := strings.Repeat(`{"heart":`, 9000) + strings.Repeat(`}`, 9000)
	for _, c := range []struct{ name, plan, want string }{
		{"NaN", head + `,"span_ms":NaN}`, "not JSON"},
		{"1e308", head + `,"span_ms":1e308}`, "allowed: a number from 100 to 86400000 ms"},
		{"a year", head + `,"span_ms":31536000000}`, "allowed: a number from 100 to 86400000 ms"},
		{"no cycle", head + `,"interventions":[{"at_ms":0,"do":"train","site":"his","cycle_ms":0,"count":9}]}`, "cycle_ms: 0; allowed: a number from 20 to 10000 ms"},
		{"a crowd of foci", head + `,"heart":{"foci":[` + foci + `]}}`, "heart.foci: 100001 items; allowed: up to 32"},
		{"too many stimuli", head + `,"interventions":[{"at_ms":0,"do":"train","site":"his","cycle_ms":20,"count":20000},{"at_ms":0,"do":"train","site":"his","cycle_ms":20,"count":20000}]}`, "interventions: 40002 stimuli in all; allowed: up to 20000"},
		{"deep", deep, "not JSON"},
		{"large", head + `,"note":"` + strings.Repeat("x", MaxBytes) + `"}`, fmt.Sprintf("allowed: up to %d bytes", MaxBytes)},
		{"not UTF-8", head + ",\"note\":\"\xff\"}", "UTF-8"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := Decode([]byte(c.plan))
			if err == nil || !strings.Contains(err.Error(), c.want) {
				t.Errorf("got  %.300v\nwant %s", err, c.want)
			}
		})
	}
}

func TestLongRampsAreBounded(t *testing.T) {
	p, err := Decode([]byte(head + `,"span_ms":86400000,"interventions":[{"at_ms":0,"do":"set","field":"heart.his_purkinje.hv_ms","to":100,"over_ms":86400000}]}`))
	if err != nil {
		t.Fatal(err)
	}
	if _, err = p.Compile(); err == nil || !strings.Contains(err.Error(), "up to 5000 steps in all") {
		t.Errorf("got %v", err)
	}
}

// What is decoded is encoded to a file that decodes to the same.
func TestEncodeRoundTrip(t *testing.T) {
	for _, name := range presets.Names() {
		b, _ := presets.Read(name)
		p, err := Decode(b)
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		once := p.Encode()
		q, err := Decode(once)
		if err != nil {
			t.Fatalf("%s, encoded: %v\n%s", name, err, once)
		}
		if twice := q.Encode(); string(once) != string(twice) {
			t.Errorf("%s: encoded\n%s\nthen\n%s", name, once, twice)
		}
	}
}

// FuzzDecode: no input panics; what is accepted encodes and decodes to itself, and
// compiles or is refused with diagnoses, quickly.
func FuzzDecode(f *testing.F) {
	for _, name := range presets.Names() {
		b, _ := presets.Read(name)
		f.Add(b)
	}
	f.Add([]byte(head + `,"heart":{"pathways":[{"atrium":"left_atrium","ventricle":"lv_lateral","down_ms":null,"drop":"3:2"}]},"interventions":[{"at_ms":5,"do":"set","field":"heart.pathways[0].up_ms","to":null}]}`))
	f.Add([]byte(head + `,"heart":{"av_node":{"slow":{},"fast":{"ah_ms":null}},"his_purkinje":{"left_bundle":null}}}`))
	f.Fuzz(func(t *testing.T, data []byte) {
		p, err := Decode(data)
		if err != nil {
			return
		}
		once := p.Encode()
		q, err := Decode(once)
		if err != nil {
			t.Fatalf("%v\n%s", err, once)
		}
		if twice := q.Encode(); string(once) != string(twice) {
			t.Fatalf("%s\n%s", once, twice)
		}
		if _, err := p.Compile(); err != nil {
			var ds Diagnoses
			if !errors.As(err, &ds) {
				t.Fatalf("not a diagnosis: %v", err)
			}
		}
	})
}

// Settings of the device that cannot run together are diagnoses, as numbers of the
// heart that cannot hold together are.
func TestSettingsThatCannotRunTogetherAreDiagnosed(t *testing.T) {
	p, err := Decode([]byte(`{"format":"escapement-plan/1","pacemaker":{"mode":"DDD","pvarp_ms":80,"pvab_ms":100,"lower_rate_bpm":130}}`))
	if err != nil {
		t.Fatal(err)
	}
	_, err = p.Compile()
	want := "pacemaker: the upper tracking rate of 120 is below the lower rate of 130\npacemaker: PVAB of 100 ms is longer than PVARP of 80 ms"
	if err == nil || err.Error() != want {
		t.Errorf("got %v, want %s", err, want)
	}
}

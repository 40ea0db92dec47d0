package plan

import "testing"

func TestWithPutsANumberAtAPlaceAndLeavesTheOldPlan(t *testing.T) {
	p, err := Decode([]byte(`{"format":"escapement-plan/1","heart":{"foci":[{"site":"his","rate_bpm":40}]},"interventions":[{"at_ms":1000,"do":"train","site":"right_atrium","cycle_ms":500,"count":2,"extras_ms":[300,250]}]}`))
	if err != nil {
		t.Fatal(err)
	}
	before := string(p.Encode())
	for _, c := range []struct {
		name, path string
		v          float64
		ok         bool
		read       func(*Plan) float64
	}{
		{"a plain field", "heart.sinus.rate_bpm", 90, true, func(q *Plan) float64 { return q.number("heart.sinus.rate_bpm") }},
		{"a focus", "heart.foci[0].rate_bpm", 55, true, func(q *Plan) float64 { return q.Foci[0]["rate_bpm"].Number }},
		{"an intervention", "interventions[0].at_ms", 1200, true, func(q *Plan) float64 { return q.Interventions[0]["at_ms"].Number }},
		{"a member of a list of numbers", "interventions[0].extras_ms[1]", 240, true, func(q *Plan) float64 { return q.Interventions[0]["extras_ms"].List[1] }},
		{"out of range", "heart.sinus.rate_bpm", 900, false, nil},
		{"out of range in an item", "interventions[0].cycle_ms", 1, false, nil},
		{"no such item", "interventions[3].at_ms", 1, false, nil},
		{"no such member", "interventions[0].extras_ms[2]", 300, false, nil},
		{"no such field", "interventions[0].nonsense", 1, false, nil},
	} {
		q, err := p.With(c.path, c.v)
		if (err == nil) != c.ok {
			t.Errorf("%s: error %v", c.name, err)
			continue
		}
		if c.ok && c.read(q) != c.v {
			t.Errorf("%s: got %v, want %v", c.name, c.read(q), c.v)
		}
		if string(p.Encode()) != before {
			t.Fatalf("%s: the old plan changed", c.name)
		}
	}
}

package plan

import (
	"errors"
	"strings"
	"testing"
)

const goalsHead = `{"format":"escapement-plan/1","heart":{"foci":[{"site":"rv_apex"}]},"pacemaker":{},"interventions":[{"at_ms":100,"do":"stimulate","site":"rv_apex"}],"goals":`

const (
	someSettings   = `"settings":[{"field":"pacemaker.pvarp_ms","from":200,"to":300,"step":10}]`
	someSituations = `"situations":[{"name":"rest"},{"name":"fast","set":{"heart.sinus.rate_bpm":150}}]`
	someMust       = `"must":[{"outcome":"longest_pause_ms","at_most":1500}]`
)

// Every mistake is told with its place, the value and what is allowed.
func TestWrongGoalsAreDiagnosed(t *testing.T) {
	for _, c := range []struct{ name, goals, want string }{
		{"no object", `3`, "goals: 3; allowed: an object with settings"},
		{"an unknown key", `{` + someSettings + `,` + someSituations + `,"mst":[]}`, `goals.mst: a field that is not known; allowed: settings, situations, must, prefer, seeds` + "\n  note: did you mean \"must\"?"},
		{"nothing asked for", `{` + someSettings + `,` + someSituations + `}`, "goals.must: nothing"},
		{"no settings", `{` + someSituations + `,` + someMust + `}`, "goals.settings: nothing; allowed: a list of 1 to 8 objects"},
		{"an unknown setting", `{"settings":[{"field":"pacemaker.pvar_ms","values":[1]}],` + someSituations + `,` + someMust + `}`, `goals.settings[0].field: "pacemaker.pvar_ms"`},
		{"a value out of range", `{"settings":[{"field":"pacemaker.pvarp_ms","from":200,"to":3000,"step":10}],` + someSituations + `,` + someMust + `}`, "goals.settings[0].to: 3000; allowed: a number from 0 to 600 ms"},
		{"a setting twice", `{"settings":[{"field":"pacemaker.pvarp_ms","values":[1]},{"field":"pacemaker.pvarp_ms","values":[2]}],` + someSituations + `,` + someMust + `}`, "goals.settings[1].field"},
		{"a premature beat as a setting", `{"settings":[{"premature":"rv_apex","values":[300]}],` + someSituations + `,` + someMust + `}`, "goals.settings[0].premature"},
		{"a situation without a name", `{` + someSettings + `,"situations":[{}],` + someMust + `}`, "goals.situations[0].name: null"},
		{"a name twice", `{` + someSettings + `,"situations":[{"name":"a"},{"name":"a"}],` + someMust + `}`, `goals.situations[1].name: "a"; allowed: another name`},
		{"a value of a situation", `{` + someSettings + `,"situations":[{"name":"a","set":{"heart.sinus.rate_bpm":1500}}],` + someMust + `}`, "goals.situations[0].set.heart.sinus.rate_bpm: 1500; allowed: a number from 10 to 220 /min"},
		{"a setting in a situation", `{` + someSettings + `,"situations":[{"name":"a","set":{"pacemaker.pvarp_ms":250}}],` + someMust + `}`, "a setting that is searched for"},
		{"an intervention of a situation", `{` + someSettings + `,"situations":[{"name":"a","interventions":[{"at_ms":5,"do":"stimulate"}]}],` + someMust + `}`, "goals.situations[0].interventions[0].site: nothing"},
		{"what varies in a situation", `{` + someSettings + `,"situations":[{"name":"a","vary":{"field":"interventions[1].at_ms","values":[5]}}],` + someMust + `}`, "goals.situations[0].vary.field"},
		{"an unknown outcome", `{` + someSettings + `,` + someSituations + `,"must":[{"outcome":"longest_pause","at_most":1500}]}`, `goals.must[0].outcome: "longest_pause"`},
		{"no condition", `{` + someSettings + `,` + someSituations + `,"must":[{"outcome":"longest_pause_ms"}]}`, "goals.must[0]: a goal without a condition; allowed: at_least, at_most, equal"},
		{"a condition that does not suit", `{` + someSettings + `,` + someSituations + `,"must":[{"outcome":"pattern","at_most":1}]}`, "goals.must[0].at_most: 1; allowed: pattern takes equal, none_of"},
		{"an unknown word", `{` + someSettings + `,` + someSituations + `,"must":[{"outcome":"endless_loop","equal":"never"}]}`, `goals.must[0].equal: "never"; allowed: none, brief, ended, sustained`},
		{"bounds the wrong way round", `{` + someSettings + `,` + someSituations + `,"must":[{"outcome":"av_min_ms","at_least":200,"at_most":100}]}`, "goals.must[0].at_most: 100; allowed: at_least (200) or more"},
		{"an unknown situation", `{` + someSettings + `,` + someSituations + `,"must":[{"outcome":"av_min_ms","at_least":200,"in":["rst"]}]}`, `goals.must[0].in[0]: "rst"; allowed: each once of rest, fast` + "\n  note: did you mean \"rest\"?"},
		{"a wish for a word", `{` + someSettings + `,` + someSituations + `,"prefer":[{"outcome":"pattern","best":"lowest"}]}`, `goals.prefer[0].outcome: "pattern"`},
		{"a wish without direction", `{` + someSettings + `,` + someSituations + `,"prefer":[{"outcome":"v_rate_bpm"}]}`, "goals.prefer[0].best: null; allowed: lowest or highest"},
		{"a wish for another setting", `{` + someSettings + `,` + someSituations + `,"prefer":[{"setting":"pacemaker.pvab_ms","best":"lowest"}]}`, "goals.prefer[0].setting"},
		{"too many runs", `{"settings":[{"field":"pacemaker.pvarp_ms","from":0,"to":600,"step":0.5},{"field":"pacemaker.sensed_av_ms","from":20,"to":400,"step":0.5}],` + someSituations + `,` + someMust + `}`, "up to 1000000 runs"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := Decode([]byte(goalsHead + c.goals + `}`))
			var ds Diagnoses
			if !errors.As(err, &ds) || !strings.Contains(ds.Error(), c.want) {
				t.Errorf("got %v\nwant %s", err, c.want)
			}
		})
	}
}

// Goals come back as they were written, and a change of the plan leaves them.
func TestGoalsAreWrittenAsTheyWereRead(t *testing.T) {
	const goals = `{"settings":[{"field":"pacemaker.pvarp_ms","from":200,"to":300,"step":10},{"field":"pacemaker.mode","values":["DDD","DDI"]}],` +
		`"situations":[{"name":"rest"},{"name":"fast","set":{"heart.his_purkinje.left_bundle":null,"heart.sinus.rate_bpm":150},"interventions":[{"at_ms":5,"do":"set","field":"heart.sinus.rate_bpm","to":60}],` +
		`"vary":{"premature":"rv_apex","after_ms":2000,"from":300,"to":500,"step":50}}],` +
		`"must":[{"name":"no stop","outcome":"longest_pause_ms","in":["fast"],"at_most":1500},{"outcome":"endless_loop","equal":["none"]},{"outcome":"findings","none_of":["mode_switch"]}],` +
		`"prefer":[{"outcome":"ventricular_paced_percent","best":"lowest"},{"setting":"pacemaker.pvarp_ms","best":"highest"}],"seeds":[1,2]}`
	p, err := Decode([]byte(goalsHead + goals + `}`))
	if err != nil {
		t.Fatal(err)
	}
	if got := string(p.Goals.Encode()); got != goals {
		t.Errorf("got  %s\nwant %s", got, goals)
	}
	if g, err := p.ReadGoals([]byte(goals)); err != nil || string(g.Encode()) != goals {
		t.Errorf("read by itself: %v", err)
	}
	if n := p.Goals.Combinations() * p.Goals.Runs(); n != 22*(1+5)*2 {
		t.Errorf("%d runs", n)
	}
	q := p.In(&p.Goals.Situations[1])
	if rate, _ := q.Amount("heart.sinus.rate_bpm"); rate != 150 || len(q.Interventions) != 2 || !q.Absent("heart.his_purkinje.left_bundle") {
		t.Errorf("in the second situation: %s", q.Encode())
	}
}

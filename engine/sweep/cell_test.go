package sweep

import (
	"reflect"
	"strings"
	"testing"

	"escapement/engine/measure"
	"escapement/engine/tick"
)

// Several seeds: mean and bounds of the runs that have a number, words by how often
// they came up and then by name, a refusal with any seed refuses the point.
func TestACellIsReducedOverItsSeeds(t *testing.T) {
	g := grid(t, 2000, noAV, `{}`, ``, `"x":{"field":"seed","values":[1]},"seeds":4,"outcomes":["loop_cycle_ms","pattern","findings","mode_switches"]`)
	one := func(cycle tick.Dur, pattern string, modes int, findings ...string) run {
		return run{tally: measure.Tally{LoopCycle: cycle, Pattern: pattern, ModeChanges: modes}, findings: findings}
	}
	runs := []run{one(500000, "3:2", 1, "b", "a"), one(0, "2:1", 2), one(600000, "2:1", 0, "a"), one(580000, "1:1", 0)}
	got := g.reduce(runs)
	want := []Reduced{
		{N: 3, Mean: (500.0 + 600 + 580) / 3, Min: 500, Max: 600},
		{N: 4, Words: []Count{{"2:1", 2}, {"1:1", 1}, {"3:2", 1}}},
		{N: 4, Words: []Count{{"a", 2}, {"b", 1}}},
		{N: 4, Mean: 0.75, Min: 0, Max: 2},
	}
	if !reflect.DeepEqual(got.Values, want) {
		t.Errorf("got  %+v\nwant %+v", got.Values, want)
	}
	runs[2].refused = "no"
	if c := g.reduce(runs); c.Refused != "no" || c.Values[3].N != 0 {
		t.Errorf("refused with one seed: %+v", c)
	}
}

func TestTheTableAsCSV(t *testing.T) {
	for _, c := range []struct{ name, sweep, want string }{
		{"one seed", `"x":{"field":"pacemaker.mode","values":["DDD","VVI"]},"y":{"field":"heart.sinus.rate_bpm","values":[90]},"outcomes":["pattern","v_interval_max_ms","warnings"]`,
			"pacemaker.mode,heart.sinus.rate_bpm,pattern,v_interval_max_ms,warnings,refused\nDDD,90,1:1,666.667,,\nVVI,90,1:0,1000,,\n"},
		{"two seeds, refused", `"x":{"field":"pacemaker.pvab_ms","values":[100,300]},"seeds":2,"outcomes":["v_interval_max_ms","endless_loop"]`,
			"pacemaker.pvab_ms,v_interval_max_ms,v_interval_max_ms_min,v_interval_max_ms_max,endless_loop,refused\n100,800,800,800,none,\n300,,,,,pacemaker: PVAB of 300 ms is longer than PVARP of 250 ms\n"},
	} {
		t.Run(c.name, func(t *testing.T) {
			var b strings.Builder
			if err := all(t, grid(t, 8000, noAV, `{}`, ``, c.sweep), Settings{}).WriteCSV(&b); err != nil {
				t.Fatal(err)
			}
			if b.String() != c.want {
				t.Errorf("got\n%swant\n%s", b.String(), c.want)
			}
		})
	}
}

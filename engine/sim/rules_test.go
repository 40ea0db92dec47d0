package sim

import (
	"strings"
	"testing"

	"escapement/engine/event"
	"escapement/engine/heart"
	"escapement/engine/plan"
	"escapement/engine/tick"
)

// Each test below is named after something that the machine once got wrong, as the
// reference simulation showed.

const milli = tick.Time(tick.Millisecond)

// bridge is a heart of two sites and one path of 100 ms between them.
func bridge() *heart.Heart {
	site := func(name string) heart.Site {
		return heart.Site{Site: event.Site{Name: name, Tissue: event.Node}, Refractory: heart.Cycled{BaseMS: 10}}
	}
	c := heart.Conduct{Open: true, Curve: heart.Curve{MinMS: 100, Theta: heart.Cycled{BaseMS: 50}, Inner: 1}}
	return &heart.Heart{Quantum: 1, Basic: tick.Second, Sites: []heart.Site{site("a"), site("b")},
		Paths: []heart.Path{{Path: event.Path{Name: "bridge", Tissue: event.Node, From: 0, To: 1}, Down: c, Up: c}}}
}

func playProgram(t *testing.T, prog *plan.Program) *event.Log {
	t.Helper()
	l, err := Play(prog)
	if err != nil {
		t.Fatal(err)
	}
	for _, err := range event.Validate(l) {
		t.Error(err)
	}
	return l
}

// lines are the events of a log that hold a word, in the text form.
func lines(l *event.Log, word string) string {
	var out []string
	for _, s := range strings.Split(l.Text(), "\n") {
		if strings.Contains(s, word) {
			out = append(out, s)
		}
	}
	return strings.Join(out, "\n")
}

// Upwards the bridge is closed and lets impulses in for a fifth of its length. The
// one from above enters at 0 and the one from below at 10 ms: they would meet at
// 55 ms, at 0.45 from below. So the one from below stops at 30 ms, at its fifth,
// and the one from above when it comes there, at 80 ms.
func TestNoCollisionBeyondReach(t *testing.T) {
	h := bridge()
	h.Paths[0].Up.Open, h.Paths[0].Up.Reach = false, 200
	got := lines(playProgram(t, &plan.Program{Heart: h, Span: 500 * milli,
		Stimuli: []plan.Stimulus{{T: 0, Site: 0, Rule: event.Premature}, {T: 10 * milli, Site: 1, Rule: event.Premature}}}), "block")
	want := `5 30000 block one_way from=4 site=b path=bridge dir=up depth=200
6 80000 block collision from=2 site=a path=bridge dir=down depth=800 recovery=-1125899906842624 needed=50000`
	if got != want {
		t.Errorf("got\n%s\nwant\n%s", got, want)
	}
}

// An impulse that only comes part of the way is no faster than one that is
// conducted: with 50 ms of decrement at its recovery, half the way is 75 ms.
func TestReachTakesItsShareOfTheDelay(t *testing.T) {
	h := bridge()
	h.Paths[0].Up = heart.Conduct{Reach: 500, Curve: heart.Curve{MinMS: 100, AlphaMS: 50, TauMS: 1e9, FirstMS: 1, Inner: 1}}
	got := lines(playProgram(t, &plan.Program{Heart: h, Span: 500 * milli, Stimuli: []plan.Stimulus{{T: 0, Site: 1, Rule: event.Premature}}}), "block")
	if want := "3 75000 block one_way from=2 site=b path=bridge dir=up depth=500"; got != want {
		t.Errorf("got\n%s\nwant\n%s", got, want)
	}
}

// trainAtA is a stimulus at a every 200 ms from 0 on.
func trainAtA(count int) (out []plan.Stimulus) {
	for i := range count {
		out = append(out, plan.Stimulus{T: tick.Time(i) * 200 * milli, Site: 0, Rule: event.Train})
	}
	return out
}

func TestADropPatternSetLaterTakesEffect(t *testing.T) {
	for _, c := range []struct {
		name        string
		start, then heart.Drop
		want        int // of ten impulses, the last five under the second pattern
	}{
		{"none, then all at random", heart.Drop{}, heart.Drop{Chance: 1}, 5},
		{"all at random, then none", heart.Drop{Chance: 1}, heart.Drop{}, 5},
		{"all at random, then a pattern", heart.Drop{Chance: 1}, heart.Drop{Of: 2, Pass: 1}, 5 + 2},
		{"none, then a pattern with a phase", heart.Drop{}, heart.Drop{Of: 10, Pass: 9, Phase: 9}, 1},
		{"a pattern that starts anew", heart.Drop{Of: 2, Pass: 1}, heart.Drop{Of: 10, Pass: 5}, 2},
		{"a pattern that goes on", heart.Drop{Of: 2, Pass: 1}, heart.Drop{Of: 2, Pass: 1}, 5},
	} {
		t.Run(c.name, func(t *testing.T) {
			h, then := bridge(), bridge()
			h.Paths[0].Drop, then.Paths[0].Drop = c.start, c.then
			l := playProgram(t, &plan.Program{Heart: h, Span: 2000 * milli, Stimuli: trainAtA(10), Changes: []plan.Change{{T: 900 * milli, Field: "drop", Heart: then}}})
			if got := strings.Count(l.Text(), "dropped"); got != c.want {
				t.Errorf("%d dropped, want %d", got, c.want)
			}
		})
	}
}

func TestJitterSetLaterTakesEffect(t *testing.T) {
	h, then := bridge(), bridge()
	h.Foci = []heart.Focus{{Site: 0, Rate: heart.Constant(300)}}
	then.Foci = []heart.Focus{{Site: 0, Rate: heart.Constant(300), Jitter: 50 * tick.Millisecond}}
	l := playProgram(t, &plan.Program{Heart: h, Span: 2000 * milli, Changes: []plan.Change{{T: 900 * milli, Field: "jitter", Heart: then}}})
	regular := 0
	for _, e := range l.Events {
		if e.Kind == event.Discharge && e.T%(200*milli) == 0 {
			regular++
		}
	}
	// 200, 400, 600, 800 and 1000, whose cycle had begun before the change.
	if regular != 5 {
		t.Errorf("%d discharges at multiples of the cycle, want 5", regular)
	}
}

// The first focus fires at 10 ms, when the second counts as having begun its cycle.
func TestAFocusFiredByAnotherIsReset(t *testing.T) {
	h := bridge()
	h.Foci = []heart.Focus{{Site: 0, Rate: heart.Constant(60), First: 10 * tick.Millisecond}, {Site: 0, Rate: heart.Constant(100), First: 610 * tick.Millisecond}}
	got := lines(playProgram(t, &plan.Program{Heart: h, Span: 615 * milli}), "discharge")
	want := `1 10000 discharge phase4 from=0 site=a
4 610000 discharge phase4 from=2 site=a`
	if got != want {
		t.Errorf("got\n%s\nwant\n%s", got, want)
	}
}

// The focus would discharge at 300 ms at a cycle of 1000 ms: its cycle began at
// -700 ms. A beat forced at 200 ms comes 900 ms into that cycle and cuts a tenth of
// it: S = 0.1, and the next cycle lasts 1100 ms.
func TestSuppressionKnowsThePhaseAtTheStart(t *testing.T) {
	h := bridge()
	h.Foci = []heart.Focus{{Site: 0, Rate: heart.Constant(60), First: 300 * tick.Millisecond, OverdriveGain: 1, OverdriveTau: tick.Minute}}
	got := lines(playProgram(t, &plan.Program{Heart: h, Span: 2000 * milli, Stimuli: []plan.Stimulus{{T: 200 * milli, Site: 0, Rule: event.Premature}}}), "discharge")
	if want := "4 1300000 discharge phase4 from=2 site=a"; got != want {
		t.Errorf("got\n%s\nwant\n%s", got, want)
	}
}

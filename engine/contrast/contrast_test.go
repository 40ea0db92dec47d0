package contrast

import (
	"fmt"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"escapement/engine/event"
	"escapement/engine/measure"
	"escapement/engine/plan"
	"escapement/engine/sim/simtest"
	"escapement/engine/tick"
	"escapement/presets"
)

func of(p simtest.Played) Side {
	return Side{Log: p.Log, Report: measure.Of(p.Log, nil), Plan: p.Plan}
}

func side(t simtest.T, file string) Side { return of(simtest.Play(t, file)) }

func preset(t simtest.T, name string) Side { return of(simtest.Preset(t, name)) }

func TestATimelineDoesNotDifferFromItself(t *testing.T) {
	for _, e := range presets.List() {
		s := preset(t, e.Name)
		c := Of(s, s)
		if len(c.Events) != 0 || len(c.Change) != 0 {
			t.Errorf("%s: %d events and %d settings differ", e.Name, len(c.Events), len(c.Change))
		}
		for _, b := range c.Beats {
			if b.Sign != Same || b.Before != b.After {
				t.Errorf("%s: beat %+v", e.Name, b)
			}
		}
		for _, r := range c.Rows {
			if r.Sign != Same || r.By != "" || r.Before != r.After {
				t.Errorf("%s: row %+v", e.Name, r)
			}
		}
	}
}

var opposite = [...]Sign{Same: Same, Gone: New, New: Gone, Earlier: Later, Later: Earlier, Altered: Altered}

// The other way round, the same pairs with before and after exchanged.
func TestComparingTheOtherWayRoundGivesTheSame(t *testing.T) {
	names := presets.List()
	sides := map[string]Side{}
	get := func(t simtest.T, name string) Side {
		if _, ok := sides[name]; !ok {
			sides[name] = preset(t, name)
		}
		return sides[name]
	}
	rapid.Check(t, func(t *rapid.T) {
		a := get(t, names[rapid.IntRange(0, len(names)-1).Draw(t, "before")].Name)
		b := get(t, names[rapid.IntRange(0, len(names)-1).Draw(t, "after")].Name)
		there, back := Of(a, b), Of(b, a)
		key := func(d Difference) string { return fmt.Sprint(d.Before, d.After, d.By, d.Longer, d.Sign) }
		var x, y []string
		for _, d := range there.Events {
			x = append(x, key(d))
		}
		for _, d := range back.Events {
			d.Before, d.After, d.By, d.Longer, d.Sign = d.After, d.Before, -d.By, -d.Longer, opposite[d.Sign]
			y = append(y, key(d))
		}
		slices.Sort(x)
		slices.Sort(y)
		if !slices.Equal(x, y) {
			t.Fatalf("there %v\nback %v", x, y)
		}
		if len(there.Beats) != len(back.Beats) || len(there.Change) != len(back.Change) {
			t.Fatalf("%d beats there, %d back; %d settings there, %d back", len(there.Beats), len(back.Beats), len(there.Change), len(back.Change))
		}
	})
}

// Every member is told once, in pairs that do not cross and lie within reach.
func TestEveryInstantIsPairedOnceAndPairsDoNotCross(t *testing.T) {
	times := rapid.Custom(func(t *rapid.T) []tick.Time {
		out := rapid.SliceOfN(rapid.Map(rapid.IntRange(0, 40), func(n int) tick.Time { return tick.Time(n) * 50000 }), 0, 20).Draw(t, "times")
		slices.Sort(out)
		return out
	})
	rapid.Check(t, func(t *rapid.T) {
		b, a := times.Draw(t, "before"), times.Draw(t, "after")
		nextB, nextA := 0, 0
		pair(b, a, Reach, func(i, j int) {
			if i >= 0 {
				if i != nextB {
					t.Fatalf("before %d told when %d was due", i, nextB)
				}
				nextB++
			}
			if j >= 0 {
				if j != nextA {
					t.Fatalf("after %d told when %d was due", j, nextA)
				}
				nextA++
			}
			if i >= 0 && j >= 0 && distance(b[i], a[j]) > Reach {
				t.Fatalf("%v and %v are a pair", b[i], a[j])
			}
		})
		if nextB != len(b) || nextA != len(a) {
			t.Fatalf("told %d of %d and %d of %d", nextB, len(b), nextA, len(a))
		}
	})
}

const pvc = `{"format":"escapement-plan/1","span_ms":2290,"heart":{"sinus":{"rate_bpm":60},"av_node":{"fast":{"va_ms":null}}},"interventions":[{"at_ms":%d,"do":"stimulate","site":"rv_apex"}]}`

// A ventricular stimulus moves by 40 ms. No impulse is conducted back and the strip
// ends before the sinus node discharges again, so by hand: the stimulus and all it
// depolarises move by 40 ms, and nothing else differs. Only the block in the AV node comes
// a little sooner after the stimulus: the node has rested 40 ms longer.
func TestAStimulusMovedBy40MSMovesItsOwnQRSAndNothingElse(t *testing.T) {
	before, after := side(t, fmt.Sprintf(pvc, 1950)), side(t, fmt.Sprintf(pvc, 1990))
	c := Of(before, after)
	var got []string
	for _, b := range c.Beats {
		if b.Sign != Same {
			got = append(got, fmt.Sprintf("%c %s %v %s", b.Channel, b.Sign, b.By(), b.What))
		}
	}
	if want := []string{"V later 40 "}; !slices.Equal(got, want) {
		t.Errorf("beats: got %q, want %q", got, want)
	}
	var moved []string
	for _, d := range c.Events {
		e := before.Log.At(d.Before)
		inNode := e.Kind == event.Block && before.Log.Paths[e.Path].Name == "av_fast"
		if d.Sign != Later || d.What != "" || d.By != 40*tick.Millisecond && !(inNode && d.By < 40*tick.Millisecond && d.By > 39*tick.Millisecond) {
			t.Errorf("%+v, want 40 ms later", d)
		}
		moved = append(moved, e.Kind.String()+" "+placeOf(before.Log, e).name)
	}
	own := 0
	for i := range before.Log.Events {
		if before.Log.Events[i].T >= 1950*1000 {
			own++
		}
	}
	if len(c.Events) != own || !slices.Contains(moved, "stimulus rv_apex") || !slices.Contains(moved, "activate his") {
		t.Errorf("%d of %d events since the stimulus moved: %q", len(c.Events), own, moved)
	}
	if len(c.Change) != 1 || c.Change[0] != (plan.SettingChange{Path: "interventions[0].at_ms", Label: "at", Before: "1950 ms", After: "1990 ms"}) {
		t.Errorf("settings: %+v", c.Change)
	}
}

// A train moved by more than half its cycle stays one train.
func TestAMovedTrainIsNotTakenForAnotherOne(t *testing.T) {
	train := `{"format":"escapement-plan/1","span_ms":6000,"interventions":[{"at_ms":%d,"do":"train","site":"rv_apex","cycle_ms":300,"count":5}]}`
	before, after := side(t, fmt.Sprintf(train, 2000)), side(t, fmt.Sprintf(train, 2200))
	n := 0
	for _, d := range Of(before, after).Events {
		e := before.Log.At(d.Before)
		if e == nil || e.Kind != event.Stimulus {
			if d.After != 0 && after.Log.At(d.After).Kind == event.Stimulus {
				t.Errorf("a new stimulus: %+v", d)
			}
			continue
		}
		if n++; d.By != 200*tick.Millisecond {
			t.Errorf("stimulus at %v moved by %v, want 200", e.T, d.By)
		}
	}
	if n != 5 {
		t.Errorf("%d stimuli moved, want 5", n)
	}
}

func TestATakenAwayBeatIsGone(t *testing.T) {
	c := Of(side(t, fmt.Sprintf(pvc, 1950)), side(t, `{"format":"escapement-plan/1","span_ms":2290,"heart":{"sinus":{"rate_bpm":60},"av_node":{"fast":{"va_ms":null}}}}`))
	var text []string
	for _, r := range c.Rows {
		if r.Sign == Gone || r.Sign == New {
			text = append(text, r.Part+": "+r.Name+" "+r.By)
		}
	}
	for _, want := range []string{"Findings: 1 ventricular premature beat", "Settings: taken away gone"} {
		if !slices.ContainsFunc(text, func(s string) bool { return strings.HasPrefix(s, want) }) {
			t.Errorf("got %q, want one that begins with %q", text, want)
		}
	}
}

// The table by hand: 60/min to 75/min makes the RR 1000 and 800 ms.
func TestTheTableOfAFasterSinusRate(t *testing.T) {
	heart := `{"format":"escapement-plan/1","span_ms":10000,"heart":{"sinus":{"rate_bpm":%d}}}`
	c := Of(side(t, fmt.Sprintf(heart, 60)), side(t, fmt.Sprintf(heart, 75)))
	for _, want := range []Row{
		{"Rates", "QRS rate", "60/min", "75/min", "+15/min", Later, ""},
		{"Intervals", "RR, shortest", "1000 ms", "800 ms", "−200 ms", Earlier, ""},
		{"Intervals", "RR, longest", "1000 ms", "800 ms", "−200 ms", Earlier, ""},
		{"Settings", "sinus rate", "60/min", "75/min", "changed", Altered, "heart.sinus.rate_bpm"},
	} {
		if !slices.Contains(c.Rows, want) {
			t.Errorf("no row %+v in %+v", want, c.Rows)
		}
	}
}

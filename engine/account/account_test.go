package account

import (
	"encoding/json"
	"strings"
	"testing"

	"escapement/engine/event"
	"escapement/engine/sim/simtest"
	"escapement/engine/tick"
	"escapement/presets"
)

// small holds one of everything, by hand. Path and site words come from the names.
const small = `log span=9000000
site sinus sinus
site right_atrium atrium
site left_atrium atrium
site av_junction av_node
site rv_apex ventricle
path exit sinus sinus right_atrium
path across atrium right_atrium left_atrium
path AV_node av_node right_atrium av_junction
path below purkinje av_junction rv_apex
1 100000 discharge phase4 from=0 site=sinus
2 100000 activate fired from=1 site=sinus until=250000
3 160000 activate conducted from=2 site=right_atrium path=exit dir=down recovery=-1125899906842624 needed=300000 until=400000
4 200000 activate conducted from=3 site=left_atrium path=across dir=down until=430000
5 260000 activate conducted from=3 site=av_junction path=AV_node dir=down recovery=-1125899906842624 needed=230000 until=360000
6 310000 activate conducted from=5 site=rv_apex path=below dir=down until=560000
7 474000 stimulus premature from=0 site=right_atrium recovery=314000 needed=240000 captured=1
8 474000 activate captured from=7 site=right_atrium until=700000
9 474000 block path_refractory from=8 site=right_atrium path=AV_node dir=down recovery=214000 needed=230000
10 500000 block site_refractory from=8 site=right_atrium path=across dir=down depth=1000 recovery=300 needed=230000
11 534000 activate conducted from=8 site=sinus path=exit dir=up recovery=374000 needed=300000 until=684000
12 600000 stimulus train from=0 site=rv_apex recovery=290000 needed=250000 captured=1
13 600000 activate captured from=12 site=rv_apex until=850000
14 640000 stimulus train from=0 site=rv_apex recovery=40000 needed=250000
15 1334000 discharge phase4 from=11 site=sinus
16 1334000 activate fired from=15 site=sinus until=1484000
17 1394000 activate conducted from=16 site=right_atrium path=exit dir=down recovery=800000 needed=300000 until=1640000
18 1420000 discharge phase4 from=0 site=av_junction
19 1420000 activate fired from=18 site=av_junction until=1520000
20 1440000 block collision from=17 site=right_atrium path=AV_node dir=down depth=690
21 1440000 block collision from=19 site=av_junction path=AV_node dir=up depth=310
22 1500000 change planned from=0 field="heart.sinus.rate_bpm" to="40"
23 2534000 discharge phase4 from=15 site=sinus
24 2534000 activate fired from=23 site=sinus until=2684000
25 2534000 block dropped from=24 site=sinus path=exit dir=down
26 3000000 discharge phase4 from=18 site=av_junction
27 3000000 activate fired from=26 site=av_junction until=3100000
28 3000000 block one_way from=27 site=av_junction path=AV_node dir=up depth=400
`

func parse(t testing.TB, text string) *event.Log {
	t.Helper()
	l, err := event.Parse(strings.NewReader(text))
	if err != nil {
		t.Fatal(err)
	}
	for _, err := range event.Validate(l) {
		t.Fatal(err)
	}
	return l
}

func TestSentences(t *testing.T) {
	l := parse(t, small)
	for _, c := range []struct {
		name   string
		id     event.ID
		says   string
		margin float64 // -1 for none
	}{
		{"block by recovery", 9, "The impulse reached the AV node 214 ms after the last one had left it (event 5); it needed 230 ms: blocked, 16 ms short.", 16},
		{"which impulse", 9, "It was the impulse of the stimulus at the right atrium (0.474 s).", 16},
		{"first discharge", 1, "It is its first discharge on this strip: its cycle began before the start.", -1},
		{"reset", 15, "Its cycle began 800 ms before, when the impulse of the stimulus at the right atrium (0.474 s) reached it and reset it.", -1},
		{"undisturbed", 23, "Its cycle began with its own discharge 1200 ms before (50/min).", -1},
		{"longer", 23, "That is 400 ms longer than its cycle before.", -1},
		{"conducted", 5, "The impulse of the sinus node (0.100 s) reached the av junction at 0.260 s, 100 ms after the right atrium.", -1},
		{"none before", 5, "No impulse had passed the AV node before on this strip.", -1},
		{"backwards", 11, "The impulse of the stimulus at the right atrium (0.474 s) reached the sinus at 0.534 s, 60 ms after the right atrium, going backwards.", 74},
		{"recovery to spare", 17, "It entered the exit 800 ms after the last one had left it (the impulse of the stimulus at the right atrium (0.474 s), going the other way, event 11); it needed 300 ms.", 500},
		{"captured", 7, "The site had last been depolarised 314 ms before and needed 240 ms.", 74},
		{"not captured", 14, "The site had been depolarised 40 ms before and needed 250 ms: still refractory, 210 ms short.", 210},
		{"train", 12, "A stimulus of a planned train at the rv apex, 0.600 s, captured.", 40},
		{"site", 10, "It needed 230 ms: 230 ms short.", 229.7},
		{"collision", 20, "The other was the impulse of the av junction (1.420 s) (event 21).", -1},
		{"dropped", 25, "The impulse of the sinus (2.534 s) was stopped in the exit by a drop pattern put on it. The pattern stands for a cause that is not modelled.", -1},
		{"one way", 28, "It went 40% of the way in before it stopped, and the path has to recover from that (concealed conduction).", -1},
		{"change", 22, "From 1.500 s on the plan sets heart.sinus.rate_bpm to 40.", -1},
	} {
		a := Of(l, c.id)
		text := strings.Join(a.Sentences, " ")
		if !strings.Contains(text, strings.ReplaceAll(c.says, "sinus node", "sinus")) {
			t.Errorf("%s: got %q, want %q in it", c.name, text, c.says)
		}
		switch {
		case c.margin == -1 && a.Margin != nil:
			t.Errorf("%s: margin got %v, want none", c.name, *a.Margin)
		case c.margin >= 0 && (a.Margin == nil || a.Margin.MS != c.margin):
			t.Errorf("%s: margin got %v, want %v", c.name, a.Margin, c.margin)
		}
	}
}

func TestChainEndsAtTheFocus(t *testing.T) {
	l := parse(t, small)
	a := Of(l, 17)
	var ids []event.ID
	for _, s := range a.Chain {
		ids = append(ids, s.ID)
	}
	// back to the discharge, then to what began its cycle
	if want := []event.ID{17, 16, 15, 11}; len(ids) != 4 || ids[0] != want[0] || ids[2] != want[2] || ids[3] != want[3] {
		t.Errorf("got %v, want %v", ids, want)
	}
	if got := Of(l, 3).Led; len(got) != 2 || got[0].ID != 4 || got[1].ID != 5 {
		t.Errorf("led to: got %v, want 4 and 5", got)
	}
	if Of(l, 0) != nil || Of(l, 99) != nil {
		t.Error("an account of an event that is not there")
	}
}

func TestSpan(t *testing.T) {
	for _, c := range []struct {
		name string
		us   int64
		want string
	}{{"whole", 214000, "214 ms"}, {"rounds", 213600, "214 ms"}, {"small", 3240, "3.2 ms"}, {"small whole", 3000, "3 ms"}, {"tiny", 20, "under 0.1 ms"}, {"zero", 0, "0 ms"}, {"almost ten", 9960, "10 ms"}, {"seconds", 12340000, "12.3 s"}, {"negative", -5000, "5 ms"}} {
		if got := span(tick.Dur(c.us)); got != c.want {
			t.Errorf("%s: got %q, want %q", c.name, got, c.want)
		}
	}
}

func TestListing(t *testing.T) {
	l := parse(t, small)
	var got []string
	for _, s := range Listing(l, 0, 650000) {
		got = append(got, s.Text)
	}
	want := []string{
		"0.100 s: The sinus discharged by itself.",
		"0.160 s: The atria begin at the right atrium, reached from the sinus; 2 places depolarised in 40 ms.",
		"0.260 s: The impulse reached the av junction 100 ms after the right atrium.",
		"0.310 s: The ventricles begin at the rv apex, reached from the av junction.",
		"0.474 s: A stimulus at the right atrium captured.",
		"0.474 s: The atria begin at the right atrium by the stimulus.",
		"0.474 s: The impulse was blocked in the AV node, 16 ms short.",
		"0.534 s: The impulse reached the sinus 60 ms after the right atrium, going backwards.",
		"0.600 s: A stimulus at the rv apex captured.",
		"0.600 s: The ventricles begin at the rv apex by the stimulus.",
		"0.640 s: A stimulus at the rv apex did not capture.",
	}
	if strings.Join(got, "\n") != strings.Join(want, "\n") {
		t.Errorf("got\n%s\nwant\n%s", strings.Join(got, "\n"), strings.Join(want, "\n"))
	}
	if got := Listing(l, 2000000, 2100000); len(got) != 0 {
		t.Errorf("silent stretch: got %v", got)
	}
}

// Every event of every preset can be accounted for.
func TestPresets(t *testing.T) {
	for _, p := range presets.List() {
		l := simtest.Preset(t, p.Name).Log
		for id := event.ID(1); int(id) <= len(l.Events); id++ {
			check(t, l, id)
		}
		for _, line := range Listing(l, 0, l.Span) {
			if line.Text == "" || line.ID == 0 {
				t.Fatalf("%s: an empty line", p.Name)
			}
		}
	}
}

func check(t *testing.T, l *event.Log, id event.ID) {
	t.Helper()
	a := Of(l, id)
	if a.Title == "" || len(a.Sentences) == 0 || len(a.Chain) == 0 || a.Chain[0].ID != id {
		t.Fatalf("event %d: %+v", id, a)
	}
	for _, s := range a.Sentences {
		if strings.Contains(s, "_") && !strings.Contains(s, "heart.") && !strings.Contains(s, "pacemaker.") || strings.Contains(s, "  ") || !strings.HasSuffix(s, ".") {
			t.Fatalf("event %d: %q", id, s)
		}
	}
	if _, err := json.Marshal(a); err != nil {
		t.Fatal(err)
	}
}

// FuzzOf: any log the validator accepts can be accounted for and listed.
func FuzzOf(f *testing.F) {
	f.Add(small)
	f.Fuzz(func(t *testing.T, text string) {
		l, err := event.Parse(strings.NewReader(text))
		if err != nil || len(event.Validate(l)) > 0 || len(l.Events) > 300 {
			return
		}
		for id := event.ID(1); int(id) <= len(l.Events); id++ {
			if _, err := json.Marshal(Of(l, id)); err != nil {
				t.Fatal(err)
			}
		}
		Listing(l, 0, l.Span)
	})
}

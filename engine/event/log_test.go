package event

import (
	"bytes"
	"encoding/json"
	"strings"
	"testing"

	"escapement/engine/tick"
)

const small = `log span=2000000
site sinus sinus
site right_atrium atrium
site his his
path sinoatrial sinus sinus right_atrium
path node av_node right_atrium his
1 300000 discharge phase4 from=0 site=sinus
2 300000 activate fired from=1 site=sinus until=450000
3 360000 activate conducted from=2 site=right_atrium path=sinoatrial dir=down until=580000
4 500000 block path_refractory from=3 site=right_atrium path=node dir=down depth=250 recovery=150000 needed=200000
5 900000 stimulus premature from=0 site=right_atrium recovery=540000 needed=220000 captured=1
6 900000 activate captured from=5 site=right_atrium until=1120000
7 1000000 change planned from=0 field="heart.sinus.rate_bpm" to="90 over 1000 ms"
`

func parse(t *testing.T, text string) *Log {
	t.Helper()
	l, err := Parse(strings.NewReader(text))
	if err != nil {
		t.Fatal(err)
	}
	return l
}

func TestTextRoundTrip(t *testing.T) {
	l := parse(t, small)
	if got := l.Text(); got != small {
		t.Errorf("got\n%s\nwant\n%s", got, small)
	}
	if faults := Validate(l); len(faults) > 0 {
		t.Errorf("a good log has faults: %v", faults)
	}
}

// Each row spoils the good log in one place; the validator must see it.
func TestValidatorSeesEachFault(t *testing.T) {
	for _, c := range []struct{ name, old, new, want string }{
		{"id out of order", "\n3 360000", "\n4 360000", "stands at place 3"},
		{"time runs back", "\n5 900000", "\n5 400000", "before the event ahead"},
		{"after the end", "log span=2000000", "log span=950000", "outside the strip"},
		{"cause later", "from=2 site=right_atrium path", "from=5 site=right_atrium path", "not an earlier event"},
		{"cause at another site", "from=2 site=right_atrium path=sino", "from=1 site=right_atrium path=sino", "does not fit together"},
		{"path does not lead there", "site=right_atrium path=sinoatrial", "site=his path=sinoatrial", "does not fit together"},
		{"inside the refractory period", "until=580000", "until=980000", "is depolarised at 900 ms, refractory until 980 ms"},
		{"refractory period ends first", "until=1120000", "until=800000", "before it begins"},
		{"blocked although recovered", "recovery=150000 needed=200000", "recovery=250000 needed=200000", "although 200 were enough"},
		{"capture without a capture", " captured=1", "", "does not fit together"},
		{"fired without discharge", "discharge phase4 from=0 site=sinus", "stimulus premature from=0 site=sinus", "does not fit together"},
	} {
		t.Run(c.name, func(t *testing.T) {
			if !strings.Contains(small, c.old) {
				t.Fatalf("%q is not in the log", c.old)
			}
			faults := Validate(parse(t, strings.Replace(small, c.old, c.new, 1)))
			for _, f := range faults {
				if strings.Contains(f.Error(), c.want) {
					return
				}
			}
			t.Errorf("faults %v, want one with %q", faults, c.want)
		})
	}
}

func TestFingerprintSeesEveryField(t *testing.T) {
	want := parse(t, small).Fingerprint()
	for _, c := range [][2]string{{"span=2000000", "span=2000001"}, {"site his his", "site his purkinje"}, {"1 300000", "1 300001"},
		{"depth=250", "depth=251"}, {"recovery=150000", "recovery=150001"}, {"until=1120000", "until=1120001"}, {"from=2 ", "from=1 "}, {`to="90`, `to="91`}, {"dir=down depth", "dir=up depth"}} {
		if got := parse(t, strings.Replace(small, c[0], c[1], 1)).Fingerprint(); got == want {
			t.Errorf("%s for %s leaves the fingerprint as it is", c[1], c[0])
		}
	}
}

// The JSON lines are a contract: names and units stay.
func TestJSONLines(t *testing.T) {
	var b bytes.Buffer
	if err := parse(t, small).WriteJSON(&b); err != nil {
		t.Fatal(err)
	}
	lines := strings.Split(strings.TrimSpace(b.String()), "\n")
	want := `{"id":4,"t_us":500000,"kind":"block","site":"right_atrium","path":"node","dir":"down","cause":3,"rule":"path_refractory","reason":"path_refractory","depth":0.25,"recovery_us":150000,"needed_us":200000,"missed_by_us":50000}`
	if lines[3] != want {
		t.Errorf("got  %s\nwant %s", lines[3], want)
	}
	for i, line := range lines {
		var m map[string]any
		if err := json.Unmarshal([]byte(line), &m); err != nil {
			t.Fatal(err)
		}
		for _, k := range []string{"id", "t_us", "kind", "cause", "rule"} {
			if _, ok := m[k]; !ok {
				t.Errorf("line %d has no %s", i+1, k)
			}
		}
	}
}

func TestChainWalksBackToTheFocus(t *testing.T) {
	l := parse(t, small)
	ids := l.Chain(4)
	if len(ids) != 4 || ids[3] != 1 || l.Origin(4).ID != 1 || l.Origin(6).ID != 5 {
		t.Errorf("chain %v, origins %d and %d", ids, l.Origin(4).ID, l.Origin(6).ID)
	}
	if got, want := l.At(4).MissedBy(), 50*tick.Millisecond; got != want {
		t.Errorf("missed by %v ms, want %v", got, want)
	}
}

// A log that names an event as its own cause is refused, and a walk still ends.
func TestChainEndsWhereCausesGoRound(t *testing.T) {
	l := parse(t, "log span=9\nsite a atrium\n1 0 discharge phase4 from=1 site=a\n")
	if ids := l.Chain(1); len(ids) != 1 {
		t.Errorf("chain %v", ids)
	}
	if len(Validate(l)) == 0 {
		t.Error("the validator lets it pass")
	}
}

// FuzzParse: any text either fails with an error that names a line or gives a log
// that writes and parses to itself; judging it never panics.
func FuzzParse(f *testing.F) {
	f.Add(small)
	f.Add("log span=1\nsite a atrium\n1 0 block site_refractory from=0 site=a\n")
	f.Fuzz(func(t *testing.T, text string) {
		l, err := Parse(strings.NewReader(text))
		if err != nil {
			return
		}
		once := l.Text()
		again, err := Parse(strings.NewReader(once))
		if err != nil {
			t.Fatalf("%v\n%s", err, once)
		}
		if twice := again.Text(); once != twice {
			t.Fatalf("%s\n%s", once, twice)
		}
		Validate(l)
		l.Fingerprint()
		for i := range l.Events {
			l.Chain(l.Events[i].ID)
		}
	})
}

const paced = `log span=2000000
site right_atrium atrium
site rv_apex ventricle
1 0 window opened from=0 until=1000000 channel=A field="atrial_escape" why="sensor"
2 1000000 stimulus timed from=0 site=right_atrium captured=1 channel=A field="atrial_escape" why="sensor"
3 1000000 activate captured from=2 site=right_atrium until=1220000
4 1100000 sense signal from=0 site=rv_apex channel=V use=safety by=1
5 1110000 stimulus timed from=4 site=rv_apex channel=V outcome=below_threshold field="safety"
6 1200000 mode switched from=4 field="DDD" to="DDI" why="atrial rate"
`

// The device's events keep every field in the text form, and the validator knows them.
func TestDeviceEventsRoundTrip(t *testing.T) {
	l := parse(t, paced)
	if got := l.Text(); got != paced {
		t.Errorf("got\n%s\nwant\n%s", got, paced)
	}
	if faults := Validate(l); len(faults) > 0 {
		t.Errorf("faults: %v", faults)
	}
	for _, c := range [][2]string{{"use=safety ", ""}, {"until=1000000", "until=900000 by=2"}, {`to="DDI" `, ""}, {"channel=V use", "use"}} {
		if spoiled := parse(t, strings.Replace(paced, c[0], c[1], 1)); len(Validate(spoiled)) == 0 && spoiled.Fingerprint() == l.Fingerprint() {
			t.Errorf("%q for %q passes unseen", c[1], c[0])
		}
	}
	var b bytes.Buffer
	if err := l.WriteJSON(&b); err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{
		`"timer":"safety","outcome":"below_threshold"`, `"channel":"V","use":"safety","because":1`,
		`"name":"atrial_escape","until_us":1000000,"ended_by":0`, `"from":"DDD"`,
	} {
		if !strings.Contains(b.String(), want) {
			t.Errorf("the JSON lines lack %s:\n%s", want, b.String())
		}
	}
}

package main

import (
	"encoding/json"
	"errors"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"escapement/engine/plan"
)

var upperMap = []string{"sweep", "dual-upper-rate-wenckebach", "-x", "heart.sinus.rate_bpm=100:160:20", "-y", "pacemaker.pvarp_ms=250,300", "-outcomes", "pattern,v_rate_bpm"}

// By the closed forms: MTRI 500, SAV 150; TARP 400 and 450. At 140 PP is 428.6: N = 0 + 2
// below TARP 400's band, and shorter than TARP 450: 2:1.
func TestSweepPrintsATable(t *testing.T) {
	out, err := call(t, "", append(upperMap, "-csv", "-j", "2")...)
	if err != nil {
		t.Fatal(err)
	}
	var rows []string
	for line := range strings.Lines(out) {
		f := strings.Split(strings.TrimSpace(line), ",")
		rows = append(rows, strings.Join(f[:3], " "))
	}
	want := []string{"heart.sinus.rate_bpm pacemaker.pvarp_ms pattern", "100 250 1:1", "120 250 1:1", "140 250 3:2", "160 250 2:1",
		"100 300 1:1", "120 300 1:1", "140 300 2:1", "160 300 2:1"}
	if got := strings.Join(rows, "\n"); got != strings.Join(want, "\n") {
		t.Errorf("got\n%s\nwant\n%s", got, strings.Join(want, "\n"))
	}
}

func TestSweepInPartsIsTheSameAsWhole(t *testing.T) {
	whole, err := call(t, "", upperMap...)
	if err != nil {
		t.Fatal(err)
	}
	dir := t.TempDir()
	join := append(append([]string{}, upperMap...), "-join")
	for _, part := range []string{"2/3", "3/3", "1/3"} {
		out, err := call(t, "", append(append([]string{}, upperMap...), "-part", part)...)
		if err != nil {
			t.Fatal(err)
		}
		name := filepath.Join(dir, part[:1]+".json")
		if err := os.WriteFile(name, []byte(out), 0o600); err != nil {
			t.Fatal(err)
		}
		join = append(join, name)
	}
	joined, err := call(t, "", join...)
	if err != nil || joined != whole {
		t.Errorf("joined from three parts:\n%s\nwhole:\n%s\n(%v)", joined, whole, err)
	}
	if _, err := call(t, "", join[:len(join)-1]...); err == nil || !strings.Contains(err.Error(), "points are in none of the files, the first is point 0") {
		t.Errorf("two of three parts: %v", err)
	}
}

func TestSweepFindsBoundariesAndOpensAPoint(t *testing.T) {
	out, err := call(t, "", append(upperMap, "-boundaries", "pattern")...)
	if err != nil {
		t.Fatal(err)
	}
	var m struct {
		Rows []struct {
			At         float64
			Boundaries []struct {
				Low, High     float64
				Before, After string
			}
		}
	}
	if err := json.Unmarshal([]byte(out), &m); err != nil || len(m.Rows) != 2 {
		t.Fatalf("%s (%v)", out, err)
	}
	// 60000 / (150 + 250) = 150 and 60000 / (150 + 300) = 133.33: Furman 1985.
	for i, want := range []float64{150, 60000.0 / 450} {
		b := m.Rows[i].Boundaries
		last := b[len(b)-1]
		if last.After != "2:1" || last.Low > want+0.001 || last.High < want-0.001 || last.High-last.Low > 0.1 {
			t.Errorf("PVARP %v: 2:1 begins at %+v, want %v", m.Rows[i].At, last, want)
		}
	}
	out, err = call(t, "", append(upperMap, "-plan", "6")...)
	if err != nil {
		t.Fatal(err)
	}
	p, err := plan.Decode([]byte(out))
	if err != nil || p.Or("heart.sinus.rate_bpm", 0) != 140 || p.Or("pacemaker.pvarp_ms", 0) != 300 || p.Sweep != nil {
		t.Errorf("point 6: %s (%v)", out, err)
	}
}

func TestBadSweepsAreExplained(t *testing.T) {
	for _, c := range []struct {
		name string
		args []string
		want string
	}{
		{"no plan", []string{"sweep"}, "sweep takes a plan, then its flags"},
		{"no axis", []string{"sweep", "normal"}, "sweep: nothing; allowed: an object with x"},
		{"no values", []string{"sweep", "normal", "-x", "heart.sinus.rate_bpm"}, `-x is "heart.sinus.rate_bpm"; allowed: FIELD=FROM:TO:STEP or FIELD=A,B,C`},
		{"misspelt", []string{"sweep", "normal", "-x", "heart.sinus.rate_bmp=60:90:1"}, `did you mean "heart.sinus.rate_bpm"?`},
		{"out of range", []string{"sweep", "normal", "-x", "heart.sinus.rate_bpm=60:900:10"}, "sweep.x.to: 900; allowed: a number from 10 to 220 /min"},
		{"part", []string{"sweep", "normal", "-x", "heart.sinus.rate_bpm=60:90:10", "-part", "4/3"}, `-part is "4/3"; allowed: I/N`},
		{"join of nothing", []string{"sweep", "normal", "-join"}, "-join takes the files to join"},
		{"along", []string{"sweep", "normal", "-along", "z"}, `-along is "z"; allowed: x or y`},
		{"left over", []string{"sweep", "normal", "a"}, `does not know what to do with "a"`},
		{"point", []string{"sweep", "normal", "-x", "heart.sinus.rate_bpm=60:90:10", "-plan", "4"}, "-plan is 4; allowed: 0 to 3"},
		{"flag", []string{"sweep", "normal", "-z"}, "flag provided but not defined: -z"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := call(t, "", c.args...)
			if err == nil || !strings.Contains(err.Error(), c.want) {
				t.Fatalf("got  %v\nwant %s", err, c.want)
			}
			var bad *usageError
			var ds plan.Diagnoses
			if !errors.As(err, &bad) && !errors.As(err, &ds) {
				t.Errorf("%T would exit with 1, want 2", err)
			}
		})
	}
}

package pacer_test

import (
	"fmt"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"
)

// cases is how many random settings and rhythms TestAgreement compares; each is 10
// to 20 s long.
const cases = 4000

// The event-driven device and the fixed-step one give the same stimuli, at the same
// instants and in the same order, and make the same use of every signal, with random
// settings in random rhythms. A case is its number: it can be run again alone.
func TestAgreement(t *testing.T) {
	seen := map[string]int{}
	for n := range cases {
		s, w := randomCase(n)
		if p := s.settings(); len(p.Faults()) > 0 {
			t.Fatalf("case %d: settings that cannot run together: %q", n, p.Faults())
		}
		got, want := runEvents(s, w.copy()), runSteps(s, w.copy())
		if !slices.Equal(got.records, want.records) || !slices.Equal(got.windows, want.windows) {
			t.Fatalf("case %d\n%s", n, explain(s, w))
		}
		for _, r := range want.records {
			seen[s.mode.name+" "+r.what]++
		}
	}
	// A test in which something never comes does not test it.
	for _, what := range []string{
		"DDD AP", "DDD VP", "DDD A tracked", "DDD A refractory", "DDD A blanked", "DDD V safety",
		"DDD V blanked", "DDD V refractory", "DDD V inhibits", "DDD V resets",
		"VDD VP", "VDD A tracked", "VDD A refractory", "VDD A blanked", "VDD V inhibits", "VDD V resets",
		"DDI AP", "DDI VP", "DDI A inhibits", "DDI A refractory", "DDI V safety", "DDI V inhibits", "DDI V resets",
		"VVI VP", "VVI V resets", "VVI V refractory", "AAI AP", "AAI A resets", "AAI A refractory", "AAI A blanked",
		"DDD V noise", "DDI V noise", "VDD V noise", "VVI V noise", "AAI A noise",
	} {
		if seen[what] < 100 {
			t.Errorf("%s came only %d times", what, seen[what])
		}
	}
}

func randomCase(n int) (stepSettings, *world) {
	d := dice{rand.New(rand.NewPCG(2, uint64(n))), []int{1, 10, 50}[n%3]}
	return d.settings(), d.rhythm(10000 + d.IntN(10000))
}

// differ tells whether the devices live differently through a world.
func differ(s stepSettings, w *world) bool {
	a, b := runEvents(s, w.copy()), runSteps(s, w.copy())
	return !slices.Equal(a.records, b.records) || !slices.Equal(a.windows, b.windows)
}

// difference is the first place where two lists differ.
func difference(a, b []record) int {
	for i := range max(len(a), len(b)) {
		if i >= len(a) || i >= len(b) || a[i] != b[i] {
			return i
		}
	}
	return len(a)
}

// explain makes the rhythm as simple as it can be while the devices differ, and
// says where they do.
func explain(s stepSettings, w *world) string {
	for i := 0; i < len(w.answers); {
		c := w.copy()
		c.answers = append(c.answers[:i], c.answers[i+1:]...)
		if differ(s, c) {
			w = c
		} else {
			i++
		}
	}
	for _, chamber := range []byte{'A', 'V'} {
		for t, there := range w.chamber(chamber) {
			if !there {
				continue
			}
			if w.chamber(chamber)[t] = false; !differ(s, w) {
				w.chamber(chamber)[t] = true
			}
		}
	}
	a, b := runEvents(s, w.copy()), runSteps(s, w.copy())
	got, want := a.records, b.records
	if slices.Equal(got, want) {
		got, want = a.windows, b.windows
	}
	i := difference(got, want)
	var out strings.Builder
	fmt.Fprintf(&out, "settings %+v\nanswers %+v\n", s, w.answers)
	fmt.Fprintf(&out, "record: %s\n", format(b.records))
	fmt.Fprintf(&out, "both:   %s\n", format(want[max(0, i-20):i]))
	fmt.Fprintf(&out, "events: %s\n", format(got[i:min(i+6, len(got))]))
	fmt.Fprintf(&out, "steps:  %s", format(want[i:min(i+6, len(want))]))
	return out.String()
}

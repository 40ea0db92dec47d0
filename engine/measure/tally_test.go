package measure

import (
	"slices"
	"testing"

	"escapement/engine/event"
	"escapement/engine/tick"
	"escapement/presets"
)

// A tally says the same as the report of the strip, on every preset.
func TestTheTallyAgreesWithTheReport(t *testing.T) {
	var reader Reader
	loops, synchronies, modes := 0, 0, 0
	for _, name := range presets.Names() {
		l := preset(t, name)
		got, r := reader.Tally(l), Of(l, nil)
		want := Tally{Pattern: got.Pattern, VV: got.VV, Vulnerable: got.Vulnerable, AVLeast: got.AVLeast, AVLongest: got.AVLongest,
			VVLeast: got.VVLeast, VVLongest: got.VVLongest, Longest: got.Longest, SynchronyAtClose: got.SynchronyAtClose, ModeChanges: got.ModeChanges,
			LoopTurns: got.LoopTurns, LoopEnd: got.LoopEnd, LoopCycle: got.LoopCycle, Ps: got.Ps, QRSs: r.Summary.QRSCount}
		if d := r.Device; d != nil {
			want.AS, want.AP, want.VS, want.VP, want.LostA, want.LostV, want.Fusion = d.AS, d.AP, d.VS, d.VP, d.LostA, d.LostV, d.Fusion
			if d.Longest != got.Longest.MS() || *d.Synchronous != *percent(got.Synchronous, got.QRSs) {
				t.Errorf("%s: longest %v, synchronous %v of %d; the report has %v and %v%%", name, got.Longest, got.Synchronous, got.QRSs, d.Longest, *d.Synchronous)
			}
			want.Synchronous = got.Synchronous
		}
		ended, n := false, 0
		for _, f := range r.Findings {
			switch f.Slug {
			case "repetitive_nonreentrant_va_synchrony":
				want.Synchrony += f.Count
				synchronies++
			case "endless_loop_tachycardia":
				n = max(n, f.Count)
			case "mode_switch":
				modes++
				if f.Count != got.ModeChanges {
					t.Errorf("%s: %d mode changes, the report has %d", name, got.ModeChanges, f.Count)
				}
			}
		}
		if ended = got.LoopEnd >= LoopEnded; ended != (n > 0) || ended && got.LoopTurns != n {
			t.Errorf("%s: loop of %d turns, %v; the report has %d", name, got.LoopTurns, got.LoopEnd, n)
		}
		if n > 0 {
			loops++
		}
		if got != want {
			t.Errorf("%s:\ngot  %+v\nwant %+v", name, got, want)
		}
	}
	if loops < 3 || synchronies < 2 || modes < 2 {
		t.Errorf("%d loops, %d synchronies and %d mode switches among the presets: too few to tell", loops, synchronies, modes)
	}
}

// Reading in the same memory again leaves nothing of the strip before.
func TestAReaderKeepsNothingOfTheStripBefore(t *testing.T) {
	names := presets.Names()
	want := map[string]Tally{} // looked up only
	for _, n := range names {
		want[n] = new(Reader).Tally(preset(t, n))
	}
	var reader Reader
	for _, n := range slices.Backward(names) {
		if got := reader.Tally(preset(t, n)); got != want[n] {
			t.Errorf("%s:\ngot  %+v\nwant %+v", n, got, want[n])
		}
	}
}

func TestRepeating(t *testing.T) {
	for _, c := range []struct{ name, flags, want string }{
		{"too few", "111", "none"},
		{"all", "1111111", "1:1"},
		{"none of them", "0000", "1:0"},
		{"two to one", "101010", "2:1"},
		{"begins inside", "1011011011", "3:2"},
		{"two patterns", "1101011010", "5:3"},
		{"only once and a half", "110101101", "varies"},
		{"changes", "1111111110", "varies"},
	} {
		t.Run(c.name, func(t *testing.T) {
			var flags []bool
			for _, f := range c.flags {
				flags = append(flags, f == '1')
			}
			if got := repeating(flags); got != c.want {
				t.Errorf("got %s, want %s", got, c.want)
			}
		})
	}
}

// The vulnerable time lies between the ends of the first and the last refractory period
// of the ventricular muscle of one beat, both ends outside it.
func TestTheVulnerableTimeIsWhileRecoveryIsUneven(t *testing.T) {
	build := func(at tick.Time) *event.Log {
		l := &event.Log{Span: tick.Time(tick.Second), Sites: []event.Site{{Name: "rv_apex", Tissue: event.Ventricle}, {Name: "lv_lateral", Tissue: event.Ventricle}, {Name: "right_atrium", Tissue: event.Atrium}}}
		add := func(e event.Event) {
			e.ID = event.ID(len(l.Events) + 1)
			l.Events = append(l.Events, e)
		}
		add(event.Event{Kind: event.Stimulus, Rule: event.Premature, T: 100000, Site: 0, Path: event.None, Captured: true})
		add(event.Event{Kind: event.Activate, Rule: event.Captured, T: 100000, Cause: 1, Site: 0, Path: event.None, Until: 330000})
		add(event.Event{Kind: event.Activate, Rule: event.Conducted, T: 180000, Cause: 2, Site: 1, Path: event.None, Until: 420000})
		add(event.Event{Kind: event.Stimulus, Rule: event.Premature, T: at, Site: 2, Path: event.None})
		add(event.Event{Kind: event.Stimulus, Rule: event.Premature, T: at, Site: 0, Path: event.None})
		return l
	}
	for _, c := range []struct {
		at   tick.Time
		want int
	}{{300000, 0}, {330000, 0}, {330001, 1}, {419999, 1}, {420000, 0}, {500000, 0}} {
		if got := read(build(c.at)).vulnerable(); got != c.want {
			t.Errorf("at %v: %d, want %d", c.at, got, c.want)
		}
	}
}

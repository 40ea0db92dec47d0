package scene

import (
	"testing"

	"pgregory.net/rapid"

	"escapement/engine/event"
	"escapement/engine/ladder"
	"escapement/engine/lead"
	"escapement/engine/tick"
)

func deviceStrip(t *testing.T, name string, o Options) (*Scene, *ladder.Diagram) {
	t.Helper()
	l := logs(t)[name]
	d := ladder.Build(l, ladder.Options{Form: ladder.Plain})
	return Strip(Input{Log: l, Diagram: d}, o), d
}

// Every window begins and ends at axis.X of its times, as a bar or as a line, and
// carries its event; what ended by an event has a solid edge there, nothing else has.
func TestWindowsStandAtTheirTimes(t *testing.T) {
	for _, name := range []string{"device_upper_rate.log", "device_odd.log"} {
		s, d := deviceStrip(t, name, Options{MMPerS: 61})
		for _, w := range d.Device.Windows {
			bar, edge := false, false
			for _, m := range s.Marks {
				if m.Event != w.Event {
					continue
				}
				ends := near(m.X, s.Axis.X(w.T0)) && near(m.X2, s.Axis.X(w.T1))
				bar = bar || ends && (m.Class == Window || m.Class == WindowArea || m.Class == Timer)
				edge = edge || m.Class == WindowEnd && m.X > s.Axis.X(w.T1)-endMM && m.X < s.Axis.X(w.T1)
			}
			if !bar {
				t.Errorf("%s: %s of event %d from %v to %v is not at its place", name, w.Name, w.Event, w.T0, w.T1)
			}
			if wide := s.Axis.X(w.T1)-s.Axis.X(w.T0) > 2*endMM; edge != w.Ended && wide {
				t.Errorf("%s: %s of event %d has a solid edge: %v, ended by an event: %v", name, w.Name, w.Event, edge, w.Ended)
			}
		}
	}
}

// Deaf windows are hatched, and no line of a hatching leaves its bar.
func TestHatchingStaysInItsBar(t *testing.T) {
	for _, from := range []tick.Time{0, 555 * 1000} { // the second cuts a bar
		s, d := deviceStrip(t, "device_upper_rate.log", Options{MMPerS: 61, From: from})
		for _, w := range d.Device.Windows {
			if w.T1 < from {
				continue
			}
			var bar Box
			n := 0
			for _, m := range s.Marks {
				switch {
				case m.Event != w.Event:
				case m.Shape == Rect && m.Class != Selected:
					bar = Box{m.X, m.Y, m.X2, m.Y2}
				case m.Class == Hatch:
					n++
					if min(m.X, m.X2) < bar.X0-1e-9 || max(m.X, m.X2) > bar.X1+1e-9 || min(m.Y, m.Y2) < bar.Y0-1e-9 || max(m.Y, m.Y2) > bar.Y1+1e-9 {
						t.Errorf("hatching %+v leaves its bar %+v", m, bar)
					}
				}
			}
			if hatched := n > 0; hatched != (w.Hearing == ladder.Deaf) {
				t.Errorf("%s at %v: hatched %v", w.Name, w.T0, hatched)
			}
		}
	}
}

// Bars that say the same of signals never share a place, and timers never share a line.
func TestBarsOfOneRowDoNotOverlap(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		d := ladder.Build(anyLog(r), ladder.Options{}).Device
		if d == nil {
			return
		}
		for i := range d.Windows {
			a := &d.Windows[i]
			if a.Row >= len(d.Rows) || (a.Hearing == ladder.Timer) != d.Rows[a.Row].Timers {
				r.Fatalf("%s stands in row %d of %d", a.Name, a.Row, len(d.Rows))
			}
			for j := range d.Windows[:i] {
				b := &d.Windows[j]
				if a.Row == b.Row && a.Hearing == b.Hearing && a.T0 < max(b.T1, b.Held) && b.T0 < max(a.T1, a.Held) {
					r.Fatalf("%s at %v and %s at %v share row %d", a.Name, a.T0, b.Name, b.T0, a.Row)
				}
			}
		}
	})
}

func TestNearestFindsWindowsAndMarkers(t *testing.T) {
	s, d := deviceStrip(t, "device_upper_rate.log", Options{})
	for _, w := range d.Device.Windows {
		if w.Name != "pvarp" && w.Name != "pvab" && w.Name != "ventricular_refractory" {
			continue
		}
		for _, m := range s.Marks {
			if m.Event == w.Event && m.Shape == Rect {
				if got, _ := s.Nearest(m.X2-0.3, (m.Y+m.Y2)/2, 1); got != w.Event {
					t.Errorf("in %s of event %d: event %d", w.Name, w.Event, got)
				}
			}
		}
	}
	for _, k := range d.Device.Markers {
		found := false
		for _, m := range s.Marks {
			found = found || m.Class == MarkerText && m.Event == k.Event && m.Text == k.Label
		}
		if !found {
			t.Errorf("marker %s at %v has no name", k.Label, k.T)
		}
	}
}

// At the upper rate the AV delay shows what was added, and the number stays when
// names of windows have gone.
func TestStretchedDelayKeepsItsNumber(t *testing.T) {
	for _, c := range []struct {
		mm   float64
		want string
		name bool
	}{{80, "150+80", true}, {25, "150+80", false}, {10, "230", false}} {
		s, _ := deviceStrip(t, "device_upper_rate.log", Options{MMPerS: c.mm})
		number, name := false, false
		for _, m := range s.Marks {
			number = number || m.Class == WindowText && m.Text == c.want
			name = name || m.Class == WindowText && m.Text == "PVARP"
		}
		if !number || name != c.name {
			t.Errorf("%v mm/s: %q %v, PVARP %v, want %v", c.mm, c.want, number, name, c.name)
		}
	}
}

// A stimulus stands on every lead, whether it captured or not.
func TestSpikesStandOnEveryLead(t *testing.T) {
	l := logs(t)["device_odd.log"]
	rec := &lead.Record{}
	for i := range rec.MV {
		rec.MV[i] = make([]float32, 5000)
	}
	in := Input{Log: l, Record: rec}
	for name, s := range map[string]*Scene{
		"strip": Strip(in, Options{Leads: []lead.Name{lead.II, lead.V1}}),
		"page":  Page12(in, Options{}),
	} {
		for i := range l.Events {
			e := &l.Events[i]
			n := 0
			for _, m := range s.Marks {
				if m.Class == Spike && m.Event == e.ID && near(m.X, s.Axis.X(e.T)) && m.X == m.X2 {
					n++
				}
			}
			want := 0
			if e.Kind == event.Stimulus {
				want = map[string]int{"strip": 2, "page": 4}[name] // a column of three and the rhythm strip
			}
			if n != want {
				t.Errorf("%s: event %d has %d spikes, want %d", name, e.ID, n, want)
			}
		}
	}
}

func TestDeviceCanBeLeftOut(t *testing.T) {
	for _, out := range []bool{false, true} {
		s, _ := deviceStrip(t, "device_odd.log", Options{NoDevice: out})
		last := s.Lanes[len(s.Lanes)-1].Name
		if (last == "device") == out {
			t.Errorf("NoDevice %v: the last lane is %q", out, last)
		}
	}
	if s, _ := deviceStrip(t, "normal.log", Options{}); s.Lanes[len(s.Lanes)-1].Name != "ladder" {
		t.Error("a log without a device has its lane")
	}
}

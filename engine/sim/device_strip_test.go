package sim

import (
	"math"
	"strings"

	"escapement/engine/event"
)

// stimuli are the times of the device's stimuli that a timer brought.
func (s strip) stimuli(timer string) []float64 {
	var out []float64
	for i := range s.Events {
		if e := &s.Events[i]; e.Kind == event.Stimulus && e.Field == timer {
			out = append(out, e.T.MS())
		}
	}
	return out
}

// delaysTo are the intervals from the last mark of a kind to the stimuli of a timer.
func (s strip) delaysTo(from, timer string) []float64 {
	var out []float64
	for _, t := range s.stimuli(timer) {
		earlier := before(s.at(from), t)
		out = append(out, t-earlier[len(earlier)-1])
	}
	return out
}

// sinceBeat is the time since the depolarisation of a site before an instant.
func (s strip) sinceBeat(site string, ms float64) float64 {
	earlier := before(s.times(site), ms)
	if len(earlier) == 0 {
		return math.Inf(1)
	}
	return ms - earlier[len(earlier)-1]
}

func (s strip) windowsBy(why string) int {
	n := 0
	for i := range s.Events {
		if e := &s.Events[i]; e.Kind == event.Window && e.Why == why {
			n++
		}
	}
	return n
}

func (s strip) noWindowBy(why string) {
	s.t.Helper()
	if n := s.windowsBy(why); n != 0 {
		s.t.Errorf("%d windows by %s", n, why)
	}
}

// modes compares the changes of mode with "DDD>DDI DDI>DDD".
func (s strip) modes(want string) {
	s.t.Helper()
	var got []string
	for i := range s.Events {
		if e := &s.Events[i]; e.Kind == event.Mode {
			got = append(got, e.Field+">"+e.To)
		}
	}
	if g := strings.Join(got, " "); g != want {
		s.t.Errorf("modes %q, want %q", g, want)
	}
}

// firstVentricular are the beginnings of the ventricular waves: depolarisations of
// muscle with none in the 250 ms before.
func (s strip) firstVentricular() []float64 {
	var out []float64
	last := -1000.0
	for i := range s.Events {
		e := &s.Events[i]
		if e.Kind != event.Activate || s.Sites[e.Site].Tissue != event.Ventricle {
			continue
		}
		if e.T.MS()-last > 250 {
			out = append(out, e.T.MS())
		}
		last = e.T.MS()
	}
	return out
}

// byStimulus counts the regions of ventricular muscle that the stimulus at a time led
// to.
func (s strip) byStimulus(ms float64) int {
	n := 0
	for i := range s.Events {
		e := &s.Events[i]
		if e.Kind != event.Activate || s.Sites[e.Site].Tissue != event.Ventricle {
			continue
		}
		if o := s.Origin(e.ID); o != nil && o.Kind == event.Stimulus && o.T.MS() == ms {
			n++
		}
	}
	return n
}

func within(ts []float64, from, to float64) []float64 { return before(after(ts, from), to) }

func first(ts []float64, n int) []float64 { return ts[:min(n, len(ts))] }

func greatest(ts []float64) float64 { return ts[greatestAt(ts)] }

func greatestAt(ts []float64) int {
	at := 0
	for i := range ts {
		if ts[i] > ts[at] {
			at = i
		}
	}
	return at
}

func before(ts []float64, ms float64) []float64 {
	i := 0
	for i < len(ts) && ts[i] < ms {
		i++
	}
	return ts[:i]
}

func after(ts []float64, ms float64) []float64 { return ts[len(before(ts, ms)):] }

func tail(ts []float64, n int) []float64 { return ts[max(0, len(ts)-n):] }

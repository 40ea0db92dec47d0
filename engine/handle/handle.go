// Package handle says what on a timeline can be moved in time by a value of the plan:
// a stimulus, the end of a window of the device, the discharge of a focus.
//
// A [Handle] names the value that rules where something stands, and how far it moves
// with it. That is read from the record: T of an event is the sum of the spans along
// its causes, and the package knows which value sets which span. So the tenth P goes
// ten times as far as the sinus cycle is changed, a train's third stimulus three
// times, the end of PVARP once. Times of conduction count as they are; where a change
// makes another beat come or go, the event lands elsewhere, which is what the user
// wants to see.
//
// A window that an event ended before its time has no handle, and neither has what no
// single value rules: the sensor's interval, a rate while it ramps.
package handle

import (
	"math"

	"escapement/engine/event"
	"escapement/engine/plan"
	"escapement/engine/tick"
)

// Handle is something that can be moved.
type Handle struct {
	Event event.ID   // what moves, or the window whose end does
	Marks []event.ID // further events at whose marks it can be taken hold of
	End   bool       // it is the end of a window
	T     tick.Time  // where it stands
	From  tick.Time  // where the span began that it ends; T where there is none

	Path  string  // of the value in the plan: "pacemaker.pvarp_ms"
	Label string  // for people: "PVARP"
	Unit  string  // "ms" or "/min"
	Value float64 // now, in that unit

	// Per is by how many milliseconds it moves for each by which the value, or the
	// interval of a rate, grows. It is not 0 and may be negative.
	Per float64

	// Fixed is set where the end of the span stays in place and its beginning moves:
	// the pointer then sets the length.
	Fixed bool

	Min, Max, Step float64 // of the value
}

// At is the value that brings the handle to t, in whole steps and within its range.
func (h *Handle) At(t tick.Time) float64 {
	return h.Round(h.rated(h.rated(h.Value) + t.Sub(h.T).MS()/h.Per))
}

// rated turns a rate into its interval in milliseconds and back, and leaves a length
// as it is.
func (h *Handle) rated(v float64) float64 {
	if h.Unit != "/min" {
		return v
	}
	return 60000 / math.Max(v, 1e-6)
}

// Round puts a value on the nearest whole step within the range.
func (h *Handle) Round(v float64) float64 {
	v = math.Round(math.Round(v/h.Step)*h.Step*1e6) / 1e6
	return math.Min(math.Max(v, h.Min), h.Max)
}

// steps of values by unit, as the page's fields go.
func stepOf(unit string) float64 {
	if unit == "/min" {
		return 1
	}
	return 5
}

// mostEvents is the longest record that is searched for handles.
const mostEvents = 300000

// before is how far ahead of a stretch windows are looked for that end in it: longer
// than any escape interval a device allows.
const before = 8 * tick.Second

// least is the smallest movement for which a handle is offered.
const least = 0.2

// Mover finds the handles of one timeline.
type Mover struct {
	p     *plan.Plan
	log   *event.Log
	set   settings
	spans []span // by event: how it came to stand where it does
	ends  map[event.ID]span
	moves map[string][]float64 // by path: milliseconds of each event for one of the value
	made  []planned            // what the interventions asked for
}

// New reads how the events of a log hang on the values of its plan. The device is nil
// where the plan has none.
func New(p *plan.Plan, device *plan.Device, log *event.Log) *Mover {
	m := &Mover{p: p, log: log, ends: map[event.ID]span{}, moves: map[string][]float64{}}
	if len(log.Events) > mostEvents {
		return m
	}
	m.set = newSettings(p, device, log)
	m.read()
	return m
}

// In lists the handles that stand between two times, in order of events.
func (m *Mover) In(from, to tick.Time) []Handle {
	var out []Handle
	p := map[event.ID]int{} // by the depolarisation that begins a P: its handle
	for i := range m.spans {
		e := &m.log.Events[i]
		if e.T < from.Add(-before) {
			continue
		}
		if e.T > to {
			break
		}
		h, ok := m.handle(e)
		if k, of := p[e.Cause]; of && e.Kind == event.Activate {
			out[k].Marks = append(out[k].Marks, e.ID)
			continue
		}
		if !ok || h.T < from || h.T > to {
			continue
		}
		if e.Kind == event.Activate {
			p[e.ID] = len(out)
		}
		out = append(out, h)
	}
	return out
}

// Find is the handle at an event, or at one of whose marks it is; nil if there is
// none.
func (m *Mover) Find(id event.ID) *Handle {
	e := m.log.At(id)
	if e == nil {
		return nil
	}
	found := m.In(e.T, max(e.T, e.Until))
	for i := range found {
		if found[i].Event == id {
			return &found[i]
		}
		for _, mark := range found[i].Marks {
			if mark == id {
				return &found[i]
			}
		}
	}
	return nil
}

func (m *Mover) handle(e *event.Event) (Handle, bool) {
	s, t, end := m.spans[e.ID-1], e.T, false
	if e.Kind == event.Window {
		s, end = m.ends[e.ID], true
		t = e.Until
	} else if e.Kind == event.Activate {
		s = m.wave(e)
	}
	if s.rule.path == "" {
		return Handle{}, false
	}
	f, ok := plan.FieldAt(s.rule.path)
	if !ok || t > m.log.Span {
		return Handle{}, false
	}
	h := Handle{Event: e.ID, End: end, T: t, From: t, Path: s.rule.path, Label: m.set.label(s.rule.path, f.Label), Unit: s.rule.unit,
		Value: s.rule.value, Min: s.rule.min, Max: s.rule.max, Step: stepOf(s.rule.unit)}
	if c := m.log.At(s.after); c != nil {
		h.From = c.T
	}
	if end {
		h.From = e.T
	}
	if h.Per = m.move(s, s.rule.path); math.Abs(h.Per) < least {
		if h.Fixed, h.Per = true, s.rule.per; !end || math.Abs(h.Per) < least {
			return Handle{}, false
		}
	}
	return h, true
}

// move is how far the end of a span goes for one millisecond of a value.
func (m *Mover) move(s span, path string) float64 {
	v := s.factor() * m.along(path)(s.after)
	for _, k := range s.terms {
		if k.path == path {
			v += k.per
		}
	}
	return v
}

// along gives how far each event goes for one millisecond of a value.
func (m *Mover) along(path string) func(event.ID) float64 {
	at, known := m.moves[path]
	if !known {
		at = make([]float64, len(m.spans)+1)
		m.moves[path] = at
		for i := range m.spans {
			s := &m.spans[i]
			v := s.factor() * at[s.after]
			for _, k := range s.terms {
				if k.path == path {
					v += k.per
				}
			}
			at[i+1] = v
		}
	}
	return func(id event.ID) float64 { return at[id] }
}

package handle

import (
	"math"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// span is how an event, or the end of a window, came to stand where it does: so long
// after another event, by values of the plan.
type span struct {
	after event.ID // 0: the start of the strip
	terms []term   // how far it goes for one millisecond of each value
	rule  rule     // the value that a hand on it moves; no path: none
	scale float64  // how far it goes with what it comes after; 0 stands for 1
}

type term struct {
	path string
	per  float64
}

// rule is a value with its range.
type rule struct {
	term
	unit     string
	value    float64
	min, max float64
}

func (s *span) factor() float64 {
	if s.scale == 0 {
		return 1
	}
	return s.scale
}

// ruled is a span of which one value sets the length.
func ruled(after event.ID, r rule, others ...term) span {
	if r.path == "" {
		return span{after: after}
	}
	return span{after: after, rule: r, terms: append([]term{r.term}, others...)}
}

// read goes through the record once.
func (m *Mover) read() {
	m.spans = make([]span, len(m.log.Events))
	last := map[string]event.ID{} // windows by name, the latest
	m.made = m.planned()
	for i := range m.log.Events {
		e := &m.log.Events[i]
		s := span{after: before0(e)}
		switch e.Kind {
		case event.Window:
			last[e.Field] = e.ID
			if e.Field == "crosstalk" { // it begins where the blanking ends
				s.terms = []term{{m.set.at("pavb_ms", e.T).path, 1}}
			}
			m.ends[e.ID] = m.end(e)
		case event.Stimulus:
			if e.Rule == event.Timed {
				s = m.timed(e, last)
			} else {
				s = m.wantedAt(e)
			}
		case event.Discharge:
			s = m.cycle(e)
		}
		m.spans[i] = s
	}
}

// before0 is the cause of an event, if it is an earlier one.
func before0(e *event.Event) event.ID {
	if e.Cause >= e.ID {
		return 0
	}
	return e.Cause
}

// timers names the window that ends with a stimulus of each timer.
var timers = map[string]string{ // looked up only
	"av_delay": "av_delay", "upper_rate": "upper_rate", "atrial_escape": "atrial_escape", "lower_rate": "lower_rate",
	"atrial_delay": "atrial_delay", "backup": "backup_delay", "safety": "crosstalk",
}

// timed is how a stimulus of the device came: by the end of a window.
func (m *Mover) timed(e *event.Event, last map[string]event.ID) span {
	if w := m.log.At(last[timers[e.Field]]); w != nil && w.Until == e.T {
		s := m.ends[w.ID]
		s.rule = rule{} // it is moved by the end of its window
		return s
	}
	s := span{after: before0(e)}
	if e.Field == "offset" {
		s.terms = []term{{m.set.at("left.offset_ms", e.T).path, 1}}
	}
	return s
}

// wave gives the depolarisation that begins a P the handle of the sinus discharge.
func (m *Mover) wave(e *event.Event) span {
	fired := m.log.At(before0(e))
	if e.Rule != event.Conducted || fired == nil || fired.Rule != event.Fired || m.log.Sites[fired.Site].Tissue != event.Sinus || m.log.Sites[e.Site].Tissue != event.Atrium {
		return span{}
	}
	return m.spans[before0(fired)-1]
}

// cycle is how a focus came to discharge: when its rate had run through one cycle.
func (m *Mover) cycle(e *event.Event) span {
	f, s := m.set.focus[e.Site], span{after: before0(e)}
	if c := m.log.At(s.after); e.Rule == event.Circuit && c != nil {
		now := m.set.at(flutterCycle, c.T)
		now.per = 1
		return ruled(s.after, now)
	}
	if f == nil || f.twice || e.Rule != event.Phase4 {
		return s
	}
	start := tick.Time(0)
	if c := m.log.At(s.after); c != nil {
		start = c.T
	} else if f.first > 0 {
		return ruled(0, rule{term{f.path + "first_ms", 1}, "ms", f.first, 1, m.set.max(f.path + "first_ms")})
	}
	now := m.set.at(f.path+"rate_bpm", start)
	if m.set.ramps(f.path+"rate_bpm", start, e.T) || !(now.value > 0) {
		return s
	}
	length := 60000 / now.value
	change, ok := m.set.between(f.path+"rate_bpm", start, e.T)
	if !ok {
		now.per = 1
		if f.overdrive {
			now.per = e.T.Sub(start).MS() / length
		}
		return ruled(s.after, now)
	}
	// The rate stepped within the cycle: what share of it was over stays over.
	next := m.set.at(f.path+"rate_bpm", change)
	over, then := change.Sub(start).MS()/length, 60000/next.value
	next.per = 1 - over
	s = ruled(s.after, next, term{now.path, over * then / length})
	s.scale = then / length
	return s
}

// planned is a stimulus that an intervention asks for.
type planned struct {
	t    tick.Time
	site string
	rule event.Rule
	r    rule
	used bool
}

func (m *Mover) planned() []planned {
	var out []planned
	for i, it := range m.p.Interventions {
		site, t := it["site"].Text, tick.Time(tick.MS(it["at_ms"].Number))
		put := func(at tick.Time, by event.Rule, name string, value, per float64) {
			path := m.set.item(i, name)
			r := rule{term{path, per}, "ms", value, m.set.min(path), m.set.max(path)}
			if name == "at_ms" {
				r.max = math.Min(r.max, m.log.Span.MS())
			}
			out = append(out, planned{at, site, by, r, false})
		}
		switch it["do"].Text {
		case "stimulate":
			put(t, event.Premature, "at_ms", it["at_ms"].Number, 1)
		case "train":
			cycle := it["cycle_ms"].Number
			for k := range int(it["count"].Number) {
				if k == 0 {
					put(t, event.Train, "at_ms", it["at_ms"].Number, 1)
				} else {
					t = t.Add(tick.MS(cycle))
					put(t, event.Train, "cycle_ms", cycle, float64(k))
				}
			}
			for k, coupling := range it["extras_ms"].List {
				t = t.Add(tick.MS(coupling))
				put(t, event.Premature, m.set.listed("extras_ms", k), coupling, 1)
			}
		}
	}
	return out
}

// wantedAt finds what asked for a planned stimulus.
func (m *Mover) wantedAt(e *event.Event) span {
	for i := range m.made {
		if p := &m.made[i]; !p.used && p.t == e.T && p.rule == e.Rule && p.site == m.log.Sites[e.Site].Name {
			p.used = true
			return ruled(0, p.r)
		}
	}
	return span{}
}

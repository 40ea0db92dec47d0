package ladder

import (
	"escapement/engine/event"
	"escapement/engine/tick"
)

// endedMalus is taken from the priority of a timer that an event ended: its length
// is the heart's, not a setting.
const endedMalus = 30

// waiter gathers a device from the record.
type waiter struct {
	l       *event.Log
	d       *Device
	upper   *event.Event        // the last upper-rate interval
	hears   bool                // the atrial channel has windows of its own
	groups  [groupCount][]int   // indexes of bars
	changed map[string]tick.Dur // the last length, by name; only looked up
}

// device draws what the log's device did, or gives nil where it did nothing.
func device(l *event.Log) *Device {
	w := waiter{l: l, d: &Device{}, changed: map[string]tick.Dur{}}
	for i := range l.Events {
		if e := &l.Events[i]; e.Kind == event.Window && kindOf(e.Field).group == groupAtrium {
			w.hears = true
			break
		}
	}
	for i := range l.Events {
		switch e := &l.Events[i]; e.Kind {
		case event.Window:
			w.window(e)
		case event.Sense, event.Stimulus, event.Mode:
			w.marker(e)
		}
	}
	if len(w.d.Windows) == 0 && len(w.d.Markers) == 0 {
		return nil
	}
	w.hits()
	w.pack()
	return w.d
}

func (w *waiter) window(e *event.Event) {
	k := kindOf(e.Field)
	b := Window{Event: e.ID, Name: e.Field, Label: k.label, Hearing: k.hearing, T0: e.T, T1: e.Until, Ended: e.By != 0, Why: e.Why, Priority: k.priority}
	if b.T1 > w.l.Span {
		b.T1, b.Ended, b.Cut = w.l.Span, false, true
	}
	switch e.Field {
	case "upper_rate":
		w.upper = e
	case "av_delay":
		w.hold(&b, e)
	}
	if b.T1 <= b.T0 {
		return
	}
	w.rank(&b)
	w.add(b, k.group)
	if e.Field == "av_delay" && w.hears {
		b.Hearing, b.Priority, b.Differs = Ignores, kindOf("pvarp").priority, false
		if b.Held != 0 {
			b.T1, b.Ended, b.Held = b.Held, w.l.At(b.HeldBy).Kind == event.Sense, 0
		}
		w.add(b, groupAtrium)
	}
}

// rank raises the text of a window that something changed and of a timer that differs
// from the one before it of its name, and lowers that of one that did not run out.
func (w *waiter) rank(b *Window) {
	if b.Hearing != Timer {
		if b.Why != "" {
			b.Differs = true
			b.Priority += changedBonus
		}
		return
	}
	if b.Ended || b.Cut {
		b.Priority -= endedMalus
		return
	}
	length, was := max(b.T1, b.Held).Sub(b.T0), w.changed[b.Name]
	if was != 0 && max(length-was, was-length) > 10*tick.Millisecond {
		b.Differs = true
		b.Priority += changedBonus
	}
	w.changed[b.Name] = length
}

func (w *waiter) add(b Window, g group) {
	w.groups[g] = append(w.groups[g], len(w.d.Windows))
	w.d.Windows = append(w.d.Windows, b)
}

// hold finds until when the stimulus after an AV delay was held back: to the end of
// the upper-rate interval that still ran, or of what the record names as its timer.
func (w *waiter) hold(b *Window, e *event.Event) {
	from := w.l.At(e.Cause)
	if b.Ended || b.Cut || from == nil || from.Kind != event.Sense {
		return
	}
	until := tick.Time(0)
	if w.upper != nil {
		until = w.upper.Until
	}
	for i := int(e.ID); i < len(w.l.Events) && w.l.Events[i].T <= max(until, b.T1.Add(2*tick.Second)); i++ {
		n := &w.l.Events[i]
		ends := n.Kind == event.Stimulus && n.Rule == event.Timed && n.Channel == 'V' ||
			n.Kind == event.Sense && n.Channel == 'V' && n.Use != event.Blanked && n.Use != event.Refractory
		switch {
		case !ends || n.T < b.T1:
			continue
		case n.T == b.T1 || n.T > until && n.Cause != e.Cause:
			return
		}
		b.Held, b.HeldBy = n.T, n.ID
		return
	}
}

// hits puts the signals into the bars that decided about them.
func (w *waiter) hits() {
	bars := make([]int32, len(w.l.Events)+1) // by event id: 1 + the index of its bar
	for i := range w.d.Windows {
		if b := &w.d.Windows[i]; b.Hearing != Timer {
			bars[b.Event] = int32(i + 1)
		}
	}
	for i := range w.l.Events {
		e := &w.l.Events[i]
		if e.Kind != event.Sense || w.l.At(e.By) == nil || bars[e.By] == 0 {
			continue
		}
		switch e.Use {
		case event.Refractory, event.Blanked, event.Noise, event.Safety:
			if b := &w.d.Windows[bars[e.By]-1]; e.T >= b.T0 && e.T <= b.T1 {
				b.Hits = append(b.Hits, Hit{e.ID, e.T})
			}
		}
	}
}

// pack gives every bar a row of its group: the first in which no bar of its kind
// still runs.
func (w *waiter) pack() {
	for g := range w.groups {
		first := len(w.d.Rows)
		var free [][hearings]tick.Time // by row of the group
		for _, i := range w.groups[g] {
			b := &w.d.Windows[i]
			row := 0
			for row < len(free) && free[row][b.Hearing] > b.T0 {
				row++
			}
			if row == len(free) {
				free = append(free, [hearings]tick.Time{})
				w.d.Rows = append(w.d.Rows, groupRows[g])
				if row > 0 {
					w.d.Rows[first+row].Label, w.d.Rows[first+row].Short = "", ""
				}
			}
			free[row][b.Hearing] = max(b.T1, b.Held)
			b.Row = first + row
		}
	}
}

// marker marks a signal, a stimulus of the device or a change of mode.
func (w *waiter) marker(e *event.Event) {
	m := Marker{Event: e.ID, T: e.T, Channel: e.Channel}
	chamber := string(e.Channel)
	switch {
	case e.Kind == event.Mode:
		m.Channel, m.Label = 0, "mode "+e.To
	case e.Kind == event.Stimulus:
		if e.Rule != event.Timed {
			return // not the device's
		}
		m.Paced, m.Label = true, chamber+"P"
		if e.Field == "safety" {
			m.Label = "safety"
		}
	case e.Use == event.Blanked:
		m.Unheard = true
	case e.Use == event.Refractory:
		m.Refractory, m.Label = true, chamber+"R"
	case e.Use == event.Noise:
		m.Label = "noise"
	default:
		m.Label = chamber + "S"
	}
	w.d.Markers = append(w.d.Markers, m)
}

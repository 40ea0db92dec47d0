package account

import (
	"fmt"
	"strings"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// windowLabels name the windows and timers of a device in sentences.
var windowLabels = map[string]string{ // looked up only, never ranged over
	"av_delay": "the AV delay", "atrial_escape": "the atrial escape interval", "lower_rate": "the lower-rate interval",
	"upper_rate": "the upper-rate interval", "pvarp": "PVARP", "pvab": "PVAB", "atrial_blanking": "atrial blanking",
	"atrial_refractory": "the atrial refractory period", "pavb": "PAVB", "crosstalk": "the crosstalk window",
	"ventricular_refractory": "the ventricular refractory period", "noise": "the noise window", "atrial_noise": "the atrial noise window",
	"atrial_delay": "the delay of the atrial stimulus", "backup_delay": "the backup delay", "withheld": "the interval after a stimulus left out",
}

func windowLabel(name string) string {
	if l := windowLabels[name]; l != "" {
		return l
	}
	return "the " + strings.ReplaceAll(name, "_", " ")
}

// longestWindow bounds the search for windows that still run: longer than any
// escape interval a device allows.
const longestWindow = 6 * tick.Second

// open lists the windows that run at the event, the latest begun last. A window is
// half open: at its end it runs no more. One that ended at this instant by this very
// event, or by one after it, still ran when the event came.
func (w *writer) open(e *event.Event) []*event.Event {
	var out []*event.Event
	for id := e.ID - 1; id > 0; id-- {
		o := w.log.At(id)
		if e.T.Sub(o.T) > longestWindow {
			break
		}
		if o.Kind == event.Window && (o.Until > e.T || o.Until == e.T && o.By >= e.ID) {
			out = append(out, o)
		}
	}
	for i, j := 0, len(out)-1; i < j; i, j = i+1, j-1 {
		out[i], out[j] = out[j], out[i]
	}
	return out
}

// running finds one of the windows that run at the event by name, or nil.
func (w *writer) running(e *event.Event, names ...string) *event.Event {
	var found *event.Event
	for _, o := range w.open(e) {
		for _, n := range names {
			if o.Field == n {
				found = o
			}
		}
	}
	return found
}

// lastWindow is the latest window of the name that began before the event, or nil.
func (w *writer) lastWindow(e *event.Event, name string) *event.Event {
	for id := e.ID - 1; id > 0; id-- {
		o := w.log.At(id)
		if o.Kind == event.Window && o.Field == name {
			return o
		}
		if e.T.Sub(o.T) > longestWindow {
			break
		}
	}
	return nil
}

// planned is how long a window was meant to last. The record keeps that only of
// windows that ran out; of one that was ended the latest of its name and reason that
// ran out is taken instead. false: none did.
func (w *writer) planned(o *event.Event) (tick.Dur, bool) {
	if o.By == 0 {
		return o.Until.Sub(o.T), true
	}
	for id := o.ID - 1; id > 0; id-- {
		if b := w.log.At(id); b.Kind == event.Window && b.Field == o.Field && b.Why == o.Why && b.By == 0 {
			return b.Until.Sub(b.T), b.Until.Sub(b.T) > o.Until.Sub(o.T)
		}
	}
	return 0, false
}

// chamber is the word for a channel.
func chamber(ch byte) string {
	if ch == 'A' {
		return "atrial"
	}
	return "ventricular"
}

// cause names the event that began a timer or a window, with its time.
func (w *writer) cause(id event.ID) string {
	e := w.log.At(id)
	if e == nil {
		return "the start of the strip"
	}
	return w.deviceEvent(e) + " at " + clock(e.T)
}

// deviceEvent names an event as the device knows it.
func (w *writer) deviceEvent(e *event.Event) string {
	switch e.Kind {
	case event.Stimulus:
		if e.Rule == event.Timed {
			return "the " + chamber(e.Channel) + " stimulus"
		}
		return "the planned stimulus"
	case event.Sense:
		switch w.nature(e) {
		case ofP:
			return "the sensed P"
		case ofR:
			return "the sensed R"
		}
		return "the " + chamber(e.Channel) + " signal"
	case event.Mode:
		return "the change to " + e.To
	case event.Window:
		return windowLabel(e.Field)
	}
	return "the event"
}

// nature of a signal: what depolarisation made it, and whether that belongs to the
// channel.
type nature uint8

const (
	ofNothing  nature = iota // no depolarisation: interference
	ofP                      // the atria's own depolarisation, on their channel
	ofR                      // the ventricles' own
	ofFarField               // the other chamber's
	ofT                      // the ventricles' own, but long after: their repolarisation
)

// lateSignal is how long after the depolarisation at the lead a ventricular signal
// must come to be its repolarisation: a lead's own signal has no delay here.
const lateSignal = 20 * tick.Millisecond

func (w *writer) nature(e *event.Event) nature {
	c := w.log.At(e.Cause)
	switch {
	case c == nil || c.Site < 0:
		return ofNothing
	case w.log.Sites[c.Site].Chamber() != e.Channel:
		return ofFarField
	case e.Channel == 'A':
		return ofP
	case e.T.Sub(c.T) > lateSignal:
		return ofT
	}
	return ofR
}

// signal says what a signal was.
func (w *writer) signal(e *event.Event) string {
	c := w.log.At(e.Cause)
	switch w.nature(e) {
	case ofFarField:
		other := "ventricular"
		if e.Channel == 'V' {
			other = "atrial"
		}
		return fmt.Sprintf("It was the far field of the %s depolarisation %s before, by %s.", other, span(e.T.Sub(c.T)), w.began(c.ID))
	case ofT:
		return fmt.Sprintf("It was the T wave of the ventricular depolarisation %s before, by %s.", span(e.T.Sub(c.T)), w.began(c.ID))
	case ofNothing:
		return "No depolarisation caused it: it was interference."
	}
	return fmt.Sprintf("It was the depolarisation of %s by %s.", w.site(c.Site), w.began(c.ID))
}

// reason says how a length came about that is not the plain setting.
func reason(why string) string {
	if why == "" {
		return ""
	}
	return ", its length set by: " + why
}

func (w *writer) mode(e *event.Event) {
	w.a.Title = "Mode changed from " + e.Field + " to " + e.To
	w.say(fmt.Sprintf("At %s the device went over from %s to %s: %s.", clock(e.T), e.Field, e.To, e.Why))
	if c := w.log.At(e.Cause); c != nil {
		w.say(upper(w.deviceEvent(c)) + " at " + clock(c.T) + " decided it.")
	}
}

// window: what opened it, how long it was, what ended it, and what fell into it.
func (w *writer) window(e *event.Event) {
	name := windowLabel(e.Field)
	length := e.Until.Sub(e.T)
	w.a.Title = upper(strings.TrimPrefix(name, "the ")) + ", " + span(length)
	w.number("length", length)
	w.say(fmt.Sprintf("%s began at %s with %s%s.", upper(name), clock(e.T), w.openedBy(e), reason(e.Why)))
	if by := w.log.At(e.By); by != nil {
		w.say(fmt.Sprintf("After %s, at %s, %s ended it before its time.", span(length), clock(e.Until), w.deviceEvent(by)))
		if full, ok := w.planned(e); ok {
			w.number("length of the last one that ran out", full)
			w.say(fmt.Sprintf("The last one that ran out lasted %s: by that this one had %s left.", span(full), span(full-length)))
		}
	} else if e.Until > w.log.Span {
		w.say(fmt.Sprintf("It lasts %s, beyond the end of the strip.", span(length)))
	} else {
		w.say(fmt.Sprintf("It lasted %s and ran out at %s.", span(length), clock(e.Until)))
	}
	w.fellIn(e)
}

// openedBy leaves the time away where it is that of the window.
func (w *writer) openedBy(e *event.Event) string {
	c := w.log.At(e.Cause)
	if c == nil || c.T != e.T {
		return w.cause(e.Cause)
	}
	return w.deviceEvent(c)
}

// fellIn lists the signals whose use the window decided.
func (w *writer) fellIn(e *event.Event) {
	var in []string
	for i := int(e.ID); i < len(w.log.Events); i++ {
		n := &w.log.Events[i]
		if n.T > e.Until {
			break
		}
		if n.Kind == event.Sense && n.By == e.ID {
			in = append(in, fmt.Sprintf("%s (%s)", clock(n.T), useWord(n.Use)))
		}
	}
	switch {
	case len(in) == 1:
		w.say("It decided the signal at " + in[0] + ".")
	case len(in) > 1:
		w.say("It decided the signals at " + strings.Join(in, ", ") + ".")
	}
}

func useWord(u event.Use) string {
	switch u {
	case event.Resets:
		return "began the timing anew"
	case event.Inhibits:
		return "kept back a stimulus"
	case event.Safety:
		return "answered by a safety stimulus"
	case event.Triggers:
		return "answered by a stimulus"
	case event.Observed:
		return "noted only"
	case event.Noise:
		return "taken for interference"
	}
	return u.String()
}

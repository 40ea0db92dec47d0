package account

import (
	"fmt"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// WhyNot is why something did not happen, with the events it rests on.
type WhyNot struct {
	Sentences []string   `json:"sentences"`
	Numbers   []Number   `json:"numbers"`
	Margin    *Margin    `json:"margin"` // null where it was not near
	Evidence  []event.ID `json:"evidence"`
}

func (w *writer) whyNot(ids ...event.ID) *WhyNot {
	n := &WhyNot{Sentences: w.a.Sentences, Numbers: w.a.Numbers, Margin: w.a.Margin, Evidence: []event.ID{}}
	for _, id := range ids {
		if id > 0 {
			n.Evidence = append(n.Evidence, id)
		}
	}
	return n
}

func newWriter(log *event.Log) *writer {
	return &writer{log: log, a: &Account{Sentences: []string{}, Numbers: []Number{}, Chain: []Step{}, Led: []Step{}}}
}

// WhyNotTracked says why the device did not begin an AV delay with an atrial event:
// an atrial signal, or a depolarisation of the atrium that it may not have sensed. It
// returns nil for anything else, for what was tracked, and for a strip without a
// device.
func WhyNotTracked(log *event.Log, id event.ID) *WhyNot {
	e := log.At(id)
	if e == nil || !hasDevice(log) {
		return nil
	}
	w := newWriter(log)
	if e.Kind == event.Activate && log.Sites[e.Site].Chamber() == 'A' {
		return w.whyNotSensed(e)
	}
	if e.Kind != event.Sense || e.Channel != 'A' || e.Use == event.Tracked {
		return nil
	}
	w.notTracked(e)
	return w.whyNot(e.ID, e.By, w.a.ID)
}

func (w *writer) notTracked(e *event.Event) {
	at := "Atrial signal at " + clock(e.T)
	switch {
	case e.Use == event.Refractory || e.Use == event.Blanked:
		w.refractory(e, at)
		if o := w.log.At(e.By); o != nil {
			w.a.ID = o.Cause
		}
	case !w.tracks(e):
		w.say(at + ": the mode in force does not track P waves.")
	case e.Use == event.Noise:
		w.say(fmt.Sprintf("%s: in %s: taken for interference.", at, w.decided(e)))
	default:
		w.sense(e)
	}
}

// whyNotSensed looks for the signal that a depolarisation of the atrium made.
func (w *writer) whyNotSensed(e *event.Event) *WhyNot {
	for i := int(e.ID); i < len(w.log.Events); i++ {
		s := &w.log.Events[i]
		if s.T.Sub(e.T) > tick.Second {
			break
		}
		if s.Kind == event.Sense && s.Channel == 'A' && s.Cause == e.ID {
			return WhyNotTracked(w.log, s.ID)
		}
	}
	if c := w.log.At(e.Cause); e.Rule == event.Captured && c.Rule == event.Timed {
		return nil // it was paced, which begins an AV delay by itself
	}
	for i := range w.log.Events { // the lead may sit at another site of the same wave
		s := &w.log.Events[i]
		if s.Kind == event.Sense && s.Channel == 'A' && s.Site != e.Site && w.nature(s) == ofP {
			w.say(fmt.Sprintf("The atrial lead senses %s, not %s: ask there.", w.site(s.Site), w.site(e.Site)))
			return w.whyNot(e.ID)
		}
	}
	w.say(fmt.Sprintf("%s was depolarised at %s and the device had no signal of it: its lead was deaf then, or the signal was below its sensitivity (undersensing).", upper(w.site(e.Site)), clock(e.T)))
	return w.whyNot(e.ID)
}

func hasDevice(log *event.Log) bool {
	for i := range log.Events {
		switch e := &log.Events[i]; e.Kind {
		case event.Sense, event.Window, event.Mode:
			return true
		case event.Stimulus:
			if e.Rule == event.Timed {
				return true
			}
		}
	}
	return false
}

// timing tells whether a window is an interval at whose end the device acts.
func timing(name string) bool {
	switch name {
	case "av_delay", "atrial_escape", "lower_rate", "upper_rate", "atrial_delay", "backup_delay", "withheld":
		return true
	}
	return false
}

// WhyGap says why the device gave no stimulus between two times: which interval ran,
// what had begun it and what changed its length, what signals began it anew or fell
// into refractory periods, and what stimuli came to nothing. It returns nil for a
// strip without a device.
func WhyGap(log *event.Log, from, to tick.Time) *WhyNot {
	if !hasDevice(log) {
		return nil
	}
	w := newWriter(log)
	var ids []event.ID
	for i := range log.Events {
		e := &log.Events[i]
		if e.T >= to {
			break
		}
		switch {
		case e.Kind == event.Window && timing(e.Field) && e.Until > from && w.matters(e, from, to):
			w.ran(e)
			ids = append(ids, e.ID, e.Cause, e.By)
		case e.T <= from:
		case e.Kind == event.Sense && e.By != 0 && (e.Use == event.Refractory || e.Use == event.Blanked):
			w.say(fmt.Sprintf("%s signal at %s in %s: %s.", upper(chamber(e.Channel)), clock(e.T), windowLabel(w.log.At(e.By).Field), e.Use))
			ids = append(ids, e.ID, e.By)
		case e.Kind == event.Stimulus && e.Rule == event.Timed && !e.Captured:
			w.say(w.short(e))
			ids = append(ids, e.ID)
		case e.Kind == event.Mode:
			w.say(w.short(e))
			ids = append(ids, e.ID)
		}
	}
	if len(w.a.Sentences) == 0 {
		w.say("No interval of the device ran here.")
	}
	return w.whyNot(ids...)
}

// matters leaves out intervals that an event at the very beginning of the gap ended.
func (w *writer) matters(e *event.Event, from, to tick.Time) bool {
	if e.Field == "upper_rate" { // only where it holds a stimulus back
		by := w.stimulusAt(e.Until)
		return by != nil && by.Field == "upper_rate"
	}
	return e.T < to && e.Until.Sub(max(e.T, from)) > tick.Millisecond
}

func (w *writer) stimulusAt(t tick.Time) *event.Event {
	for i := range w.log.Events {
		if e := &w.log.Events[i]; e.T > t {
			break
		} else if e.T == t && e.Kind == event.Stimulus {
			return e
		}
	}
	return nil
}

// ran tells of one interval in a gap.
func (w *writer) ran(e *event.Event) {
	length := e.Until.Sub(e.T)
	w.number(windowLabel(e.Field), length)
	text := fmt.Sprintf("%s began at %s with %s%s", upper(windowLabel(e.Field)), clock(e.T), w.openedBy(e), reason(e.Why))
	if by := w.log.At(e.By); by != nil {
		text += fmt.Sprintf("; %s ended it after %s, at %s", w.deviceEvent(by), span(length), clock(e.Until))
		if by.Kind == event.Sense {
			if k := w.nature(by); k != ofP && k != ofR {
				text += ". " + w.signal(by)
				w.say(text)
				return
			}
		}
	} else {
		text += fmt.Sprintf(" and runs %s to %s", span(length), clock(e.Until))
	}
	w.say(text + ".")
}

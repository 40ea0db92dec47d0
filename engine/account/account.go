// Package account says in sentences why one event of a timeline happened, what
// numbers decided it, how close it came to going the other way, and how it goes
// back, step by step, to the focus or stimulus that began it.
//
// [Of] accounts for one event; [Listing] is the text equivalent of the timeline.
// [WhyNotTracked] and [WhyGap] say why a device did not follow a P, or gave no
// stimulus for so long. All read a log and nothing else: every sentence rests on what is recorded
// there, on the cause each event carries and the rule that applied. A record keeps
// how long a device's window was meant to last only if it ran out; for one that an
// event ended, sentences go by the last of its kind that did, and say so. Words are
// plain trade English; times are milliseconds, or seconds from the start of the
// strip.
package account

import (
	"escapement/engine/event"
	"escapement/engine/tick"
)

// Account is what there is to say about one event.
type Account struct {
	ID        event.ID  `json:"id"`
	T         tick.Time `json:"t_us"`
	Title     string    `json:"title"`
	Sentences []string  `json:"sentences"`
	Numbers   []Number  `json:"numbers"`
	Margin    *Margin   `json:"margin"` // null where nothing could have gone the other way
	Chain     []Step    `json:"chain"`  // the event first, then its causes, to the focus or stimulus
	Led       []Step    `json:"led_to"` // what it caused directly
}

// Number is one quantity that the sentences use.
type Number struct {
	Name string  `json:"name"`
	MS   float64 `json:"ms"`
}

// Margin is how close the event was to going the other way.
type Margin struct {
	MS   float64 `json:"ms"` // never negative
	Text string  `json:"text"`
}

// Step is one event of a chain in one sentence.
type Step struct {
	ID   event.ID  `json:"id"`
	T    tick.Time `json:"t_us"`
	Text string    `json:"text"`
}

// longest bounds the chain: a re-entrant impulse can go round for ever.
const longest = 80

// Of accounts for the event, or returns nil if the log has none with this id.
func Of(log *event.Log, id event.ID) *Account {
	e := log.At(id)
	if e == nil {
		return nil
	}
	w := newWriter(log)
	w.a.ID, w.a.T = id, e.T
	switch e.Kind {
	case event.Discharge:
		w.discharge(e)
	case event.Activate:
		w.activate(e)
	case event.Block:
		w.block(e)
	case event.Stimulus:
		if e.Rule == event.Timed {
			w.pacing(e)
		} else {
			w.stimulus(e)
		}
	case event.Change:
		w.change(e)
	case event.Sense:
		w.sense(e)
	case event.Window:
		w.window(e)
	case event.Mode:
		w.mode(e)
	}
	w.chain(e)
	w.led(e)
	return w.a
}

type writer struct {
	log   *event.Log
	a     *Account
	modes modes
}

func (w *writer) say(sentence string) { w.a.Sentences = append(w.a.Sentences, sentence) }

func (w *writer) number(name string, d tick.Dur) {
	w.a.Numbers = append(w.a.Numbers, Number{name, d.MS()})
}

func (w *writer) margin(d tick.Dur, text string) {
	w.a.Margin = &Margin{max(d, -d).MS(), text}
}

// chain walks back to the focus or planned stimulus that began the impulse, and
// says what began the cycle of a focus. A stimulus of a device does not end it: its
// timer began with an earlier event, and so on to a focus or the start of the strip.
func (w *writer) chain(e *event.Event) {
	for ; e != nil; e = w.log.At(e.Cause) {
		if len(w.a.Chain) == longest {
			w.a.Chain = append(w.a.Chain, Step{e.ID, e.T, "And so on: it goes back further than this."})
			return
		}
		w.a.Chain = append(w.a.Chain, Step{e.ID, e.T, w.short(e)})
		if e.Kind == event.Discharge || e.Kind == event.Stimulus && e.Rule != event.Timed || e.Kind == event.Change {
			break
		}
	}
	if e != nil && e.Kind == event.Discharge {
		if c := w.log.At(e.Cause); c != nil {
			w.a.Chain = append(w.a.Chain, Step{c.ID, c.T, "Its cycle had begun here. " + w.short(c)})
		}
	}
}

// led lists direct consequences. Causes come before effects, and effects of one
// event follow within seconds, so the search ends a while after the event except
// for a focus, whose next discharge may be far off.
func (w *writer) led(e *event.Event) {
	for i := int(e.ID); i < len(w.log.Events); i++ {
		if n := &w.log.Events[i]; n.Cause == e.ID {
			w.a.Led = append(w.a.Led, Step{n.ID, n.T, w.short(n)})
		}
	}
}

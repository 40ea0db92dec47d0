package account

import (
	"fmt"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// discharge: what began the cycle, how long it lasted, and whether it ran
// undisturbed, was reset or was delayed.
func (w *writer) discharge(e *event.Event) {
	if e.Rule != event.Phase4 {
		w.driver(e)
		return
	}
	w.a.Title = upper(w.site(e.Site)) + " discharged"
	w.say(fmt.Sprintf("%s reached threshold by itself at %s.", upper(w.site(e.Site)), clock(e.T)))
	began := w.log.At(e.Cause)
	if began == nil {
		w.say("It is its first discharge on this strip: its cycle began before the start.")
		return
	}
	cycle := e.T.Sub(began.T)
	w.number("cycle", cycle)
	switch {
	case began.Kind == event.Discharge && began.Site == e.Site:
		w.say(fmt.Sprintf("Its cycle began with its own discharge %s before (%.0f/min).", span(cycle), cycle.BPM()))
	case began.Kind == event.Activate && began.Rule == event.Conducted:
		w.say(fmt.Sprintf("Its cycle began %s before, when %s reached it and reset it.", span(cycle), w.began(began.ID)))
	case began.Kind == event.Activate:
		w.say(fmt.Sprintf("Its cycle began %s before, when its site was depolarised.", span(cycle)))
	case began.Kind == event.Stimulus:
		w.say(fmt.Sprintf("Its cycle began %s before, with the stimulus.", span(cycle)))
	case began.Kind == event.Change:
		w.say(fmt.Sprintf("Its cycle began %s before, when %s became %s.", span(cycle), began.Field, began.To))
	default:
		w.say(fmt.Sprintf("Its cycle began %s before.", span(cycle)))
	}
	w.compare(e, began, cycle)
}

// compare holds the cycle against the one before.
func (w *writer) compare(e, began *event.Event, cycle tick.Dur) {
	before := w.dischargeBefore(e)
	if before == nil {
		return
	}
	usual := w.cycleOf(before)
	if began.ID != before.ID && began.T > before.T && usual > 0 {
		due := before.T.Add(usual)
		shift := e.T.Sub(due)
		w.number("moved by", shift)
		if shift > tick.Millisecond {
			w.say(fmt.Sprintf("Undisturbed, after a cycle like the one before (%s), it was due at %s: it came %s later.", span(usual), clock(due), span(shift)))
		} else if shift < -tick.Millisecond {
			w.say(fmt.Sprintf("After a cycle like the one before (%s) it was due at %s: it came %s earlier.", span(usual), clock(due), span(shift)))
		}
		return
	}
	if usual == 0 {
		return
	}
	w.number("cycle before", usual)
	switch d := cycle - usual; {
	case d > tick.Millisecond:
		w.say(fmt.Sprintf("That is %s longer than its cycle before.", span(d)))
	case d < -tick.Millisecond:
		w.say(fmt.Sprintf("That is %s shorter than its cycle before.", span(d)))
	default:
		w.say("That is the length of its cycle before: nothing disturbed it.")
	}
}

// dischargeBefore is the discharge of the same site before this one.
func (w *writer) dischargeBefore(e *event.Event) *event.Event {
	for id := e.ID - 1; id > 0; id-- {
		if b := w.log.At(id); b.Kind == event.Discharge && b.Site == e.Site {
			return b
		}
	}
	return nil
}

func (w *writer) cycleOf(e *event.Event) tick.Dur {
	c := w.log.At(e.Cause)
	if c == nil {
		return 0
	}
	return e.T.Sub(c.T)
}

func (w *writer) stimulus(e *event.Event) {
	what := "A planned stimulus"
	if e.Rule == event.Train {
		what = "A stimulus of a planned train"
	}
	known := e.Needed > 0 && e.Recovery >= 0
	if known {
		w.number("since the site was last depolarised", e.Recovery)
		w.number("refractory period", e.Needed)
	}
	if e.Captured {
		w.a.Title = "Stimulus captured"
		w.say(fmt.Sprintf("%s at %s, %s, captured.", what, w.site(e.Site), clock(e.T)))
		if known {
			w.say(fmt.Sprintf("The site had last been depolarised %s before and needed %s.", span(e.Recovery), span(e.Needed)))
			w.margin(e.Recovery-e.Needed, fmt.Sprintf("%s earlier it would not have captured.", span(e.Recovery-e.Needed)))
		}
		return
	}
	w.a.Title = "Stimulus without capture"
	w.say(fmt.Sprintf("%s at %s, %s, did not capture.", what, w.site(e.Site), clock(e.T)))
	if known {
		w.say(fmt.Sprintf("The site had been depolarised %s before and needed %s: still refractory, %s short.", span(e.Recovery), span(e.Needed), span(e.MissedBy())))
		w.margin(e.MissedBy(), fmt.Sprintf("%s later it would have captured.", span(e.MissedBy())))
	}
}

func (w *writer) change(e *event.Event) {
	w.a.Title = "Planned change"
	w.say(fmt.Sprintf("From %s on the plan sets %s to %s.", clock(e.T), e.Field, e.To))
}

// driver: a turn of the flutter circuit, or a wave of fibrillation.
func (w *writer) driver(e *event.Event) {
	began := w.log.At(e.Cause)
	if e.Rule == event.Arrival {
		w.a.Title = "A wave of fibrillation at " + w.site(e.Site)
		w.say(fmt.Sprintf("A wave of fibrillation arrived at %s at %s. When it comes is drawn at random by the plan's seed; no front crosses the atria.", w.site(e.Site), clock(e.T)))
		if began != nil {
			w.number("since the last one here", e.T.Sub(began.T))
		}
		return
	}
	w.a.Title = "The flutter circuit passed " + w.site(e.Site)
	w.say(fmt.Sprintf("The flutter circuit came round to %s at %s.", w.site(e.Site), clock(e.T)))
	if began == nil {
		return
	}
	w.number("cycle", e.T.Sub(began.T))
	if began.Kind != event.Discharge {
		w.say(fmt.Sprintf("%s had entered the circuit %s before: one turn (event %d).", upper(w.began(began.ID)), span(e.T.Sub(began.T)), began.ID))
	}
}

package account

import (
	"fmt"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// pacing: a stimulus of the device: which timer ended, by what it had begun, and
// whether it captured.
func (w *writer) pacing(e *event.Event) {
	what := upper(chamber(e.Channel)) + " stimulus"
	w.a.Title = what + " captured"
	if !e.Captured {
		w.a.Title = what + " without capture"
	}
	w.say(fmt.Sprintf("%s at %s: %s.", what, clock(e.T), w.timer(e)))
	if why := e.Why; why != "" {
		w.say("The length of the interval was set by: " + why + ".")
	}
	w.capture(e)
}

// timer says which timer ended to bring the stimulus.
func (w *writer) timer(e *event.Event) string {
	since := tick.Dur(e.T)
	if c := w.log.At(e.Cause); c != nil {
		since = e.T.Sub(c.T)
	}
	w.number("since the timer began", since)
	from := w.cause(e.Cause)
	switch e.Field {
	case "av_delay":
		return fmt.Sprintf("the AV delay of %s that began with %s ended without a ventricular event", span(since), from)
	case "upper_rate", "rate_change":
		return w.held(e, since, from)
	case "atrial_escape":
		return fmt.Sprintf("the atrial escape interval of %s that began with %s ended without an atrial event that counts", span(since), from)
	case "lower_rate":
		return fmt.Sprintf("the lower-rate interval of %s that began with %s ended without %s event that counts", span(since), from, article(e.Channel))
	case "safety":
		c := w.log.At(e.Cause)
		if x := w.crosstalk(c); x != nil {
			a := w.log.At(x.Cause)
			return fmt.Sprintf("a signal in the crosstalk window at %s brought a safety stimulus, %s after the atrial stimulus at %s", clock(c.T), span(e.T.Sub(a.T)), clock(a.T))
		}
		return fmt.Sprintf("a signal in the crosstalk window brought a safety stimulus (%s)", from)
	case "offset":
		return fmt.Sprintf("a further ventricular lead, %s after %s", span(since), from)
	case "trigger":
		return "the answer to " + from
	case "atrial_delay":
		return fmt.Sprintf("the atrial escape interval was over, but the stimulus was put off to %s after %s in a refractory period", span(since), from)
	case "backup":
		return fmt.Sprintf("no ventricular event had come between the last two atrial ones: backup %s after %s", span(since), from)
	}
	return fmt.Sprintf("%s that began with %s ended after %s", windowLabel(e.Field), from, span(since))
}

func (w *writer) crosstalk(sense *event.Event) *event.Event {
	if sense == nil {
		return nil
	}
	x := w.log.At(sense.By)
	if x == nil || x.Kind != event.Window || w.log.At(x.Cause) == nil {
		return nil
	}
	return x
}

func article(ch byte) string {
	if ch == 'A' {
		return "an atrial"
	}
	return "a ventricular"
}

// held: the AV delay was over, but a limit kept the stimulus back.
func (w *writer) held(e *event.Event, since tick.Dur, from string) string {
	av := w.windowOf(e, "av_delay")
	if av == nil {
		return fmt.Sprintf("%s ended, %s after %s", windowLabel(e.Field), span(since), from)
	}
	w.number("AV delay", av.Until.Sub(av.T))
	w.number("held back", e.T.Sub(av.Until))
	text := fmt.Sprintf("the AV delay of %s that began with %s ended at %s without a ventricular event; held back %s", span(av.Until.Sub(av.T)), from, clock(av.Until), span(e.T.Sub(av.Until)))
	if e.Field == "rate_change" {
		return text + " by the limit on the change of the rate"
	}
	if u := w.lastWindow(e, "upper_rate"); u != nil && u.Until == e.T {
		w.number("upper-rate interval", u.Until.Sub(u.T))
		return fmt.Sprintf("%s to the end of the upper-rate interval of %s since %s", text, span(u.Until.Sub(u.T)), w.cause(u.Cause))
	}
	return text + " by the upper-rate interval"
}

// windowOf is the window of the name that the stimulus's cause opened, or nil.
func (w *writer) windowOf(e *event.Event, name string) *event.Event {
	if c := w.log.At(e.Cause); c != nil {
		return w.openedNow(c, name)
	}
	return nil
}

// outcomes in words.
var outcomes = [...]string{
	event.MuscleOnly:     "only the muscle of the two tissues under the tip",
	event.ConductionOnly: "only the conduction system, not the muscle beside it",
	event.BelowThreshold: "the output was below the threshold",
	event.CaptureLost:    "loss of capture",
	event.Overtaken:      "another impulse came first",
}

// capture: captured with what to spare, or why not.
func (w *writer) capture(e *event.Event) {
	known := e.Needed > 0 && e.Recovery >= 0
	if known {
		w.number("since the site was last depolarised", e.Recovery)
		w.number("refractory period", e.Needed)
	}
	where := w.site(e.Site)
	switch {
	case e.Captured && e.Outcome != 0:
		w.say(fmt.Sprintf("It captured %s.", outcomes[e.Outcome]))
	case e.Captured && known:
		w.say(fmt.Sprintf("It captured at %s, which had last been depolarised %s before and needed %s.", where, span(e.Recovery), span(e.Needed)))
		w.margin(e.Recovery-e.Needed, fmt.Sprintf("%s earlier it would not have captured.", span(e.Recovery-e.Needed)))
	case e.Captured:
		w.say(fmt.Sprintf("It captured at %s.", where))
	case e.Outcome == event.Overtaken:
		w.say(fmt.Sprintf("It did not capture: another impulse reached %s before it took effect.", where))
	case e.MissedBy() > 0:
		by := ""
		if last := w.lastActivation(e.Site, e.ID); last != nil {
			by = " by " + w.began(last.ID)
		}
		w.say(fmt.Sprintf("It did not capture: %s had been depolarised%s %s before and needed %s: refractory tissue, missed by %s.", where, by, span(e.Recovery), span(e.Needed), span(e.MissedBy())))
		w.unsensed(e)
		w.margin(e.MissedBy(), fmt.Sprintf("%s later it would have captured.", span(e.MissedBy())))
	case e.Outcome != 0:
		w.say(fmt.Sprintf("It did not capture although %s was excitable: %s.", where, outcomes[e.Outcome]))
	default:
		w.say(fmt.Sprintf("It did not capture at %s.", where))
	}
}

// unsensed says how the device had taken the beat that left the tissue refractory.
func (w *writer) unsensed(e *event.Event) {
	last := w.lastActivation(e.Site, e.ID)
	if last == nil {
		return
	}
	for id := last.ID + 1; id < e.ID; id++ {
		if s := w.log.At(id); s.Kind == event.Sense && s.Channel == e.Channel && s.Cause == last.ID {
			w.say(fmt.Sprintf("The device had that beat as a signal: %s%s.", useWord(s.Use), w.in(s)))
			return
		}
	}
	if last.Rule == event.Conducted || last.Rule == event.Fired {
		w.say("The device had no signal of that beat when it gave the stimulus.")
	}
}

func (w *writer) in(s *event.Event) string {
	if o := w.log.At(s.By); o != nil && o.Kind == event.Window {
		return " in " + windowLabel(o.Field)
	}
	return ""
}

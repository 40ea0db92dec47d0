package account

import (
	"fmt"
	"slices"

	"escapement/engine/event"
	"escapement/engine/tick"
)

func (w *writer) activate(e *event.Event) {
	w.a.Title = upper(w.site(e.Site)) + " was depolarised"
	switch e.Rule {
	case event.Fired:
		w.say(fmt.Sprintf("%s was depolarised by its own discharge at %s.", upper(w.site(e.Site)), clock(e.T)))
	case event.Captured:
		w.say(fmt.Sprintf("%s was depolarised by the stimulus at %s.", upper(w.site(e.Site)), clock(e.T)))
	default:
		w.conducted(e)
	}
	if d := e.Until.Sub(e.T); d > 0 {
		w.number("refractory period begun", d)
		w.say(fmt.Sprintf("It is refractory for %s from here.", span(d)))
	}
}

// conducted: the way, the delay, and what the path had of recovery and needed.
func (w *writer) conducted(e *event.Event) {
	c := w.log.At(e.Cause)
	delay := e.T.Sub(c.T)
	w.number("delay", delay)
	w.say(fmt.Sprintf("%s reached %s at %s, %s after %s%s.", upper(w.began(e.ID)), w.site(e.Site), clock(e.T), span(delay), w.site(c.Site), w.way(e)))
	if usual := w.usualDelay(e); usual > 0 && delay-usual >= 5*tick.Millisecond {
		w.number("usual delay", usual)
		w.say(fmt.Sprintf("The usual passage takes %s: this one took %s more.", span(usual), span(delay-usual)))
	}
	if e.Recovery == event.Unknown {
		w.say(fmt.Sprintf("No impulse had passed %s before on this strip.", w.path(e.Path)))
		return
	}
	if e.Recovery < 0 {
		return
	}
	w.number("recovery", e.Recovery)
	if e.Needed <= 0 {
		w.say(fmt.Sprintf("The way there had last been used %s before%s.", span(e.Recovery), w.lastOne(e, c.T)))
		return
	}
	w.number("recovery needed", e.Needed)
	w.say(fmt.Sprintf("It entered %s %s after the last one had left it%s; it needed %s.", w.path(e.Path), span(e.Recovery), w.lastOne(e, c.T), span(e.Needed)))
	w.margin(e.Recovery-e.Needed, fmt.Sprintf("%s earlier it would have been blocked here.", span(e.Recovery-e.Needed)))
}

// usualDelay is the median passage along the path in this direction.
func (w *writer) usualDelay(e *event.Event) tick.Dur {
	var d []tick.Dur
	for i := range w.log.Events {
		o := &w.log.Events[i]
		if o.Kind == event.Activate && o.Path == e.Path && o.Dir == e.Dir {
			d = append(d, o.T.Sub(w.log.At(o.Cause).T))
		}
	}
	slices.Sort(d)
	return d[len(d)/2]
}

// lastOne names the impulse that left the path refractory, where it is another
// than the rhythm's ordinary one: found by its time, entry - recovery.
func (w *writer) lastOne(e *event.Event, entry tick.Time) string {
	at := entry.Add(-e.Recovery)
	for id := e.ID - 1; id > 0; id-- {
		o := w.log.At(id)
		if o.T < at-1 {
			break
		}
		if o.Path != e.Path || o.T > at+1 {
			continue
		}
		switch {
		case o.Kind == event.Block:
			return fmt.Sprintf(" (%s had entered it and not come out, event %d)", w.began(o.ID), o.ID)
		case o.Dir != e.Dir:
			return fmt.Sprintf(" (%s, going the other way, event %d)", w.began(o.ID), o.ID)
		}
		return fmt.Sprintf(" (event %d)", o.ID)
	}
	return ""
}

func (w *writer) block(e *event.Event) {
	switch e.Rule {
	case event.PathRefractory:
		w.pathRefractory(e)
	case event.SiteRefractory:
		w.siteRefractory(e)
	case event.Collision:
		w.collision(e)
	case event.OneWay:
		w.a.Title = "Stopped: one-way path"
		w.say(fmt.Sprintf("%s came from %s, but %s does not conduct in this direction.", upper(w.began(e.ID)), w.site(e.Site), w.path(e.Path)))
	case event.Dropped:
		w.a.Title = "Dropped by a planned pattern"
		w.say(fmt.Sprintf("%s was stopped in %s by a drop pattern put on it. The pattern stands for a cause that is not modelled.", upper(w.began(e.ID)), w.path(e.Path)))
	}
	w.depth(e)
}

// depth: a blocked impulse that went in leaves refractoriness behind.
func (w *writer) depth(e *event.Event) {
	if e.Depth == 0 || e.Depth >= 1000 || e.Path < 0 || e.Rule == event.Collision {
		return
	}
	w.say(fmt.Sprintf("It went %d%% of the way in before it stopped, and the path has to recover from that (concealed conduction).", (int(e.Depth)+5)/10))
}

func (w *writer) pathRefractory(e *event.Event) {
	w.a.Title = "Blocked in " + w.path(e.Path)
	if e.Recovery == event.Unknown || e.Needed == 0 {
		w.say(fmt.Sprintf("%s was blocked in %s.", upper(w.began(e.ID)), w.path(e.Path)))
		return
	}
	w.number("recovery needed", e.Needed)
	if e.Recovery < 0 {
		w.say(fmt.Sprintf("%s reached %s while another was still inside; it would leave %s later, and then the path needs %s.", upper(w.began(e.ID)), w.path(e.Path), span(e.Recovery), span(e.Needed)))
		w.margin(e.MissedBy(), fmt.Sprintf("%s later it would have conducted.", span(e.MissedBy())))
		return
	}
	short := e.MissedBy()
	w.a.Title += ", " + span(short) + " short"
	w.number("recovery", e.Recovery)
	w.number("missed by", short)
	entry := e.T
	if c := w.log.At(e.Cause); c != nil {
		entry = c.T
	}
	w.say(fmt.Sprintf("The impulse reached %s %s after the last one had left it%s; it needed %s: blocked, %s short.", w.path(e.Path), span(e.Recovery), w.lastOne(e, entry), span(e.Needed), span(short)))
	w.say(fmt.Sprintf("It was %s.", w.began(e.ID)))
	w.margin(short, fmt.Sprintf("%s later it would have conducted.", span(short)))
}

func (w *writer) siteRefractory(e *event.Event) {
	end := e.Site
	if e.Path >= 0 {
		end = w.log.Paths[e.Path].Exit(e.Dir)
	}
	w.a.Title = "Stopped: " + w.site(end) + " was refractory"
	if e.Path < 0 {
		w.say(fmt.Sprintf("%s discharged at %s but its own site was still refractory, so nothing followed.", upper(w.site(end)), clock(e.T)))
	} else {
		w.say(fmt.Sprintf("%s came through %s to %s and found it refractory.", upper(w.began(e.ID)), w.path(e.Path), w.site(end)))
	}
	if last := w.lastActivation(end, e.ID); last != nil {
		w.say(fmt.Sprintf("%s had depolarised it %s before (event %d).", upper(w.began(last.ID)), span(e.T.Sub(last.T)), last.ID))
	}
	if e.Needed == 0 || e.Recovery < 0 {
		return
	}
	w.number("since the site was last depolarised", e.Recovery)
	w.number("refractory period", e.Needed)
	if m := e.MissedBy(); m > 0 {
		w.number("missed by", m)
		w.say(fmt.Sprintf("It needed %s: %s short.", span(e.Needed), span(m)))
		w.margin(m, fmt.Sprintf("%s later it would have been depolarised.", span(m)))
	}
}

func (w *writer) lastActivation(s event.SiteID, before event.ID) *event.Event {
	for id := before - 1; id > 0; id-- {
		if o := w.log.At(id); o.Kind == event.Activate && o.Site == s {
			return o
		}
	}
	return nil
}

func (w *writer) collision(e *event.Event) {
	w.a.Title = "Two impulses met"
	w.say(fmt.Sprintf("%s met another coming the other way in %s, %d%% of the way from %s; both ended there.", upper(w.began(e.ID)), w.path(e.Path), (int(e.Depth)+5)/10, w.site(e.Site)))
	for _, id := range []event.ID{e.ID - 1, e.ID + 1} {
		o := w.log.At(id)
		if o != nil && o.Kind == event.Block && o.Rule == event.Collision && o.Path == e.Path && o.T == e.T && o.Dir != e.Dir {
			w.say(fmt.Sprintf("The other was %s (event %d).", w.began(o.ID), o.ID))
			return
		}
	}
}

package account

import (
	"fmt"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// sense: in which window the signal fell, what the device did with it and how near
// it was to another use.
func (w *writer) sense(e *event.Event) {
	at := fmt.Sprintf("%s signal at %s", upper(chamber(e.Channel)), clock(e.T))
	w.a.Title = upper(chamber(e.Channel)) + " signal: " + useWord(e.Use)
	switch e.Use {
	case event.Tracked:
		w.tracked(e, at)
	case event.Refractory, event.Blanked:
		w.refractory(e, at)
	case event.Noise:
		w.say(fmt.Sprintf("%s: in %s: taken for interference, and the window began anew with it.", at, w.decided(e)))
	case event.Safety:
		w.say(fmt.Sprintf("%s: in %s: it may be the atrial stimulus itself, so it did not keep back the ventricular stimulus but brought it forward, as a safety stimulus.", at, w.decided(e)))
		w.left(e, "it would have kept back the ventricular stimulus")
	case event.Triggers:
		w.say(at + ": answered by a stimulus at once, as this mode does.")
	case event.Observed:
		w.say(at + ": noted only; the mode in force makes no use of this channel.")
	default:
		w.inhibits(e, at)
	}
	w.say(w.signal(e))
	w.unseen(e)
}

// decided describes the window that decided a sense: what began it and until when
// it runs.
func (w *writer) decided(e *event.Event) string {
	o := w.log.At(e.By)
	if o == nil || o.Kind != event.Window {
		return "no window"
	}
	end := "runs to"
	if o.By != 0 {
		end = "was ended at"
	}
	return fmt.Sprintf("%s, which began with %s%s and %s %s", windowLabel(o.Field), w.cause(o.Cause), reason(o.Why), end, clock(o.Until))
}

// left is the margin of a sense to the end of the window that decided it.
func (w *writer) left(e *event.Event, then string) {
	o := w.log.At(e.By)
	if o == nil || o.Kind != event.Window || o.By != 0 {
		return
	}
	d := o.Until.Sub(e.T)
	w.number("left of the window", d)
	w.margin(d, fmt.Sprintf("%s later %s.", span(d), then))
}

func (w *writer) refractory(e *event.Event, at string) {
	what := "refractory, noted and nothing more"
	tracks := e.Channel == 'A' && w.tracks(e)
	switch {
	case e.Use == event.Blanked:
		what = "blanked, not seen at all"
	case tracks:
		what = "refractory, not tracked"
	}
	o := w.log.At(e.By)
	if o == nil {
		w.say(fmt.Sprintf("%s: %s: a ventricular stimulus was due already.", at, what))
		return
	}
	free := w.free(e)
	text := fmt.Sprintf("%s: in %s: %s", at, w.decided(e), what)
	d := free.Sub(e.T)
	w.number("into the window", e.T.Sub(o.T))
	switch {
	case o.Field == "av_delay" || o.Field == "upper_rate":
		w.say(text + "; a P before it had begun the AV delay already.")
		return
	case !tracks:
		w.say(fmt.Sprintf("%s; %s later it would have been used.", text, span(d)))
	default:
		w.say(fmt.Sprintf("%s; %s later it would have been.", text, span(d)))
	}
	if free != o.Until {
		w.say(fmt.Sprintf("%s ends %s later, but %s runs on to %s.", upper(windowLabel(o.Field)), span(o.Until.Sub(e.T)), w.lastBar(e, free), clock(free)))
	}
	w.number("missed by", d)
	then := "it would have been used"
	if tracks {
		then = "it would have been tracked"
	}
	w.margin(d, fmt.Sprintf("%s later %s.", span(d), then))
}

// bars are the windows that keep a signal of a channel from use.
func bars(ch byte) []string {
	if ch == 'A' {
		return []string{"pvarp", "pvab", "atrial_blanking", "atrial_refractory", "atrial_noise"}
	}
	return []string{"ventricular_refractory", "pavb", "crosstalk", "noise"}
}

// free is the end of the last of the windows that run at the signal and keep it from
// use.
func (w *writer) free(e *event.Event) tick.Time {
	end := e.T
	for _, o := range w.open(e) {
		for _, n := range bars(e.Channel) {
			if o.Field == n {
				end = max(end, o.Until)
			}
		}
	}
	return end
}

func (w *writer) lastBar(e *event.Event, until tick.Time) string {
	for _, o := range w.open(e) {
		for _, n := range bars(e.Channel) {
			if o.Field == n && o.Until == until {
				return windowLabel(n)
			}
		}
	}
	return "another window"
}

// tracks tells whether the mode in force at the event lets atrial signals begin an
// AV delay: by its letters where a mode change tells them, else by what the strip
// shows.
func (w *writer) tracks(e *event.Event) bool {
	if !w.modes.read {
		w.modes = readModes(w.log)
	}
	code := ""
	for _, o := range w.modes.changes {
		if o.ID < e.ID {
			code = o.To
		} else if code == "" {
			code = o.Field
		}
	}
	if len(code) < 3 {
		return w.modes.tracking
	}
	return code[2] == 'D' && code[0] != 'A' && code[1] != 'V'
}

// modes is what the strip shows of the mode, read once.
type modes struct {
	read     bool
	changes  []*event.Event
	tracking bool // a P was tracked, or an interval ran that only tracking needs
}

func readModes(log *event.Log) modes {
	m := modes{read: true}
	for i := range log.Events {
		o := &log.Events[i]
		if o.Kind == event.Mode {
			m.changes = append(m.changes, o)
		}
		m.tracking = m.tracking || o.Kind == event.Window && o.Field == "upper_rate" || o.Kind == event.Sense && o.Use == event.Tracked
	}
	return m
}

// tracked: the AV delay that began, whether the upper rate holds the stimulus, and
// how soon after the refractory period it came.
func (w *writer) tracked(e *event.Event, at string) {
	av := w.openedNow(e, "av_delay")
	text := at + ": outside every refractory period, tracked"
	if av != nil {
		text += fmt.Sprintf(": it began an AV delay of %s, to %s%s", span(av.Until.Sub(av.T)), clock(av.Until), reason(av.Why))
		if full, ok := w.planned(av); ok && av.By != 0 {
			text = fmt.Sprintf("%s: outside every refractory period, tracked: it began an AV delay (of %s, as the last one that ran out), ended at %s by %s", at, span(full), clock(av.Until), w.deviceEvent(w.log.At(av.By)))
		}
	}
	w.say(text + ".")
	if u := w.running(e, "upper_rate"); u != nil && av != nil && u.By == 0 && u.Until > av.Until {
		w.number("held back", u.Until.Sub(av.Until))
		w.say(fmt.Sprintf("The stimulus cannot come before the upper-rate interval since %s ends at %s, %s after the AV delay.", w.cause(u.Cause), clock(u.Until), span(u.Until.Sub(av.Until))))
	}
	if p := w.lastWindow(e, "pvarp"); p != nil && p.Until <= e.T {
		d := e.T.Sub(p.Until)
		w.number("after the end of PVARP", d)
		w.margin(d, fmt.Sprintf("More than %s earlier it would have been in PVARP and not tracked.", span(d)))
	}
	w.keptBack(e, "atrial_escape", "atrial")
}

// openedNow is the window of the name that the event opened, or nil.
func (w *writer) openedNow(e *event.Event, name string) *event.Event {
	for i := int(e.ID); i < len(w.log.Events) && w.log.Events[i].T == e.T; i++ {
		if n := &w.log.Events[i]; n.Kind == event.Window && n.Field == name && n.Cause == e.ID {
			return n
		}
	}
	return nil
}

// keptBack says that the event ended an interval at whose end a stimulus was due.
func (w *writer) keptBack(e *event.Event, name, stimulus string) {
	o := w.running(e, name)
	if o == nil || o.By != e.ID {
		return
	}
	text := fmt.Sprintf("It kept back the %s stimulus at the end of %s that had begun with %s", stimulus, windowLabel(name), w.cause(o.Cause))
	if full, ok := w.planned(o); ok {
		d := full - o.Until.Sub(o.T)
		text += fmt.Sprintf("; at the length of the last one that ran out (%s) that was %s off", span(full), span(d))
		w.number("before the stimulus was due", d)
	}
	w.say(text + ".")
}

func (w *writer) inhibits(e *event.Event, at string) {
	what := "used"
	if e.Use == event.Inhibits {
		what = "kept back a stimulus"
	} else if e.Use == event.Resets {
		what = "no refractory period was running, it began the timing anew"
	}
	w.say(at + ": " + what + ".")
	before := w.a.Numbers
	if e.Channel == 'A' {
		w.keptBack(e, "atrial_escape", "atrial")
		w.keptBack(e, "lower_rate", "atrial")
	} else {
		w.keptBack(e, "av_delay", "ventricular")
		w.keptBack(e, "atrial_escape", "atrial")
		w.keptBack(e, "lower_rate", "ventricular")
	}
	if n := len(w.a.Numbers); n > len(before) {
		d := tick.MS(w.a.Numbers[len(before)].MS)
		w.margin(d, fmt.Sprintf("Later than %s and the stimulus would have come first.", span(d)))
	}
	if n := w.openedNow(e, "atrial_escape"); n != nil && e.Channel == 'V' {
		w.say(fmt.Sprintf("It began an atrial escape interval%s.", reason(n.Why)))
	} else if n := w.openedNow(e, "lower_rate"); n != nil {
		w.say(fmt.Sprintf("It began a lower-rate interval%s.", reason(n.Why)))
	}
	if n := w.openedNow(e, "pvarp"); n != nil && n.Why != "" {
		w.say(fmt.Sprintf("PVARP after it lasts %s, its length set by: %s.", span(n.Until.Sub(n.T)), n.Why))
	}
}

// unseen adds what a signal of no beat of its chamber does to the rhythm.
func (w *writer) unseen(e *event.Event) {
	if k := w.nature(e); k == ofP || k == ofR {
		return
	}
	switch e.Use {
	case event.Resets, event.Inhibits:
		w.say("The device took it for a beat, so the next stimulus comes later than the heart needs it (oversensing).")
	case event.Tracked:
		w.say("The device took it for a P and follows it (oversensing).")
	}
}

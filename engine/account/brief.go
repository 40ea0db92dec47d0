package account

import (
	"fmt"

	"escapement/engine/event"
)

// timerLabels name what a stimulus of a device ended, where that is no window.
var timerLabels = map[string]string{ // looked up only, never ranged over
	"safety": "a signal in the crosstalk window", "offset": "a further ventricular lead", "trigger": "a signal",
	"rate_change": "the limit on the change of the rate", "backup": "no ventricular event",
}

// shortPacing is a stimulus of a device in one sentence.
func (w *writer) shortPacing(e *event.Event) string {
	why := timerLabels[e.Field]
	if why == "" {
		why = "end of " + windowLabel(e.Field)
	}
	capture := "captured"
	switch {
	case e.Captured:
	case e.MissedBy() > 0:
		capture = "no capture, refractory tissue, missed by " + span(e.MissedBy())
	case e.Outcome != 0:
		capture = "no capture, " + outcomes[e.Outcome]
	default:
		capture = "no capture"
	}
	return fmt.Sprintf("%s stimulus (%s): %s.", upper(chamber(e.Channel)), why, capture)
}

// shortDevice is a signal, a window, a change of mode or of the plan in one sentence.
func (w *writer) shortDevice(e *event.Event) string {
	switch e.Kind {
	case event.Sense:
		text := fmt.Sprintf("%s signal%s: %s%s", upper(chamber(e.Channel)), signalWord(w.nature(e)), useWord(e.Use), w.in(e))
		if e.Use == event.Refractory && e.Channel == 'A' && w.tracks(e) {
			text += ", not tracked"
		}
		return text + "."
	case event.Window:
		text := fmt.Sprintf("%s began, with %s, and", upper(windowLabel(e.Field)), w.openedBy(e))
		if e.By != 0 {
			return fmt.Sprintf("%s was ended at %s by %s.", text, clock(e.Until), w.deviceEvent(w.log.At(e.By)))
		}
		return fmt.Sprintf("%s runs to %s.", text, clock(e.Until))
	case event.Mode:
		return fmt.Sprintf("The mode changed from %s to %s: %s.", e.Field, e.To, e.Why)
	}
	return fmt.Sprintf("From here on %s was %s.", e.Field, e.To)
}

// signalWord marks a signal that no beat of its chamber made.
func signalWord(n nature) string {
	switch n {
	case ofFarField:
		return " (far field)"
	case ofT:
		return " (T wave)"
	case ofNothing:
		return " (interference)"
	}
	return ""
}

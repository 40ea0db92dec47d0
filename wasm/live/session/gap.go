package session

import (
	"fmt"
	"slices"

	"escapement/engine/account"
	"escapement/engine/event"
	"escapement/engine/tick"
)

// gapReply is why the device gave no stimulus between two QRS complexes.
type gapReply struct {
	From      float64  `json:"from_ms"`
	To        float64  `json:"to_ms"`
	Long      bool     `json:"long"` // longer than the lower-rate interval
	Title     string   `json:"title"`
	Sentences []string `json:"sentences"`
	Lines     []line   `json:"lines"` // the events it rests on
	Settings  []linked `json:"settings"`
}

// linked is a setting that had a part in something.
type linked struct {
	Path  string  `json:"path"`
	Label string  `json:"label"`
	Unit  string  `json:"unit"`
	Value float64 `json:"value"`
}

// gap answers for the stretch between the QRS complexes around an instant; null without
// a device that paces the ventricles, and before the first complex.
func (s *Session) gap(args []byte) []byte {
	var q struct {
		T float64 `json:"t_ms"`
	}
	decode(args, &q)
	t := s.current
	if t == nil || t.Device == nil || !t.Device.Settings.Mode.PacesV() {
		return none
	}
	at := tick.Time(tick.MS(q.T))
	from, to := tick.Time(-1), t.Log.Span
	for i := range t.Measure.Beats {
		b := &t.Measure.Beats[i]
		if b.Kind == "P" {
			continue
		}
		if b.T > at {
			to = b.T
			break
		}
		from = b.T
	}
	if from < 0 {
		return none
	}
	from, to = t.noticed(from), t.noticed(to)
	w := account.WhyGap(t.Log, from, to)
	if w == nil {
		return none
	}
	r := gapReply{From: from.MS(), To: to.MS(), Sentences: w.Sentences, Settings: []linked{},
		Title: fmt.Sprintf("Why no stimulus for %.0f ms", to.Sub(from).MS()),
		Long:  to.Sub(from).MS() > 60000/t.Device.Settings.LowerRate+1}
	evidence := slices.Clone(w.Evidence)
	slices.Sort(evidence)
	evidence = slices.Compact(evidence)
	r.Lines = t.lines(evidence)
	for _, id := range evidence {
		if t.Log.At(id).Kind == event.Window {
			r.Settings = t.link(r.Settings, id)
		}
	}
	return encode(r)
}

// late is how long after the start of a QRS complex a lead may notice it.
const late = 150 * tick.Millisecond

// noticed is when the device paced or sensed the QRS complex that began at a time; that
// time where it did neither.
func (t *sheet) noticed(qrs tick.Time) tick.Time {
	for i := range t.Log.Events {
		e := &t.Log.Events[i]
		if e.T > qrs.Add(late) {
			break
		}
		if e.T >= qrs && e.Channel == 'V' && (e.Kind == event.Sense && e.Use != event.Blanked || e.Kind == event.Stimulus) {
			return e.T
		}
	}
	return qrs
}

// link adds the settings of an event that are not yet in a list.
func (t *sheet) link(list []linked, id event.ID) []linked {
	for _, s := range t.moves().Settings(id) {
		if !slices.ContainsFunc(list, func(l linked) bool { return l.Path == s.Path }) {
			list = append(list, linked{s.Path, s.Label, s.Unit, s.Value})
		}
	}
	return list
}

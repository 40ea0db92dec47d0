package event

import (
	"bufio"
	"encoding/json"
	"io"
)

// record is the JSON form of an event: one object a line, as the command line
// prints it. Times are microseconds from the start of the strip.
type record struct {
	ID       ID       `json:"id"`
	T        int64    `json:"t_us"`
	Kind     string   `json:"kind"`
	Site     string   `json:"site,omitempty"`
	Path     string   `json:"path,omitempty"`
	Dir      string   `json:"dir,omitempty"`
	Chamber  string   `json:"chamber,omitempty"`
	Captured *bool    `json:"captured,omitempty"`
	Cause    ID       `json:"cause"`
	Rule     string   `json:"rule"`
	Reason   string   `json:"reason,omitempty"`
	Depth    *float64 `json:"depth,omitempty"`
	Recovery *int64   `json:"recovery_us,omitempty"`
	Needed   *int64   `json:"needed_us,omitempty"`
	MissedBy *int64   `json:"missed_by_us,omitempty"`
	Until    *int64   `json:"refractory_until_us,omitempty"`
	Field    string   `json:"field,omitempty"`
	To       string   `json:"to,omitempty"`
	Timer    string   `json:"timer,omitempty"`
	Outcome  string   `json:"outcome,omitempty"`
	Channel  string   `json:"channel,omitempty"`
	Use      string   `json:"use,omitempty"`
	Because  ID       `json:"because,omitempty"` // the window that decided a sense
	Name     string   `json:"name,omitempty"`
	Ends     *int64   `json:"until_us,omitempty"`
	EndedBy  *ID      `json:"ended_by,omitempty"` // 0: it ran out
	From     string   `json:"from,omitempty"`
	Why      string   `json:"why,omitempty"`
}

// WriteJSON writes one event a line.
func (l *Log) WriteJSON(w io.Writer) error {
	b := bufio.NewWriter(w)
	enc := json.NewEncoder(b)
	for i := range l.Events {
		if err := enc.Encode(l.record(&l.Events[i])); err != nil {
			return err
		}
	}
	return b.Flush()
}

func (l *Log) record(e *Event) record {
	r := record{ID: e.ID, T: int64(e.T), Kind: e.Kind.String(), Cause: e.Cause, Rule: e.Rule.String()}
	if e.Site >= 0 {
		r.Site = l.Sites[e.Site].Name
	}
	if e.Path >= 0 {
		r.Path = l.Paths[e.Path].Name
		r.Dir = e.Dir.String()
	}
	micro := func(v int64) *int64 { return &v }
	if e.Needed != 0 {
		r.Needed = micro(int64(e.Needed))
		if e.Recovery != Unknown {
			r.Recovery = micro(int64(e.Recovery))
		}
	}
	switch e.Kind {
	case Activate:
		r.Until = micro(int64(e.Until))
	case Block:
		depth := float64(e.Depth) / 1000
		r.Depth, r.Reason = &depth, r.Rule
		if m := e.MissedBy(); m > 0 {
			r.MissedBy = micro(int64(m))
		}
	case Change:
		r.Field, r.To = e.Field, e.To
	case Sense:
		r.Channel, r.Use, r.Because = string(e.Channel), e.Use.String(), e.By
	case Window:
		by := e.By
		r.Name, r.Ends, r.EndedBy = e.Field, micro(int64(e.Until)), &by
	case Mode:
		r.From, r.To, r.Why = e.Field, e.To, e.Why
	case Stimulus:
		captured := e.Captured
		r.Captured, r.Timer, r.Why = &captured, e.Field, e.Why
		if e.Outcome != 0 {
			r.Outcome = e.Outcome.String()
		}
		if c := l.Sites[e.Site].Chamber(); c != 0 {
			r.Chamber = string(c)
		}
		if m := e.MissedBy(); m > 0 && !captured {
			r.MissedBy = micro(int64(m))
		}
	}
	return r
}

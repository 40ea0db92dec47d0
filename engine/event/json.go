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
	r := record{ID: e.ID, T: int64(e.T), Kind: e.Kind.String(), Cause: e.Cause, Rule: e.Rule.String(), Field: e.Field, To: e.To}
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
	case Stimulus:
		captured := e.Captured
		r.Captured = &captured
		if c := l.Sites[e.Site].Chamber(); c != 0 {
			r.Chamber = string(c)
		}
		if m := e.MissedBy(); m > 0 && !captured {
			r.MissedBy = micro(int64(m))
		}
	}
	return r
}

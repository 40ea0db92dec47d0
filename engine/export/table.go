package export

import (
	"encoding/csv"
	"io"
	"strconv"

	"escapement/engine/account"
	"escapement/engine/event"
	"escapement/engine/timeline"
)

// Columns are the names of the columns of [CSV], with their units. They are stable; new
// ones are added at the end.
var Columns = []string{
	"event", "time_ms", "kind", "rule", "cause_event", "site", "path", "direction",
	"depth", "recovery_ms", "needed_ms", "missed_by_ms", "until_ms", "captured", "outcome",
	"channel", "use", "by_event", "field", "to", "why", "sentence",
}

// CSV writes the events as a table after RFC 4180: a line of names, then an event a
// line, lines ended by CR LF, fields quoted where they need it. A field that an event
// does not have is empty.
func CSV(w io.Writer, s *timeline.Timeline) error {
	c := csv.NewWriter(w)
	c.UseCRLF = true
	if err := c.Write(Columns); err != nil {
		return err
	}
	sentences := account.Sentences(s.Log)
	for i := range s.Log.Events {
		if err := c.Write(line(s.Log, &s.Log.Events[i], sentences[i])); err != nil {
			return err
		}
	}
	c.Flush()
	return c.Error()
}

func line(l *event.Log, e *event.Event, sentence string) []string {
	f := make(map[string]string, len(Columns)) // only looked up
	f["event"], f["time_ms"] = number(int64(e.ID)), e.T.String()
	f["kind"], f["rule"], f["cause_event"] = e.Kind.String(), e.Rule.String(), id(e.Cause)
	f["sentence"] = sentence
	if e.Site >= 0 {
		f["site"] = l.Sites[e.Site].Name
	}
	if e.Path >= 0 {
		f["path"], f["direction"] = l.Paths[e.Path].Name, e.Dir.String()
	}
	if e.Needed != 0 {
		f["needed_ms"] = e.Needed.String()
		if e.Recovery != event.Unknown {
			f["recovery_ms"] = e.Recovery.String()
		}
		if m := e.MissedBy(); m > 0 && (e.Kind == event.Block || e.Kind == event.Stimulus && !e.Captured) {
			f["missed_by_ms"] = m.String()
		}
	}
	switch e.Kind {
	case event.Activate:
		f["until_ms"] = e.Until.String()
	case event.Block:
		f["depth"] = strconv.FormatFloat(float64(e.Depth)/1000, 'f', -1, 64)
	case event.Change:
		f["field"], f["to"] = e.Field, e.To
	case event.Sense:
		f["channel"], f["use"], f["by_event"] = string(e.Channel), e.Use.String(), id(e.By)
	case event.Window:
		f["field"], f["until_ms"], f["by_event"] = e.Field, e.Until.String(), id(e.By)
	case event.Mode:
		f["field"], f["to"], f["why"] = e.Field, e.To, e.Why
	case event.Stimulus:
		f["captured"], f["field"], f["why"] = strconv.FormatBool(e.Captured), e.Field, e.Why
		if e.Outcome != 0 {
			f["outcome"] = e.Outcome.String()
		}
		if e.Channel != 0 {
			f["channel"] = string(e.Channel)
		}
	}
	out := make([]string, len(Columns))
	for i, name := range Columns {
		out[i] = f[name]
	}
	return out
}

func number(n int64) string { return strconv.FormatInt(n, 10) }

// id is the number of an event, or nothing for none.
func id(e event.ID) string {
	if e == 0 {
		return ""
	}
	return number(int64(e))
}

package session

import (
	"strings"

	"escapement/engine/account"
	"escapement/engine/event"
	"escapement/engine/tick"
)

// line is an event in one sentence.
type line struct {
	ID   event.ID `json:"id"`
	T    float64  `json:"t_ms"`
	Text string   `json:"text"`
}

type accountReply struct {
	Event     event.ID `json:"event"`
	T         float64  `json:"t_ms"`
	Title     string   `json:"title"`
	Sentences []string `json:"sentences"`
	Margin    string   `json:"margin"`            // how close it came to going the other way; may be empty
	Chain     []line   `json:"chain"`             // the event, then its causes
	Led       []line   `json:"led"`               // what it caused directly
	Against   string   `json:"against,omitempty"` // how it differs from its partner before or after
	Settings  []linked `json:"settings"`
	Not       *notThat `json:"not"` // why the device did not follow a P; null elsewhere
}

// notThat is why something did not happen.
type notThat struct {
	Title     string   `json:"title"`
	Sentences []string `json:"sentences"`
	Lines     []line   `json:"lines"`
}

func (s *Session) account(args []byte) []byte {
	var q struct {
		Event event.ID `json:"event"`
	}
	decode(args, &q)
	if s.current == nil {
		return none
	}
	t, id, sign := s.current, q.Event, event.ID(1)
	if q.Event < 0 && s.before != nil {
		t, id, sign = s.before, -q.Event, -1
	}
	a := account.Of(t.Log, id)
	if a == nil {
		return none
	}
	r := accountReply{Event: q.Event, T: a.T.MS(), Title: a.Title, Sentences: a.Sentences, Chain: steps(a.Chain, sign), Led: steps(a.Led, sign), Against: s.against(q.Event)}
	if sign < 0 {
		r.Title = "Before: " + r.Title
	}
	if a.Margin != nil {
		r.Margin = a.Margin.Text
	}
	r.Settings, r.Not = t.link([]linked{}, id), t.notTracked(id, sign)
	return encode(r)
}

// notTracked answers for a depolarisation of the atria; of a signal the account itself
// tells it.
func (t *sheet) notTracked(id, sign event.ID) *notThat {
	if t.Log.At(id).Kind != event.Activate || t.Device == nil || !t.Device.Settings.Mode.Tracks() {
		return nil
	}
	w := account.WhyNotTracked(t.Log, id)
	if w == nil || len(w.Sentences) == 0 {
		return nil
	}
	lines := t.lines(w.Evidence)
	for i := range lines {
		lines[i].ID *= sign
	}
	return &notThat{"Why it was not tracked", w.Sentences, lines}
}

func steps(from []account.Step, sign event.ID) []line {
	out := make([]line, len(from))
	for i, s := range from {
		out[i] = line{s.ID * sign, s.T.MS(), s.Text}
	}
	return out
}

type listingReply struct {
	Lines []line `json:"lines"`
}

func (s *Session) listing(args []byte) []byte {
	var q struct {
		From float64 `json:"from_ms"`
		To   float64 `json:"to_ms"`
	}
	decode(args, &q)
	if s.current == nil {
		return none
	}
	r := listingReply{Lines: []line{}}
	for _, l := range account.Listing(s.current.Log, tick.Time(tick.MS(q.From)), tick.Time(tick.MS(q.To))) {
		text := l.Text
		if _, rest, ok := strings.Cut(text, " s: "); ok { // the page has a column for the time
			text = rest
		}
		r.Lines = append(r.Lines, line{l.ID, l.T.MS(), text})
	}
	return encode(r)
}

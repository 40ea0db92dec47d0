package session

import (
	"slices"

	"escapement/engine/account"
	"escapement/engine/event"
	"escapement/engine/sim"
	"escapement/engine/study"
)

// extraReply is what came of a planned stimulus. Item is its place in the plan's list
// of interventions; Single tells that it can be scanned.
type extraReply struct {
	Event     event.ID `json:"event"`
	Item      int      `json:"item"`
	Single    bool     `json:"single"`
	Slug      string   `json:"slug"`
	Text      string   `json:"text"`
	Sentences []string `json:"sentences"`
	Lines     []line   `json:"lines"` // the events that show it
}

// extra plays the plan without the intervention that made a stimulus and compares.
func (s *Session) extra(args []byte) []byte {
	var q struct {
		Event event.ID `json:"event"`
	}
	decode(args, &q)
	if s.current == nil {
		return none
	}
	t := s.current
	e := t.Log.At(q.Event)
	if e == nil {
		return none
	}
	item := t.intervention(e) - 1
	if item < 0 {
		return none
	}
	p := t.Plan.Clone()
	p.Interventions = slices.Delete(p.Interventions, item, item+1)
	without, err := sim.Run(p)
	if err != nil {
		return none
	}
	o := study.Extra(t.Log, without, e.ID)
	if o == nil {
		return none
	}
	return encode(extraReply{e.ID, item, t.Plan.Interventions[item]["do"].Text == "stimulate", o.Slug, o.Text, o.Sentences, t.lines(o.Events)})
}

// lines tells events in a sentence each.
func (t *sheet) lines(ids []event.ID) []line {
	out := []line{}
	for _, id := range ids {
		if a := account.Of(t.Log, id); a != nil && len(a.Chain) > 0 {
			out = append(out, line{id, a.T.MS(), a.Chain[0].Text})
		}
	}
	return out
}

// scanReply is a scan as far as it has come. Couplings are whole milliseconds after
// From.
type scanReply struct {
	Item     int       `json:"item"`
	From     float64   `json:"from_ms"`
	Last     int       `json:"last"`
	Done     int       `json:"done"`
	Of       int       `json:"of"`
	Finished bool      `json:"finished"`
	Segments []segment `json:"segments"`
	Jump     *jump     `json:"jump"` // of AH by two pathways; null: none
	Fault    string    `json:"fault"`
}

type segment struct {
	From    int        `json:"from"`
	To      int        `json:"to"`
	Slug    string     `json:"slug"`
	Text    string     `json:"text"`
	Passage [2]float64 `json:"passage_ms"`
	AH      [2]float64 `json:"ah_ms"`
}

type jump struct {
	Coupling int     `json:"coupling"`
	By       float64 `json:"by_ms"`
}

// scan begins to sweep the coupling of an intervention of the current plan, or goes on
// with it for so many tries.
func (s *Session) scan(args []byte) []byte {
	var q struct {
		Item  int  `json:"item"`
		Start bool `json:"start"`
		Tries int  `json:"tries"`
	}
	decode(args, &q)
	if s.current == nil {
		return none
	}
	if q.Start {
		var err error
		if s.scanned, err = study.NewScan(s.current.Plan, q.Item); err != nil {
			s.scanned = nil
			return encode(scanReply{Item: q.Item, Finished: true, Segments: []segment{}, Fault: err.Error()})
		}
	}
	if s.scanned == nil {
		return none
	}
	r := scanReply{Item: q.Item, Finished: s.scanned.Run(q.Tries), From: s.scanned.From.MS(), Last: s.scanned.Last, Segments: []segment{}}
	r.Done, r.Of = s.scanned.Progress()
	for _, g := range s.scanned.Segments() {
		r.Segments = append(r.Segments, segment{g.From, g.To, g.Outcome.Slug, g.Outcome.Text,
			[2]float64{g.Passage[0].MS(), g.Passage[1].MS()}, [2]float64{g.AH[0].MS(), g.AH[1].MS()}})
	}
	if at, by, ok := s.scanned.Jump(); ok {
		r.Jump = &jump{at, by.MS()}
	}
	return encode(r)
}

package session

import (
	"context"
	"encoding/json"

	"escapement/engine/manoeuvre"
	"escapement/engine/plan"
	"escapement/engine/search"
)

// sensing is a sensitivity in the making.
type sensing struct {
	combination int
	todo        []search.Probe
	rows        []*search.Sensed
}

// sensedReply is the reply of sense.
type sensedReply struct {
	OK          bool                `json:"ok"`
	Diagnoses   []plan.Worded       `json:"diagnoses,omitempty"`
	Done        int                 `json:"done"` // numbers moved
	Of          int                 `json:"of"`
	Sensitivity *search.Sensitivity `json:"sensitivity,omitempty"` // as far as it has come, the first to change in front
}

// sense moves so many numbers of the heart more ("count", some hundred runs each), with
// the settings of a combination of the plan's search, or its own where that is -1. The
// session goes on where the last call with the same plan and combination ended; "again"
// begins anew.
func (s *Session) sense(args []byte) []byte {
	var q struct {
		Plan        json.RawMessage `json:"plan"`
		Combination int             `json:"combination"`
		Numbers     []string        `json:"numbers"`
		Count       int             `json:"count"`
		Again       bool            `json:"again"`
	}
	decode(args, &q)
	if err := s.toSearch(q.Plan, nil, false); err != nil {
		return encode(sensedReply{Diagnoses: plan.Told(err)})
	}
	at := s.searching
	if q.Combination < -1 || q.Combination >= at.search.Len() {
		panic("session: there is no such combination")
	}
	if at.sensing == nil || at.sensing.combination != q.Combination || q.Again {
		at.sensing = &sensing{combination: q.Combination, todo: at.search.Probes(q.Numbers)}
	}
	x := at.sensing
	for range min(max(1, q.Count), len(x.todo)) {
		row, err := at.search.Sense(context.Background(), x.todo[0], q.Combination)
		if err != nil {
			panic("session: a sensitivity without end was ended: " + err.Error())
		}
		x.todo, x.rows = x.todo[1:], append(x.rows, row)
	}
	return encode(sensedReply{OK: true, Done: len(x.rows), Of: len(x.rows) + len(x.todo), Sensitivity: at.search.Sensitivity(x.rows, q.Combination)})
}

// against tries the manoeuvres of the laboratory on two plans. The arguments may name
// the drives, couplings and so on, so that a page can ask for a part at a time.
func against(args []byte) []byte {
	var q struct {
		Plan     json.RawMessage     `json:"plan"`
		Other    json.RawMessage     `json:"other"`
		Protocol *manoeuvre.Protocol `json:"protocol"`
		Most     int                 `json:"most"`
	}
	decode(args, &q)
	type reply struct {
		OK         bool                  `json:"ok"`
		Diagnoses  []plan.Worded         `json:"diagnoses,omitempty"`
		Comparison *manoeuvre.Comparison `json:"comparison,omitempty"`
	}
	a, err := plan.Decode(q.Plan)
	if err != nil {
		return encode(reply{Diagnoses: plan.Told(err)})
	}
	b, err := plan.Decode(q.Other)
	if err != nil {
		return encode(reply{Diagnoses: plan.Told(err)})
	}
	p := manoeuvre.Usual()
	if q.Protocol != nil {
		p = *q.Protocol
	}
	c, err := manoeuvre.Compare(a, b, p, q.Most)
	if err != nil {
		return encode(reply{Diagnoses: plan.Told(err)})
	}
	return encode(reply{OK: true, Comparison: c})
}

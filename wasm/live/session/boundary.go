package session

import (
	"context"
	"encoding/json"

	"escapement/engine/plan"
	"escapement/engine/sweep"
)

// bounded is the reply of boundary.
type bounded struct {
	OK         bool             `json:"ok"`
	Diagnoses  []plan.Worded    `json:"diagnoses,omitempty"`
	Boundaries []sweep.Boundary `json:"boundaries"`
	Alone      []sweep.Form     `json:"alone"` // closed forms without a boundary near them
}

// boundary finds where along an axis of a plan's sweep an outcome changes. Along and at
// are those of sweep.Question; after may name the values after which to look, where the
// page has the cells already.
func (s *Session) boundary(args []byte) []byte {
	var q struct {
		Plan    json.RawMessage `json:"plan"`
		Outcome string          `json:"outcome"`
		From    *float64        `json:"from"`
		Along   int             `json:"along"`
		At      int             `json:"at"`
		After   []int           `json:"after"`
	}
	decode(args, &q)
	if err := s.toSweep(q.Plan); err != nil {
		return encode(bounded{Diagnoses: plan.Told(err)})
	}
	found, alone, err := s.sweeping.worker.Boundaries(context.Background(), sweep.Question{
		Outcome: q.Outcome, From: q.From, Along: q.Along, At: q.At, After: q.After,
	})
	if err != nil {
		return encode(bounded{Diagnoses: plan.Told(err)})
	}
	return encode(bounded{OK: true, Boundaries: found, Alone: alone})
}

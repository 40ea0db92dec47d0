package session

import (
	"bytes"
	"encoding/json"

	"escapement/engine/plan"
	"escapement/engine/sweep"
)

// sweeping is the grid of the latest plan that was swept, with the worker that has its
// hearts.
type sweeping struct {
	file   []byte
	grid   *sweep.Grid
	worker *sweep.Worker
}

// swept is the reply of sweep. Diagnoses are those of the plan or its sweep.
type swept struct {
	OK        bool          `json:"ok"`
	Diagnoses []plan.Worded `json:"diagnoses,omitempty"`
	Head      *sweep.Head   `json:"head,omitempty"`
	Slice     *sweep.Slice  `json:"slice,omitempty"`
}

// sweep runs some points of a plan's sweep, in their order, and hands them over in
// columns; without points it gives the head of the grid alone. Several workers of the
// page may each run other points of one grid: a point's outcomes do not depend on who
// runs it. A number outside the grid is a bug of the page and panics.
func (s *Session) sweep(args []byte) []byte {
	var q struct {
		Plan   json.RawMessage `json:"plan"`
		Points []int           `json:"points"`
	}
	decode(args, &q)
	if err := s.toSweep(q.Plan); err != nil {
		return encode(swept{Diagnoses: plan.Told(err)})
	}
	g, w := s.sweeping.grid, s.sweeping.worker
	head := g.Head()
	r := swept{OK: true, Head: &head}
	if len(q.Points) > 0 {
		cells := make(map[int]*sweep.Cell, len(q.Points)) // looked up only
		for _, p := range q.Points {
			c := w.Point(p)
			cells[p] = &c
		}
		r.Slice = g.Slice(q.Points, func(p int) *sweep.Cell { return cells[p] })
	}
	return encode(r)
}

// sweptPlan is the plan of one point of a sweep, to open by itself.
func (s *Session) sweptPlan(args []byte) []byte {
	var q struct {
		Plan  json.RawMessage `json:"plan"`
		Point int             `json:"point"`
		Seed  uint64          `json:"seed"`
	}
	decode(args, &q)
	fail := func(err error) []byte { return encode(swept{Diagnoses: plan.Told(err)}) }
	if err := s.toSweep(q.Plan); err != nil {
		return fail(err)
	}
	p, err := s.sweeping.worker.Plan(q.Point, q.Seed)
	if err != nil {
		return fail(err)
	}
	return opened(p)
}

// opened is the reply with a plan to go on with.
func opened(p *plan.Plan) []byte {
	return encode(struct {
		OK   bool            `json:"ok"`
		Plan json.RawMessage `json:"plan"`
	}{true, p.Encode()})
}

func (s *Session) toSweep(file []byte) error {
	if s.sweeping != nil && bytes.Equal(s.sweeping.file, file) {
		return nil
	}
	p, err := plan.Decode(file)
	if err != nil {
		return err
	}
	g, err := sweep.New(p)
	if err != nil {
		return err
	}
	s.sweeping = &sweeping{file: bytes.Clone(file), grid: g, worker: g.NewWorker()}
	return nil
}

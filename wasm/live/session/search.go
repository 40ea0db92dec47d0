package session

import (
	"bytes"
	"context"
	"encoding/json"

	"escapement/engine/plan"
	"escapement/engine/search"
)

// searching is the search of the latest plan whose goals were asked for.
type searching struct {
	file   []byte
	search *search.Search
	state  *search.State

	sensing *sensing // nil until it was asked how far the heart may move
}

// searched is the reply of search. Diagnoses are those of the plan or its goals.
type searched struct {
	OK        bool           `json:"ok"`
	Diagnoses []plan.Worded  `json:"diagnoses,omitempty"`
	Done      int            `json:"done"`  // combinations tried in this phase
	Of        int            `json:"of"`    //
	Phase     int            `json:"phase"` // 1 looking for settings, 2 for what conflicts, 3 done
	Finished  bool           `json:"finished"`
	Answer    *search.Answer `json:"answer,omitempty"` // as far as it has come
	State     *search.State  `json:"state,omitempty"`
}

// search goes on with the search of a plan's goals for a budget of runs, some ten
// thousand a second. The session keeps the state between calls with the same plan;
// with "state" in the arguments it goes on from that, with "keep" it hands it over, and
// with "again" it begins anew. "most" bounds the list of what was found; 0 leaves the
// answer out until the search has finished.
func (s *Session) search(args []byte) []byte {
	var q struct {
		Plan   json.RawMessage `json:"plan"`
		Budget int             `json:"budget"`
		Most   int             `json:"most"`
		State  *search.State   `json:"state"`
		Keep   bool            `json:"keep"`
		Again  bool            `json:"again"`
	}
	decode(args, &q)
	if err := s.toSearch(q.Plan, q.State, q.Again); err != nil {
		return encode(searched{Diagnoses: plan.Told(err)})
	}
	x, st := s.searching.search, s.searching.state
	if err := x.Run(context.Background(), st, search.Settings{Workers: 1, Budget: max(1, q.Budget)}); err != nil {
		panic("session: a search without end was ended: " + err.Error())
	}
	r := searched{OK: true, Phase: st.Phase, Finished: st.Done()}
	r.Done, r.Of = st.Progress()
	if q.Most > 0 || r.Finished {
		r.Answer = x.Answer(st, q.Most)
	}
	if q.Keep {
		r.State = st
	}
	return encode(r)
}

func (s *Session) toSearch(file []byte, state *search.State, again bool) error {
	if s.searching == nil || !bytes.Equal(s.searching.file, file) {
		p, err := plan.Decode(file)
		if err != nil {
			return err
		}
		x, err := search.New(p)
		if err != nil {
			return err
		}
		s.searching = &searching{file: bytes.Clone(file), search: x, state: x.Begin()}
	}
	if again {
		s.searching.state = s.searching.search.Begin()
	}
	if state != nil {
		if err := s.searching.search.Continue(state); err != nil {
			return err
		}
		s.searching.state = state
	}
	return nil
}

// searchPlan is the plan with a combination of settings that a search tried, to open by
// itself; with the name of a situation, put in that.
func (s *Session) searchPlan(args []byte) []byte {
	var q struct {
		Plan        json.RawMessage `json:"plan"`
		Combination int             `json:"combination"`
		Situation   string          `json:"situation"`
	}
	decode(args, &q)
	fail := func(err error) []byte { return encode(searched{Diagnoses: plan.Told(err)}) }
	if err := s.toSearch(q.Plan, nil, false); err != nil {
		return fail(err)
	}
	p, err := s.searching.search.Open(q.Combination, q.Situation)
	if err != nil {
		return fail(err)
	}
	return opened(p)
}

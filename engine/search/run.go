package search

import (
	"context"
	"fmt"
	"runtime"
	"sync"
)

// Format is the "format" of a state and of an answer.
const (
	StateFormat  = "escapement-search-state/1"
	AnswerFormat = "escapement-search/1"
)

// State is how far a search has come; as JSON it can be kept and gone on with.
type State struct {
	Format      string `json:"format"`
	Fingerprint string `json:"fingerprint"` // of plan and goals
	Phase       int    `json:"phase"`       // 1: looking for settings; 2: none were found, looking at what conflicts; 3: done
	Rows        []*Row `json:"rows"`        // by combination; null: not tried in this phase
	Runs        int    `json:"runs"`
	Given       int    `json:"given_up_runs"` // of them, of combinations that were given up and run anew
	Bounds      []int  `json:"bounds"`        // combinations excluded by a closed form, by goal
}

// Begin is the state of a search that has not begun.
func (s *Search) Begin() *State {
	return &State{Format: StateFormat, Fingerprint: s.Fingerprint(), Phase: 1, Rows: make([]*Row, s.total), Bounds: make([]int, len(s.Goals.Must))}
}

// Continue tells whether a state is one of this search. The error says what is wrong.
func (s *Search) Continue(st *State) error {
	switch {
	case st.Format != StateFormat:
		return fmt.Errorf("format is %q; allowed: %q", st.Format, StateFormat)
	case st.Fingerprint != s.Fingerprint():
		return fmt.Errorf("a state of another plan or other goals (fingerprint %s, this one has %s)", st.Fingerprint, s.Fingerprint())
	case st.Phase < 1 || st.Phase > 3 || len(st.Rows) != s.total || len(st.Bounds) != len(s.Goals.Must):
		return fmt.Errorf("a state of phase %d with %d combinations; allowed: phase 1 to 3 with %d", st.Phase, len(st.Rows), s.total)
	}
	for i, r := range st.Rows {
		if r != nil && (r.Combination != i || r.Whole && (len(r.Marks) != len(s.Goals.Must) || len(r.Sums) != len(s.Goals.Prefer))) {
			return fmt.Errorf("rows[%d] is not of this search", i)
		}
		if r != nil {
			for _, k := range r.Failed {
				if k < 0 || k >= len(s.Goals.Must) {
					return fmt.Errorf("rows[%d].failed: goal %d; allowed: 0 to %d", i, k, len(s.Goals.Must)-1)
				}
			}
			for _, m := range r.Marks {
				if m.Situation < 0 || m.Situation >= len(s.rooms) || m.At < 0 || m.At >= s.rooms[m.Situation].at.Runs() {
					return fmt.Errorf("rows[%d].marks: situation %d, value %d, which is not of this search", i, m.Situation, m.At)
				}
			}
		}
	}
	return nil
}

// Settings are how a search is run. The zero value runs all of it on all cores.
type Settings struct {
	Workers  int // 0: one for each core
	Budget   int // hand out no more combinations after so many runs; 0: no bound
	Progress func(done, of int)
}

// Done tells whether there is nothing left to run.
func (st *State) Done() bool { return st.Phase == 3 }

// Progress is how many combinations were tried in the phase, of how many.
func (st *State) Progress() (done, of int) {
	for _, r := range st.Rows {
		if r != nil && (st.Phase == 1 || r.Whole || r.Refused != "") {
			done++
		}
	}
	return done, len(st.Rows)
}

// Run goes on with a search until it is done, the budget is used up or the context
// ends, whose error it returns then. The state stands in any case.
func (s *Search) Run(ctx context.Context, st *State, set Settings) error {
	left := set.Budget
	for !st.Done() {
		todo := s.todo(st)
		if len(todo) == 0 {
			s.turn(st)
			continue
		}
		before := st.Runs
		if err := s.part(ctx, st, set, todo, left); err != nil {
			return err
		}
		if set.Budget > 0 {
			// A closed form costs next to nothing, but not nothing: it counts as a run does.
			if left -= max(1, st.Runs-before); left <= 0 {
				if len(s.todo(st)) == 0 {
					s.turn(st)
				}
				return nil
			}
		}
	}
	return nil
}

// todo are the combinations that the phase has not tried.
func (s *Search) todo(st *State) []int {
	var out []int
	for i, r := range st.Rows {
		if r == nil || st.Phase == 2 && !r.Whole && r.Refused == "" {
			out = append(out, i)
		}
	}
	return out
}

// turn goes to the next phase.
func (s *Search) turn(st *State) {
	if st.Phase == 2 {
		st.Phase = 3
		return
	}
	st.Phase = 2
	for _, r := range st.Rows {
		if r.good() {
			st.Phase = 3
			return
		}
	}
}

// part tries combinations in order on workers; with a budget of runs above 0 it hands
// out none after so many.
func (s *Search) part(ctx context.Context, st *State, set Settings, todo []int, budget int) error {
	workers := set.Workers
	if workers <= 0 {
		workers = runtime.GOMAXPROCS(0)
	}
	workers = min(workers, len(todo))
	var (
		mu   sync.Mutex
		next int
		wait sync.WaitGroup
		cost int
		of   = len(st.Rows)
		done = of - len(todo)
	)
	giveUp := st.Phase == 1
	// take hands out a combination, -1 where there is none to hand out.
	take := func() int {
		mu.Lock()
		defer mu.Unlock()
		if next == len(todo) || ctx.Err() != nil || budget > 0 && cost >= budget {
			return -1
		}
		next++
		return todo[next-1]
	}
	work := func() {
		w := s.newWorker()
		for c := take(); c >= 0; c = take() {
			r := w.try(c, giveUp)
			mu.Lock()
			cost += max(1, r.Runs)
			st.put(&r)
			done++
			if set.Progress != nil {
				set.Progress(done, of)
			}
			mu.Unlock()
		}
	}
	if workers <= 1 {
		work()
		return ctx.Err()
	}
	for range workers {
		wait.Go(work)
	}
	wait.Wait()
	return ctx.Err()
}

// put takes in what was found of a combination.
func (st *State) put(r *Row) {
	st.Runs += r.Runs
	if old := st.Rows[r.Combination]; old != nil {
		st.Given += old.Runs
		r.Excluded = old.Excluded
	} else if r.Excluded != nil {
		st.Bounds[r.Excluded.Goal]++
	}
	st.Rows[r.Combination] = r
}

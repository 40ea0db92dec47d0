package search

import (
	"slices"

	"escapement/engine/plan"
	"escapement/engine/sweep"
	"escapement/engine/tick"
)

// Row is what is known of a combination.
type Row struct {
	Combination int    `json:"combination"`
	Refused     string `json:"refused,omitempty"` // its plan cannot be, and why
	Excluded    *Bound `json:"excluded,omitempty"`
	Failed      []int  `json:"failed,omitempty"` // goals known not to hold
	Runs        int    `json:"runs"`
	Whole       bool   `json:"whole"` // run in every situation; else given up at the first goal that failed
	Marks       []Mark `json:"marks,omitempty"`
	Sums        []Sum  `json:"sums,omitempty"`
}

// Bound is a closed form that shows by itself that a goal cannot hold.
type Bound struct {
	Goal      int    `json:"goal"`
	Situation int    `json:"situation"`
	By        string `json:"by"` // stable: "two_to_one"
	Text      string `json:"text"`
}

// Mark is a goal over all runs of a combination: the run in which it is nearest to
// failing, or fails by most.
type Mark struct {
	Runs      int     `json:"runs"`
	Fails     int     `json:"fails"` // runs in which it does not hold
	None      bool    `json:"none,omitempty"`
	Margin    float64 `json:"margin"`
	Value     float64 `json:"value"`
	Word      string  `json:"word,omitempty"`
	Situation int     `json:"situation"`
	At        int     `json:"at"` // of the values that vary there
}

// worse tells whether a verdict is nearer to failing than the mark.
func (m *Mark) worse(v *verdict) bool {
	switch {
	case m.Runs == 0:
		return true
	case v.none != m.None:
		return v.none
	}
	return v.margin < m.Margin
}

func (m *Mark) add(v *verdict, situation, at int) {
	if m.worse(v) {
		m.None, m.Margin, m.Value, m.Word, m.Situation, m.At = v.none, v.margin, v.value, v.word, situation, at
	}
	m.Runs++
	if !v.holds {
		m.Fails++
	}
}

// Sum is a wish over the runs that have its number.
type Sum struct {
	Sum float64 `json:"sum"`
	N   int     `json:"n"`
}

// holds tells whether a goal holds, which a whole row knows.
func (r *Row) holds(goal int) bool { return !slices.Contains(r.Failed, goal) }

// good tells whether every goal holds in every situation.
func (r *Row) good() bool { return r.Whole && r.Refused == "" && len(r.Failed) == 0 }

// try runs a combination. With giveUp it stops at the first run in which a goal does
// not hold and keeps no marks; without, all is run.
func (w *worker) try(combination int, giveUp bool) Row {
	s := w.s
	r := Row{Combination: combination, Marks: make([]Mark, len(s.Goals.Must)), Sums: make([]Sum, len(s.Goals.Prefer))}
	settings := s.At(combination)
	if giveUp && !s.Simulate {
		if r.Excluded, r.Refused = w.excluded(settings); r.Excluded != nil || r.Refused != "" {
			if r.Excluded != nil {
				r.Failed = []int{r.Excluded.Goal}
			}
			r.Marks, r.Sums = nil, nil
			return r
		}
	}
	for _, room := range w.order(settings) {
		if !w.visit(room, settings, giveUp, &r) {
			r.Marks, r.Sums = nil, nil
			return r
		}
	}
	r.Whole = true
	for k := range r.Marks {
		if r.Marks[k].Fails > 0 {
			r.Failed = append(r.Failed, k)
		}
	}
	return r
}

// visit runs a combination in a situation; false: it was given up.
func (w *worker) visit(room int, settings []plan.Value, giveUp bool, r *Row) bool {
	s, at := w.s, &w.s.rooms[room]
	for _, seed := range s.seeds {
		anchor := tick.Time(-1)
		for k := range at.at.Runs() {
			o, err := w.run(room, settings, k, seed, &anchor)
			if err != nil {
				r.Refused, r.Failed = at.at.Name+": "+err.Error(), nil
				return false
			}
			r.Runs++
			for _, g := range at.must {
				v := judge(&s.Goals.Must[g], o)
				if r.Marks[g].add(&v, room, k); !v.holds && giveUp {
					r.Failed = []int{g}
					return false
				}
			}
			for _, p := range at.prefer {
				if x, ok := sweep.Number(s.Goals.Prefer[p].Outcome, &o.tally); ok {
					r.Sums[p].Sum += x
					r.Sums[p].N++
				}
			}
		}
	}
	return true
}

package search

import (
	"fmt"
	"math/bits"
	"slices"
	"strings"

	"escapement/engine/plan"
)

// Conflict is a smallest set of goals that no combination holds together: without any
// one of them the others can be held.
type Conflict struct {
	Goals []int   `json:"goals"`
	Reach []Reach `json:"reach"` // by goal of the set: how near it comes where the others hold
	Forms bool    `json:"by_closed_forms"`
	Text  string  `json:"text"`
}

// Reach is the best that a goal comes to among the combinations that hold the others
// of its conflict.
type Reach struct {
	Margin
	Values []any    `json:"values"`          // the settings, in their order
	Words  []string `json:"words,omitempty"` // a word: all that come up among them, at most ten
	Text   string   `json:"text"`
}

// conflicts finds all smallest sets of goals that no combination holds together. It
// goes by what each combination was found to hold: a set is possible where some
// combination holds all of it, so every set of a size is looked at before the next
// size.
func (s *Search) conflicts(w *worker, st *State) []Conflict {
	out := []Conflict{}
	held := s.held(st)
	n := len(s.Goals.Must)
	for size := 1; size <= n && len(out) == 0 && len(held) > 0; size++ {
		for set := uint(1); set < 1<<n; set++ {
			if bits.OnesCount(set) != size || possible(held, set) {
				continue
			}
			out = append(out, s.conflict(w, st, set))
		}
	}
	slices.SortFunc(out, func(a, b Conflict) int { return slices.Compare(a.Goals, b.Goals) })
	return out
}

// held are the different sets of goals that combinations hold.
func (s *Search) held(st *State) []uint {
	var out []uint
	for _, r := range st.Rows {
		if r.Refused != "" {
			continue
		}
		set := uint(0)
		for k := range s.Goals.Must {
			if r.holds(k) {
				set |= 1 << k
			}
		}
		if !slices.Contains(out, set) {
			out = append(out, set)
		}
	}
	return out
}

func possible(held []uint, set uint) bool {
	for _, h := range held {
		if h&set == set {
			return true
		}
	}
	return false
}

func members(set uint) []int {
	var out []int
	for k := 0; set>>k != 0; k++ {
		if set>>k&1 == 1 {
			out = append(out, k)
		}
	}
	return out
}

func (s *Search) conflict(w *worker, st *State, set uint) Conflict {
	c := Conflict{Goals: members(set)}
	for _, k := range c.Goals {
		c.Reach = append(c.Reach, s.reach(st, set, k))
	}
	var names []string
	for _, k := range c.Goals {
		names = append(names, `"`+s.Goals.Must[k].Text()+`"`)
	}
	c.Text = strings.Join(names, " and ") + " cannot hold together."
	if len(names) == 1 {
		c.Text = names[0] + " cannot hold."
	}
	c.Forms = s.explain(w, &c)
	for i := range c.Reach {
		c.Text += " " + c.Reach[i].Text
	}
	return c
}

// reach looks for the best of a goal among combinations that hold the others of a set.
func (s *Search) reach(st *State, set uint, goal int) Reach {
	var best *Row
	var words []string
	others := members(set &^ (1 << goal))
	for _, r := range st.Rows {
		if r.Refused != "" || slices.ContainsFunc(others, func(k int) bool { return !r.holds(k) }) {
			continue
		}
		m := &r.Marks[goal]
		if m.Word != "" && len(words) < 10 && !slices.Contains(words, m.Word) {
			words = append(words, m.Word)
		}
		if best == nil || nearer(m, &best.Marks[goal]) {
			best = r
		}
	}
	out := Reach{Margin: s.margin(best, goal), Values: s.raw(best.Combination), Words: words}
	g := &s.Goals.Must[goal]
	o := plan.OutcomeNamed(g.Outcome)
	got := best.Marks[goal].Word
	if out.Value != nil {
		got = num(*out.Value)
		if o.Unit != "" {
			got += " " + o.Unit
		}
	}
	out.Text = fmt.Sprintf("%s %s is %s, with %s", lead(len(others)), o.Label, got, s.describe(best.Combination))
	if out.At != "" {
		out.Text += " (" + out.At + ")"
	}
	out.Text += "."
	return out
}

// nearer tells whether a mark comes nearer to its goal than another.
func nearer(a, b *Mark) bool {
	if a.None != b.None {
		return b.None
	}
	if a.Margin != b.Margin {
		return a.Margin > b.Margin
	}
	return a.Fails < b.Fails
}

// mostForms bounds how many closed forms an explanation works out.
const mostForms = 300000

// lead leads over to the best of a goal.
func lead(others int) string {
	if others == 0 {
		return "At best"
	}
	return "Where the rest hold, at best"
}

// explain shows by closed forms alone why no combination holds the goals of a
// conflict, and puts the forms where it had the best that was simulated; false where
// they do not show it. For each goal it looks for the combination that comes nearest to
// it while the forms of the others hold.
func (s *Search) explain(w *worker, c *Conflict) bool {
	if s.total*len(c.Goals)*s.Goals.Runs() > mostForms {
		return false
	}
	best := make([]*Form, len(c.Goals))
	at := make([]int, len(c.Goals))
	for k := range s.total {
		forms := make([]Form, len(c.Goals))
		failing, which := 0, 0
		for i, g := range c.Goals {
			f, ok := w.slack(g, s.At(k))
			if !ok {
				return false
			}
			if forms[i] = f; !f.holds() {
				failing, which = failing+1, i
			}
		}
		switch failing {
		case 0:
			return false // the forms would allow it: the heart does otherwise than they suppose
		case 1:
			if f := &forms[which]; best[which] == nil || f.Slack > best[which].Slack {
				best[which], at[which] = f, k
			}
		}
	}
	if slices.Contains(best, nil) {
		return false
	}
	for i, f := range best {
		c.Reach[i].Form = f
		c.Reach[i].Text = fmt.Sprintf("%s %s, with %s.", lead(len(best)-1), f.Text, s.describe(at[i]))
	}
	return true
}

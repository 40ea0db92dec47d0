package search

import (
	"fmt"
	"slices"
	"strings"

	"escapement/engine/plan"
)

// Answer is what a search came to, as far as it has come.
type Answer struct {
	Format      string     `json:"format"`
	Fingerprint string     `json:"fingerprint"`
	Title       string     `json:"title"`
	Done        bool       `json:"done"`
	Phase       int        `json:"phase"`
	Text        string     `json:"text"` // in a sentence or two
	Settings    []Setting  `json:"settings"`
	Situations  []Place    `json:"situations"`
	Goals       []Asked    `json:"goals"`
	Wishes      []string   `json:"wishes"`
	Work        Work       `json:"work"`
	FoundCount  int        `json:"found_count"`
	Found       []Found    `json:"found"`     // best first
	Conflicts   []Conflict `json:"conflicts"` // where nothing was found: all smallest sets of goals that no combination holds together
}

// Setting describes one that was searched for.
type Setting struct {
	Field  string `json:"field"`
	Label  string `json:"label"`
	Unit   string `json:"unit"`
	Values []any  `json:"values"`
	Now    any    `json:"now"` // of the plan as it stands; null: nothing typed and no default
}

// Place is a situation, with what it costs.
type Place struct {
	Name string `json:"name"`
	Runs int    `json:"runs"`
	Vary string `json:"vary,omitempty"`
}

// Asked is a goal.
type Asked struct {
	Text string `json:"text"`
	Unit string `json:"unit"` // of its margins; "" where it is a word
}

// Work says what was simulated and what was not.
type Work struct {
	Combinations int      `json:"combinations"`
	Tried        int      `json:"tried"`
	Refused      int      `json:"refused"` // their plan cannot be
	Whole        int      `json:"run_in_every_situation"`
	Excluded     []string `json:"excluded"` // by a closed form and how many, in sentences
	Runs         int      `json:"runs"`
}

// Found is a combination that holds every goal; it was run in every situation.
type Found struct {
	Combination int       `json:"combination"`
	Values      []any     `json:"values"` // in the order of the settings
	Wishes      []*Number `json:"wishes"` // in their order
	Margins     []Margin  `json:"margins"`
	Runs        int       `json:"runs"`
}

// Number is the mean of an outcome over runs.
type Number struct {
	Mean float64 `json:"mean"`
	Unit string  `json:"unit"`
}

// Margin is how far a goal is from failing, in the run in which it is nearest to it.
type Margin struct {
	Goal      int      `json:"goal"`
	Holds     bool     `json:"holds"`
	Margin    *float64 `json:"margin"` // in the goal's unit; null where it is a word
	Value     *float64 `json:"value"`
	Word      string   `json:"word,omitempty"`
	Situation string   `json:"situation"`
	At        string   `json:"at,omitempty"` // what varied there
	Form      *Form    `json:"closed_form"`  // null: none

	// Otherwise: the closed form says the contrary. The runs decide; the form speaks of
	// any trigger and any beginning, the runs of those of the situations.
	Otherwise bool `json:"otherwise,omitempty"`
}

// Answer sums up a state; most bounds the list of what was found, 0 for all of it.
func (s *Search) Answer(st *State, most int) *Answer {
	a := &Answer{Format: AnswerFormat, Fingerprint: st.Fingerprint, Title: s.Plan.Title, Done: st.Done(), Phase: st.Phase,
		Wishes: []string{}, Found: []Found{}, Conflicts: []Conflict{}}
	s.head(a)
	s.work(a, st)
	var good []*Row
	for _, r := range st.Rows {
		if r != nil && r.good() {
			good = append(good, r)
		}
	}
	slices.SortStableFunc(good, s.better)
	a.FoundCount = len(good)
	if most > 0 && len(good) > most {
		good = good[:most]
	}
	w := s.newWorker()
	for _, r := range good {
		a.Found = append(a.Found, s.found(w, r))
	}
	if a.Done && a.FoundCount == 0 {
		a.Conflicts = s.conflicts(w, st)
	}
	a.Text = s.say(a)
	return a
}

func (s *Search) head(a *Answer) {
	for i := range s.Goals.Settings {
		x := &s.Goals.Settings[i]
		f := x.Described()
		e := Setting{Field: x.Field, Label: f.Label, Unit: f.Unit}
		for _, v := range x.Values {
			e.Values = append(e.Values, x.Raw(v))
		}
		if v, ok := s.Plan.Amount(x.Field); ok {
			e.Now = v
		} else if text, ok := s.Plan.Stated(x.Field); ok {
			e.Now = text
		}
		a.Settings = append(a.Settings, e)
	}
	for i := range s.rooms {
		at := s.rooms[i].at
		p := Place{Name: at.Name, Runs: at.Runs() * len(s.seeds)}
		if at.Vary != nil {
			p.Vary = at.Vary.Name()
		}
		a.Situations = append(a.Situations, p)
	}
	a.Goals = []Asked{}
	for i := range s.Goals.Must {
		g := &s.Goals.Must[i]
		a.Goals = append(a.Goals, Asked{g.Text(), plan.OutcomeNamed(g.Outcome).Unit})
	}
	for i := range s.Goals.Prefer {
		a.Wishes = append(a.Wishes, s.Goals.Prefer[i].Text())
	}
}

func (s *Search) work(a *Answer, st *State) {
	a.Work = Work{Combinations: s.total, Runs: st.Runs, Excluded: []string{}}
	by := map[[2]string]int{} // goal's text and bound; read in order of first use
	var order [][2]string
	for _, r := range st.Rows {
		if r == nil {
			continue
		}
		a.Work.Tried++
		if r.Refused != "" {
			a.Work.Refused++
		}
		if r.Whole {
			a.Work.Whole++
		}
		if r.Excluded != nil {
			k := [2]string{s.Goals.Must[r.Excluded.Goal].Text(), boundNames[r.Excluded.By]}
			if by[k] == 0 {
				order = append(order, k)
			}
			by[k]++
		}
	}
	for _, k := range order {
		a.Work.Excluded = append(a.Work.Excluded, fmt.Sprintf("%d combinations excluded without a run by %s, for %s", by[k], k[1], k[0]))
	}
}

var boundNames = map[string]string{"two_to_one": "the 2:1 point", "upper_rate": "the upper rate"}

// better orders settings: by the wishes one after the other, then by combination.
func (s *Search) better(a, b *Row) int {
	for k := range s.Goals.Prefer {
		w := &s.Goals.Prefer[k]
		x, hasX := s.wish(a, k)
		y, hasY := s.wish(b, k)
		switch {
		case !hasX && !hasY || hasX && hasY && x == y:
			continue
		case !hasY, hasX && (x < y) != w.Highest:
			return -1
		default:
			return 1
		}
	}
	return a.Combination - b.Combination
}

// wish is the number that a wish goes by; false: no run has it.
func (s *Search) wish(r *Row, k int) (float64, bool) {
	w := &s.Goals.Prefer[k]
	if w.Setting == "" {
		return r.Sums[k].Sum / float64(max(1, r.Sums[k].N)), r.Sums[k].N > 0
	}
	for i, v := range s.At(r.Combination) {
		if s.Goals.Settings[i].Field == w.Setting {
			return v.Number, true
		}
	}
	panic("search: a wish for no setting")
}

func (s *Search) found(w *worker, r *Row) Found {
	f := Found{Combination: r.Combination, Values: s.raw(r.Combination), Wishes: []*Number{}, Margins: []Margin{}, Runs: r.Runs}
	for k := range s.Goals.Prefer {
		x, ok := s.wish(r, k)
		if !ok {
			f.Wishes = append(f.Wishes, nil)
			continue
		}
		unit := plan.OutcomeNamed(s.Goals.Prefer[k].Outcome).Unit
		if p := s.Goals.Prefer[k].Setting; p != "" {
			field, _ := plan.FieldAt(p)
			unit = field.Unit
		}
		f.Wishes = append(f.Wishes, &Number{x, unit})
	}
	settings := s.At(r.Combination)
	for k := range s.Goals.Must {
		m := s.margin(r, k)
		if form, ok := w.slack(k, settings); ok {
			m.Form, m.Otherwise = &form, form.holds() != m.Holds
		}
		f.Margins = append(f.Margins, m)
	}
	return f
}

func (s *Search) margin(r *Row, goal int) Margin {
	m := &r.Marks[goal]
	room := &s.rooms[m.Situation]
	out := Margin{Goal: goal, Holds: m.Fails == 0, Word: m.Word, Situation: room.at.Name}
	if v := room.at.Vary; v != nil {
		out.At = v.Name() + " " + v.Text(v.Values[m.At])
	}
	if plan.OutcomeNamed(s.Goals.Must[goal].Outcome).Kind == plan.NumberOutcome && !m.None {
		margin, value := m.Margin, m.Value
		out.Margin, out.Value = &margin, &value
	}
	return out
}

func (s *Search) raw(combination int) []any {
	var out []any
	for i, v := range s.At(combination) {
		out = append(out, s.Goals.Settings[i].Raw(v))
	}
	return out
}

// describe writes a combination: "PVARP 250 ms, upper tracking rate 150/min".
func (s *Search) describe(combination int) string {
	var parts []string
	for i, v := range s.At(combination) {
		x := &s.Goals.Settings[i]
		f := x.Described()
		unit := f.Unit
		if unit != "" && !strings.HasPrefix(unit, "/") {
			unit = " " + unit
		}
		parts = append(parts, f.Label+" "+x.Text(v)+unit)
	}
	return strings.Join(parts, ", ")
}

func (s *Search) say(a *Answer) string {
	each := s.Goals.Runs()
	switch {
	case !a.Done:
		return fmt.Sprintf("%d of %d combinations tried so far, %d hold every goal.", a.Work.Tried, a.Work.Combinations, a.FoundCount)
	case a.FoundCount > 0:
		return fmt.Sprintf("%d of %d combinations hold every goal. Each of them was run in all %d situations, %d runs each; %d runs in all. Best: %s.",
			a.FoundCount, a.Work.Combinations, len(a.Situations), each, a.Work.Runs, s.describe(a.Found[0].Combination))
	case a.Work.Refused == a.Work.Combinations:
		return "The plan of no combination can be: the settings exclude each other."
	}
	var texts []string
	for _, c := range a.Conflicts {
		texts = append(texts, c.Text)
	}
	return fmt.Sprintf("None of %d combinations holds every goal; all were run in all situations, %d runs in all. %s", a.Work.Combinations, a.Work.Runs, strings.Join(texts, " "))
}

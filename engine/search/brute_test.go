package search

import (
	"math/bits"
	"slices"
	"sort"
	"testing"

	"escapement/engine/event"
	"escapement/engine/measure"
	"escapement/engine/plan"
	"escapement/engine/sim"
	"escapement/engine/sweep"
)

// tried is what brute force finds of a combination: which goals hold, and its wishes.
type tried struct {
	combination int
	holds       []bool
	wishes      []float64
}

// brute runs every combination in every situation from its plan file, each by itself,
// and judges it by the definitions of the goals alone.
func brute(t *testing.T, s *Search) []tried {
	var out []tried
	for c := range s.Len() {
		x := tried{combination: c, wishes: make([]float64, len(s.Goals.Prefer))}
		for range s.Goals.Must {
			x.holds = append(x.holds, true)
		}
		runs := make([]int, len(s.Goals.Prefer))
		for i := range s.Goals.Situations {
			sit := &s.Goals.Situations[i]
			for k := range sit.Runs() {
				tally := played(t, s, c, sit, k)
				for g := range s.Goals.Must {
					if plan.For(s.Goals.Must[g].In, sit.Name) && !meets(&s.Goals.Must[g], &tally) {
						x.holds[g] = false
					}
				}
				for p := range s.Goals.Prefer {
					if w := &s.Goals.Prefer[p]; w.Setting == "" && plan.For(w.In, sit.Name) {
						if n, ok := sweep.Number(w.Outcome, &tally); ok {
							x.wishes[p] += n
							runs[p]++
						}
					}
				}
			}
		}
		for p := range s.Goals.Prefer {
			if runs[p] > 0 {
				x.wishes[p] /= float64(runs[p])
			}
			for i := range s.Goals.Settings {
				if s.Goals.Settings[i].Field == s.Goals.Prefer[p].Setting {
					x.wishes[p] = s.At(c)[i].Number
				}
			}
			if s.Goals.Prefer[p].Highest {
				x.wishes[p] = -x.wishes[p]
			}
		}
		out = append(out, x)
	}
	return out
}

// played decodes, compiles and runs one plan afresh.
func played(t *testing.T, s *Search, c int, sit *plan.Situation, k int) measure.Tally {
	t.Helper()
	opened, err := s.Open(c, sit.Name)
	if err != nil {
		t.Fatal(err)
	}
	p, err := plan.Decode(opened.Encode())
	if err != nil {
		t.Fatal(err)
	}
	log, err := sim.Run(p)
	if err != nil {
		t.Fatal(err)
	}
	if v := sit.Vary; v != nil && v.Premature != "" {
		site := log.Site(v.Premature)
		at := slices.IndexFunc(log.Events, func(e event.Event) bool {
			return e.Kind == event.Activate && e.Site == site && e.T.MS() >= v.AfterMS
		})
		p.Interventions = append(p.Interventions, plan.Extra(v.Premature, log.Events[at].T.MS()+v.Values[k].Number))
	} else if v != nil {
		if p, err = p.With(v.Field, v.Values[k].Number); err != nil {
			t.Fatal(err)
		}
	}
	if log, err = sim.Run(p); err != nil {
		t.Fatal(err)
	}
	return new(measure.Reader).Tally(log)
}

func meets(g *plan.Goal, t *measure.Tally) bool {
	if plan.OutcomeNamed(g.Outcome).Kind == plan.NumberOutcome {
		x, ok := sweep.Number(g.Outcome, t)
		return ok && (g.AtLeast == nil || x >= *g.AtLeast) && (g.AtMost == nil || x <= *g.AtMost)
	}
	w := sweep.Word(g.Outcome, t)
	return (g.Equal == nil || slices.Contains(g.Equal, w)) && !slices.Contains(g.NoneOf, w)
}

// smallest are all smallest sets of goals that no combination holds together.
func smallest(all []tried, goals int) [][]int {
	var out [][]int
	for size := 1; size <= goals && out == nil; size++ {
		for set := uint(1); set < 1<<goals; set++ {
			if bits.OnesCount(set) != size {
				continue
			}
			somewhere := slices.ContainsFunc(all, func(x tried) bool {
				for k := range goals {
					if set>>k&1 == 1 && !x.holds[k] {
						return false
					}
				}
				return true
			})
			if !somewhere {
				out = append(out, members(set))
			}
		}
	}
	sort.Slice(out, func(i, j int) bool { return slices.Compare(out[i], out[j]) < 0 })
	return out
}

// The search finds what brute force over the whole grid finds, in the same order, and
// the same conflicts.
func TestTheSearchFindsWhatBruteForceFinds(t *testing.T) {
	for _, name := range []string{"goals-treadmill-conflict", "goals-treadmill-shorter-av", "goals-least-ventricular-pacing"} {
		t.Run(name, func(t *testing.T) {
			s := preset(t, name)
			a, _ := solve(t, s, Settings{})
			all := brute(t, s)
			good := slices.DeleteFunc(slices.Clone(all), func(x tried) bool { return slices.Contains(x.holds, false) })
			slices.SortFunc(good, func(x, y tried) int {
				if d := slices.Compare(x.wishes, y.wishes); d != 0 {
					return d
				}
				return x.combination - y.combination
			})
			if a.FoundCount != len(good) || len(a.Found) != len(good) {
				t.Fatalf("%d found, brute force finds %d", a.FoundCount, len(good))
			}
			for i := range good {
				if a.Found[i].Combination != good[i].combination {
					t.Errorf("place %d: combination %d, brute force has %d", i, a.Found[i].Combination, good[i].combination)
				}
				if a.Found[i].Runs != s.Goals.Runs() {
					t.Errorf("combination %d was run %d times; all situations take %d", a.Found[i].Combination, a.Found[i].Runs, s.Goals.Runs())
				}
			}
			var want [][]int
			if len(good) == 0 {
				want = smallest(all, len(s.Goals.Must))
			}
			var got [][]int
			for _, c := range a.Conflicts {
				got = append(got, c.Goals)
			}
			if !slices.EqualFunc(got, want, slices.Equal) {
				t.Errorf("conflicts %v, brute force has %v", got, want)
			}
		})
	}
}

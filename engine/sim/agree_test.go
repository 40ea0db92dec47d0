package sim

import (
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"escapement/engine/event"
	"escapement/engine/heart"
	"escapement/engine/plan"
	"escapement/engine/tick"
)

// The tests below have runs that must agree with each other, on random hearts.

// programs calls f with random programs, in microseconds and in steps.
func programs(t *testing.T, count int, f func(d dice, prog *plan.Program) (got, want string)) {
	if testing.Short() {
		count /= 10
	}
	for seed := uint64(1); seed <= uint64(count); seed++ {
		d := dice{rand.New(rand.NewPCG(seed, 1))}
		prog := d.network()
		if seed%4 == 0 {
			if prog = d.clinical(); prog == nil {
				continue
			}
		}
		if seed%2 == 0 {
			fine(prog)
		}
		got, want := f(d, prog)
		if diff := difference(got, want); diff != "" {
			t.Fatalf("seed %d: %s%s", seed, strings.NewReplacer("queue:", "got:", "reference:", "want:").Replace(diff), describe(prog))
		}
	}
}

// fine sets every heart of a program to whole microseconds.
func fine(prog *plan.Program) {
	prog.Heart.Quantum = 1
	for i := range prog.Changes {
		if h := prog.Changes[i].Heart; h != nil {
			h.Quantum = 1
		}
	}
}

// hearts are all hearts of a program, each once.
func hearts(prog *plan.Program) []*heart.Heart {
	out := []*heart.Heart{prog.Heart}
	for i := range prog.Changes {
		if h := prog.Changes[i].Heart; h != nil && !slices.Contains(out, h) {
			out = append(out, h)
		}
	}
	return out
}

func text(t *testing.T, prog *plan.Program) string { return playProgram(t, prog).Text() }

// without leaves out the lines that begin with a word.
func without(s, word string) string {
	lines := strings.Split(s, "\n")
	return strings.Join(slices.DeleteFunc(lines, func(l string) bool { return strings.HasPrefix(l, word+" ") }), "\n")
}

func TestALongerStripOnlyAppends(t *testing.T) {
	programs(t, 1000, func(d dice, prog *plan.Program) (got, want string) {
		short := *prog
		short.Span = d.at(prog.Span)
		long := playProgram(t, prog)
		cut := *long
		cut.Span = short.Span
		for i := range long.Events {
			if long.Events[i].T > short.Span {
				cut.Events = long.Events[:i]
				break
			}
		}
		return text(t, &short), cut.Text()
	})
}

func TestAnUnusedSiteChangesNothing(t *testing.T) {
	programs(t, 1000, func(d dice, prog *plan.Program) (got, want string) {
		want = without(text(t, prog), "site")
		at := d.IntN(len(prog.Heart.Sites) + 1)
		lone := heart.Site{Site: event.Site{Name: "lone", Tissue: event.Atrium}, Refractory: heart.Cycled{BaseMS: 100}}
		move := func(s *event.SiteID) {
			if int(*s) >= at {
				*s++
			}
		}
		for _, h := range hearts(prog) {
			h.Sites = slices.Insert(slices.Clone(h.Sites), at, lone)
			for i := range h.Paths {
				move(&h.Paths[i].From)
				move(&h.Paths[i].To)
			}
			for i := range h.Foci {
				move(&h.Foci[i].Site)
			}
		}
		for i := range prog.Stimuli {
			move(&prog.Stimuli[i].Site)
		}
		return without(text(t, prog), "site"), want
	})
}

func TestTimeShift(t *testing.T) {
	programs(t, 1000, func(d dice, prog *plan.Program) (got, want string) {
		for _, h := range hearts(prog) {
			for i := range h.Foci {
				h.Foci[i].First = tick.Dur(d.at(900*milli)) + tick.Dur(step)
			}
		}
		before := playProgram(t, prog)
		by := tick.Dur(d.at(5000 * milli))
		for i := range before.Events {
			e := &before.Events[i]
			e.T = e.T.Add(by)
			if e.Kind == event.Activate {
				e.Until = e.Until.Add(by)
			}
		}
		before.Span = before.Span.Add(by)
		shift(prog, by)
		return text(t, prog), before.Text()
	})
}

// shift moves everything that a program plans to a later time.
func shift(prog *plan.Program, by tick.Dur) {
	prog.Span = prog.Span.Add(by)
	for _, h := range hearts(prog) {
		if h.Apart.Until > 0 {
			h.Apart.From, h.Apart.Until = h.Apart.From.Add(by), h.Apart.Until.Add(by)
		}
		h.Foci = slices.Clone(h.Foci)
		for i := range h.Foci {
			f := &h.Foci[i]
			f.First += by
			f.From = f.From.Add(by)
			if f.Until > 0 {
				f.Until = f.Until.Add(by)
			}
			f.Rate = slices.Clone(f.Rate)
			for k := range f.Rate {
				f.Rate[k].T = f.Rate[k].T.Add(by)
			}
		}
	}
	for i := range prog.Stimuli {
		prog.Stimuli[i].T = prog.Stimuli[i].T.Add(by)
	}
	for i := range prog.Changes {
		prog.Changes[i].T = prog.Changes[i].T.Add(by)
	}
}

func TestSmallBudgetsEqualOneRun(t *testing.T) {
	programs(t, 1000, func(_ dice, prog *plan.Program) (got, want string) {
		m := New(prog)
		for !m.Run(7) {
		}
		return m.Log().Text(), text(t, prog)
	})
}

func TestDrainChangesNothing(t *testing.T) {
	programs(t, 1000, func(d dice, prog *plan.Program) (got, want string) {
		m := New(prog)
		whole := *m.Log()
		whole.Events = nil
		for done := false; !done; {
			done = m.Run(d.int(1, 40))
			if done || d.chance(0.5) {
				whole.Events = append(whole.Events, m.Log().Events...)
				m.Drain()
			}
		}
		return whole.Text(), text(t, prog)
	})
}

package main

import (
	"context"
	"encoding/json"
	"errors"
	"flag"
	"fmt"
	"io"
	"os"
	"os/signal"
	"strconv"
	"strings"
	"time"

	"escapement/engine/manoeuvre"
	"escapement/engine/plan"
	"escapement/engine/search"
)

const searchUsage = `escapement search PLAN: the settings that reach the plan's goals, as JSON

  -goals FILE          goals to take instead of the plan's own
  -most N              list the N best (20; 0 for all)
  -j N                 workers; 0 for one a core
  -budget N            stop after so many runs
  -state FILE          go on from FILE where it is there, and keep the state in it
  -plan N              the plan with combination N; -in SITUATION puts it there
  -sensitivity N       how far each number of the heart can move before a goal changes
                       sides, with combination N; -1 for the plan's own settings
  -against PLAN2       the manoeuvres of the laboratory that two hearts answer most
                       differently, and maps of their extrastimuli; needs no goals

Each combination that is listed was run in every situation. Where none holds every goal,
the smallest sets of goals that conflict are listed, with how near each comes.
`

type searchArgs struct {
	goals, state, in     string
	against, sensitivity string
	most, workers        int
	budget, point        int
}

func searchFlags(args []string) (*searchArgs, error) {
	a := &searchArgs{}
	f := flag.NewFlagSet("search", flag.ContinueOnError)
	f.SetOutput(io.Discard)
	f.StringVar(&a.goals, "goals", "", "")
	f.StringVar(&a.state, "state", "", "")
	f.StringVar(&a.in, "in", "", "")
	f.StringVar(&a.against, "against", "", "")
	f.StringVar(&a.sensitivity, "sensitivity", "", "")
	f.IntVar(&a.most, "most", 20, "")
	f.IntVar(&a.workers, "j", 0, "")
	f.IntVar(&a.budget, "budget", 0, "")
	f.IntVar(&a.point, "plan", -1, "")
	err := f.Parse(args)
	switch {
	case errors.Is(err, flag.ErrHelp):
		return nil, &usageError{searchUsage}
	case err != nil:
		return nil, &usageError{"search: " + err.Error() + "\n\n" + searchUsage}
	case f.NArg() > 0:
		return nil, &usageError{fmt.Sprintf("search does not know what to do with %q", f.Arg(0))}
	case a.most < 0 || a.budget < 0:
		return nil, &usageError{"-most and -budget take 0 or more"}
	}
	return a, nil
}

// runSearch carries out the command. Notes go to standard error.
func runSearch(args []string, in io.Reader, out, notes io.Writer) error {
	if len(args) == 0 || strings.HasPrefix(args[0], "-") && args[0] != "-" {
		return &usageError{"search takes a plan, then its flags\n\n" + searchUsage}
	}
	a, err := searchFlags(args[1:])
	if err != nil {
		return err
	}
	p, err := read(args[0], in)
	if err != nil {
		return err
	}
	if a.against != "" {
		return a.compare(p, in, out)
	}
	if a.goals != "" {
		b, err := os.ReadFile(a.goals)
		if err != nil {
			return &usageError{err.Error()}
		}
		if p.Goals, err = p.ReadGoals(b); err != nil {
			return err
		}
	}
	s, err := search.New(p)
	if err != nil {
		return err
	}
	if a.sensitivity != "" {
		return a.sense(s, out)
	}
	if a.point >= 0 || a.in != "" {
		return a.open(s, out)
	}
	st, err := a.begin(s)
	if err != nil {
		return err
	}
	ended := a.run(s, st, notes)
	if err := a.keep(st); err != nil {
		return err
	}
	return errors.Join(writeJSON(out, s.Answer(st, a.most)), ended)
}

func (a *searchArgs) open(s *search.Search, out io.Writer) error {
	var p *plan.Plan
	p, err := s.Open(a.point, a.in)
	if err != nil {
		return &usageError{err.Error()}
	}
	_, err = out.Write(p.Encode())
	return err
}

// begin is the state in the file, or a new one.
func (a *searchArgs) begin(s *search.Search) (*search.State, error) {
	if a.state == "" {
		return s.Begin(), nil
	}
	b, err := os.ReadFile(a.state)
	if errors.Is(err, os.ErrNotExist) {
		return s.Begin(), nil
	}
	if err != nil {
		return nil, &usageError{err.Error()}
	}
	st := &search.State{}
	if err := json.Unmarshal(b, st); err != nil {
		return nil, &usageError{a.state + " is no state of a search: " + err.Error()}
	}
	if err := s.Continue(st); err != nil {
		return nil, &usageError{a.state + ": " + err.Error()}
	}
	return st, nil
}

// run runs the search. An interrupt stops it; what is there is kept.
func (a *searchArgs) run(s *search.Search, st *search.State, notes io.Writer) error {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt)
	defer stop()
	began, before := time.Now(), st.Runs
	err := s.Run(ctx, st, search.Settings{Workers: a.workers, Budget: a.budget})
	took := time.Since(began).Seconds()
	done, of := st.Progress()
	fmt.Fprintf(notes, "phase %d, %d of %d combinations, %d runs in %.2f s, %.0f runs/s\n", st.Phase, done, of, st.Runs-before, took, float64(st.Runs-before)/took)
	return err
}

func (a *searchArgs) keep(st *search.State) error {
	if a.state == "" {
		return nil
	}
	b, err := json.Marshal(st)
	if err != nil {
		return err
	}
	return os.WriteFile(a.state, b, 0o644)
}

// compare does the manoeuvres of the laboratory on two plans.
func (a *searchArgs) compare(p *plan.Plan, in io.Reader, out io.Writer) error {
	other, err := read(a.against, in)
	if err != nil {
		return err
	}
	c, err := manoeuvre.Compare(p, other, manoeuvre.Usual(), a.most)
	if err != nil {
		return err
	}
	return writeJSON(out, c)
}

// sense moves each number of the heart.
func (a *searchArgs) sense(s *search.Search, out io.Writer) error {
	n, err := strconv.Atoi(a.sensitivity)
	if err != nil || n < -1 || n >= s.Len() {
		return &usageError{fmt.Sprintf("-sensitivity is %q; allowed: a combination from 0 to %d, or -1", a.sensitivity, s.Len()-1)}
	}
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt)
	defer stop()
	var rows []*search.Sensed
	for _, p := range s.Probes(nil) {
		x, err := s.Sense(ctx, p, n)
		if err != nil {
			return err
		}
		rows = append(rows, x)
	}
	return writeJSON(out, s.Sensitivity(rows, n))
}

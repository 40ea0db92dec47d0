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

	"escapement/engine/plan"
	"escapement/engine/sweep"
)

const sweepUsage = `escapement sweep PLAN: a grid of runs, as JSON

  -x FIELD=FROM:TO:STEP     what varies along x; or FIELD=A,B,C
  -x premature:SITE:AFTER=FROM:TO:STEP
                            the coupling of an extra stimulus at a site, to the first
                            depolarisation of that site at or after AFTER ms
  -y ...                    what varies along y
  -seeds N                  every point with the seeds 1 to N
  -outcomes A,B             what each run is reduced to (see -outcomes help)
  -csv                      a table with a line for each point
  -part I/N                 every N-th point, from the I-th on; join the parts later
  -join FILE...             the parts, as one; nothing is run
  -j N                      workers; 0 for one a core
  -boundaries OUTCOME       where along x (or -along y) the outcome changes, by halving,
                            with the closed forms beside; -from VALUE for a number,
                            -tolerance T
  -plan POINT               the plan of one point

Without -x the plan's own "sweep" is run.
`

// sweepArgs are what the command line says.
type sweepArgs struct {
	x, y, outcomes, part    string
	seeds, workers, point   int
	csv, join               bool
	boundaries, from, along string
	tolerance               float64
}

func sweepFlags(args []string) (*sweepArgs, []string, error) {
	a := &sweepArgs{}
	f := flag.NewFlagSet("sweep", flag.ContinueOnError)
	f.SetOutput(io.Discard)
	for name, into := range map[string]*string{"x": &a.x, "y": &a.y, "outcomes": &a.outcomes, "part": &a.part, "boundaries": &a.boundaries, "from": &a.from} {
		f.StringVar(into, name, "", "")
	}
	f.StringVar(&a.along, "along", "x", "")
	f.IntVar(&a.seeds, "seeds", 0, "")
	f.IntVar(&a.workers, "j", 0, "")
	f.IntVar(&a.point, "plan", -1, "")
	f.BoolVar(&a.csv, "csv", false, "")
	f.BoolVar(&a.join, "join", false, "")
	f.Float64Var(&a.tolerance, "tolerance", 0, "")
	err := f.Parse(args)
	switch {
	case errors.Is(err, flag.ErrHelp):
		return nil, nil, &usageError{sweepUsage}
	case err != nil:
		return nil, nil, &usageError{"sweep: " + err.Error() + "\n\n" + sweepUsage}
	case a.along != "x" && a.along != "y":
		return nil, nil, &usageError{fmt.Sprintf("-along is %q; allowed: x or y", a.along)}
	case !a.join && f.NArg() > 0:
		return nil, nil, &usageError{fmt.Sprintf("sweep does not know what to do with %q", f.Arg(0))}
	case a.join && f.NArg() == 0:
		return nil, nil, &usageError{"-join takes the files to join"}
	}
	return a, f.Args(), nil
}

// runSweep carries out the command. Notes go to standard error.
func runSweep(args []string, in io.Reader, out, notes io.Writer) error {
	if len(args) == 0 || strings.HasPrefix(args[0], "-") && args[0] != "-" {
		return &usageError{"sweep takes a plan, then its flags\n\n" + sweepUsage}
	}
	a, files, err := sweepFlags(args[1:])
	if err != nil {
		return err
	}
	if a.outcomes == "help" {
		return writeJSON(out, plan.Outcomes())
	}
	p, err := read(args[0], in)
	if err != nil {
		return err
	}
	if err := a.spec(p); err != nil {
		return err
	}
	g, err := sweep.New(p)
	if err != nil {
		return err
	}
	switch {
	case a.point >= 0:
		return onePlan(g, a.point, out)
	case a.boundaries != "":
		return a.boundary(g, out)
	}
	t := sweep.NewTable(g)
	if a.join {
		err = join(t, files)
	} else {
		err = a.run(g, t, notes)
	}
	if err != nil && t.Done() == 0 {
		return err
	}
	write := t.WriteJSON
	if a.csv {
		write = t.WriteCSV
	}
	return errors.Join(write(out), err)
}

// spec puts the flags over the plan's own sweep.
func (a *sweepArgs) spec(p *plan.Plan) error {
	if a.x == "" && a.y == "" && a.seeds == 0 && a.outcomes == "" {
		return nil
	}
	m := map[string]any{}
	if p.Sweep != nil {
		if err := json.Unmarshal(p.Sweep.Encode(), &m); err != nil {
			return err
		}
	}
	for _, axis := range []struct{ name, text string }{{"x", a.x}, {"y", a.y}} {
		if axis.text == "" {
			continue
		}
		v, err := axisOf(axis.name, axis.text)
		if err != nil {
			return err
		}
		m[axis.name] = v
	}
	if a.seeds != 0 {
		m["seeds"] = a.seeds
	}
	if a.outcomes != "" {
		m["outcomes"] = strings.Split(a.outcomes, ",")
	}
	b, err := json.Marshal(m)
	if err != nil {
		return err
	}
	p.Sweep, err = p.ReadSweep(b)
	return err
}

// axisOf reads FIELD=FROM:TO:STEP or FIELD=A,B,C. The plan's decoder judges the values.
func axisOf(name, text string) (map[string]any, error) {
	field, values, ok := strings.Cut(text, "=")
	if !ok || values == "" {
		return nil, &usageError{fmt.Sprintf("-%s is %q; allowed: FIELD=FROM:TO:STEP or FIELD=A,B,C", name, text)}
	}
	m := map[string]any{"field": field}
	if rest, extra := strings.CutPrefix(field, "premature:"); extra {
		site, after, _ := strings.Cut(rest, ":")
		m = map[string]any{"premature": site}
		if after != "" {
			m["after_ms"] = plainValue(after)
		}
	}
	if parts := strings.Split(values, ":"); len(parts) == 3 {
		m["from"], m["to"], m["step"] = plainValue(parts[0]), plainValue(parts[1]), plainValue(parts[2])
		return m, nil
	}
	var list []any
	for v := range strings.SplitSeq(values, ",") {
		list = append(list, plainValue(v))
	}
	m["values"] = list
	return m, nil
}

// plainValue is a number, true, false, null, or else a text.
func plainValue(s string) any {
	var v any
	if json.Unmarshal([]byte(s), &v) == nil {
		return v
	}
	return s
}

// run runs the points of this part. An interrupt stops it; what is there is kept.
func (a *sweepArgs) run(g *sweep.Grid, t *sweep.Table, notes io.Writer) error {
	s := sweep.Settings{Workers: a.workers, Each: t.Put}
	if a.part != "" {
		one, all, ok := strings.Cut(a.part, "/")
		i, err1 := strconv.Atoi(one)
		n, err2 := strconv.Atoi(all)
		if !ok || err1 != nil || err2 != nil || i < 1 || i > n {
			return &usageError{fmt.Sprintf("-part is %q; allowed: I/N with I from 1 to N, such as 3/16", a.part)}
		}
		s.Points = g.Part(i, n)
	}
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt)
	defer stop()
	began := time.Now()
	st, err := g.Run(ctx, s)
	took := time.Since(began).Seconds()
	fmt.Fprintf(notes, "%d of %d points in %.2f s, %.0f runs/s\n", st.Done, st.Of, took, float64(st.Done*len(g.Seeds()))/took)
	return err
}

// join takes in parts and says what is still missing.
func join(t *sweep.Table, files []string) error {
	for _, name := range files {
		data, err := os.ReadFile(name)
		if err != nil {
			return &usageError{err.Error()}
		}
		if err := t.Join(data); err != nil {
			return &usageError{name + ": " + err.Error()}
		}
	}
	if left := t.Missing(); len(left) > 0 {
		return &usageError{fmt.Sprintf("%d points are in none of the files, the first is point %d", len(left), left[0])}
	}
	return nil
}

func onePlan(g *sweep.Grid, point int, out io.Writer) error {
	if point >= g.Len() {
		return &usageError{fmt.Sprintf("-plan is %d; allowed: 0 to %d", point, g.Len()-1)}
	}
	p, err := g.NewWorker().Plan(point, g.Seeds()[0])
	if err != nil {
		return &usageError{err.Error()}
	}
	_, err = out.Write(p.Encode())
	return err
}

// edges are the boundaries along one axis at one value of the other.
type edges struct {
	At         any              `json:"at"` // null on a line
	Boundaries []sweep.Boundary `json:"boundaries"`
	Alone      []sweep.Form     `json:"closed_forms_without_boundary"`
}

func (a *sweepArgs) boundary(g *sweep.Grid, out io.Writer) error {
	q := sweep.Question{Outcome: a.boundaries, Tolerance: a.tolerance}
	if a.from != "" {
		x, err := strconv.ParseFloat(a.from, 64)
		if err != nil {
			return &usageError{fmt.Sprintf("-from is %q; allowed: a number", a.from)}
		}
		q.From = &x
	}
	along, other := g.Sweep.X, g.Sweep.Y
	if a.along == "y" {
		q.Along, along, other = 1, g.Sweep.Y, g.Sweep.X
	}
	n := 1
	if other != nil {
		n = len(other.Values)
	}
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt)
	defer stop()
	w := g.NewWorker()
	rows := []edges{}
	for q.At = range n {
		found, alone, err := w.Boundaries(ctx, q)
		if err != nil {
			return err
		}
		e := edges{Boundaries: found, Alone: alone}
		if other != nil {
			e.At = other.Raw(other.Values[q.At])
		}
		rows = append(rows, e)
	}
	axes := struct {
		Along   string  `json:"along"`
		Other   *string `json:"other"`
		Outcome string  `json:"outcome"`
		Rows    []edges `json:"rows"`
	}{along.Name(), nil, a.boundaries, rows}
	if other != nil {
		name := other.Name()
		axes.Other = &name
	}
	return writeJSON(out, axes)
}

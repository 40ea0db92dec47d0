package sweep

import (
	"errors"

	"escapement/engine/event"
	"escapement/engine/measure"
	"escapement/engine/pacer"
	"escapement/engine/plan"
	"escapement/engine/sim"
	"escapement/engine/tick"
)

// Worker runs points, one at a time, into memory of its own. Use each from one
// goroutine.
type Worker struct {
	g        *Grid
	variants *plan.Variants
	fields   []int // of the grid's axes, those that are values of the plan
	extra    int   // the axis of an extra stimulus, -1: none
	player   sim.Player
	reader   measure.Reader
	runs     []run
	values   []plan.Value
	anchors  map[string]anchor
}

// run is one run's outcomes, or why there was none.
type run struct {
	refused  string
	tally    measure.Tally
	findings []string
	warnings []string
}

// anchor is what the coupling of an extra stimulus counts from.
type anchor struct {
	t   tick.Time
	err error
}

// mostAnchors bounds the memory of anchors; without them the strip before the extra
// stimulus is run once for every point.
const mostAnchors = 10000

// NewWorker makes a worker of the grid.
func (g *Grid) NewWorker() *Worker {
	w := &Worker{g: g, extra: -1, anchors: map[string]anchor{}}
	var fields []string
	for i, a := range g.axes() {
		if a.Premature != "" {
			w.extra = i
			continue
		}
		w.fields = append(w.fields, i)
		fields = append(fields, a.Field)
	}
	w.variants = plan.NewVariants(g.Plan, fields...)
	return w
}

// Point runs a point with every seed and gives its cell.
func (w *Worker) Point(point int) Cell {
	at := w.g.At(point)
	w.runs = w.runs[:0]
	for _, seed := range w.g.seeds {
		w.runs = append(w.runs, w.run(at, seed))
	}
	return w.g.reduce(w.runs)
}

// run plays one variant.
func (w *Worker) run(at []plan.Value, seed uint64) run {
	prog, err := w.program(at, seed)
	if err != nil {
		return run{refused: err.Error()}
	}
	log, err := w.player.Play(prog)
	if err != nil {
		return run{refused: err.Error()}
	}
	r := run{tally: w.reader.Tally(log)}
	if w.g.slow {
		r.findings = Slugs(measure.Of(log, nil))
	}
	if w.g.warns && prog.Device != nil {
		patient := w.variants.Patient()
		for _, x := range pacer.Warnings(&prog.Device.Settings, patient) {
			r.warnings = append(r.warnings, x.Name)
		}
	}
	return r
}

// Slugs are the stable names of a report's findings, with the channel where they are of one.
func Slugs(r *measure.Report) []string {
	var out []string
	for i := range r.Findings {
		s := r.Findings[i].Slug
		if c := r.Findings[i].Channel; c != "" {
			s += "_" + c
		}
		out = append(out, s)
	}
	return out
}

// program compiles one variant.
func (w *Worker) program(at []plan.Value, seed uint64) (*plan.Program, error) {
	extra, err := w.stimulus(at, seed)
	if err != nil {
		return nil, err
	}
	return w.variants.Program(w.own(at), seed, extra)
}

// own are the values of the plan's fields among those of a point.
func (w *Worker) own(at []plan.Value) []plan.Value {
	w.values = w.values[:0]
	for _, i := range w.fields {
		w.values = append(w.values, at[i])
	}
	return w.values
}

// stimulus is the extra stimulus of a point, or nil where no axis is one.
func (w *Worker) stimulus(at []plan.Value, seed uint64) (plan.Item, error) {
	if w.extra < 0 {
		return nil, nil
	}
	a := w.g.axes()[w.extra]
	key := string(plan.Key(w.own(at), seed))
	from, met := w.anchors[key]
	if !met {
		from.t, from.err = w.anchor(a, at, seed)
		if len(w.anchors) < mostAnchors {
			w.anchors[key] = from
		}
	}
	if from.err != nil {
		return nil, from.err
	}
	return plan.Extra(a.Premature, from.t.MS()+at[w.extra].Number), nil
}

// errNoBeat is the refusal of a coupling to a beat that never comes.
var errNoBeat = errors.New("the site of the extra stimulus is never depolarised at or after after_ms, so there is nothing to couple it to")

// anchor is when the site of an extra stimulus is first depolarised at or after the
// axis's time, in the run without it.
func (w *Worker) anchor(a *plan.Axis, at []plan.Value, seed uint64) (tick.Time, error) {
	prog, err := w.variants.Program(w.own(at), seed, nil)
	if err != nil {
		return 0, err
	}
	log, err := w.player.Play(prog)
	if err != nil {
		return 0, err
	}
	site, from := log.Site(a.Premature), tick.Time(tick.MS(a.AfterMS))
	for i := range log.Events {
		if e := &log.Events[i]; e.Kind == event.Activate && e.Site == site && e.T >= from {
			return e.T, nil
		}
	}
	return 0, errNoBeat
}

// Plan is the plan of a point with a seed, to open by itself. Its error is that of a
// coupling to a beat that never comes.
func (w *Worker) Plan(point int, seed uint64) (*plan.Plan, error) {
	at := w.g.At(point)
	extra, err := w.stimulus(at, seed)
	if err != nil {
		return nil, err
	}
	return w.variants.Plan(w.own(at), seed, extra).Clone(), nil
}

package study

import (
	"fmt"
	"math"
	"slices"
	"sort"

	"escapement/engine/event"
	"escapement/engine/plan"
	"escapement/engine/sim"
	"escapement/engine/tick"
)

// Scan sweeps the coupling of one planned stimulus through the cycle, from just after
// the last depolarisation of its site to the next one, and finds to a millisecond where
// the outcome changes. It is done in slices: see [Scan.Run].
type Scan struct {
	prog    *plan.Program // without the stimulus
	without *event.Log
	site    event.SiteID
	player  sim.Player

	From tick.Time // couplings count from here: the last depolarisation of the site
	Last int       // the longest coupling, in milliseconds

	points []point // by coupling
	todo   []int
	done   int
}

type point struct {
	ms int
	o  *Outcome
}

// Segment is a range of couplings with one outcome.
type Segment struct {
	From, To int // whole milliseconds, both within it
	Outcome  *Outcome
	Passage  [2]tick.Dur // at its ends, 0 where the other chamber was not reached
	AH       [2]tick.Dur
}

// Sizes of a scan.
const (
	stride   = 10              // ms between the couplings tried first
	longest  = 2000            // ms, the longest coupling where no beat follows
	judged   = 6 * tick.Second // of strip after the stimulus that an outcome is judged by
	shortest = 10              // ms, the fewest that a scan can sweep
)

// NewScan prepares the scan of a single stimulus: a place in the plan's list of
// interventions. Errors: [plan.Diagnoses] of a plan that does not compile, and a place
// that holds no single stimulus.
func NewScan(p *plan.Plan, place int) (*Scan, error) {
	if place < 0 || place >= len(p.Interventions) || p.Interventions[place]["do"].Text != "stimulate" {
		return nil, fmt.Errorf("interventions[%d]: a scan moves a single stimulus, and there is none here", place)
	}
	it := p.Interventions[place]
	q := p.Clone()
	q.Interventions = slices.Delete(q.Interventions, place, place+1)
	prog, err := q.Compile()
	if err != nil {
		return nil, err
	}
	s := &Scan{prog: prog, site: prog.Heart.Site(it["site"].Text)}
	if s.without, err = sim.Play(prog); err != nil {
		return nil, err
	}
	at := tick.Time(tick.MS(it["at_ms"].Number))
	next := tick.Time(math.MaxInt64)
	for i := range s.without.Events {
		e := &s.without.Events[i]
		if e.Kind != event.Activate || e.Site != s.site {
			continue
		}
		if e.T >= at {
			next = e.T
			break
		}
		s.From = e.T
	}
	s.Last = int(min(next, s.From.Add(longest*tick.Millisecond), prog.Span).Sub(s.From) / tick.Millisecond)
	if s.Last < shortest {
		return nil, fmt.Errorf("interventions[%d].at_ms: only %d ms lie between the beats around it", place, s.Last)
	}
	for c := stride; c < s.Last; c += stride {
		s.todo = append(s.todo, c)
	}
	s.todo = append([]int{1}, append(s.todo, s.Last)...)
	return s, nil
}

// Run tries so many couplings more and tells whether the scan is done.
func (s *Scan) Run(tries int) bool {
	for ; tries > 0; tries-- {
		if len(s.todo) == 0 && !s.refine() {
			return true
		}
		c := s.todo[0]
		s.todo = s.todo[1:]
		s.points = append(s.points, point{c, s.try(c)})
		s.done++
	}
	return len(s.todo) == 0 && !s.refine()
}

// Progress is how many couplings were tried, of how many as far as is known.
func (s *Scan) Progress() (done, of int) { return s.done, s.done + len(s.todo) }

// try runs the plan with the stimulus at a coupling.
func (s *Scan) try(coupling int) *Outcome {
	at := s.From.Add(tick.Dur(coupling) * tick.Millisecond)
	prog := *s.prog
	prog.Stimuli = append(slices.Clone(s.prog.Stimuli), plan.Stimulus{T: at, Site: s.site, Rule: event.Premature})
	prog.Span = min(prog.Span, at.Add(judged))
	log, err := s.player.Play(&prog)
	if err != nil {
		return &Outcome{Slug: "too_long", Text: "too many events to follow"}
	}
	for i := range log.Events {
		if e := &log.Events[i]; e.T == at && e.Kind == event.Stimulus && e.Rule == event.Premature && e.Site == s.site {
			return Extra(log, s.without, e.ID)
		}
	}
	return &Outcome{Slug: "none", Text: "no stimulus"}
}

// refine halves the gaps between different outcomes; false: there is none left.
func (s *Scan) refine() bool {
	sort.Slice(s.points, func(i, j int) bool { return s.points[i].ms < s.points[j].ms })
	for i := 1; i < len(s.points); i++ {
		a, b := s.points[i-1], s.points[i]
		if b.ms-a.ms > 1 && a.o.Slug != b.o.Slug {
			s.todo = append(s.todo, (a.ms+b.ms)/2)
		}
	}
	return len(s.todo) > 0
}

// Segments are the outcomes found so far, in order of coupling. Between two of them
// the limit lies, once the scan is done, within a millisecond.
func (s *Scan) Segments() []Segment {
	points := slices.Clone(s.points)
	sort.Slice(points, func(i, j int) bool { return points[i].ms < points[j].ms })
	var out []Segment
	for _, p := range points {
		if n := len(out); n > 0 && out[n-1].Outcome.Slug == p.o.Slug {
			out[n-1].To = p.ms
			out[n-1].Passage[1], out[n-1].AH[1] = p.o.Passage, p.o.AH
			continue
		}
		out = append(out, Segment{p.ms, p.ms, p.o, [2]tick.Dur{p.o.Passage, p.o.Passage}, [2]tick.Dur{p.o.AH, p.o.AH}})
	}
	return out
}

// jump is by how much AH must grow when the coupling falls by one stride to show two
// pathways in the AV node: 50 ms for 10 ms (common practice).
const jump = 50 * tick.Millisecond

// Jump is the first coupling, from above, at which AH grows by 50 ms or more as the
// coupling falls by 10 ms, and by how much.
func (s *Scan) Jump() (coupling int, by tick.Dur, ok bool) {
	at := map[int]*Outcome{}
	for _, p := range s.points {
		at[p.ms] = p.o
	}
	for c := s.Last / stride * stride; c > stride; c -= stride {
		a, b := at[c], at[c-stride]
		if a != nil && b != nil && a.AH > 0 && b.AH > 0 && b.AH-a.AH >= jump {
			return c - stride, b.AH - a.AH, true
		}
	}
	return 0, 0, false
}

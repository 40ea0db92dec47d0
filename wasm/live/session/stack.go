package session

import (
	"math"
	"slices"
	"strings"

	"escapement/engine/event"
	"escapement/engine/ladder"
	"escapement/engine/lead"
	"escapement/engine/scene"
)

// stack lays out both timelines on one sheet. Where the page is too low for both, the
// leads that say least go first. The forms of paper are for one timeline.
func (s *Session) stack(q *view) ([]byte, []float32) {
	form, margin := ladder.Plain, float64(marginPlain)
	if q.View.Ladder == "full" {
		form, margin = ladder.Full, marginFull
	}
	c := s.contrast()
	o := s.current.options(q)
	o.Margin, o.Selected = margin, q.Selected
	half := func(t *timeline, name string, alone []event.ID) scene.Half {
		h := scene.Half{Input: t.input(form), Name: name, Says: t.says(), Alone: alone}
		h.Signals = t.sampled(o.Lanes, q.View.EGMGain)
		return h
	}
	before, after := half(s.before, "Before", c.gone), half(s.current, "After", c.fresh)
	fitHalves(&o, before, after, q.View.Height)
	drawn := scene.Stack(before, after, c.links, o)
	return s.current.wire(drawn, &o, s.bothTimes(drawn))
}

// says names a half: what plan it is, and its rhythm.
func (t *timeline) says() string {
	if t.plan.Title == "" {
		return t.report.Statement
	}
	return t.plan.Title + ": " + t.report.Statement
}

// leastStacked is the least height of a tier where two ladders share the page, mm.
const leastStacked = 6.5

// changesRoom is what the rows of changes take, which an empty list does not show, mm.
const changesRoom = 14

// fitHalves leaves out leads until both halves have room, and lets the ladders take
// what is left. Where one lead a half is still too much, its lane is made lower.
func fitHalves(o *scene.Options, before, after scene.Half, room float64) {
	units := max(before.Diagram.Height(), after.Diagram.Height())
	least := leastStacked * units
	rest := func() float64 {
		p := *o
		p.LadderMM, p.To = least, p.From+1
		return scene.Stack(before, after, nil, p).Height + changesRoom - 2*least
	}
	for rest()+2*least > room && fewer(o) {
	}
	o.LadderMM = math.Min(math.Max((room-rest())/2, least), mostTier*units)
	o.Closer = math.Max(rest()+2*least-room, 0) / 2
}

// fewer leaves out the lead that says least about rhythm: the last that is neither II
// nor V1, then V1. It keeps one, and tells whether it left out any.
func fewer(o *scene.Options) bool {
	if o.Lanes != nil {
		at := weakest(o.Lanes, func(lane string) (lead.Name, bool) {
			name, ok := strings.CutPrefix(lane, "lead:")
			if !ok {
				return 0, false
			}
			return lead.Parse(name)
		})
		if at >= 0 {
			o.Lanes = slices.Delete(slices.Clone(o.Lanes), at, at+1)
		}
		return at >= 0
	}
	at := weakest(o.Leads, func(n lead.Name) (lead.Name, bool) { return n, true })
	if at >= 0 {
		o.Leads = slices.Delete(slices.Clone(o.Leads), at, at+1)
	}
	return at >= 0
}

// weakest is the place of the lead to leave out, or -1.
func weakest[T any](list []T, of func(T) (lead.Name, bool)) int {
	at, n, worst := -1, 0, -1
	for i := len(list) - 1; i >= 0; i-- {
		l, ok := of(list[i])
		if !ok {
			continue
		}
		n++
		rank := 2
		switch l {
		case lead.II:
			rank = 0
		case lead.V1:
			rank = 1
		}
		if rank > worst {
			at, worst = i, rank
		}
	}
	if n < 2 {
		return -1
	}
	return at
}

// bothTimes is times for a sheet of two: no event of the upper half can be moved.
func (s *Session) bothTimes(drawn *scene.Scene) [][4]float64 {
	out := s.current.times(drawn)
	seen := map[event.ID]bool{}
	for i := range drawn.Marks {
		if id := drawn.Marks[i].Event; id < 0 && !seen[id] {
			seen[id] = true
			e := s.before.log.At(-id)
			out = append(out, [4]float64{float64(id), e.T.MS(), 0, s.before.measured(e)})
		}
	}
	return out
}

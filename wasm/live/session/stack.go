package session

import (
	"math"

	"escapement/engine/event"
	"escapement/engine/ladder"
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
	half := func(t *sheet, name string, alone []event.ID) scene.Half {
		h := scene.Half{Input: t.input(form), Name: name, Says: t.says(), Alone: alone}
		h.Signals = t.Signals(o.Lanes, q.View.EGMGain)
		return h
	}
	before, after := half(s.before, "Before", c.gone), half(s.current, "After", c.fresh)
	fitHalves(&o, before, after, q.View.Height)
	drawn := scene.Stack(before, after, c.links, o)
	return s.current.wire(drawn, &o, s.bothTimes(drawn))
}

// says names a half: what plan it is, and its rhythm.
func (t *sheet) says() string {
	if t.Plan.Title == "" {
		return t.Measure.Statement
	}
	return t.Plan.Title + ": " + t.Measure.Statement
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
	for rest()+2*least > room && scene.Fewer(o) {
	}
	o.LadderMM = math.Min(math.Max((room-rest())/2, least), mostTier*units)
	o.Closer = math.Max(rest()+2*least-room, 0) / 2
}

// bothTimes is times for a sheet of two: no event of the upper half can be moved.
func (s *Session) bothTimes(drawn *scene.Scene) [][4]float64 {
	out := s.current.times(drawn)
	seen := map[event.ID]bool{}
	for i := range drawn.Marks {
		if id := drawn.Marks[i].Event; id < 0 && !seen[id] {
			seen[id] = true
			e := s.before.Log.At(-id)
			out = append(out, [4]float64{float64(id), e.T.MS(), 0, s.before.measured(e)})
		}
	}
	return out
}

package scene

import (
	"sort"

	"escapement/engine/event"
)

// spikeMM is the height of a stimulus on a lead. It is a sign, not a voltage: how
// large a real one looks depends on the recorder.
const spikeMM = 6

// spikes draws the stimuli of a part of a row, captured or not, each as a thin
// upright line from a little below the zero line.
func (s *sheet) spikes(r *row, p segment) {
	if s.in.Log == nil {
		return
	}
	all := s.in.Log.Events
	first := sort.Search(len(all), func(i int) bool { return all[i].T >= p.from })
	y0, y1 := max(r.zero-0.8*spikeMM, r.lane.Y0), min(r.zero+0.2*spikeMM, r.lane.Y1)
	for i := first; i < len(all) && all[i].T <= p.to; i++ {
		e := &all[i]
		if e.Kind != event.Stimulus {
			continue
		}
		x := s.Axis.X(e.T)
		if e.ID == s.o.Selected {
			s.mark(Mark{Shape: Line, Class: Selected, X: x, Y: y0, X2: x, Y2: y1, Event: e.ID})
		}
		s.mark(Mark{Shape: Line, Class: Spike, X: x, Y: y0, X2: x, Y2: y1, Event: e.ID})
	}
}

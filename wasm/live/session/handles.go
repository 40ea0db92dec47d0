package session

import (
	"math"

	"escapement/engine/event"
	"escapement/engine/handle"
	"escapement/engine/scene"
	"escapement/engine/tick"
)

// handles are what of a scene can be moved. A value stands once, with its range; each
// member of List is
//
//	[event, value, t_ms, from_ms, per, flags, coupling_ms, y0, y1, further events...]
//
// value is a place in Values, flags 1 for the end of a window and 2 for one whose
// length is set while its end stays. coupling is the time since the site of a stimulus
// was last depolarised, or -1. y0 and y1 are millimetres of the scene.
type handles struct {
	Values []handled   `json:"values"`
	List   [][]float64 `json:"list"`
}

type handled struct {
	Path  string  `json:"path"`
	Label string  `json:"label"`
	Unit  string  `json:"unit"`
	Value float64 `json:"value"`
	Min   float64 `json:"min"`
	Max   float64 `json:"max"`
	Step  float64 `json:"step"`
}

// narrowest is the least width of a window on the sheet whose end has a handle, mm.
const narrowest = 1.2

// moves reads once what the events hang on.
func (t *sheet) moves() *handle.Mover {
	if t.mover == nil {
		t.mover = handle.New(t.Plan, t.Device, t.Log)
	}
	return t.mover
}

func (t *sheet) handles(s *scene.Scene, o *scene.Options) handles {
	out := handles{Values: []handled{}, List: [][]float64{}}
	var found []handle.Handle
	for _, h := range t.moves().In(o.From, o.To) {
		if !h.End || s.Axis.X(h.T)-s.Axis.X(h.From) >= narrowest {
			found = append(found, h)
		}
	}
	marks, at := make([][]event.ID, len(found)), make([]tick.Time, len(found))
	for i := range found {
		marks[i], at[i] = append(found[i].Marks, found[i].Event), found[i].T
	}
	place := map[string]int{}
	for i, hold := range s.Holds(marks, at) {
		h := &found[i]
		if hold.Y1 == 0 {
			continue
		}
		k, known := place[h.Path]
		if !known {
			k = len(out.Values)
			place[h.Path] = k
			out.Values = append(out.Values, handled{h.Path, h.Label, h.Unit, h.Value, h.Min, h.Max, h.Step})
		}
		flags, coupling := 0.0, -1.0
		if h.End {
			flags++
		}
		if h.Fixed {
			flags += 2
		}
		if e := t.Log.At(h.Event); e.Kind == event.Stimulus && e.Needed > 0 {
			coupling = e.Recovery.MS()
		}
		row := []float64{float64(h.Event), float64(k), h.T.MS(), h.From.MS(), round(h.Per), flags, coupling, round(hold.Y0), round(hold.Y1)}
		for _, id := range h.Marks {
			row = append(row, float64(id))
		}
		out.List = append(out.List, row)
	}
	return out
}

func round(v float64) float64 { return math.Round(v*1e4) / 1e4 }

// tier is a band of the ladder, in millimetres.
type tier struct {
	Name string  `json:"name"`
	Y0   float64 `json:"y0"`
	Y1   float64 `json:"y1"`
}

func tiers(s *scene.Scene) []tier {
	out := []tier{}
	for i := range s.Tiers {
		out = append(out, tier{s.Tiers[i].Name, round(s.Tiers[i].Y0), round(s.Tiers[i].Y1)})
	}
	return out
}

package session

import (
	"math"

	"escapement/engine/event"
	"escapement/engine/ladder"
	"escapement/engine/lead"
	"escapement/engine/scene"
	"escapement/engine/tick"
)

// Sizes of the page's scenes in millimetres: the font is 12 CSS pixels for the
// usual text, the margin holds the longest name of a tier.
const (
	fontMM = 3.4
	margin = 25
	edge   = 2
)

// view is what the page wants to see.
type view struct {
	View struct {
		T0      float64  `json:"t0_ms"`
		Width   float64  `json:"width_mm"` // of the time axis
		Height  float64  `json:"height_mm"`
		MMPerS  float64  `json:"mm_per_s"`
		MMPerMV float64  `json:"mm_per_mv"`
		Leads   []string `json:"leads"`
		Ladder  string   `json:"ladder"`
	} `json:"view"`
	Marked []event.ID `json:"marked"` // the first is selected
}

func (s *Session) layout(args []byte) ([]byte, []float32) {
	var q view
	decode(args, &q)
	if s.current == nil {
		return none, nil
	}
	return s.current.scene(&q)
}

// scene lays out the part of the timeline that the view asks for and adds the
// times of the events in it.
func (t *timeline) scene(q *view) ([]byte, []float32) {
	form := ladder.Plain
	if q.View.Ladder == "full" {
		form = ladder.Full
	}
	o := t.options(q)
	drawn := scene.Strip(scene.Input{Log: t.log, Record: t.record, Diagram: t.diagram(form)}, o)
	meta, points := scene.Encode(drawn)
	return append(meta[:len(meta)-1], append(append([]byte(`,"times":`), encode(t.times(drawn))...), '}')...), points
}

func (t *timeline) options(q *view) scene.Options {
	v := &q.View
	speed := v.MMPerS
	if !(speed > 0) {
		speed = 25
	}
	from := tick.Time(0)
	if v.T0 > 0 && v.T0 < t.log.Span.MS() {
		from = tick.Time(tick.MS(v.T0))
	}
	room := math.Max(v.Width, 20)
	to := min(from.Add(tick.MS(math.Min(room/speed*1000, 1e9))), t.log.Span)
	o := scene.Options{From: from, To: to, MMPerS: speed, MMPerMV: v.MMPerMV, Margin: margin, FontMM: fontMM, ColumnMM: 0.13, Grid: true}
	for _, name := range v.Leads {
		if l, ok := lead.Parse(name); ok {
			o.Leads = append(o.Leads, l)
		}
	}
	if len(q.Marked) > 0 && t.log.At(q.Marked[0]) != nil {
		o.Selected = q.Marked[0]
	}
	return o
}

func (t *timeline) diagram(f ladder.Form) *ladder.Diagram {
	d := t.diagrams[f]
	if d == nil {
		d = ladder.Build(t.log, ladder.Options{Form: f})
		t.diagrams[f] = d
	}
	return d
}

// times gives id and milliseconds of every event that has a mark.
func (t *timeline) times(s *scene.Scene) [][2]float64 {
	seen := map[event.ID]bool{}
	out := [][2]float64{}
	for i := range s.Marks {
		id := s.Marks[i].Event
		if id == 0 || seen[id] {
			continue
		}
		seen[id] = true
		out = append(out, [2]float64{float64(id), t.log.At(id).T.MS()})
	}
	return out
}

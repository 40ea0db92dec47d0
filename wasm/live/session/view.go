package session

import (
	"math"
	"slices"

	"escapement/engine/event"
	"escapement/engine/ladder"
	"escapement/engine/lead"
	"escapement/engine/scene"
	"escapement/engine/tick"
)

// Sizes of the page's scenes in millimetres: the font is 12 CSS pixels for the
// usual text, the margins hold the longest name of a tier.
const (
	fontMM      = 3.4
	marginPlain = 16
	marginFull  = 25
	edge        = 2
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

		NoDevice bool `json:"no_device"` // leave the device's lane out

		Lanes   []string `json:"lanes"`    // from top to bottom; none: the leads, axis, ladder, device
		EGMGain float64  `json:"egm_gain"` // of electrograms, mm a millivolt; 0: 10
		Paper   string   `json:"paper"`    // "3x4 + rhythm" and the like: the twelve leads as on paper, above the other lanes
	} `json:"view"`
	Selected event.ID `json:"selected"`
}

func (s *Session) layout(args []byte) ([]byte, []float32) {
	var q view
	decode(args, &q)
	if s.current == nil {
		return none, nil
	}
	return s.scene(&q)
}

// scene is that of the timeline, or of both.
func (s *Session) scene(q *view) ([]byte, []float32) {
	if s.before != nil {
		return s.stack(q)
	}
	return s.current.scene(q)
}

// scene lays out the part of the timeline that the view asks for and adds the
// times of the events in it.
func (t *sheet) scene(q *view) ([]byte, []float32) {
	form, margin := ladder.Plain, float64(marginPlain)
	if q.View.Ladder == "full" {
		form, margin = ladder.Full, marginFull
	}
	in := t.input(form)
	o := t.options(q)
	o.Margin = margin
	in.Signals = t.Signals(o.Lanes, q.View.EGMGain)
	lay := scene.Strip
	if form, ok := scene.ParseForm12(q.View.Paper); ok {
		lay, o.Paper, o.Leads = scene.Paper12, form, nil
	}
	o.LadderMM, o.Closer = fit(lay, in, o, q.View.Height)
	drawn := lay(in, o)
	return t.wire(drawn, &o, t.times(drawn))
}

// wire is a scene with the times of its events, what of it can be moved, and its tiers.
func (t *sheet) wire(drawn *scene.Scene, o *scene.Options, times [][4]float64) ([]byte, []float32) {
	meta, points := scene.Encode(drawn)
	meta = append(append(meta[:len(meta)-1], `,"times":`...), encode(times)...)
	meta = append(append(meta, `,"handles":`...), encode(t.handles(drawn, o))...)
	return append(append(append(meta, `,"tiers":`...), encode(tiers(drawn))...), '}'), points
}

func (t *sheet) input(form ladder.Form) scene.Input {
	return scene.Input{Log: t.Log, Record: t.drawn, Diagram: t.diagram(form), Extents: &t.extents}
}

// A tier is between so many millimetres high: readable, and not stretched beyond
// what the eye takes in as one ladder.
const (
	leastTier = 9.5
	mostTier  = 26
)

// fit shares the page's room out: the ladder takes what the other lanes leave. Where that is
// too little for it, the lanes of signals move closer. A strip of no length tells how
// much all the rest takes.
func fit(lay func(scene.Input, scene.Options) *scene.Scene, in scene.Input, o scene.Options, room float64) (ladderMM, closer float64) {
	units := in.Diagram.Height()
	least := leastTier * units
	o.LadderMM, o.To = least, o.From+1
	rest := lay(in, o).Height - least
	if room <= 0 {
		return least, 0
	}
	return math.Min(math.Max(room-rest, least), mostTier*units), math.Max(rest+least-room, 0)
}

func (t *sheet) options(q *view) scene.Options {
	v := &q.View
	speed := v.MMPerS
	if !(speed > 0) {
		speed = 25
	}
	from := tick.Time(0)
	if v.T0 > 0 && v.T0 < t.Log.Span.MS() {
		from = tick.Time(tick.MS(v.T0))
	}
	room := math.Max(v.Width, 20)
	to := min(from.Add(tick.MS(math.Min(room/speed*1000, 1e9))), t.Log.Span)
	o := scene.Options{From: from, To: to, MMPerS: speed, MMPerMV: v.MMPerMV, FontMM: fontMM, ColumnMM: 0.13, Grid: true, NoDevice: v.NoDevice, Lanes: v.Lanes}
	for _, name := range v.Leads {
		if l, ok := lead.Parse(name); ok {
			o.Leads = append(o.Leads, l)
		}
	}
	if t.Log.At(q.Selected) != nil {
		o.Selected = q.Selected
	}
	return o
}

func (t *sheet) diagram(f ladder.Form) *ladder.Diagram {
	d := t.diagrams[f]
	if d == nil {
		d = ladder.Build(t.Log, ladder.Options{Form: f})
		t.diagrams[f] = d
	}
	return d
}

// times gives, for every event that has a mark, its id, its milliseconds, the place,
// from 1, of the intervention that made it, 0 for none, and 1 for one that people
// measure from: the beginning of a P or a QRS, a stimulus, a signal of the device.
func (t *sheet) times(s *scene.Scene) [][4]float64 {
	seen := map[event.ID]bool{}
	out := [][4]float64{}
	for i := range s.Marks {
		id := s.Marks[i].Event
		if id <= 0 || seen[id] { // those below 0 belong to the timeline before
			continue
		}
		seen[id] = true
		e := t.Log.At(id)
		out = append(out, [4]float64{float64(id), e.T.MS(), float64(t.intervention(e)), t.measured(e)})
	}
	return out
}

// intervention is the place, from 1, of the planned stimulus or the train that
// begins with this one; moving it moves the event.
func (t *sheet) intervention(e *event.Event) int {
	if e.Kind != event.Stimulus {
		return 0
	}
	do := "stimulate"
	if e.Rule == event.Train {
		do = "train"
	}
	for i, it := range t.Plan.Interventions {
		if it["do"].Text == do && tick.Time(tick.MS(it["at_ms"].Number)) == e.T && it["site"].Text == t.Log.Sites[e.Site].Name {
			return i + 1
		}
	}
	return 0
}

// measured is 1 for an event that people measure from, else 0.
func (t *sheet) measured(e *event.Event) float64 {
	switch e.Kind {
	case event.Stimulus, event.Sense:
		return 1
	case event.Activate:
		if _, found := slices.BinarySearch(t.first(), e.ID); found {
			return 1
		}
	}
	return 0
}

// first lists the first activation of every P and QRS, in order.
func (t *sheet) first() []event.ID {
	if t.begun == nil {
		t.begun = make([]event.ID, len(t.Measure.Beats))
		for i := range t.Measure.Beats {
			t.begun[i] = t.Measure.Beats[i].ID
		}
		slices.Sort(t.begun)
	}
	return t.begun
}

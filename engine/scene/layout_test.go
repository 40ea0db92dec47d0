package scene

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"escapement/engine/event"
	"escapement/engine/ladder"
	"escapement/engine/lead"
	"escapement/engine/tick"
)

var (
	testSites = []event.Site{
		{Name: "sinus", Tissue: event.Sinus}, {Name: "right_atrium", Tissue: event.Atrium}, {Name: "left_atrium", Tissue: event.Atrium},
		{Name: "atrial_septum", Tissue: event.Atrium}, {Name: "av_junction", Tissue: event.Node}, {Name: "his", Tissue: event.His},
		{Name: "right_bundle", Tissue: event.Purkinje}, {Name: "left_bundle", Tissue: event.Purkinje},
		{Name: "rv_apex", Tissue: event.Ventricle}, {Name: "lv_lateral", Tissue: event.Ventricle},
	}
	testPaths = []event.Path{
		{Name: "sinoatrial", Tissue: event.Sinus, From: 0, To: 1}, {Name: "internodal", Tissue: event.Atrium, From: 1, To: 3},
		{Name: "interatrial", Tissue: event.Atrium, From: 1, To: 2}, {Name: "av_fast", Tissue: event.Node, From: 3, To: 4},
		{Name: "av_slow", Tissue: event.Node, From: 3, To: 4}, {Name: "lower_node", Tissue: event.Node, From: 4, To: 5},
		{Name: "his_right", Tissue: event.Purkinje, From: 5, To: 6}, {Name: "his_left", Tissue: event.Purkinje, From: 5, To: 7},
		{Name: "right_bundle-rv_apex", Tissue: event.Purkinje, From: 6, To: 8}, {Name: "left_bundle-lv_lateral", Tissue: event.Purkinje, From: 7, To: 9},
		{Name: "rv_apex-lv_lateral", Tissue: event.Ventricle, From: 8, To: 9}, {Name: "left_atrium-lv_lateral", Tissue: event.Accessory, From: 2, To: 9},
	}
)

// anyLog draws a log that may be nonsense as physiology: the layout must stand it.
func anyLog(r *rapid.T) *event.Log {
	l := &event.Log{Sites: testSites, Paths: testPaths}
	t := tick.Time(0)
	for range rapid.IntRange(0, 120).Draw(r, "events") {
		t = t.Add(tick.Dur(rapid.Int64Range(0, 200000).Draw(r, "later")))
		e := event.Event{ID: event.ID(len(l.Events) + 1), T: t, Site: event.SiteID(rapid.IntRange(0, len(testSites)-1).Draw(r, "site")), Path: event.None}
		e.Cause = event.ID(rapid.IntRange(0, len(l.Events)).Draw(r, "cause"))
		switch rapid.IntRange(0, 15).Draw(r, "kind") {
		case 10, 11, 12, 13, 14, 15:
			anyDevice(r, &e)
		case 0:
			e.Kind, e.Rule = event.Discharge, event.Phase4
		case 1:
			e.Kind, e.Rule, e.Captured = event.Stimulus, event.Premature, rapid.Bool().Draw(r, "captured")
		case 2, 3:
			e.Kind, e.Rule = event.Block, event.PathRefractory
			e.Path, e.Dir = event.PathID(rapid.IntRange(0, len(testPaths)-1).Draw(r, "path")), event.Dir(rapid.IntRange(1, 2).Draw(r, "dir"))
			e.Depth = uint16(rapid.IntRange(0, 1000).Draw(r, "depth"))
			e.Needed, e.Recovery = 300000, tick.Dur(rapid.Int64Range(0, 299999).Draw(r, "recovery"))
		case 4:
			e.Kind, e.Rule = event.Activate, event.Fired
		default:
			e.Kind, e.Rule = event.Activate, event.Conducted
			e.Path, e.Dir = event.PathID(rapid.IntRange(0, len(testPaths)-1).Draw(r, "path")), event.Dir(rapid.IntRange(1, 2).Draw(r, "dir"))
			e.Site = testPaths[e.Path].Exit(e.Dir)
		}
		l.Events = append(l.Events, e)
	}
	l.Span = t.Add(tick.Dur(rapid.Int64Range(0, 500000).Draw(r, "rest")))
	return l
}

// anyDevice makes the event one of a device.
func anyDevice(r *rapid.T, e *event.Event) {
	e.Channel = rapid.SampledFrom([]byte("AV")).Draw(r, "channel")
	switch rapid.IntRange(0, 5).Draw(r, "of the device") {
	case 0:
		e.Kind, e.Rule, e.Field, e.Captured = event.Stimulus, event.Timed, rapid.SampledFrom([]string{"av_delay", "upper_rate", "safety"}).Draw(r, "timer"), true
	case 1:
		e.Kind, e.Rule, e.By = event.Sense, event.Signal, e.Cause
		e.Use = event.Use(rapid.IntRange(int(event.Tracked), int(event.Observed)).Draw(r, "use"))
	case 2:
		e.Kind, e.Rule, e.Field, e.To = event.Mode, event.Switched, "DDD", "DDI"
	default:
		e.Kind, e.Rule = event.Window, event.Opened
		e.Field = rapid.SampledFrom([]string{"av_delay", "atrial_escape", "lower_rate", "upper_rate", "pvarp", "pvab", "atrial_blanking", "pavb",
			"crosstalk", "ventricular_refractory", "noise", "of another name"}).Draw(r, "window")
		e.Until = e.T.Add(tick.Dur(rapid.Int64Range(0, 900000).Draw(r, "length")))
		e.Why = rapid.SampledFrom([]string{"", "hysteresis"}).Draw(r, "why")
		if rapid.Bool().Draw(r, "ended") {
			e.By = e.Cause
		}
	}
}

func anyRecord(r *rapid.T, span tick.Time) *lead.Record {
	rec := &lead.Record{}
	n := int(span/tick.Time(lead.Step)) + 1
	a := float32(rapid.Float64Range(0, 4).Draw(r, "mv"))
	for i := range rec.MV {
		rec.MV[i] = make([]float32, n)
		for k := range rec.MV[i] {
			rec.MV[i][k] = a * float32(math.Sin(float64(k*(i+1))/37))
		}
	}
	return rec
}

func anyStrip(r *rapid.T) (*Scene, Options) {
	l := anyLog(r)
	in := Input{Log: l}
	if rapid.Bool().Draw(r, "leads") {
		in.Record = anyRecord(r, l.Span)
	}
	if rapid.Bool().Draw(r, "ladder") {
		in.Diagram = ladder.Build(l, ladder.Options{Form: ladder.Form(rapid.IntRange(1, 2).Draw(r, "form"))})
	}
	o := Options{
		From: tick.Time(rapid.Int64Range(0, int64(l.Span)).Draw(r, "from")), To: l.Span,
		MMPerS: rapid.Float64Range(0.5, 400).Draw(r, "mm/s"), MMPerMV: rapid.Float64Range(1, 40).Draw(r, "mm/mV"),
		FontMM: rapid.Float64Range(0.5, 9).Draw(r, "font"), Margin: rapid.Float64Range(0, 30).Draw(r, "margin"),
		Leads: []lead.Name{lead.II, lead.AVR, lead.V1}[:rapid.IntRange(0, 3).Draw(r, "number of leads")],
		Grid:  rapid.Bool().Draw(r, "grid"), Legend: rapid.Bool().Draw(r, "legend"), Caution: rapid.Bool().Draw(r, "caution"),
		Title:     rapid.SampledFrom([]string{"", "Wenckebach", "A title with a good many words and Überlängenwörterbuchstabensuppenmonster in it"}).Draw(r, "title"),
		Statement: rapid.SampledFrom([]string{"", "Sinus 95/min, 4:3 AV block with growing PR (180, 260, 300 ms), at the AV node."}).Draw(r, "statement"),
		Selected:  event.ID(rapid.IntRange(0, len(l.Events)).Draw(r, "selected")),
	}
	if rapid.Bool().Draw(r, "page12") {
		return Page12(in, o), o
	}
	return Strip(in, o), o
}

const hairsbreadth = 1e-6 // mm, for sums of floats

// No two texts overlap and none leaves the sheet, whatever the log, the zoom and
// the size of the letters.
func TestLabelsNeverOverlapNorLeaveTheSheet(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		s, _ := anyStrip(r)
		var boxes []Box
		var texts []string
		for i := range s.Marks {
			m := &s.Marks[i]
			if m.Shape != Text {
				continue
			}
			b := s.TextBox(m)
			if b.X0 < -hairsbreadth || b.Y0 < -hairsbreadth || b.X1 > s.Width+hairsbreadth || b.Y1 > s.Height+hairsbreadth {
				r.Fatalf("%q at %+v leaves the sheet of %v by %v mm", m.Text, b, s.Width, s.Height)
			}
			b.X0, b.Y0, b.X1, b.Y1 = b.X0+hairsbreadth, b.Y0+hairsbreadth, b.X1-hairsbreadth, b.Y1-hairsbreadth
			for j := range boxes {
				if b.meets(boxes[j]) {
					r.Fatalf("%q at %+v overlaps %q at %+v", m.Text, b, texts[j], boxes[j])
				}
			}
			boxes, texts = append(boxes, b), append(texts, m.Text)
		}
	})
}

// Marks stay on the sheet and hold finite numbers; lanes follow one another.
func TestMarksStayOnTheSheet(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		s, _ := anyStrip(r)
		on := func(m *Mark, x, y float64) {
			const room = 3 // half a bar or a halo may stand over the window's edge
			if !(x >= -room && x <= s.Width+room && y >= -room && y <= s.Height+room) {
				r.Fatalf("%s mark %+v is off the sheet of %v by %v mm", m.Class, *m, s.Width, s.Height)
			}
		}
		for i := range s.Marks {
			m := &s.Marks[i]
			if m.Class.String() == "invalid" {
				r.Fatalf("mark %+v has no class", *m)
			}
			switch m.Shape {
			case Poly:
				for _, p := range m.Points {
					on(m, float64(p.X), float64(p.Y))
				}
			case Line, Rect:
				on(m, m.X, m.Y)
				on(m, m.X2, m.Y2)
			case Disc, Ring, Text:
				on(m, m.X, m.Y)
			default:
				r.Fatalf("mark %+v has no shape", *m)
			}
		}
		y := 0.0
		for _, l := range s.Lanes {
			if l.Y0 < y-hairsbreadth || l.Y1 < l.Y0 || l.Y1 > s.Height {
				r.Fatalf("lane %+v does not follow at %v", l, y)
			}
			y = l.Y1
		}
	})
}

// The same strip laid out twice is the same, and so is its wire form.
func TestStripIsDeterministic(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		l := anyLog(r)
		in := Input{Log: l, Diagram: ladder.Build(l, ladder.Options{Form: ladder.Full})}
		a := Describe(Strip(in, Options{Caution: true}))
		b := Describe(Strip(in, Options{Caution: true}))
		if string(a) != string(b) {
			r.Fatal("two layouts of one log differ")
		}
	})
}

// Package report fills the one-page report of a plan and the page that compares two:
// it computes the plan, takes the strip, its measures, the arithmetic and the settings,
// and puts them into the rows that package scene lays out on paper.
//
// What is printed is what the page shows, from the same packages. Nothing is read from
// a clock: date and version are given. A report names no person; a plan has no field
// for one.
package report

import (
	"fmt"

	"escapement/engine/ladder"
	"escapement/engine/lead"
	"escapement/engine/numbers"
	"escapement/engine/scene"
	"escapement/engine/tick"
	"escapement/engine/timeline"
)

// rows makes the rows of a report out of a timeline.
type rows struct{ *timeline.Timeline }

// Options say what is printed. The zero value is A4 with leads II and V1, the full
// ladder and as much of the strip's beginning as one line holds.
type Options struct {
	Paper         scene.Paper
	Date, Version string // as they are to be printed; empty: left out
	From, To      tick.Time
	Leads         []lead.Name  // nil: II and V1; empty: none
	Lanes         []string     // from top to bottom, as in [scene.Options]; nil: the leads, axis, ladder, device
	EGMGain       float64      // of electrograms among the lanes, mm a millivolt; 0: 10
	Form          scene.Form12 // the twelve leads as on paper, above the other lanes; without columns: not so
	Ladder        ladder.Form  // 0: full
	NoLadder      bool
	NoDevice      bool    // leave the device's lane out
	MMPerS        float64 // 0: 25
	MMPerMV       float64 // 0: 10
}

// Build lays out the report of one plan.
func Build(t *timeline.Timeline, o Options) ([]*scene.Scene, error) {
	c := rows{t}
	strip, err := c.excerpt(&o)
	if err != nil {
		return nil, err
	}
	r := &scene.Report{
		Title: c.title(), Statement: c.Measure.Statement, Note: c.Plan.Note, Strip: strip,
		Findings: c.findings(), Settings: c.settings(), Date: o.Date, Version: o.Version,
	}
	measured := numbers.Measured(&c.Measure.Summary)
	r.Readings = readings(measured)
	if d := c.Beside(); d != nil {
		r.Warnings, r.Sums, r.Counted = d.Warnings, sums(d.Arithmetic), readings(d.Counted)
	}
	if c.Record == nil {
		r.Warnings = append(r.Warnings, numbers.NoLeads)
	}
	r.Sources = sources(measured)
	return r.Pages(o.Paper)
}

// Compare lays out two plans one above the other, named as given ("before", "after"),
// with the lines in which they differ; nil are those of [Differences].
func Compare(two [2]*timeline.Timeline, names [2]string, differences []scene.Difference, o Options) ([]*scene.Scene, error) {
	if differences == nil {
		differences = Differences(two[0], two[1])
	}
	cases := [2]rows{{two[0]}, {two[1]}}
	title := first(names[0]) + " and " + names[1]
	if t := cases[1].title(); t == cases[0].title() {
		title += ": " + t
	}
	p := &scene.Comparison{Title: title, Differences: differences, Date: o.Date, Version: o.Version}
	for i, c := range cases {
		own := o
		if own.From >= c.Log.Span {
			own.From, own.To = 0, 0
		}
		own.To = min(own.To, c.Log.Span)
		strip, err := c.excerpt(&own)
		if err != nil {
			return nil, err
		}
		p.Parts[i] = scene.Part{Name: names[i], Title: c.Plan.Title, Statement: c.Measure.Statement, Strip: strip}
	}
	return p.Pages(o.Paper)
}

// first is a text with a capital at its beginning.
func first(s string) string {
	if s == "" || s[0] < 'a' || s[0] > 'z' {
		return s
	}
	return string(s[0]-'a'+'A') + s[1:]
}

func (c rows) title() string {
	if c.Plan.Title == "" {
		return "Untitled plan"
	}
	return c.Plan.Title
}

func (c rows) excerpt(o *Options) (scene.Excerpt, error) {
	span := c.Log.Span
	if o.From < 0 || o.From >= span || o.To != 0 && (o.To <= o.From || o.To > span) {
		return scene.Excerpt{}, fmt.Errorf("report: the window from %v to %v ms does not lie in the strip of %v ms", o.From, o.To, span)
	}
	e := scene.Excerpt{In: scene.Input{Log: c.Log, Record: c.Record}}
	leads := o.Leads
	if leads == nil {
		leads = []lead.Name{lead.II, lead.V1}
		if o.Form.Columns > 0 {
			leads = []lead.Name{lead.II}
		}
	}
	e.O = scene.Options{From: o.From, To: o.To, MMPerS: o.MMPerS, MMPerMV: o.MMPerMV, Leads: leads, Lanes: o.Lanes, Paper: o.Form, NoDevice: o.NoDevice}
	e.In.Signals = c.Signals(o.Lanes, o.EGMGain)
	if !o.NoLadder {
		form := o.Ladder
		if form == 0 {
			form = ladder.Full
		}
		e.In.Diagram = ladder.Build(c.Log, ladder.Options{Form: form})
	}
	return e, nil
}

package service

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"maps"
	"net/http"
	"slices"
	"strings"

	"escapement/engine/field"
	"escapement/engine/ladder"
	"escapement/engine/lead"
	"escapement/engine/numbers"
	"escapement/engine/plan"
	"escapement/engine/press"
	"escapement/engine/scene"
	"escapement/engine/tick"
	"escapement/engine/timeline"
)

// printed is a finished print.
type printed struct {
	kind  string // media type
	name  string // of the file
	pages int    // of the whole print; SVG and PNG hold one of them
	bytes []byte
}

type maker func(*Request) (*printed, error)

// routes are the answers by name and format.
var routes = map[string]map[string]maker{
	"strip":  also(drawings(strip), exports),
	"ladder": drawings(ladderAlone),
	"twelve": drawings(twelve),

	"report":     drawings(onePage),
	"comparison": drawings(comparison),
}

// Routes lists what can be asked for.
func Routes() []string {
	var all []string
	for name, formats := range routes {
		for format := range formats {
			all = append(all, Prefix+name+"."+format)
		}
	}
	slices.Sort(all)
	return all
}

func also(a, b map[string]maker) map[string]maker {
	maps.Copy(a, b)
	return a
}

// drawings are the formats in which pages can be had.
func drawings(lay func(*Request) ([]*scene.Scene, error)) map[string]maker {
	with := func(kind string, print func(*bytes.Buffer, *Request, []*scene.Scene) error) maker {
		return func(r *Request) (*printed, error) {
			pages, err := lay(r)
			if err != nil {
				return nil, err
			}
			var b bytes.Buffer
			if err := print(&b, r, pages); err != nil {
				return nil, err
			}
			return &printed{kind: kind, pages: len(pages), bytes: b.Bytes()}, nil
		}
	}
	return map[string]maker{
		"pdf": with("application/pdf", func(b *bytes.Buffer, _ *Request, pages []*scene.Scene) error { return press.Pages(b, pages) }),
		"svg": with("image/svg+xml", func(b *bytes.Buffer, r *Request, pages []*scene.Scene) error {
			s, err := r.page(pages)
			if err != nil {
				return err
			}
			return press.SVG(b, s)
		}),
		"png": with("image/png", func(b *bytes.Buffer, r *Request, pages []*scene.Scene) error {
			s, err := r.page(pages)
			if err != nil {
				return err
			}
			if n := s.Width * s.Height * r.Dots * r.Dots; n > maxDots {
				return refuse(http.StatusUnprocessableEntity, "dots_mm", fmt.Sprintf("%g, which is %.0f million dots", r.Dots, n/1e6), fmt.Sprintf("up to %.0f million", maxDots/1e6), "take fewer dots a millimetre, or a PDF")
			}
			return press.PNG(b, s, r.Dots)
		}),
	}
}

// maxDots keeps a picture within the memory of a browser's worker: 160 MB.
const maxDots = 40e6

func (r *Request) page(pages []*scene.Scene) (*scene.Scene, error) {
	if r.Page > len(pages) {
		return nil, refuse(http.StatusUnprocessableEntity, "page", fmt.Sprint(r.Page), fmt.Sprintf("1 to %d", len(pages)), "")
	}
	return pages[r.Page-1], nil
}

func strip(r *Request) ([]*scene.Scene, error) {
	leads := r.leads
	if r.twelve.Columns > 0 {
		return twelve(r)
	}
	if r.Leads == nil {
		leads = []lead.Name{lead.II, lead.V1}
	}
	return sheets(r, leads, scene.StripForm)
}

func ladderAlone(r *Request) ([]*scene.Scene, error) {
	if r.Ladder == "none" {
		return nil, refuse(http.StatusBadRequest, "ladder", "none", "full, plain", "the ladder is all that this print shows")
	}
	r.Lanes = []string{"axis", "ladder", "device"}
	return sheets(r, nil, scene.StripForm)
}

// twelve is the page of twelve leads. r.Leads name those that run below, where the form
// has a rhythm strip.
func twelve(r *Request) ([]*scene.Scene, error) {
	if r.Ladder == "" && r.Lanes == nil {
		r.Ladder = "none"
	}
	leads := r.leads
	if len(leads) == 0 {
		leads = []lead.Name{lead.II}
	}
	return sheets(r, leads, scene.TwelveForm)
}

func sheets(r *Request, leads []lead.Name, form scene.Form) ([]*scene.Scene, error) {
	c, err := r.run(r.Plan)
	if err != nil {
		return nil, err
	}
	signals := len(leads) > 0 || slices.ContainsFunc(r.Lanes, func(l string) bool { return strings.Contains(l, ":") })
	if signals && c.Record == nil {
		return nil, refuse(http.StatusUnprocessableEntity, "plan", fmt.Sprintf("a strip of %.0f min", c.Log.Span.Seconds()/60), fmt.Sprintf("leads for strips of up to %.0f min", numbers.LeadsUpTo.Seconds()/60), "print the ladder alone")
	}
	in := scene.Input{Log: c.Log, Signals: c.Signals(r.Lanes, r.EGMGain)}
	if signals {
		in.Record = c.Record
	}
	if r.Ladder != "none" {
		in.Diagram = ladder.Build(c.Log, ladder.Options{Form: r.form()})
	}
	o := scene.Options{
		From: tick.Time(tick.MS(r.From)), To: tick.Time(tick.MS(r.To)), MMPerS: r.Speed, MMPerMV: r.Gain, Leads: leads, Lanes: r.Lanes, Paper: r.twelve, Fill: r.Fill,
		Grid: true, Legend: true, Caution: true, NoDevice: !r.Device, Title: c.Plan.Title, Statement: c.Measure.Statement, Imprint: r.imprint(),
	}
	if o.Title == "" {
		o.Title = "Untitled plan"
	}
	if r.Paper == Roll {
		s, err := scene.Roll(in, o, form)
		return []*scene.Scene{s}, r.room(err)
	}
	if r.Paper == "" {
		r.paper = scene.Paper{Width: 297, Height: 210}
	}
	pages, err := scene.Sheets(in, o, r.paper, form)
	return pages, r.room(err)
}

// run computes one of the plans, and sees that the window lies in its strip.
func (r *Request) run(raw json.RawMessage) (*timeline.Timeline, error) {
	p, err := planOf(raw)
	if err != nil {
		return nil, err
	}
	c, err := timeline.Of(p, field.New())
	if err != nil {
		return nil, err
	}
	if span := c.Log.Span; r.From >= span.MS() || r.To > span.MS() {
		return nil, refuse(http.StatusUnprocessableEntity, "from_ms, to_ms", fmt.Sprintf("%g to %g ms", r.From, r.To), fmt.Sprintf("within the strip of %v ms", span), "")
	}
	return c, nil
}

func (r *Request) form() ladder.Form {
	if r.Ladder == "plain" {
		return ladder.Plain
	}
	return ladder.Full
}

// room puts the words of a layout that did not fit at the paper.
func (r *Request) room(err error) error {
	if err == nil {
		return nil
	}
	d := plan.Diagnosis{Path: "paper", Found: err.Error(), Note: "take larger paper, fewer leads, a lower gain or speed, or a shorter part of the strip"}
	var room *scene.RoomError
	if errors.As(err, &room) {
		d.Allowed = fmt.Sprintf("up to %.0f %s", room.Has, room.Unit())
	}
	return &refusal{http.StatusUnprocessableEntity, plan.Diagnoses{d}}
}

// imprint tells when and by what a print was made.
func (r *Request) imprint() string {
	text := strings.TrimSpace("escapement " + r.Version)
	if r.Date != "" {
		text += " · " + r.Date
	}
	return text
}

package main

import (
	"flag"
	"fmt"
	"io"
	"path/filepath"
	"strings"

	"escapement/engine/field"
	"escapement/engine/ladder"
	"escapement/engine/lead"
	"escapement/engine/press"
	"escapement/engine/report"
	"escapement/engine/scene"
	"escapement/engine/tick"
	"escapement/engine/timeline"
)

// paper is what the flags of report ask for.
type paper struct {
	out, size, before, leads, tiers string
	from, to, speed, gain, dots     float64
	date                            string
	lanes                           laneFlags
}

// onPaper prints a plan's report: as a PDF of all pages, or as one picture a page,
// F-1.png and so on.
//
//	escapement report PLAN -o F.pdf [-paper a4] [-leads II,V1] [-tiers full] [-from MS] [-to MS] [-lanes LANES] [-paper-form 3x4+rhythm] [-date TEXT] [-before PLAN]
func onPaper(args []string, in io.Reader) error {
	if len(args) == 0 || strings.HasPrefix(args[0], "-") && args[0] != "-" {
		return &usageError{"report takes a plan and then -o FILE"}
	}
	var q paper
	fs := flag.NewFlagSet("report", flag.ContinueOnError)
	fs.SetOutput(io.Discard)
	fs.StringVar(&q.out, "o", "", "file to write: .pdf, .svg or .png")
	fs.StringVar(&q.size, "paper", "a4", "a4, letter, a3, with -landscape, or 200x250 in mm")
	fs.StringVar(&q.before, "before", "", "a second plan to compare with")
	fs.StringVar(&q.leads, "leads", "II,V1", "leads, with commas")
	fs.StringVar(&q.tiers, "tiers", "full", "ladder: full, plain or none")
	fs.StringVar(&q.date, "date", "", "a date to print")
	q.lanes.define(fs)
	fs.Float64Var(&q.speed, "speed", 25, "mm a second")
	fs.Float64Var(&q.gain, "gain", 10, "mm a millivolt")
	fs.Float64Var(&q.from, "from", 0, "start of the window, ms")
	fs.Float64Var(&q.to, "to", 0, "end of the window, ms; 0 is as much as one line holds")
	fs.Float64Var(&q.dots, "dots", 8, "dots a millimetre, for .png")
	if err := fs.Parse(args[1:]); err != nil {
		return &usageError{"report: " + err.Error()}
	}
	if fs.NArg() > 0 || q.out == "" {
		return &usageError{"report takes a plan and then -o FILE"}
	}
	pages, err := q.pages(args[0], in)
	if err != nil {
		return err
	}
	return q.write(pages)
}

func (q *paper) pages(arg string, in io.Reader) ([]*scene.Scene, error) {
	o, err := q.options()
	if err != nil {
		return nil, err
	}
	c, err := computed(arg, in)
	if err != nil {
		return nil, err
	}
	if q.before == "" {
		return report.Build(c, o)
	}
	before, err := computed(q.before, in)
	if err != nil {
		return nil, err
	}
	return report.Compare([2]*timeline.Timeline{before, c}, [2]string{"before", "after"}, nil, o)
}

func computed(arg string, in io.Reader) (*timeline.Timeline, error) {
	p, err := read(arg, in)
	if err != nil {
		return nil, err
	}
	return timeline.Of(p, field.New())
}

func (q *paper) options() (report.Options, error) {
	o := report.Options{Date: q.date, From: tick.Time(tick.MS(q.from)), To: tick.Time(tick.MS(q.to)), MMPerS: q.speed, MMPerMV: q.gain, Leads: []lead.Name{}, EGMGain: q.lanes.egmGain}
	var err error
	if o.Paper, err = scene.ParsePaper(q.size); err != nil {
		return o, &usageError{err.Error()}
	}
	if o.Leads, err = leadNames("report", q.leads); err != nil {
		return o, err
	}
	if o.Lanes, o.Form, err = q.lanes.read("report"); err != nil {
		return o, err
	}
	switch q.tiers {
	case "full":
		o.Ladder = ladder.Full
	case "plain":
		o.Ladder = ladder.Plain
	case "none":
		o.NoLadder = true
	default:
		return o, &usageError{fmt.Sprintf("report: tiers %q; they can be full, plain or none", q.tiers)}
	}
	return o, nil
}

// leadNames reads leads with commas between them.
func leadNames(command, text string) ([]lead.Name, error) {
	names := []lead.Name{}
	for _, name := range strings.Split(text, ",") {
		if name == "" {
			continue
		}
		n, ok := lead.Parse(name)
		if !ok {
			return nil, &usageError{fmt.Sprintf("%s: %q is not a lead: I, II, III, aVR, aVL, aVF, V1 to V6", command, name)}
		}
		names = append(names, n)
	}
	return names, nil
}

func (q *paper) write(pages []*scene.Scene) error {
	ext := strings.ToLower(filepath.Ext(q.out))
	var one func(io.Writer, *scene.Scene) error
	switch ext {
	case ".pdf":
		return create(q.out, func(w io.Writer) error { return press.Pages(w, pages) })
	case ".svg":
		one = press.SVG
	case ".png":
		one = func(w io.Writer, s *scene.Scene) error { return press.PNG(w, s, q.dots) }
	default:
		return &usageError{fmt.Sprintf("report: %q ends in %q; it can be .pdf, .svg or .png", q.out, ext)}
	}
	for i, s := range pages {
		name := q.out
		if len(pages) > 1 {
			name = fmt.Sprintf("%s-%d%s", strings.TrimSuffix(q.out, filepath.Ext(q.out)), i+1, filepath.Ext(q.out))
		}
		if err := create(name, func(w io.Writer) error { return one(w, s) }); err != nil {
			return err
		}
	}
	return nil
}

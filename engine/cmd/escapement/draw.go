package main

import (
	"bufio"
	"errors"
	"flag"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"

	"escapement/engine/field"
	"escapement/engine/ladder"
	"escapement/engine/plan"
	"escapement/engine/press"
	"escapement/engine/scene"
	"escapement/engine/tick"
	"escapement/engine/timeline"
)

// drawing is what the flags of draw ask for.
type drawing struct {
	out          string
	speed, gain  float64
	from, to     float64
	leads, tiers string
	dots         float64
	lanes        laneFlags
}

// draw lays out the sheet of a plan and prints it by the ending of its file name.
//
//	escapement draw PLAN -o F.svg [-speed 25] [-gain 10] [-leads II,V1] [-lanes lead:II,egm:HISd,axis,ladder] [-paper-form 3x4+rhythm] [-tiers full] [-from MS] [-to MS]
func draw(args []string, in io.Reader) error {
	if len(args) == 0 || strings.HasPrefix(args[0], "-") && args[0] != "-" {
		return &usageError{"draw takes a plan and then -o FILE"}
	}
	d := drawing{}
	fs := flag.NewFlagSet("draw", flag.ContinueOnError)
	fs.SetOutput(io.Discard)
	fs.StringVar(&d.out, "o", "", "file to write: .svg, .pdf or .png")
	fs.Float64Var(&d.speed, "speed", 25, "mm a second")
	fs.Float64Var(&d.gain, "gain", 10, "mm a millivolt")
	fs.StringVar(&d.leads, "leads", "II,V1", "leads, with commas")
	fs.StringVar(&d.tiers, "tiers", "full", "ladder: full, plain or none")
	fs.Float64Var(&d.from, "from", 0, "start of the window, ms")
	fs.Float64Var(&d.to, "to", 0, "end of the window, ms; 0 is the end of the strip")
	fs.Float64Var(&d.dots, "dots", 12, "dots a millimetre, for .png")
	d.lanes.define(fs)
	if err := fs.Parse(args[1:]); err != nil {
		return &usageError{"draw: " + err.Error()}
	}
	if fs.NArg() > 0 || d.out == "" {
		return &usageError{"draw takes a plan and then -o FILE"}
	}
	write, err := d.printer()
	if err != nil {
		return err
	}
	p, err := read(args[0], in)
	if err != nil {
		return err
	}
	s, err := d.scene(p)
	if err != nil {
		return err
	}
	return create(d.out, func(w io.Writer) error { return write(w, s) })
}

func (d *drawing) printer() (func(io.Writer, *scene.Scene) error, error) {
	switch ext := strings.ToLower(filepath.Ext(d.out)); ext {
	case ".svg":
		return press.SVG, nil
	case ".pdf":
		return press.PDF, nil
	case ".png":
		return func(w io.Writer, s *scene.Scene) error { return press.PNG(w, s, d.dots) }, nil
	default:
		return nil, &usageError{fmt.Sprintf("draw: %q ends in %q; it can be .svg, .pdf or .png", d.out, ext)}
	}
}

func (d *drawing) scene(p *plan.Plan) (*scene.Scene, error) {
	o := scene.Options{MMPerS: d.speed, MMPerMV: d.gain, Grid: true, Legend: true, Caution: true, Pulse: true, Title: p.Title}
	names, err := leadNames("draw", d.leads)
	if err != nil {
		return nil, err
	}
	o.Leads = names
	if o.Lanes, o.Paper, err = d.lanes.read("draw"); err != nil {
		return nil, err
	}
	c, err := timeline.Of(p, field.New())
	if err != nil {
		return nil, err
	}
	log := c.Log
	if d.from < 0 || d.from >= log.Span.MS() || d.to != 0 && (d.to <= d.from || d.to > log.Span.MS()) {
		return nil, &usageError{fmt.Sprintf("draw: the window from %g to %g ms does not lie in the strip of %v ms", d.from, d.to, log.Span)}
	}
	o.From, o.To = tick.Time(tick.MS(d.from)), tick.Time(tick.MS(d.to))
	if c.Record == nil { // a report leaves the leads of a long strip out; a drawing shows what it is asked for
		c.Record = field.Record(log)
	}
	in := scene.Input{Log: log, Record: c.Record, Signals: c.Signals(o.Lanes, d.lanes.egmGain)}
	switch d.tiers {
	case "full":
		in.Diagram = ladder.Build(log, ladder.Options{Form: ladder.Full})
	case "plain":
		in.Diagram = ladder.Build(log, ladder.Options{Form: ladder.Plain})
	case "none":
	default:
		return nil, &usageError{fmt.Sprintf("draw: tiers %q; they can be full, plain or none", d.tiers)}
	}
	o.Statement = c.Measure.Statement
	if o.Paper.Columns > 0 {
		return scene.Paper12(in, o), nil
	}
	return scene.Strip(in, o), nil
}

// create writes a file whole or not at all.
func create(name string, write func(io.Writer) error) (err error) {
	f, err := os.CreateTemp(filepath.Dir(name), ".escapement-*")
	if err != nil {
		return err
	}
	defer func() {
		if err != nil {
			err = errors.Join(err, os.Remove(f.Name()))
		}
	}()
	b := bufio.NewWriter(f)
	if err = write(b); err == nil {
		err = b.Flush()
	}
	if err = errors.Join(err, f.Close()); err != nil {
		return err
	}
	if err = os.Chmod(f.Name(), 0o644); err != nil {
		return err
	}
	return os.Rename(f.Name(), name)
}

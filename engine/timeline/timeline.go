// Package timeline is a plan with all that is computed of it: what happened, the leads,
// what is measured, and the signals that a sheet may show besides. The page, prints,
// exports and the command line take it from here, so that they show the same.
package timeline

import (
	"escapement/engine/contrast"
	"escapement/engine/event"
	"escapement/engine/field"
	"escapement/engine/lead"
	"escapement/engine/measure"
	"escapement/engine/numbers"
	"escapement/engine/plan"
	"escapement/engine/scene"
	"escapement/engine/signal"
	"escapement/engine/sim"
)

// Timeline is a computed plan.
type Timeline struct {
	Plan    *plan.Plan
	Device  *plan.Device // nil: none
	Log     *event.Log
	Record  *lead.Record // nil for a strip longer than numbers.LeadsUpTo
	Measure *measure.Report

	signals *signal.Source
}

// Of computes a plan with a field, which may know some of its waves already. Errors are
// those of [plan.Plan.Compile] and [sim.Play].
func Of(p *plan.Plan, f *field.Field) (*Timeline, error) {
	prog, err := p.Compile()
	if err != nil {
		return nil, err
	}
	log, err := sim.Play(prog)
	if err != nil {
		return nil, err
	}
	t := &Timeline{Plan: p, Device: prog.Device, Log: log, signals: signal.Of(prog, log, f)}
	if log.Span <= numbers.LeadsUpTo {
		t.Record = f.Record(log)
	}
	t.Measure = measure.Of(log, t.Record)
	return t, nil
}

// Signals are the electrograms and action potentials among the lanes, for a scene; gain
// is the scale of electrograms, mm a millivolt, 0: 10. A strip without leads has none.
func (t *Timeline) Signals(lanes []string, gain float64) []scene.Sampled {
	if t.Record == nil {
		return nil
	}
	return t.signals.Lanes(lanes, gain)
}

// Beside is what stands beside the strip of a device, or nil without one.
func (t *Timeline) Beside() *numbers.Device { return numbers.OfDevice(t.Plan, t.Device, t.Measure) }

// Side is the timeline as one of two that are compared.
func (t *Timeline) Side() contrast.Side {
	s := contrast.Side{Log: t.Log, Report: t.Measure, Plan: t.Plan}
	if d := t.Beside(); d != nil {
		s.Warnings = d.Warnings
	}
	return s
}

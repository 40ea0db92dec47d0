package sim

import (
	"fmt"

	"escapement/engine/event"
	"escapement/engine/plan"
)

// MaxEvents is how many events a log may hold.
const MaxEvents = 2000000

// Run plays a plan to the end of its strip. Errors: plan.Diagnoses where numbers
// cannot hold together, *Overrun where the strip holds more than MaxEvents events.
func Run(p *plan.Plan) (*event.Log, error) {
	prog, err := p.Compile()
	if err != nil {
		return nil, err
	}
	return Play(prog)
}

// Play runs a program that is compiled already.
func Play(prog *plan.Program) (*event.Log, error) {
	m := New(prog)
	if !m.Run(MaxEvents) {
		return nil, &Overrun{Events: len(m.log.Events), Seconds: m.now.Seconds()}
	}
	return m.Log(), nil
}

// Overrun says where a run was stopped for its length.
type Overrun struct {
	Events  int
	Seconds float64
}

func (o *Overrun) Error() string {
	return fmt.Sprintf("stopped after %d events at %.3f s: a strip may hold up to %d; shorten span_ms or slow the fastest focus", o.Events, o.Seconds, MaxEvents)
}

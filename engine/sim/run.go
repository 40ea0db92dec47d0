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
	return new(Player).Play(prog)
}

// Player runs one program after another in the same room, for searches and sweeps: a
// run then allocates next to nothing. The zero Player is ready. Use it from one
// goroutine.
type Player struct{ m Machine }

// Play runs a program that is compiled already. The log is the player's own and holds
// until its next run. The error is as with [Run].
func (p *Player) Play(prog *plan.Program) (*event.Log, error) {
	p.m.begin(prog)
	if !p.m.Run(MaxEvents) {
		return nil, &Overrun{Events: len(p.m.log.Events), Seconds: p.m.now.Seconds()}
	}
	return &p.m.log, nil
}

// Overrun says where a run was stopped for its length.
type Overrun struct {
	Events  int
	Seconds float64
}

func (o *Overrun) Error() string {
	return fmt.Sprintf("stopped after %d events at %.3f s: a strip may hold up to %d; shorten span_ms or slow the fastest focus", o.Events, o.Seconds, MaxEvents)
}

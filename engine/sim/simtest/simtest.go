// Package simtest makes timelines for the tests of other packages: a plan, as text or
// by the name of a preset, decoded, compiled and run. Every log is validated. Only tests
// import it.
package simtest

import (
	"fmt"
	"strings"

	"escapement/engine/event"
	"escapement/engine/plan"
	"escapement/engine/sim"
	"escapement/presets"
)

// T is a test or a property.
type T interface {
	Helper()
	Fatal(args ...any)
}

// Played is a plan with what it was compiled to and what came of it.
type Played struct {
	Plan    *plan.Plan
	Program *plan.Program
	Log     *event.Log
}

// Play runs a plan file. The test ends where it is refused or its log is not valid.
func Play(t T, file string) Played {
	t.Helper()
	p, err := plan.Decode([]byte(file))
	if err != nil {
		t.Fatal(err)
	}
	return Run(t, p)
}

// Run runs a plan.
func Run(t T, p *plan.Plan) Played {
	t.Helper()
	prog, err := p.Compile()
	if err != nil {
		t.Fatal(err)
	}
	log, err := sim.Play(prog)
	if err != nil {
		t.Fatal(err)
	}
	for _, err := range event.Validate(log) {
		t.Fatal(err)
	}
	return Played{p, prog, log}
}

// Body runs a plan of which only what stands beside its format is given:
// `"heart":{...}`.
func Body(t T, body string) Played {
	t.Helper()
	return Play(t, `{"format":"escapement-plan/1",`+body+`}`)
}

// Preset runs a preset.
func Preset(t T, name string) Played {
	t.Helper()
	return Changed(t, name, "", "")
}

// Changed runs a preset with a part of its text replaced, which must be there.
func Changed(t T, name, old, with string) Played {
	t.Helper()
	file, ok := presets.Read(name)
	if !ok || !strings.Contains(string(file), old) {
		t.Fatal(fmt.Sprintf("no preset %s with %q", name, old))
	}
	return Play(t, strings.Replace(string(file), old, with, 1))
}

package sim

import (
	"fmt"
	"math/rand/v2"
	"strings"
	"testing"

	"escapement/engine/event"
	"escapement/engine/plan"
	"escapement/engine/tick"
	"escapement/presets"
)

// TestAgreesWithReferenceOnRandomNetworks has the queue and the fixed-step
// simulation play the same hearts, and compares their logs byte for byte.
func TestAgreesWithReferenceOnRandomNetworks(t *testing.T) {
	agree(t, 6000, func(d dice) *plan.Program { return d.network() })
}

// TestAgreesWithReferenceOnClinicalHearts does the same with hearts made of
// clinical numbers; those that heart.New refuses are passed over.
func TestAgreesWithReferenceOnClinicalHearts(t *testing.T) {
	agree(t, 1000, func(d dice) *plan.Program { return d.clinical() })
}

// TestAgreesWithReferenceInMicroseconds has the reference step by single
// microseconds, as the queue does in use.
func TestAgreesWithReferenceInMicroseconds(t *testing.T) {
	agree(t, 100, func(d dice) *plan.Program {
		prog := d.network()
		prog.Span = 400 * tick.Time(tick.Millisecond)
		fine(prog)
		return prog
	})
}

// TestAgreesWithReferenceOnPresets compares the two on the heart of every preset,
// its times rounded to steps.
func TestAgreesWithReferenceOnPresets(t *testing.T) {
	for _, e := range presets.List() {
		b, _ := presets.Read(e.Name)
		p, err := plan.Decode(b)
		if err != nil {
			t.Fatalf("%s: %v", e.Name, err)
		}
		prog, err := p.Compile()
		if err != nil {
			t.Fatalf("%s: %v", e.Name, err)
		}
		for _, h := range hearts(prog) {
			h.Quantum = step
		}
		prog.Device, prog.Faults = nil, nil // the reference knows no device
		whole := func(at *tick.Time) { *at -= *at % tick.Time(step) }
		for i := range prog.Stimuli {
			whole(&prog.Stimuli[i].T)
		}
		for i := range prog.Changes {
			whole(&prog.Changes[i].T)
		}
		prog.Span = min(prog.Span, 30*tick.Time(tick.Second))
		if d := difference(playProgram(t, prog).Text(), referenceLog(prog).Text()); d != "" {
			t.Errorf("%s: %s", e.Name, d)
		}
	}
}

func agree(t *testing.T, hearts int, make func(dice) *plan.Program) {
	if testing.Short() {
		hearts /= 10
	}
	played, events := 0, 0
	rules := map[string]int{}
	for seed := uint64(1); played < hearts; seed++ {
		if seed > uint64(20*hearts) {
			t.Fatalf("only %d of %d seeds made a heart", played, seed)
		}
		prog := make(dice{rand.New(rand.NewPCG(seed, 0))})
		if prog == nil {
			continue
		}
		played++
		got, err := Play(prog)
		if err != nil {
			t.Fatalf("seed %d: %v", seed, err)
		}
		for _, e := range event.Validate(got) {
			t.Errorf("seed %d: %v", seed, e)
		}
		if d := difference(got.Text(), referenceLog(prog).Text()); d != "" {
			t.Fatalf("seed %d: %s%s", seed, d, describe(prog))
		}
		events += len(got.Events)
		for i := range got.Events {
			rules[got.Events[i].Kind.String()+" "+got.Events[i].Rule.String()]++
		}
	}
	t.Logf("%d hearts, %d events: %v", played, events, rules)
}

// difference shows the first line in which two texts differ, with what led to it.
func difference(got, want string) string {
	if got == want {
		return ""
	}
	g, w := strings.Split(got, "\n"), strings.Split(want, "\n")
	i := 0
	for i < len(g) && i < len(w) && g[i] == w[i] {
		i++
	}
	part := func(lines []string) string {
		return strings.Join(lines[min(i, len(lines)):min(i+3, len(lines))], "\n  ")
	}
	return fmt.Sprintf("the logs differ\nboth:\n  %s\nqueue:\n  %s\nreference:\n  %s\n", strings.Join(g[max(0, i-25):i], "\n  "), part(g), part(w))
}

func describe(prog *plan.Program) string {
	var b strings.Builder
	h := prog.Heart
	for i := range h.Sites {
		fmt.Fprintf(&b, "%s %+v\n", h.Sites[i].Name, h.Sites[i].Refractory)
	}
	for i := range h.Paths {
		p := &h.Paths[i]
		fmt.Fprintf(&b, "%s silent=%v drop=%+v\n  down %+v\n  up %+v\n", p.Name, p.Silent, p.Drop, p.Down, p.Up)
	}
	for i := range h.Foci {
		fmt.Fprintf(&b, "focus %+v\n", h.Foci[i])
	}
	fmt.Fprintf(&b, "basic %v seed %d changes %d stimuli %v\n", h.Basic, prog.Seed, len(prog.Changes), prog.Stimuli)
	return b.String()
}

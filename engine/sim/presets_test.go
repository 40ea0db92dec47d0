package sim

import (
	"testing"

	"escapement/engine/event"
	"escapement/engine/plan"
	"escapement/presets"
)

// preset runs a preset and has its log validated.
func preset(t *testing.T, name string) *event.Log {
	t.Helper()
	b, ok := presets.Read(name)
	if !ok {
		t.Fatalf("no preset %s", name)
	}
	p, err := plan.Decode(b)
	if err != nil {
		t.Fatal(err)
	}
	l, err := Run(p)
	if err != nil {
		t.Fatal(err)
	}
	for _, e := range event.Validate(l) {
		t.Error(e)
	}
	return l
}

func TestEveryPresetRunsToAValidLog(t *testing.T) {
	for _, e := range presets.List() {
		t.Run(e.Name, func(t *testing.T) { preset(t, e.Name) })
	}
}

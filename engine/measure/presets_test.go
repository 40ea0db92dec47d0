package measure

import (
	"testing"

	"escapement/engine/event"
	"escapement/engine/plan"
	"escapement/engine/sim"
	"escapement/presets"
)

func preset(t testing.TB, name string) *event.Log {
	t.Helper()
	b, ok := presets.Read(name)
	if !ok {
		t.Fatalf("no preset %s", name)
	}
	p, err := plan.Decode(b)
	if err != nil {
		t.Fatal(err)
	}
	l, err := sim.Run(p)
	if err != nil {
		t.Fatal(err)
	}
	return l
}

func TestDump(t *testing.T) {
	for _, e := range presets.List() {
		r := Of(preset(t, e.Name), nil)
		t.Logf("%s: %v\n   %s", e.Name, slugs(r), r.Statement)
	}
}

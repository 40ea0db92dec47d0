package sim

import (
	"testing"

	"escapement/engine/plan"
	"escapement/presets"
)

// A player that has played other things plays a program as a fresh machine does,
// forwards and backwards through all presets.
func TestAPlayerKeepsNothingOfTheRunBefore(t *testing.T) {
	var progs []*plan.Program
	var want []uint64
	for _, e := range presets.List() {
		b, _ := presets.Read(e.Name)
		p, err := plan.Decode(b)
		if err != nil {
			t.Fatal(err)
		}
		prog, err := p.Compile()
		if err != nil {
			t.Fatal(err)
		}
		l, err := Play(prog)
		if err != nil {
			t.Fatal(err)
		}
		progs, want = append(progs, prog), append(want, l.Fingerprint())
	}
	var player Player
	check := func(i int) {
		l, err := player.Play(progs[i])
		if err != nil {
			t.Fatal(err)
		}
		if got := l.Fingerprint(); got != want[i] {
			t.Errorf("%s: %016x after another run, %016x alone", presets.List()[i].Name, got, want[i])
		}
	}
	for i := range progs {
		check(i)
	}
	for i := range progs {
		check(len(progs) - 1 - i)
	}
}

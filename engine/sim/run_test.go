package sim

import (
	"errors"
	"strings"
	"testing"

	"escapement/engine/event"
	"escapement/engine/plan"
	"escapement/presets"
)

// Twenty-four hours of a focus at 400/min hold more events than a log may: the run
// stops with the numbers, and does not hang.
func TestTooManyEventsEndInNumbers(t *testing.T) {
	if testing.Short() {
		t.Skip("two million events take seconds")
	}
	p, err := plan.Decode([]byte(`{"format":"escapement-plan/1","span_ms":86400000,"heart":{"foci":[{"site":"rv_apex","rate_bpm":400}]}}`))
	if err != nil {
		t.Fatal(err)
	}
	_, err = Run(p)
	var over *Overrun
	if !errors.As(err, &over) || over.Events < MaxEvents || over.Seconds <= 0 {
		t.Fatalf("got %v, want an overrun", err)
	}
	if !strings.HasPrefix(err.Error(), "stopped after 2000") || !strings.Contains(err.Error(), "up to 2000000; shorten span_ms") {
		t.Errorf("the message is %q", err)
	}
}

// A number changed during the strip acts from its time on, and the change is on
// the record.
func TestChangesAct(t *testing.T) {
	s := play(t, 12000, `"sinus":{"rate_bpm":60}`,
		`{"at_ms":4100,"do":"set","field":"heart.his_purkinje.hv_ms","to":90}`,
		`{"at_ms":8100,"do":"set","field":"heart.av_node.fast.ah_ms","to":null}`)
	hv := func(i int) float64 { h := s.times("his"); return firstVentricular(s, h[i]) - h[i] }
	near(t, "HV before", hv(2), 45, exact)
	near(t, "HV after", hv(5), 90, exact)
	if got := len(s.times("his")); got != 8 {
		t.Errorf("%d His deflections, want 8: none after AH is null at 8.1 s", got)
	}
	n := 0
	for i := range s.Events {
		if s.Events[i].Kind == event.Change {
			n++
		}
	}
	if n != 2 {
		t.Errorf("%d changes on the record, want 2", n)
	}
}

// A ramp of the sinus rate from 60 to 120 over 10 s runs through (60+120)/2 * 10/60
// = 15 cycles.
func TestRampOfTheSinusRate(t *testing.T) {
	s := play(t, 16000, `"sinus":{"rate_bpm":60,"first_ms":1000}`, `{"at_ms":1000,"do":"set","field":"heart.sinus.rate_bpm","to":120,"over_ms":10000}`)
	d := s.times("sinus")
	near(t, "fifteen cycles after the first discharge", d[15], 11000, exact)
	near(t, "cycle after the ramp", d[17]-d[16], 500, exact)
}

// FuzzRun: every plan that the decoder accepts runs to a valid log or is refused
// with diagnoses; nothing panics.
func FuzzRun(f *testing.F) {
	for _, name := range presets.Names() {
		b, _ := presets.Read(name)
		f.Add(b)
	}
	f.Fuzz(func(t *testing.T, data []byte) {
		p, err := plan.Decode(data)
		if err != nil {
			return
		}
		prog, err := p.Compile()
		if err != nil {
			return
		}
		m := New(prog)
		m.Run(5000)
		for _, e := range event.Validate(m.Log()) {
			t.Error(e)
		}
	})
}

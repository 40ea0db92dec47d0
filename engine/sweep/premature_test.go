package sweep

import (
	"math"
	"testing"

	"escapement/engine/event"
	"escapement/engine/sim"
	"escapement/engine/tick"
)

// The coupling counts from the first depolarisation of the site at or after the time,
// in the run of this point: with another sinus rate or seed it is another one.
func TestTheCouplingOfAnExtraStimulusIsMeasuredBack(t *testing.T) {
	g := grid(t, 6000, `"sinus":{"jitter_ms":90}`, `null`, ``,
		`"x":{"premature":"rv_apex","after_ms":2500,"from":300,"to":420,"step":40},"y":{"field":"heart.sinus.rate_bpm","values":[60,75,90]},"seeds":[4,9]`)
	w := g.NewWorker()
	times := map[float64]bool{} // counted only
	for p := range g.Len() {
		for _, seed := range g.Seeds() {
			q, err := w.Plan(p, seed)
			if err != nil {
				t.Fatal(err)
			}
			log, err := sim.Run(q)
			if err != nil {
				t.Fatal(err)
			}
			site, from := log.Site("rv_apex"), tick.Time(0)
			for i := range log.Events {
				e := &log.Events[i]
				if e.Kind == event.Activate && e.Site == site && e.T >= tick.Time(2500*tick.Millisecond) && from == 0 {
					from = e.T
				}
				if e.Kind != event.Stimulus {
					continue
				}
				times[from.MS()] = true
				if got, want := e.T.Sub(from).MS(), g.At(p)[0].Number; math.Abs(got-want) > 0.001 || from == 0 {
					t.Errorf("point %d, seed %d: coupling %v, want %v", p, seed, got, want)
				}
			}
		}
	}
	if len(times) != 6 {
		t.Errorf("%d beats to couple to, want one for each rate and seed", len(times))
	}
}

func TestAnExtraStimulusWithoutABeatIsRefused(t *testing.T) {
	g := grid(t, 3000, still+","+noAV, `null`, ``, `"x":{"premature":"rv_apex","after_ms":1000,"values":[300]}`)
	if c := g.NewWorker().Point(0); c.Refused != errNoBeat.Error() {
		t.Errorf("got %q, want %q", c.Refused, errNoBeat)
	}
}

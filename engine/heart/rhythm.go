package heart

import (
	"fmt"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// AtrialRhythm is what drives the atria besides the sinus node; the zero value is
// nothing. Times are milliseconds.
type AtrialRhythm struct {
	Driver          Driver
	CycleMS         float64 // of flutter; the mean interval at one place in fibrillation
	EndsBelowMS     float64 // flutter: a beat that comes sooner after the last turn ends it; 0 for never
	LeastMS         float64 // fibrillation: the shortest interval, and the refractory period of the atria
	FromMS, UntilMS float64 // UntilMS 0: to the end of the strip
}

// check tells whether the atria can follow the rhythm.
func (r *AtrialRhythm) check(erp Cycled) error {
	switch at := erp.At(tick.MS(r.CycleMS)).MS(); {
	case r.Driver == Reentry && at >= r.CycleMS:
		return &Unmet{"atria.flutter.cycle_ms", fmt.Sprintf("cycle_ms %g is not longer than the refractory period that the atria have at this cycle, %.1f ms", r.CycleMS, at), "lower heart.atria.erp_ms or lengthen the cycle"}
	case r.Driver == Arrivals && r.LeastMS >= r.CycleMS:
		return &Unmet{"atria.fibrillation.shortest_ms", fmt.Sprintf("shortest_ms %g is not shorter than the mean interval cycle_ms %g", r.LeastMS, r.CycleMS), fmt.Sprintf("give shortest_ms under %g", r.CycleMS)}
	}
	return nil
}

// drivers adds the foci of the atrial rhythm, after all others: flutter passes the
// right atrium; in fibrillation each atrial site has arrivals of its own.
func (b *builder) drivers() {
	r := &b.n.Rhythm
	if r.Driver == 0 {
		return
	}
	from, until := tick.Time(tick.MS(r.FromMS)), tick.Time(tick.MS(r.UntilMS))
	for i := range b.h.Sites {
		s := &b.h.Sites[i]
		if s.Tissue != event.Atrium || r.Driver == Reentry && s.Name != "right_atrium" {
			continue
		}
		b.h.Foci = append(b.h.Foci, Focus{Site: event.SiteID(i), Rate: Constant(60000 / r.CycleMS), Protected: r.Driver == Arrivals,
			Driver: r.Driver, From: from, Until: until, EndsBelow: tick.MS(r.EndsBelowMS), Least: tick.MS(r.LeastMS), Mean: tick.MS(r.CycleMS)})
	}
	if r.Driver == Arrivals {
		b.h.Apart.From, b.h.Apart.Until = from, until
		if until == 0 {
			b.h.Apart.Until = tick.Never
		}
	}
}

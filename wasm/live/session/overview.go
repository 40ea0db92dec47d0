package session

import (
	"escapement/engine/event"
	"escapement/engine/tick"
)

// overview is the strip on one line a chamber: milliseconds at which a wave
// began, an impulse was blocked, a stimulus was given.
type overview struct {
	Atrium    []float64 `json:"atrium"`
	Ventricle []float64 `json:"ventricle"`
	Blocks    []float64 `json:"blocks"`
	Stimuli   []float64 `json:"stimuli"`
}

// The overview is a thousand or so pixels wide: marks nearer to each other than a
// four-thousandth of the strip are one.
const overviewMarks = 4000

func (t *timeline) overview() overview {
	o := overview{[]float64{}, []float64{}, []float64{}, []float64{}}
	gap := tick.Dur(t.log.Span) / overviewMarks
	var last [4]tick.Time
	put := func(line int, into *[]float64, at tick.Time) {
		if len(*into) > 0 && at.Sub(last[line]) < gap {
			return
		}
		last[line] = at
		*into = append(*into, at.MS())
	}
	for i := range t.report.Beats {
		b := &t.report.Beats[i]
		if b.Kind == "P" {
			put(0, &o.Atrium, b.T)
			if !b.Conducted && len(b.Blocks) > 0 && !b.Retrograde {
				put(2, &o.Blocks, t.log.At(b.Blocks[0]).T)
			}
		} else {
			put(1, &o.Ventricle, b.T)
		}
	}
	for i := range t.log.Events {
		if e := &t.log.Events[i]; e.Kind == event.Stimulus {
			put(3, &o.Stimuli, e.T)
		}
	}
	return o
}

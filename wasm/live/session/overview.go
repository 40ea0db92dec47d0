package session

import (
	"escapement/engine/event"
	"escapement/engine/tick"
)

// overview is the strip on one line a chamber: milliseconds at which a wave
// began, an impulse was blocked, a stimulus was given. A device's stimuli stand apart
// from those of the plan's interventions, each with the chamber it was meant for.
// Where there are too many beats for a line, Trend has their rates instead.
type overview struct {
	Atrium    []float64 `json:"atrium"`
	Ventricle []float64 `json:"ventricle"`
	Blocks    []float64 `json:"blocks"`
	Stimuli   []float64 `json:"stimuli"`
	PacedA    []float64 `json:"paced_atrium"`
	PacedV    []float64 `json:"paced_ventricle"`
	Lost      []float64 `json:"lost"` // those of the device that did not capture, of both chambers
	Trend     *trend    `json:"trend"`
	Flags     []spot    `json:"flags"`
}

// The overview is a thousand or so pixels wide: marks nearer to each other than a
// four-thousandth of the strip are one.
const overviewMarks = 4000

func (t *sheet) overview() overview {
	o := overview{[]float64{}, []float64{}, []float64{}, []float64{}, []float64{}, []float64{}, []float64{}, t.trend(), t.flags()}
	gap := tick.Dur(t.Log.Span) / overviewMarks
	var last [7]tick.Time
	put := func(line int, into *[]float64, at tick.Time) {
		if len(*into) > 0 && at.Sub(last[line]) < gap {
			return
		}
		last[line] = at
		*into = append(*into, at.MS())
	}
	for i := range t.Measure.Beats {
		b := &t.Measure.Beats[i]
		if b.Kind == "P" {
			put(0, &o.Atrium, b.T)
			if !b.Conducted && len(b.Blocks) > 0 && !b.Retrograde {
				put(2, &o.Blocks, t.Log.At(b.Blocks[0]).T)
			}
		} else {
			put(1, &o.Ventricle, b.T)
		}
	}
	for i := range t.Log.Events {
		e := &t.Log.Events[i]
		if e.Kind != event.Stimulus {
			continue
		}
		switch {
		case e.Rule != event.Timed:
			put(3, &o.Stimuli, e.T)
		case e.Channel == 'A':
			put(4, &o.PacedA, e.T)
		default:
			put(5, &o.PacedV, e.T)
		}
		if e.Rule == event.Timed && !e.Captured {
			put(6, &o.Lost, e.T)
		}
	}
	return o
}

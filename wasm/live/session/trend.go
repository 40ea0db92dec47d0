package session

import (
	"math"

	"escapement/engine/measure"
	"escapement/engine/tick"
)

// trend is the rates of a long strip in parts of equal length.
type trend struct {
	Step      float64 `json:"step_ms"`
	Atrium    rates   `json:"atrium"`
	Ventricle rates   `json:"ventricle"`
	Blocks    []int   `json:"blocks"` // blocked P waves in each part
}

// rates are those of the intervals that end in each part, a minute; 0 where none does.
// Paced is the share of its beats that a stimulus of the device began, in percent.
type rates struct {
	Least []float64 `json:"least"`
	Mean  []float64 `json:"mean"`
	Most  []float64 `json:"most"`
	Paced []int     `json:"paced"`
}

// A line of the overview shows so many beats one by one; from there on it shows rates,
// in so many parts.
const (
	beatsOneByOne = 300
	trendParts    = 720
)

func (t *sheet) trend() *trend {
	n := 0
	for i := range t.Measure.Beats {
		if t.Measure.Beats[i].Kind == "QRS" {
			n++
		}
	}
	if max(n, len(t.Measure.Beats)-n) <= beatsOneByOne {
		return nil
	}
	out := &trend{Step: t.Log.Span.MS() / trendParts, Blocks: make([]int, trendParts)}
	out.Atrium = t.rates("P", func(b *measure.Beat, part int) {
		if !b.Conducted && len(b.Blocks) > 0 && !b.Retrograde {
			out.Blocks[part]++
		}
	})
	out.Ventricle = t.rates("QRS", func(*measure.Beat, int) {})
	return out
}

func (t *sheet) rates(kind string, each func(b *measure.Beat, part int)) rates {
	r := rates{make([]float64, trendParts), make([]float64, trendParts), make([]float64, trendParts), make([]int, trendParts)}
	var sum [trendParts]tick.Dur
	var intervals, beats, paced [trendParts]int
	last := tick.Time(-1)
	for i := range t.Measure.Beats {
		b := &t.Measure.Beats[i]
		if b.Kind != kind {
			continue
		}
		part := min(int(float64(b.T)/float64(t.Log.Span)*trendParts), trendParts-1)
		each(b, part)
		beats[part]++
		if b.Paced {
			paced[part]++
		}
		if d := b.T.Sub(last); last >= 0 && d > 0 {
			bpm := d.BPM()
			if intervals[part] == 0 {
				r.Least[part], r.Most[part] = bpm, bpm
			}
			r.Least[part], r.Most[part] = math.Min(r.Least[part], bpm), math.Max(r.Most[part], bpm)
			sum[part] += d
			intervals[part]++
		}
		last = b.T
	}
	for i := range r.Mean {
		if intervals[i] > 0 {
			r.Mean[i] = tenth((sum[i] / tick.Dur(intervals[i])).BPM())
			r.Least[i], r.Most[i] = tenth(r.Least[i]), tenth(r.Most[i])
		}
		if beats[i] > 0 {
			r.Paced[i] = (100*paced[i] + beats[i]/2) / beats[i]
		}
	}
	return r
}

func tenth(v float64) float64 { return math.Round(v*10) / 10 }

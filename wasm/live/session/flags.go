package session

import (
	"cmp"
	"slices"
	"strings"

	"escapement/engine/event"
	"escapement/engine/measure"
	"escapement/engine/tick"
)

// spot is a place on the strip that a finding rests on.
type spot struct {
	Finding int      `json:"finding"` // place in the answer's findings
	Event   event.ID `json:"event"`
	T       float64  `json:"t_ms"`
	Until   float64  `json:"until_ms"`
	Shape   string   `json:"shape"` // block, pause, premature, device, rhythm
}

// Evidence that lies nearer together than a hundredth of the strip, within these
// limits, is one place; of more places than mostFlags the nearest become one.
const (
	leastApart = 2 * tick.Second
	mostApart  = 15 * tick.Minute
	mostFlags  = 300
)

// shapes tells by a part of its slug what sort of finding it is; the first that fits.
var shapes = [...]struct{ part, shape string }{
	{"premature", "premature"},
	{"pause", "pause"}, {"arrest", "pause"}, {"inhibit", "pause"},
	{"bundle", "rhythm"}, {"first_degree", "rhythm"},
	{"block", "block"}, {"mobitz", "block"}, {"wenckebach", "block"}, {"two_to_one", "block"}, {"dissociation", "block"},
	{"capture", "device"}, {"sensing", "device"}, {"noise", "device"}, {"safety", "device"}, {"switch", "device"},
	{"loop", "device"}, {"synchrony", "device"}, {"fusion", "device"}, {"locked", "device"}, {"crosstalk", "device"},
}

func shapeOf(slug string) string {
	for _, s := range shapes {
		if strings.Contains(slug, s.part) {
			return s.shape
		}
	}
	return "rhythm"
}

// flags lists where the findings are, in order of time. What holds from the beginning
// and is a matter of rhythm has no place; one that begins later has its beginning.
func (t *sheet) flags() []spot {
	for apart := min(max(tick.Dur(t.Log.Span)/100, leastApart), mostApart); ; apart *= 2 {
		out := []spot{}
		for i := range t.Measure.Findings {
			out = append(out, t.places(&t.Measure.Findings[i], i, apart)...)
		}
		if len(out) > mostFlags && apart < tick.Dur(t.Log.Span) {
			continue
		}
		slices.SortStableFunc(out, func(a, b spot) int { return cmp.Compare(a.T, b.T) })
		return out
	}
}

func (t *sheet) places(f *measure.Finding, at int, apart tick.Dur) []spot {
	shape := shapeOf(f.Slug)
	var out []spot
	for _, id := range f.Evidence {
		e := t.Log.At(id)
		if n := len(out); n > 0 && e.T.MS()-out[n-1].Until <= apart.MS() {
			out[n-1].Until = e.T.MS()
			continue
		}
		out = append(out, spot{at, id, e.T.MS(), e.T.MS(), shape})
	}
	if shape == "rhythm" && len(out) > 0 {
		out = out[:1]
		if out[0].T < leastApart.MS() {
			return nil
		}
	}
	return out
}

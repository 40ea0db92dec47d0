package ladder

import (
	"escapement/engine/event"
	"escapement/engine/tick"
)

// A wave that is still spreading takes in activations that start anew (by
// another bundle, from a focus, over an accessory pathway) up to this long after
// its last one. The longest way between neighbouring regions takes about 200 ms
// and no chamber can be activated twice in this time.
const waveGap = 80 * tick.Millisecond

// entry is how an impulse came into a chamber.
type entry uint8

const (
	within entry = iota // from muscle of the same wave
	above               // from the sinus node, or from the bundles
	below               // from the AV node into the atria
	beside              // over an accessory pathway
	born                // a focus or a stimulus in the muscle itself
)

// wave is one depolarisation of the atria or of the ventricles: one P or one QRS.
type wave struct {
	chamber byte
	members []event.ID // in order of time
	entries []entry    // of each member
	top     []bool     // of each member: it belongs to the part that spread from above
}

func (w *wave) first(l *event.Log) *event.Event { return l.At(w.members[0]) }
func (w *wave) last(l *event.Log) *event.Event  { return l.At(w.members[len(w.members)-1]) }

// waves holds the waves of both chambers in order of their starts.
type waves struct {
	all    []wave
	of     []int32 // by event id: index into all, or -1
	member []int32 // by event id: index into members
}

func findWaves(l *event.Log) *waves {
	ws := &waves{of: make([]int32, len(l.Events)+1), member: make([]int32, len(l.Events)+1)}
	var latest [2]int32 // by chamber: A, V
	latest[0], latest[1] = -1, -1
	for i := range l.Events {
		e := &l.Events[i]
		ws.of[e.ID] = -1
		if e.Kind != event.Activate || e.Site < 0 {
			continue
		}
		chamber := l.Sites[e.Site].Chamber()
		if chamber == 0 {
			continue
		}
		c := 0
		if chamber == 'V' {
			c = 1
		}
		how := howEntered(l, e, chamber)
		w := latest[c]
		if how == within {
			w = ws.of[e.Cause]
		}
		if w < 0 || !ws.takes(l, w, e, how) {
			w = int32(len(ws.all))
			ws.all = append(ws.all, wave{chamber: chamber})
		}
		ws.join(l, w, e, how)
		latest[c] = w
	}
	return ws
}

func (ws *waves) takes(l *event.Log, w int32, e *event.Event, how entry) bool {
	v := &ws.all[w]
	for _, id := range v.members {
		if l.At(id).Site == e.Site {
			return false // the site has had its turn: a re-entrant impulse begins a new wave
		}
	}
	return how == within || e.T.Sub(v.last(l).T) <= waveGap
}

func (ws *waves) join(l *event.Log, w int32, e *event.Event, how entry) {
	v := &ws.all[w]
	ws.of[e.ID], ws.member[e.ID] = w, int32(len(v.members))
	top := how == above || how == beside && v.chamber == 'V'
	if from := ws.inside(l, w, e); from != 0 {
		top = v.top[ws.member[from]]
	}
	v.members, v.entries, v.top = append(v.members, e.ID), append(v.entries, how), append(v.top, top)
}

// inside is the member of the wave that an activation came from, through muscle
// or round over the bundles, or 0.
func (ws *waves) inside(l *event.Log, w int32, e *event.Event) event.ID {
	for e != nil && e.Kind == event.Activate && e.Rule == event.Conducted {
		if e = l.At(e.Cause); e != nil && ws.of[e.ID] == w {
			return e.ID
		}
	}
	return 0
}

func howEntered(l *event.Log, e *event.Event, chamber byte) entry {
	if e.Rule != event.Conducted || e.Path < 0 {
		return born
	}
	p := &l.Paths[e.Path]
	switch {
	case p.Tissue == event.Accessory:
		return beside
	case p.Tissue == event.Node || p.Tissue == event.His:
		return below
	}
	if c := l.At(e.Cause); c != nil && c.Kind == event.Activate && c.Site >= 0 && l.Sites[c.Site].Chamber() == chamber {
		return within
	}
	return above
}

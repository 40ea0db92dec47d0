package session

import (
	"slices"

	"escapement/engine/event"
	"escapement/engine/lead"
)

// pressed is the record as it is drawn: a press on a QRS selects the first muscle of
// the ventricles that was depolarised, which reads better than the fascicle that
// brought the impulse there.
func pressed(log *event.Log, rec *lead.Record) *lead.Record {
	if rec == nil {
		return nil
	}
	out := &lead.Record{MV: rec.MV, Waves: slices.Clone(rec.Waves)}
	first := map[event.ID]event.ID{} // by the activation it came from
	for i := range log.Events {
		e := &log.Events[i]
		if e.Kind == event.Activate && log.Sites[e.Site].Tissue == event.Ventricle && first[e.Cause] == 0 {
			first[e.Cause] = e.ID
		}
	}
	for i := range out.Waves {
		w := &out.Waves[i]
		if w.Kind != lead.QRS || len(w.Sources) == 0 || log.Sites[log.At(w.Sources[0]).Site].Tissue == event.Ventricle {
			continue
		}
		best := event.ID(0)
		for _, id := range w.Sources {
			if f := first[id]; f != 0 && (best == 0 || log.At(f).T < log.At(best).T) {
				best = f
			}
		}
		if best != 0 {
			w.Sources = append([]event.ID{best}, w.Sources...)
		}
	}
	return out
}

package field

import (
	"escapement/engine/event"
	"escapement/engine/lead"
	"escapement/engine/tick"
)

// How long after a wave's first source another one still belongs to it. Longer
// than muscle needs to be depolarised from anywhere (about 200 ms for the
// ventricles and 120 for the atria) no source can be part of the same wave.
const (
	ventricularGroup = 200 * tick.Millisecond
	atrialGroup      = 120 * tick.Millisecond
)

// source is an impulse entering muscle from outside.
type source struct {
	id    event.ID
	at    tick.Time
	entry int // index into the part's entries
}

// group is the sources of one wave, in order of time.
type group []source

// groups finds the sources of a chamber's waves. The ventricles' are every
// activation of a fascicle, from above or backwards, and those of a muscle
// region that did not come through muscle or the Purkinje system; the atria's
// are those that did not come through atrial muscle. What does come through
// muscle the field works out itself.
//
// A wave begins with the first source that comes too long after the last wave's
// first one, or at a site that wave has already used. A fascicle that muscle
// itself depolarised begins none: its impulse is part of the wave it comes from,
// however late, and without one there is nothing it could add.
func (c *chamber) groups(log *event.Log) []group {
	entries := c.entriesBySite(log)
	var out []group
	for i := range log.Events {
		e := &log.Events[i]
		if e.Kind != event.Activate || entries[e.Site] < 0 || !c.enters(log, e) {
			continue
		}
		s := source{e.ID, e.T, entries[e.Site]}
		last := len(out) - 1
		switch {
		case last >= 0 && s.at.Sub(out[last][0].at) <= c.group && !out[last].has(s.entry):
			out[last] = append(out[last], s)
		case !fromMuscle(log, e):
			out = append(out, group{s})
		}
	}
	return out
}

func (g group) has(entry int) bool {
	for _, s := range g {
		if s.entry == entry {
			return true
		}
	}
	return false
}

// entriesBySite gives, for each site of the log, the part's entry there or -1.
func (c *chamber) entriesBySite(log *event.Log) []int {
	out := make([]int, len(log.Sites))
	for i := range log.Sites {
		out[i] = -1
		for k := range c.muscle.Part.Entries {
			if c.muscle.Part.Entries[k].Site == log.Sites[i].Name {
				out[i] = k
			}
		}
	}
	return out
}

// enters tells whether an activation brings an impulse into muscle from outside.
func (c *chamber) enters(log *event.Log, e *event.Event) bool {
	if e.Path < 0 {
		return true
	}
	via := log.Paths[e.Path].Tissue
	if c.kind == lead.P {
		return via != event.Atrium
	}
	if log.Sites[e.Site].Tissue == event.Purkinje {
		return true // a fascicle
	}
	return via != event.Ventricle && via != event.Purkinje
}

// fromMuscle tells whether an activation came out of ventricular muscle into the
// Purkinje system.
func fromMuscle(log *event.Log, e *event.Event) bool {
	if e.Path < 0 {
		return false
	}
	entry := log.Paths[e.Path].Entry(e.Dir)
	return log.Sites[entry].Tissue == event.Ventricle && log.Sites[e.Site].Tissue == event.Purkinje
}

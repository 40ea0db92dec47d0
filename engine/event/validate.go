package event

import "fmt"

// faultLimit bounds how many faults [Validate] reports.
const faultLimit = 20

// Validate checks what must hold in every log, whatever made it: ids count up
// from 1, times never run backwards or past the span, causes come first, fields
// fit the kind, an impulse leaves from where its cause was, and no site is
// depolarised inside the refractory period of the time before. It returns all
// faults found, at most twenty.
func Validate(l *Log) []error {
	v := &validator{l: l, until: make([]Event, len(l.Sites))}
	for i := range l.Sites {
		if !plain(l.Sites[i].Name) || l.Sites[i].Tissue == 0 {
			v.fault(0, "site %d has no plain name or no tissue", i)
		}
	}
	for i := range l.Paths {
		p := &l.Paths[i]
		if !plain(p.Name) || p.Tissue == 0 || !v.site(p.From) || !v.site(p.To) {
			v.fault(0, "path %d has no plain name, no tissue or ends nowhere", i)
			return v.faults
		}
	}
	for i := range l.Events {
		if len(v.faults) >= faultLimit {
			break
		}
		v.event(i)
	}
	return v.faults
}

type validator struct {
	l      *Log
	until  []Event // by site: its last activation
	faults []error
}

func (v *validator) fault(id ID, format string, args ...any) {
	v.faults = append(v.faults, fmt.Errorf("event %d: "+format, append([]any{id}, args...)...))
}

func (v *validator) site(s SiteID) bool { return s >= 0 && int(s) < len(v.l.Sites) }
func (v *validator) path(p PathID) bool { return p >= 0 && int(p) < len(v.l.Paths) }

func (v *validator) event(i int) {
	e := &v.l.Events[i]
	if e.ID != ID(i+1) {
		v.fault(e.ID, "stands at place %d", i+1)
	}
	if e.T < 0 || e.T > v.l.Span {
		v.fault(e.ID, "time %v ms lies outside the strip of %v ms", e.T, v.l.Span)
	}
	if i > 0 && e.T < v.l.Events[i-1].T {
		v.fault(e.ID, "time %v ms is before the event ahead of it", e.T)
	}
	if e.Cause < 0 || e.Cause >= e.ID {
		v.fault(e.ID, "cause %d is not an earlier event", e.Cause)
		return
	}
	switch e.Kind {
	case Discharge:
		v.want(e, (e.Rule == Phase4 || e.Rule == Circuit || e.Rule == Arrival) && v.site(e.Site) && e.Path == None)
	case Activate:
		v.activate(e)
	case Block:
		v.block(e)
	case Stimulus:
		v.want(e, (e.Rule == Premature || e.Rule == Train || e.Rule == Timed && e.Field != "") && v.site(e.Site) && e.Path == None)
	case Change:
		v.want(e, e.Rule == Planned && e.Field != "")
	case Sense:
		v.want(e, e.Rule == Signal && v.site(e.Site) && e.Use != 0 && e.Channel != 0 && e.By < e.ID)
	case Window:
		v.window(e)
	case Mode:
		v.want(e, e.Rule == Switched && e.Field != "" && e.To != "")
	default:
		v.fault(e.ID, "kind %d is not known", e.Kind)
	}
}

func (v *validator) want(e *Event, ok bool) bool {
	if !ok {
		v.fault(e.ID, "%s by %s at site %d, path %d does not fit together", e.Kind, e.Rule, e.Site, e.Path)
	}
	return ok
}

func (v *validator) activate(e *Event) {
	if !v.want(e, v.site(e.Site) && e.Cause != 0) {
		return
	}
	cause := v.l.At(e.Cause)
	switch e.Rule {
	case Fired:
		v.want(e, cause.Kind == Discharge && cause.Site == e.Site && cause.T == e.T && e.Path == None)
	case Captured:
		// A device's lead may capture the muscle beside the tissue it lies on.
		v.want(e, cause.Kind == Stimulus && cause.Captured && (cause.Site == e.Site || cause.Rule == Timed) && e.Path == None)
	case Conducted:
		if !v.want(e, v.path(e.Path) && e.Dir != 0) {
			return
		}
		p := &v.l.Paths[e.Path]
		v.want(e, p.Exit(e.Dir) == e.Site && cause.Kind == Activate && cause.Site == p.Entry(e.Dir))
	default:
		v.want(e, false)
	}
	last := &v.until[e.Site]
	if last.ID != 0 && e.T < last.Until {
		v.fault(e.ID, "%s is depolarised at %v ms, refractory until %v ms since event %d", v.l.Sites[e.Site].Name, e.T, last.Until, last.ID)
	}
	if e.Until < e.T {
		v.fault(e.ID, "refractory period ends at %v ms, before it begins", e.Until)
	}
	*last = *e
}

// window checks that a window ends, and by an event at the time it ends.
func (v *validator) window(e *Event) {
	if !v.want(e, e.Rule == Opened && e.Field != "") {
		return
	}
	if e.Until < e.T {
		v.fault(e.ID, "%s ends at %v ms, before it begins", e.Field, e.Until)
	}
	if by := v.l.At(e.By); e.By != 0 && (by == nil || by.T != e.Until) {
		v.fault(e.ID, "%s is ended by event %d, which is not at %v ms", e.Field, e.By, e.Until)
	}
}

func (v *validator) block(e *Event) {
	if e.Depth > 1000 {
		v.fault(e.ID, "depth %d is over 1000", e.Depth)
	}
	switch e.Rule {
	case PathRefractory, Collision, OneWay, Dropped:
		if v.want(e, v.path(e.Path) && e.Dir != 0 && v.site(e.Site)) {
			v.want(e, v.l.Paths[e.Path].Entry(e.Dir) == e.Site && e.Cause != 0)
		}
		if e.Rule == PathRefractory && e.Recovery != Unknown && e.Recovery >= e.Needed {
			v.fault(e.ID, "blocked after %v ms although %v were enough", e.Recovery, e.Needed)
		}
	case SiteRefractory:
		v.want(e, v.site(e.Site) && e.Cause != 0)
	default:
		v.want(e, false)
	}
}

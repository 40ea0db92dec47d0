package contrast

import (
	"escapement/engine/event"
	"escapement/engine/tick"
)

// place is where an event belongs: events of one place are paired among themselves.
type place struct {
	kind    event.Kind
	planned bool // a stimulus of the plan
	dir     event.Dir
	channel byte
	name    string // site, path or timer
}

func placeOf(l *event.Log, e *event.Event) place {
	p := place{kind: e.Kind}
	switch e.Kind {
	case event.Discharge, event.Activate:
		p.name = siteName(l, e.Site)
	case event.Block:
		p.dir = e.Dir
		if e.Path != event.None {
			p.name = l.Paths[e.Path].Name
		}
	case event.Stimulus:
		p.name, p.planned, p.channel = siteName(l, e.Site), e.Rule != event.Timed, e.Channel
	case event.Sense:
		p.name, p.channel = siteName(l, e.Site), e.Channel
	case event.Window, event.Change:
		p.name = e.Field
	}
	return p
}

// siteName is empty for what belongs to no site, as the discharges of a rhythm that
// drives the atria.
func siteName(l *event.Log, id event.SiteID) string {
	if id == event.None {
		return ""
	}
	return l.Sites[id].Name
}

// series is the events of one place on both sides.
type series struct {
	place
	ids [2][]event.ID
	at  [2][]tick.Time
}

// gather sorts the events of both logs by place, places in order of appearance. What
// is later than the shorter strip has no other side and is left out.
func gather(before, after *event.Log) []*series {
	var all []*series
	known := map[place]*series{}
	until := min(before.Span, after.Span)
	for side, l := range [...]*event.Log{before, after} {
		for i := range l.Events {
			e := &l.Events[i]
			if e.T > until {
				break
			}
			p := placeOf(l, e)
			s := known[p]
			if s == nil {
				s = &series{place: p}
				known[p] = s
				all = append(all, s)
			}
			s.ids[side] = append(s.ids[side], e.ID)
			s.at[side] = append(s.at[side], e.T)
		}
	}
	return all
}

// events pairs all events of two logs and keeps what differs.
func events(before, after *event.Log) []Difference {
	out := []Difference{}
	for _, s := range gather(before, after) {
		put := func(b, a int) {
			d := Difference{}
			if b >= 0 {
				d.Before = s.ids[0][b]
			}
			if a >= 0 {
				d.After = s.ids[1][a]
			}
			if d.judge(before, after); d.Sign != Same {
				out = append(out, d)
			}
		}
		if s.planned && len(s.at[0]) == len(s.at[1]) {
			inTurn(len(s.at[0]), put)
			continue
		}
		pair(s.at[0], s.at[1], Reach, put)
	}
	inOrder(out, func(d *Difference) (tick.Time, Sign) { return when(before, after, d.Before, d.After), d.Sign })
	return out
}

// judge says how the two events differ.
func (d *Difference) judge(before, after *event.Log) {
	b, a := before.At(d.Before), after.At(d.After)
	switch {
	case b == nil:
		d.Sign = New
		return
	case a == nil:
		d.Sign = Gone
		return
	}
	d.By = a.T.Sub(b.T)
	if b.Kind == event.Window {
		d.Longer = a.Until.Sub(a.T) - b.Until.Sub(b.T)
	}
	d.What = what(before, after, b, a)
	switch {
	case d.By < 0:
		d.Sign = Earlier
	case d.By > 0:
		d.Sign = Later
	case d.What != "" || d.Longer != 0:
		d.Sign = Altered
	}
}

// what else differs between two events of a pair.
func what(before, after *event.Log, b, a *event.Event) string {
	switch b.Kind {
	case event.Stimulus:
		if b.Captured != a.Captured {
			if a.Captured {
				return "captures"
			}
			return "does not capture"
		}
	case event.Sense:
		if b.Use != a.Use {
			return "was " + b.Use.String() + ", now " + a.Use.String()
		}
	case event.Activate:
		if was, is := way(before, b), way(after, a); was != is {
			return "was reached by " + was + ", now by " + is
		}
	case event.Block:
		if b.Rule != a.Rule {
			return "was " + b.Rule.String() + ", now " + a.Rule.String()
		}
	case event.Change, event.Mode:
		if b.To != a.To || b.Field != a.Field {
			return "was to " + b.To + ", now to " + a.To
		}
	}
	return ""
}

// way is how a site was reached.
func way(l *event.Log, e *event.Event) string {
	if e.Path == event.None {
		if e.Rule == event.Captured {
			return "a stimulus"
		}
		return "its own focus"
	}
	return l.Paths[e.Path].Label
}

package measure

import (
	"testing"

	"escapement/engine/event"
	"escapement/engine/lead"
	"escapement/engine/tick"
	"pgregory.net/rapid"
)

// anyLog draws a log that the validator accepts on a network of any shape: names
// that the package looks for may be missing, paths may join anything, impulses
// may do what no heart does.
func anyLog(rt *rapid.T) *event.Log {
	n := func(lo, hi int, what string) int { return rapid.IntRange(lo, hi).Draw(rt, what) }
	names := []string{"sinus", "right_atrium", "atrial_septum", "his", "av_junction", "a", "b", "c"}
	l := &event.Log{Span: 1 << 30}
	for i := range n(1, len(names), "sites") {
		l.Sites = append(l.Sites, event.Site{Name: names[i], Label: names[i], Tissue: event.Tissue(n(1, 7, "tissue"))})
	}
	for i := range n(0, 10, "paths") {
		end := func() event.SiteID { return event.SiteID(n(0, len(l.Sites)-1, "end")) }
		l.Paths = append(l.Paths, event.Path{Name: string(rune('p' + i)), Tissue: event.Tissue(n(1, 7, "tissue")), From: end(), To: end()})
	}
	until := make([]tick.Time, len(l.Sites))
	var at tick.Time
	for range n(0, 60, "events") {
		at = at.Add(tick.MS(float64(n(0, 900, "later"))))
		grow(l, n, at, until)
	}
	return l
}

// grow adds an event and what must go with it.
func grow(l *event.Log, n func(int, int, string) int, at tick.Time, until []tick.Time) {
	put := func(e event.Event) event.ID {
		e.ID, e.T = event.ID(len(l.Events)+1), at
		l.Events = append(l.Events, e)
		return e.ID
	}
	activate := func(e event.Event) {
		if until[e.Site] <= at {
			e.Kind, e.Until = event.Activate, at.Add(tick.MS(float64(n(0, 300, "refractory"))))
			until[e.Site] = e.Until
			put(e)
		}
	}
	earlier := event.ID(n(0, len(l.Events), "cause"))
	site := event.SiteID(n(0, len(l.Sites)-1, "site"))
	switch n(0, 10, "kind") {
	case 0, 1:
		id := put(event.Event{Kind: event.Discharge, Rule: event.Phase4, Cause: earlier, Site: site, Path: event.None})
		activate(event.Event{Rule: event.Fired, Cause: id, Site: site, Path: event.None})
	case 2:
		id := put(event.Event{Kind: event.Stimulus, Rule: event.Premature, Captured: until[site] <= at, Cause: earlier, Site: site, Path: event.None})
		if l.At(id).Captured {
			activate(event.Event{Rule: event.Captured, Cause: id, Site: site, Path: event.None})
		}
	case 3, 4, 5:
		c := l.At(earlier)
		if c == nil || c.Kind != event.Activate || len(l.Paths) == 0 {
			return
		}
		p, dir := event.PathID(n(0, len(l.Paths)-1, "path")), event.Dir(n(1, 2, "dir"))
		if l.Paths[p].Entry(dir) != c.Site {
			return
		}
		recovery := []tick.Dur{event.Unknown, -5000, 0, 200000}[n(0, 3, "recovery")]
		e := event.Event{Rule: event.Conducted, Cause: earlier, Dir: dir, Path: p, Site: l.Paths[p].Exit(dir), Recovery: recovery, Needed: 230000}
		if n(0, 1, "through") == 1 {
			activate(e)
			return
		}
		e.Kind, e.Site, e.Depth = event.Block, c.Site, uint16(n(0, 1000, "depth"))
		e.Rule = []event.Rule{event.PathRefractory, event.SiteRefractory, event.Collision, event.OneWay, event.Dropped}[n(0, 4, "rule")]
		put(e)
	case 7:
		ch := channelOf(n)
		id := put(event.Event{Kind: event.Stimulus, Rule: event.Timed, Captured: n(0, 1, "captured") == 1 && until[site] <= at, Cause: earlier, Site: site, Path: event.None, Channel: ch,
			Field: []string{"av_delay", "upper_rate", "atrial_escape", "lower_rate", "safety", "offset", "backup"}[n(0, 6, "timer")], Recovery: 100000, Needed: tick.Dur(n(0, 1, "needed")) * 200000, Why: []string{"", "hysteresis"}[n(0, 1, "why")], Outcome: event.Outcome(n(0, 5, "outcome"))})
		if l.At(id).Captured {
			activate(event.Event{Rule: event.Captured, Cause: id, Site: site, Path: event.None})
		}
	case 8:
		put(event.Event{Kind: event.Sense, Rule: event.Signal, Cause: earlier, Site: site, Path: event.None, Channel: channelOf(n), Use: event.Use(n(1, 9, "use")), By: event.ID(n(0, len(l.Events), "by"))})
	case 9:
		put(event.Event{Kind: event.Window, Rule: event.Opened, Cause: earlier, Site: event.None, Path: event.None, Channel: channelOf(n), Until: at.Add(tick.MS(float64(n(0, 900, "long")))),
			Field: []string{"av_delay", "pvarp", "upper_rate", "atrial_escape", "lower_rate", "ventricular_refractory", "crosstalk", "withheld"}[n(0, 7, "name")], Why: []string{"", "hysteresis"}[n(0, 1, "why")]})
	case 10:
		put(event.Event{Kind: event.Mode, Rule: event.Switched, Cause: earlier, Site: event.None, Path: event.None, Field: "DDD", To: "DDI", Why: "x"})
	case 6:
		put(event.Event{Kind: event.Change, Rule: event.Planned, Site: event.None, Path: event.None, Field: "x", To: "1"})
	}
}

func channelOf(n func(int, int, string) int) byte { return "AV"[n(0, 1, "channel")] }

func TestAnyValidLogIsMeasured(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		l := anyLog(rt)
		for _, err := range event.Validate(l) {
			rt.Fatal(err)
		}
		checkReport(rt, l, Of(l, nil))
		rec := &lead.Record{}
		for i := range l.Events {
			kind := lead.WaveKind(1 + i%2)
			rec.Waves = append(rec.Waves, lead.Wave{Kind: kind, Sources: []event.ID{event.ID(i + 1)}, T: l.Events[i].T, Onset: l.Events[i].T, Offset: l.Events[i].T, End: l.Events[i].T})
		}
		checkReport(rt, l, Of(l, rec))
	})
}

package account

import (
	"fmt"
	"strings"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// Line is one line of a listing.
type Line struct {
	ID   event.ID  `json:"id"`
	T    tick.Time `json:"t_us"`
	Text string    `json:"text"`
}

// muscle is a chamber's wave while it spreads: one line that grows.
type muscle struct {
	line  int // index of its line, -1 for none
	began tick.Time
	last  tick.Time
	sites int
	from  string
}

// spread is how long after its beginning a wave in a chamber takes in further
// entries: longer than the slowest spread, shorter than a refractory period.
const spread = 220 * tick.Millisecond

// Listing is the text equivalent of the timeline from one time to another, both
// included: every event in order in a short sentence with its time, except that
// the spread through the muscle of a chamber is one line, and blocks inside
// muscle and at its edges, where a wave only ends, are left out. Windows of a device
// that one event begins share a line.
func Listing(log *event.Log, from, to tick.Time) []Line {
	l := &lister{writer: writer{log: log}, out: []Line{}}
	l.chamber['A'].line, l.chamber['V'].line = -1, -1
	for i := range log.Events {
		e := &log.Events[i]
		if e.T > to {
			break
		}
		if e.T >= from {
			l.event(e)
		}
	}
	for _, c := range []byte{'A', 'V'} {
		l.close(c)
	}
	return l.out
}

type lister struct {
	writer
	out     []Line
	chamber ['V' + 1]muscle
	windows opening
}

// opening is the line that gathers the windows begun by one event at one instant.
type opening struct {
	cause event.ID
	at    tick.Time
	line  int // index of its line
	any   bool
}

func (l *lister) event(e *event.Event) {
	if e.Kind == event.Activate {
		if c := l.log.Sites[e.Site].Chamber(); c != 0 {
			l.wave(c, e)
			return
		}
		if e.Rule != event.Conducted {
			return // its discharge or stimulus has just been told
		}
	}
	if e.Kind == event.Block && l.edge(e) {
		return
	}
	if e.Kind == event.Window {
		l.window(e)
		return
	}
	l.out = append(l.out, Line{e.ID, e.T, clock(e.T) + ": " + l.short(e)})
}

// window adds a window to the line of the event that began it.
func (l *lister) window(e *event.Event) {
	text := fmt.Sprintf("%s to %s", windowLabel(e.Field), clock(e.Until))
	if o := &l.windows; o.any && o.cause == e.Cause && o.at == e.T {
		line := &l.out[o.line]
		line.Text = strings.TrimSuffix(line.Text, ".") + ", " + text + "."
		return
	}
	l.windows = opening{e.Cause, e.T, len(l.out), true}
	l.out = append(l.out, Line{e.ID, e.T, fmt.Sprintf("%s: With %s began: %s.", clock(e.T), l.openedBy(e), text)})
}

// edge tells whether a block is only a wave of muscle ending where another has
// been: in muscle, or between muscle and the conduction system.
func (l *lister) edge(e *event.Event) bool {
	if e.Path < 0 {
		return false
	}
	p := &l.log.Paths[e.Path]
	if p.Tissue == event.Accessory {
		return false
	}
	a, b := l.log.Sites[p.From].Chamber(), l.log.Sites[p.To].Chamber()
	return b == 'V' || a == 'A' && b == 'A'
}

func (l *lister) wave(c byte, e *event.Event) {
	m := &l.chamber[c]
	if m.line >= 0 && e.T.Sub(m.began) <= spread {
		m.last, m.sites = e.T, m.sites+1
		return
	}
	l.close(c)
	*m = muscle{line: len(l.out), began: e.T, last: e.T, sites: 1, from: l.entry(e)}
	l.out = append(l.out, Line{ID: e.ID, T: e.T})
}

// entry says where a wave of muscle began and by what.
func (l *lister) entry(e *event.Event) string {
	switch e.Rule {
	case event.Fired:
		return fmt.Sprintf("begin at %s by its own discharge", l.site(e.Site))
	case event.Captured:
		return fmt.Sprintf("begin at %s by the stimulus", l.site(e.Site))
	}
	return fmt.Sprintf("begin at %s, reached from %s", l.site(e.Site), l.site(l.log.At(e.Cause).Site))
}

// close writes the line of a wave once its extent is known.
func (l *lister) close(c byte) {
	m := &l.chamber[c]
	if m.line < 0 {
		return
	}
	name := "the atria"
	if c == 'V' {
		name = "the ventricles"
	}
	text := fmt.Sprintf("%s: %s %s", clock(m.began), upper(name), m.from)
	if m.sites > 1 {
		text += fmt.Sprintf("; %d places depolarised in %s", m.sites, span(m.last.Sub(m.began)))
	}
	l.out[m.line].Text = text + "."
	m.line = -1
}

// Sentences gives every event of the log in one short sentence, in the log's order.
func Sentences(log *event.Log) []string {
	w := newWriter(log)
	out := make([]string, len(log.Events))
	for i := range log.Events {
		out[i] = w.short(&log.Events[i])
	}
	return out
}

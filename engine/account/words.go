package account

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// span writes a duration: whole milliseconds from ten on, one decimal below,
// seconds from ten seconds on.
func span(d tick.Dur) string {
	d = max(d, -d)
	switch ms := d.MS(); {
	case ms >= 9999.5:
		return strconv.FormatFloat(ms/1000, 'f', 1, 64) + " s"
	case ms >= 9.95:
		return strconv.FormatFloat(math.Round(ms), 'f', 0, 64) + " ms"
	case ms >= 0.05:
		return strings.TrimSuffix(strconv.FormatFloat(ms, 'f', 1, 64), ".0") + " ms"
	case d > 0:
		return "under 0.1 ms"
	}
	return "0 ms"
}

// clock writes an instant in seconds from the start of the strip.
func clock(t tick.Time) string { return strconv.FormatFloat(t.Seconds(), 'f', 3, 64) + " s" }

// site names a site with its article.
func (w *writer) site(s event.SiteID) string {
	if s < 0 || int(s) >= len(w.log.Sites) {
		return "an unnamed place"
	}
	return "the " + label(w.log.Sites[s].Label, w.log.Sites[s].Name)
}

// path names a path: its label, turned so that it reads in a sentence.
func (w *writer) path(p event.PathID) string {
	if p < 0 || int(p) >= len(w.log.Paths) {
		return "an unnamed path"
	}
	path := &w.log.Paths[p]
	l := label(path.Label, path.Name)
	if from, to, ok := strings.Cut(l, " to "); ok {
		return "the way from the " + from + " to the " + to
	}
	if whole, part, ok := strings.Cut(l, ", "); ok {
		return "the " + part + " of the " + whole
	}
	return "the " + l
}

// label falls back on the stable name.
func label(l, name string) string {
	if l == "" {
		l = name
	}
	return strings.ReplaceAll(l, "_", " ")
}

func upper(s string) string {
	if s == "" {
		return s
	}
	return strings.ToUpper(s[:1]) + s[1:]
}

// way says the direction where it has a name: in muscle it has none.
func (w *writer) way(e *event.Event) string {
	if e.Path < 0 {
		return ""
	}
	switch w.log.Paths[e.Path].Tissue {
	case event.Atrium, event.Ventricle:
		return ""
	}
	if e.Dir == event.Up {
		return ", going backwards"
	}
	return ""
}

// began names the impulse an event belongs to by its origin.
func (w *writer) began(id event.ID) string {
	o := w.log.Origin(id)
	switch {
	case o == nil:
		return "an impulse of unknown origin"
	case o.Kind == event.Discharge && o.Rule == event.Circuit:
		return fmt.Sprintf("the impulse of the flutter circuit (%s)", clock(o.T))
	case o.Kind == event.Discharge && o.Rule == event.Arrival:
		return fmt.Sprintf("the impulse of a wave of fibrillation at %s (%s)", w.site(o.Site), clock(o.T))
	case o.Kind == event.Discharge:
		return fmt.Sprintf("the impulse of %s (%s)", w.site(o.Site), clock(o.T))
	case o.Kind == event.Stimulus && o.Rule == event.Timed:
		return fmt.Sprintf("the impulse of the %s stimulus (%s)", chamber(o.Channel), clock(o.T))
	case o.Kind == event.Stimulus:
		return fmt.Sprintf("the impulse of the stimulus at %s (%s)", w.site(o.Site), clock(o.T))
	}
	return "an impulse from before"
}

// short is an event in one sentence.
func (w *writer) short(e *event.Event) string {
	switch e.Kind {
	case event.Discharge:
		switch e.Rule {
		case event.Circuit:
			return fmt.Sprintf("The flutter circuit passed %s.", w.site(e.Site))
		case event.Arrival:
			return fmt.Sprintf("A wave of fibrillation arrived at %s.", w.site(e.Site))
		}
		return upper(w.site(e.Site)) + " discharged by itself."
	case event.Activate:
		switch e.Rule {
		case event.Fired:
			return upper(w.site(e.Site)) + " was depolarised by its own discharge."
		case event.Captured:
			return upper(w.site(e.Site)) + " was depolarised by the stimulus."
		}
		c := w.log.At(e.Cause)
		return fmt.Sprintf("The impulse reached %s %s after %s%s.", w.site(e.Site), span(e.T.Sub(c.T)), w.site(c.Site), w.way(e))
	case event.Block:
		return w.shortBlock(e)
	case event.Stimulus:
		if e.Rule == event.Timed {
			return w.shortPacing(e)
		}
		if e.Captured {
			return fmt.Sprintf("A stimulus at %s captured.", w.site(e.Site))
		}
		return fmt.Sprintf("A stimulus at %s did not capture.", w.site(e.Site))
	}
	return w.shortDevice(e)
}

func (w *writer) shortBlock(e *event.Event) string {
	where := w.path(e.Path)
	if e.Path < 0 {
		where = w.site(e.Site)
	}
	switch e.Rule {
	case event.Collision:
		return fmt.Sprintf("Two impulses met in %s and both ended.", where)
	case event.OneWay:
		return fmt.Sprintf("The impulse stopped: %s does not conduct this way.", where)
	case event.Dropped:
		return fmt.Sprintf("The impulse was dropped in %s by a planned pattern.", where)
	case event.SiteRefractory:
		end := e.Site
		if e.Path >= 0 {
			end = w.log.Paths[e.Path].Exit(e.Dir)
		}
		return fmt.Sprintf("The impulse stopped: %s was still refractory%s.", w.site(end), shortBy(e))
	}
	return fmt.Sprintf("The impulse was blocked in %s%s%s.", where, shortBy(e), w.way(e))
}

func shortBy(e *event.Event) string {
	if m := e.MissedBy(); m > 0 && e.Recovery >= 0 {
		return ", " + span(m) + " short"
	}
	return ""
}

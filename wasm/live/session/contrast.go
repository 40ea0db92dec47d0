package session

import (
	"bytes"
	"fmt"
	"math"
	"slices"

	"escapement/engine/contrast"
	"escapement/engine/event"
	"escapement/engine/scene"
	"escapement/engine/tick"
)

type contrastReply struct {
	Title     string         `json:"title"` // of the plan before
	Statement string         `json:"statement"`
	After     string         `json:"after"` // title of the present one
	Shared    float64        `json:"shared_ms"`
	Rows      []contrast.Row `json:"rows"`
	Events    eventCount     `json:"events"`
	First     event.ID       `json:"first"` // where the two part: an event of the present timeline, or of the one before; 0 if nowhere
}

// eventCount tells how many events of every kind differ.
type eventCount struct {
	Gone    int `json:"gone"`
	New     int `json:"new"`
	Moved   int `json:"moved"`
	Altered int `json:"altered"`
}

// known is the timeline of a plan: computed, or one of those at hand.
func (s *Session) known(file []byte) (*sheet, error) {
	for _, t := range [...]*sheet{s.current, s.before} {
		if t != nil && bytes.Equal(t.file, file) {
			return t, nil
		}
	}
	return s.run(file)
}

// keep holds the timeline of a plan to compare with; none where there is no plan. What
// is wrong with it is told, and there is no comparison.
func (s *Session) keep(file []byte) (doubt []string) {
	if len(file) == 0 || bytes.Equal(file, none) {
		s.before = nil
		return nil
	}
	t, err := s.known(file)
	if err != nil {
		t, doubt = nil, []string{"The plan before cannot be computed: " + err.Error()}
	}
	s.before = t
	return doubt
}

// compared is how two timelines differ, and what of it every drawing needs.
type compared struct {
	*contrast.Contrast
	gone, fresh []event.ID // events without a partner, in order
	links       []scene.Link
}

// contrast compares the two timelines, once.
func (s *Session) contrast() *compared {
	if s.differs != nil {
		return s.differs
	}
	c := &compared{Contrast: contrast.Of(s.before.Side(), s.current.Side())}
	for i := range c.Events {
		switch d := &c.Events[i]; d.Sign {
		case contrast.Gone:
			c.gone = append(c.gone, d.Before)
		case contrast.New:
			c.fresh = append(c.fresh, d.After)
		}
	}
	slices.Sort(c.gone)
	slices.Sort(c.fresh)
	for i := range c.Beats {
		b := &c.Beats[i]
		c.links = append(c.links, scene.Link{Channel: b.Channel, Before: b.Before, After: b.After, T0: b.T0, T1: b.T1, Altered: b.What != ""})
	}
	s.differs = c
	return c
}

func (s *Session) contrasted() []byte {
	if s.current == nil || s.before == nil {
		return none
	}
	c := s.contrast()
	r := contrastReply{Title: s.before.Plan.Title, Statement: s.before.Measure.Statement, After: s.current.Plan.Title, Shared: c.Shared.MS(), Rows: c.Rows}
	for i := range c.Events {
		d := &c.Events[i]
		if r.First == 0 {
			if r.First = d.After; r.First == 0 {
				r.First = -d.Before
			}
		}
		switch d.Sign {
		case contrast.Gone:
			r.Events.Gone++
		case contrast.New:
			r.Events.New++
		case contrast.Altered:
			r.Events.Altered++
		default:
			r.Events.Moved++
		}
	}
	return encode(r)
}

// against says how an event differs from its partner in the other timeline.
func (s *Session) against(id event.ID) string {
	if s.before == nil {
		return ""
	}
	for _, d := range s.contrast().Events {
		if id > 0 && d.After != id || id < 0 && d.Before != -id {
			continue
		}
		switch {
		case d.Sign == contrast.New:
			return "It has no counterpart before."
		case d.Sign == contrast.Gone:
			return "It has no counterpart after."
		}
		return pairText(&d, id < 0)
	}
	return "It is the same before and after."
}

func pairText(d *contrast.Difference, before bool) string {
	text := ""
	switch {
	case d.By > 0:
		text = fmt.Sprintf("It comes %s ms later after the change", short(d.By))
	case d.By < 0:
		text = fmt.Sprintf("It comes %s ms earlier after the change", short(-d.By))
	default:
		text = "It comes at the same time before and after"
	}
	if before && d.By != 0 {
		text = "Before the change. " + text
	}
	switch {
	case d.Longer > 0:
		text += fmt.Sprintf(", and lasts %s ms longer", short(d.Longer))
	case d.Longer < 0:
		text += fmt.Sprintf(", and is %s ms shorter", short(-d.Longer))
	}
	if d.What != "" {
		text += ", and " + d.What
	}
	return text + "."
}

// short writes milliseconds with a decimal where less than ten of them are told.
func short(d tick.Dur) string {
	if d.MS() < 10 {
		return fmt.Sprint(math.Round(d.MS()*10) / 10)
	}
	return fmt.Sprintf("%.0f", d.MS())
}

package handle

import (
	"fmt"
	"sort"
	"strings"

	"escapement/engine/event"
	"escapement/engine/pacer"
	"escapement/engine/plan"
	"escapement/engine/tick"
)

// settings are the values of a plan over time: a planned change of a number hands its
// rule from the number to the change.
type settings struct {
	p       *plan.Plan
	device  *pacer.Settings
	changes []change
	focus   map[event.SiteID]*focus
	sites   []event.Site
}

type change struct {
	path  string
	t     tick.Time
	over  tick.Dur
	to    float64
	place int // in the plan's list of interventions
}

type focus struct {
	path      string // up to the name of the field
	first     float64
	overdrive bool
	twice     bool // another one at the same site: the record does not tell them apart
}

func newSettings(p *plan.Plan, device *plan.Device, log *event.Log) settings {
	s := settings{p: p, focus: map[event.SiteID]*focus{}, sites: log.Sites}
	if device != nil {
		s.device = &device.Settings
	}
	for i, it := range p.Interventions {
		if it["do"].Text == "set" {
			s.changes = append(s.changes, change{it["field"].Text, tick.Time(tick.MS(it["at_ms"].Number)), tick.MS(it["over_ms"].Number), it["to"].Number, i})
		}
	}
	sort.SliceStable(s.changes, func(i, j int) bool { return s.changes[i].t < s.changes[j].t })
	s.add(log.Site("sinus"), "heart.sinus.", s.or("heart.sinus.first_ms"), s.or("heart.sinus.overdrive") > 0)
	for i, it := range p.Foci {
		s.add(log.Site(it["site"].Text), fmt.Sprintf("heart.foci[%d].", i), it["first_ms"].Number, it["overdrive"].Number > 0)
	}
	return s
}

func (s *settings) add(site event.SiteID, path string, first float64, overdrive bool) {
	if site == event.None {
		return
	}
	if old := s.focus[site]; old != nil {
		old.twice = true
		return
	}
	s.focus[site] = &focus{path: path, first: first, overdrive: overdrive}
}

// or is the value at a path or its default.
func (s *settings) or(path string) float64 {
	var list int
	var name string
	items := s.p.Foci
	n, _ := fmt.Sscanf(path, "heart.foci[%d].%s", &list, &name)
	if n < 2 {
		n, _ = fmt.Sscanf(path, "heart.pathways[%d].%s", &list, &name)
		items = s.p.Pathways
	}
	if n == 2 && list < len(items) {
		if v, ok := items[list][name]; ok {
			return v.Number
		}
		if f, ok := plan.FieldAt(path); ok && f.Default != nil {
			return *f.Default
		}
	}
	return s.p.Or(path, 0)
}

// full is a path in the plan: those of the device are given without their stem.
func full(path string) string {
	if strings.HasPrefix(path, "heart.") {
		return path
	}
	return "pacemaker." + path
}

// at is the value in force at a time, with what to change to change it. Its per is
// left to the caller.
func (s *settings) at(path string, t tick.Time) rule {
	path = full(path)
	f, _ := plan.FieldAt(path)
	r := rule{term{path: path}, f.Unit, s.or(path), f.Min, f.Max}
	for i := range s.changes {
		if c := &s.changes[i]; c.path == path && c.t <= t {
			r.path, r.value = s.item(c.place, "to"), c.to
		}
	}
	return r
}

// rate is a rate that sets a span of one interval.
func (s *settings) rate(path string, t tick.Time) rule {
	r := s.at(path, t)
	if r.per = 1; r.value <= 0 {
		return rule{}
	}
	return r
}

// between finds the one change of a value within a stretch of time.
func (s *settings) between(path string, from, to tick.Time) (tick.Time, bool) {
	for i := range s.changes {
		if c := &s.changes[i]; c.path == path && from < c.t && c.t < to {
			return c.t, true
		}
	}
	return 0, false
}

// ramps tells whether a value moves within a stretch of time, or steps more than once.
func (s *settings) ramps(path string, from, to tick.Time) bool {
	steps := 0
	for i := range s.changes {
		c := &s.changes[i]
		if c.path != path || c.t >= to {
			continue
		}
		if c.over > 0 && c.t.Add(c.over) > from {
			return true
		}
		if c.t > from {
			steps++
		}
	}
	return steps > 1
}

func (s *settings) item(place int, name string) string {
	return fmt.Sprintf("interventions[%d].%s", place, name)
}

func (s *settings) listed(name string, place int) string { return fmt.Sprintf("%s[%d]", name, place) }

func (s *settings) min(path string) float64 {
	f, _ := plan.FieldAt(path)
	return f.Min
}

func (s *settings) max(path string) float64 {
	f, _ := plan.FieldAt(path)
	return f.Max
}

// label names a value so that it needs nothing around it.
func (s *settings) label(path, own string) string {
	var place int
	var name string
	switch {
	case strings.HasPrefix(path, "heart.foci["):
		if n, _ := fmt.Sscanf(path, "heart.foci[%d].%s", &place, &name); n == 2 && place < len(s.p.Foci) {
			for i := range s.sites {
				if s.sites[i].Name == s.p.Foci[place]["site"].Text {
					return s.sites[i].Label + " " + own
				}
			}
		}
	case strings.HasPrefix(path, "heart.pathways["):
		if n, _ := fmt.Sscanf(path, "heart.pathways[%d].%s", &place, &name); n == 2 && len(s.p.Pathways) > 1 {
			return fmt.Sprintf("accessory pathway %d, %s", place+1, own)
		}
		return "accessory pathway, " + own
	case strings.HasPrefix(path, "interventions["):
		if n, _ := fmt.Sscanf(path, "interventions[%d].%s", &place, &name); n != 2 || place >= len(s.p.Interventions) {
			return own
		}
		it := s.p.Interventions[place]
		switch {
		case name == "to":
			f, _ := plan.FieldAt(it["field"].Text)
			return s.label(it["field"].Text, f.Label)
		case name == "at_ms" && it["do"].Text == "train":
			return "train at"
		case name == "at_ms":
			return "stimulus at"
		case name == "cycle_ms":
			return "train cycle"
		}
		return "coupling"
	case path == "heart.sinus.first_ms":
		return "first sinus discharge"
	case strings.Contains(path, ".hysteresis.") || strings.Contains(path, ".night.") || strings.Contains(path, ".magnet."):
		return own
	}
	return own
}

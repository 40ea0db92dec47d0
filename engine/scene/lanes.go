package scene

import (
	"math"
	"slices"
	"strings"

	"escapement/engine/event"
	"escapement/engine/lead"
	"escapement/engine/tick"
)

// Sampled is a lane of samples other than a lead: an electrogram from within the
// heart, or the action potential of a site.
type Sampled struct {
	Name    string    // the lane's: "egm:HISd", "membrane:his"
	Label   string    // for the margin
	MV      []float32 // at the leads' sampling times
	MMPerMV float64
	ClipMM  float64 // nothing is drawn further from zero, as recorders do it; 0 for no limit
	Levels  []Level // potentials marked by a line through the lane
	Arrows  []Arrow
}

// Level is a potential that a line through the lane marks.
type Level struct {
	MV   float64
	Text string // in the margin; may be empty
}

// Arrow marks on a signal an impulse that came and found the site refractory.
type Arrow struct {
	T     tick.Time
	Event event.ID
}

// lanes sorts out which lanes there are, from top to bottom. rest names them, and
// rows belong, in order, to those of rest that are signals. Rows of a page of twelve leads
// come first and stand for the leads of Options.
func (s *sheet) lanes(page []row) (rows []row, rest []string) {
	names := s.o.Lanes
	if names == nil {
		for _, n := range s.o.Leads {
			names = append(names, "lead:"+n.String())
		}
		names = append(names, "axis", "ladder", "device")
	}
	rows = page
	for range page {
		rest = append(rest, "lead:")
	}
	seen := map[string]bool{}
	for _, name := range names {
		if seen[name] {
			continue
		}
		seen[name] = true
		kind, which, _ := strings.Cut(name, ":")
		switch {
		case kind == "lead" && page == nil && s.in.Record != nil:
			if n, ok := lead.Parse(which); ok {
				rows, rest = append(rows, row{parts: []segment{s.lead(n, s.o.From, s.o.To)}}), append(rest, name)
			}
		case name == "axis", name == "ladder" && s.in.Diagram != nil,
			name == "device" && s.in.Diagram != nil && s.in.Diagram.Device != nil && !s.o.NoDevice:
			rest = append(rest, name)
		default:
			if i := slices.IndexFunc(s.in.Signals, func(g Sampled) bool { return g.Name == name }); i >= 0 {
				g := &s.in.Signals[i]
				part := segment{name: g.Label, mv: g.MV, gain: g.MMPerMV, clip: g.ClipMM, from: s.o.From, to: s.o.To}
				rows, rest = append(rows, row{parts: []segment{part}, signal: g}), append(rest, name)
			}
		}
	}
	for i := range rows {
		rows[i].measure(&s.o, s.in.Extents)
	}
	if s.o.Pulse {
		s.pulse(rows)
	}
	return rows, rest
}

// has tells whether a lane that is no signal is asked for.
func (o *Options) has(lane string) bool { return o.Lanes == nil || slices.Contains(o.Lanes, lane) }

// tiersOf is the height of the ladder in tiers; 0 where none is drawn.
func tiersOf(in *Input, o *Options) float64 {
	if in.Diagram == nil || !o.has("ladder") {
		return 0
	}
	return in.Diagram.Height()
}

// pulse makes room for the pulse of 1 mV: where no lane of leads is high enough for it,
// the highest of them becomes so.
func (s *sheet) pulse(rows []row) {
	best := -1
	for i := range rows {
		r := &rows[i]
		if r.signal == nil && (best < 0 || r.up+r.down > rows[best].up+rows[best].down) {
			best = i
		}
	}
	if best < 0 {
		return
	}
	if short := math.Ceil(s.o.MMPerMV + pulseEdge - rows[best].up - rows[best].down); short > 0 {
		rows[best].up += short
	}
}

// alike is how many of the next lanes are rows of one kind that stand together.
func alike(rows []row, rest []string) int {
	n := 0
	for n < len(rows) && n < len(rest) && strings.Contains(rest[n], ":") && (rows[n].signal == nil) == (rows[0].signal == nil) {
		n++
	}
	return n
}

func (s *sheet) lead(n lead.Name, from, to tick.Time) segment {
	return segment{name: n.String(), mv: s.in.Record.MV[n], gain: s.o.MMPerMV, from: from, to: to}
}

// measure finds how much room a row's signals need above and below zero: by the
// whole record, so that it does not change as the window moves.
func (r *row) measure(o *Options, known *Extents) {
	for _, p := range r.parts {
		if r.signal == nil {
			r.up, r.down = max(r.up, 0.5*p.gain), max(r.down, 0.3*p.gain)
		}
		low, high := known.of(p.mv)
		if p.clip > 0 {
			low, high = max(low, -p.clip/p.gain), min(high, p.clip/p.gain)
		}
		r.up, r.down = max(r.up, high*p.gain), max(r.down, -low*p.gain)
	}
	r.up, r.down = math.Ceil(r.up+0.5), math.Ceil(r.down+0.5)
	if len(r.parts) > 1 {
		r.up += LaneLabel.height(o.FontMM) // names stand over the traces
	}
	if short := 1.4*o.FontMM - r.up - r.down; short > 0 {
		r.up, r.down = r.up+short/2, r.down+short/2
	}
}

// closer takes [Options.Closer] away between rows: of each lane the same share of
// what it has over what its name needs. The first row of all keeps its room above and
// the last one below, so that nothing leaves the sheet.
func (s *sheet) closer(rows []row) {
	if s.o.Closer <= 0 || len(rows) < 2 {
		return
	}
	least := 0.7 * s.o.FontMM
	spare := 0.0
	each := func(f func(v *float64)) {
		for i := range rows {
			if i > 0 {
				f(&rows[i].up)
			}
			if i < len(rows)-1 {
				f(&rows[i].down)
			}
		}
	}
	each(func(v *float64) { spare += max(*v-least, 0) })
	if spare == 0 {
		return
	}
	share := min(s.o.Closer/spare, 1)
	each(func(v *float64) {
		if *v > least {
			*v = max(math.Floor(*v-share*(*v-least)), math.Ceil(least)) // whole, for zero lines on the paper grid
		}
	})
}

// scales names the scale of everything on the sheet that has one.
func (s *sheet) scales() string {
	text := trim(s.o.MMPerS) + " mm/s"
	if s.in.Record != nil && slices.ContainsFunc(s.Lanes, func(l Lane) bool { return strings.HasPrefix(l.Name, "lead:") }) {
		text += ", " + trim(s.o.MMPerMV) + " mm/mV"
	}
	shown := func(g *Sampled) bool {
		return slices.ContainsFunc(s.Lanes, func(l Lane) bool { return l.Name == g.Name })
	}
	return text + scalesOf(s.in.Signals, shown) + ". Numbers in ms."
}

// scalesOf names the scales of signals, those of one scale together.
func scalesOf(signals []Sampled, shown func(*Sampled) bool) string {
	type group struct{ labels, scale string }
	var groups []group
	for i := range signals {
		g := &signals[i]
		if !shown(g) {
			continue
		}
		at := slices.IndexFunc(groups, func(q group) bool { return q.scale == g.scale() })
		if at < 0 {
			groups = append(groups, group{g.Label, g.scale()})
		} else {
			groups[at].labels += ", " + g.Label
		}
	}
	text := ""
	for _, g := range groups {
		text += "; " + g.labels + " " + g.scale
	}
	return text
}

// scale is the lane's own scale in words.
func (g *Sampled) scale() string { return trim(g.MMPerMV) + " mm/mV" }

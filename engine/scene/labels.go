package scene

import (
	"sort"
	"strings"

	"escapement/engine/ladder"
	"escapement/engine/tick"
)

// label is something to be named, with what it takes to name it. Labels are
// placed in order of priority; each tries its candidates and is left out if none
// is free, so at small scales the less important ones go first.
type label struct {
	priority int
	t        tick.Time
	measure  ladder.Measure // 0 for the name of a block
	put      func() bool
	from, to int // its marks; none where it had no room
}

func (r *rungs) labels() {
	var all []label
	for i := range r.d.Dims {
		if d := &r.d.Dims[i]; d.T1 >= r.o.From && d.T0 <= r.o.To {
			all = append(all, label{priority: d.Priority, t: d.T0, measure: d.Measure, put: func() bool { return r.dim(d) }})
		}
	}
	for i := range r.d.Marks {
		m := &r.d.Marks[i]
		if m.Sign == ladder.Bar && r.inside(m.T) && !m.Up && (m.Label != "" || m.Missed != 0) {
			all = append(all, label{priority: barPriority, t: m.T, put: func() bool { return r.bar(m) }})
		}
	}
	sort.SliceStable(all, func(i, j int) bool {
		if all[i].priority != all[j].priority {
			return all[i].priority > all[j].priority
		}
		return all[i].t < all[j].t
	})
	for i := range all {
		all[i].from = len(r.Marks)
		all[i].put()
		all[i].to = len(r.Marks)
	}
	r.thin(all)
	r.unname()
}

// thin takes back the routine numbers of every beat (PR, AH, HV, HA, node) where
// fewer than three in five had room: the few that are left by chance would say
// less than none.
func (r *rungs) thin(all []label) {
	var tried, placed [ladder.Escape + 1]int
	for i := range all {
		tried[all[i].measure]++
		if all[i].to > all[i].from {
			placed[all[i].measure]++
		}
	}
	if len(all) == 0 {
		return
	}
	kept := r.Marks[:all[0].from]
	for i := range all {
		l := &all[i]
		switch l.measure {
		case ladder.PR, ladder.AH, ladder.HV, ladder.NodeIn, ladder.HA, ladder.NodeUp:
			if 5*placed[l.measure] < 3*tried[l.measure] {
				continue
			}
		}
		kept = append(kept, r.Marks[l.from:l.to]...)
	}
	r.Marks = kept
}

// unname takes away the names of rows in which no number had room.
func (r *rungs) unname() {
	for row, y := range r.rows {
		if r.named[row] == 0 {
			continue
		}
		name, used := -1, false
		for i := range r.Marks {
			switch m := &r.Marks[i]; {
			case m.Y < y || m.Y > y+r.rowH:
			case m.Class == TierLabel:
				name = i
			case m.Class == Dim:
				used = true
			}
		}
		if name >= 0 && !used {
			r.Marks = append(r.Marks[:name], r.Marks[name+1:]...)
		}
	}
}

// barPriority is that of the name of a block among the priorities of package
// ladder. A block on the way up is not named: the tier and the stroke say enough.
const barPriority = 85

// bar names the part that blocked and by how much the impulse was too early.
func (r *rungs) bar(m *ladder.Mark) bool {
	var texts []string
	if m.Missed > 0 {
		texts = append(texts, strings.TrimSpace(m.Label+" "+ms(m.Missed)+" early"))
	}
	if m.Label != "" {
		texts = append(texts, m.Label)
	}
	x, y, h := r.Axis.X(m.T), r.y(m.Y), BlockLabel.height(r.o.FontMM)
	sides := [...]Anchor{Start, End}
	if m.Branch == ladder.Left {
		sides = [...]Anchor{End, Start}
	}
	for _, text := range texts {
		for _, side := range sides {
			dx := barSide + 0.6
			if side == End {
				dx = -dx
			}
			for _, dy := range [...]float64{0.35, 1.1, -0.5, 1.6, -1} {
				t := Mark{Shape: Text, Class: BlockLabel, X: x + dx, Y: y + dy*h, Text: text, Anchor: side, Event: m.Event}
				if r.inWindow(&t) && r.place(t) {
					return true
				}
			}
		}
	}
	return false
}

package ladder

import (
	"fmt"
	"strings"
)

// The text form is for tests and for reading: one stroke, mark or interval a
// line, times in milliseconds, heights in units.
//
//	stroke 660 0.75 -> 718 1.65 atrium arrived e4
//	bar 1420 1.95 av_node missed=16 e17
//	PR 660-860 80 e12
//	window pvarp 510-760 250 row0 ignores p30 e15
//	marker 360 AS e5

var (
	branchNames  = [...]string{Left: " left", Right: " right", Slow: " slow"}
	endNames     = [...]string{Arrived: "arrived", Blocked: "blocked", Collided: "collided"}
	signNames    = [...]string{Focus: "focus", Stimulus: "stimulus", Capture: "capture", Bar: "bar", Tail: "tail"}
	measureNames = [...]string{PP: "PP", RR: "RR", PR: "PR", VA: "VA", AH: "AH", HV: "HV", HA: "HA", NodeUp: "node up", NodeIn: "node", Escape: "escape"}
)

// String is the short name of the measure, as it stands on drawings.
func (m Measure) String() string { return measureNames[m] }

// Text writes the diagram in its text form.
func (d *Diagram) Text() string {
	var b strings.Builder
	for i := range d.Strokes {
		s := &d.Strokes[i]
		fmt.Fprintf(&b, "stroke %v %.2f -> %v %.2f %s%s %s e%d\n", s.T0, s.Y0, s.T1, s.Y1, s.Tissue, branchNames[s.Branch], endNames[s.End], s.Event)
	}
	for i := range d.Marks {
		m := &d.Marks[i]
		fmt.Fprintf(&b, "%s %v %.2f %s%s", signNames[m.Sign], m.T, m.Y, m.Tissue, branchNames[m.Branch])
		if m.Until != 0 {
			fmt.Fprintf(&b, " until=%v", m.Until)
		}
		if m.Label != "" {
			fmt.Fprintf(&b, " %s", m.Label)
		}
		if m.Missed != 0 {
			fmt.Fprintf(&b, " missed=%v", m.Missed)
		}
		fmt.Fprintf(&b, " e%d\n", m.Event)
	}
	for i := range d.Dims {
		m := &d.Dims[i]
		fmt.Fprintf(&b, "%s %v-%v %v p%d e%d\n", m.Measure, m.T0, m.T1, m.T1.Sub(m.T0), m.Priority, m.Event)
	}
	if d.Device != nil {
		d.Device.text(&b)
	}
	return b.String()
}

var hearingNames = [hearings]string{Deaf: "deaf", Ignores: "ignores", Watches: "watches", Timer: "timer"}

func (d *Device) text(b *strings.Builder) {
	for i := range d.Windows {
		w := &d.Windows[i]
		fmt.Fprintf(b, "window %s %v-%v %v row%d %s p%d", w.Name, w.T0, w.T1, w.T1.Sub(w.T0), w.Row, hearingNames[w.Hearing], w.Priority)
		switch {
		case w.Ended:
			b.WriteString(" ended")
		case w.Cut:
			b.WriteString(" cut")
		}
		if w.Held != 0 {
			fmt.Fprintf(b, " held=%v", w.Held)
		}
		for _, h := range w.Hits {
			fmt.Fprintf(b, " hit=e%d", h.Event)
		}
		fmt.Fprintf(b, " e%d\n", w.Event)
	}
	for i := range d.Markers {
		m := &d.Markers[i]
		label := m.Label
		if m.Unheard {
			label = "unheard"
		}
		fmt.Fprintf(b, "marker %v %s e%d\n", m.T, label, m.Event)
	}
}

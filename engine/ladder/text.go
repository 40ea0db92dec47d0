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
	return b.String()
}

package report

import (
	"escapement/engine/contrast"
	"escapement/engine/numbers"
	"escapement/engine/scene"
)

// Differences are the lines for [Compare]: numbers of both cases, and the findings,
// warnings and settings in which they differ. Numbers that agree are left out.
func Differences(before, after *Case) []scene.Difference {
	out := []scene.Difference{}
	for _, r := range contrast.Of(before.side(), after.side()).Rows {
		if r.Sign == contrast.Same {
			continue
		}
		label := r.Name
		switch r.Part {
		case "Findings", "Warnings", "Settings":
			label = r.Part[:len(r.Part)-1] + ": " + r.Name
		}
		out = append(out, scene.Difference{Label: label, Before: r.Before, After: r.After, Change: r.By})
	}
	return out
}

func (c *Case) side() contrast.Side {
	s := contrast.Side{Log: c.Log, Report: c.Measure, Plan: c.Plan}
	if d := numbers.OfDevice(c.Plan, c.Device, c.Measure); d != nil {
		s.Warnings = d.Warnings
	}
	return s
}

package report

import (
	"math"
	"strconv"

	"escapement/engine/numbers"
	"escapement/engine/scene"
)

// written is a measured value as it is printed: milliseconds and degrees whole, as the
// trade reads them; rates and shares with a decimal where they have one.
func written(v float64, unit string) string {
	decimals := 1
	if unit == "ms" || unit == "°" {
		decimals = 0
	}
	scale := math.Pow10(decimals)
	v = math.Round(v*scale) / scale
	if v == 0 {
		v = 0 // not -0
	}
	return strconv.FormatFloat(v, 'f', -1, 64)
}

func between(low, high float64, unit string) string {
	return written(low, unit) + " to " + written(high, unit)
}

// readings are the measured numbers; those that were not measured are left out.
func readings(list []numbers.Number) []scene.Reading {
	var out []scene.Reading
	for _, n := range list {
		if n.Value == nil {
			continue
		}
		r := scene.Reading{Label: n.Label, Value: written(*n.Value, n.Unit), Unit: n.Unit}
		if n.Normal != nil {
			r.Normal = between(n.Normal[0], n.Normal[1], n.Unit)
			r.Outside = *n.Value < n.Normal[0] || *n.Value > n.Normal[1]
		}
		out = append(out, r)
	}
	return out
}

// sources says whose the normal ranges are, those of one source in one line.
func sources(list []numbers.Number) []string {
	var out, of []string
	for _, n := range list {
		if n.Value == nil || n.Normal == nil || n.Source == "" {
			continue
		}
		found := false
		for i := range of {
			if found = of[i] == n.Source; found {
				out[i] = n.Label + ", " + out[i]
				break
			}
		}
		if !found {
			of, out = append(of, n.Source), append(out, n.Label+": "+n.Source)
		}
	}
	return out
}

func sums(list []numbers.Sum) []scene.Sum {
	var out []scene.Sum
	for _, s := range list {
		out = append(out, scene.Sum{Label: s.Label, Value: s.Text, Unit: s.Unit, Formula: s.Formula, Numbers: s.Numbers})
	}
	return out
}

func (c rows) findings() []scene.Remark {
	var out []scene.Remark
	for i := range c.Measure.Findings {
		f := &c.Measure.Findings[i]
		out = append(out, scene.Remark{Text: f.Text, Note: f.Note, Rivals: f.Rivals})
	}
	return out
}

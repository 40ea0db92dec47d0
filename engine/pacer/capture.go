package pacer

import (
	"fmt"
	"math"

	"escapement/engine/tick"
)

// Strength is a strength-duration curve of capture by rectangular pulses.
//
// Source: Lapicque and Weiss, V(t) = b (1 + c/t); Geddes 2004 and Bioengineering
// 2025;12:194 (read). In volts it holds where polarisation can be left out.
type Strength struct {
	Rheobase  float64  // volts, usually 0.3 to 0.8 (from memory)
	Chronaxie tick.Dur // usually 0.25 to 0.5 ms (from memory)
}

// Threshold is the voltage that just captures at a pulse width.
func (s Strength) Threshold(width tick.Dur) float64 {
	return float64(s.Rheobase * (1 + float64(s.Chronaxie)/float64(width)))
}

// Energy is the energy in microjoules of a pulse at threshold into a resistance in
// ohms. It is least where the width is the chronaxie (derived).
func (s Strength) Energy(width tick.Dur, ohms float64) float64 {
	v := s.Threshold(width)
	return float64(v*v) * float64(width) / ohms
}

// FitStrength finds the curve through two thresholds. It fails where the widths are
// equal or the two do not lie on such a curve.
//
// Source: derived from the law: V t = b t + b c is a line.
func FitStrength(v1 float64, t1 tick.Dur, v2 float64, t2 tick.Dur) (Strength, error) {
	if t1 == t2 || t1 <= 0 || t2 <= 0 {
		return Strength{}, fmt.Errorf("two thresholds at different pulse widths are needed, not at %v and %v ms", t1, t2)
	}
	q1, q2 := float64(v1*float64(t1)), float64(v2*float64(t2))
	b := (q1 - q2) / float64(t1-t2)
	if b <= 0 {
		return Strength{}, fmt.Errorf("%v V at %v ms and %v V at %v ms leave no rheobase: the threshold must fall less than the width grows", v1, t1, v2, t2)
	}
	c := (q1 - float64(b*float64(t1))) / b
	if c < 0 {
		return Strength{}, fmt.Errorf("%v V at %v ms and %v V at %v ms: the threshold rises with the width", v1, t1, v2, t2)
	}
	return Strength{b, tick.Dur(math.RoundToEven(c))}, nil
}

// Values are the threshold and the safety margin of an output.
func (s Strength) Values(output float64, width tick.Dur) []Value {
	th := s.Threshold(width)
	margin := output / th
	b, c, w := fmt.Sprintf("%.2f", s.Rheobase), fmt.Sprintf("%.2f", s.Chronaxie.MS()), fmt.Sprintf("%.2f", width.MS())
	return []Value{
		{Name: "threshold", Label: "capture threshold", Amount: th, Unit: "V", Text: fmt.Sprintf("%.2f", th), Formula: "b (1 + c / t)",
			Numbers: fmt.Sprintf("%s (1 + %s / %s) = %.2f V", b, c, w, th), Source: "Geddes 2004 (read)"},
		{Name: "safety_margin", Label: "safety margin of the output", Amount: margin, Text: fmt.Sprintf("%.1f:1", margin), Formula: "output / threshold",
			Numbers: fmt.Sprintf("%.2f / %.2f = %.1f", output, th, margin), Source: "2:1 is common practice, from memory"},
	}
}

// Package criteria is the published ECG criteria that the field's waves are held
// against: for every condition, which leads must show what. The field's tests
// judge the embedded model by it and the generator's search improves a model by
// it; nothing at run time uses it.
//
// Sources in the tables: "AHA" is the AHA/ACCF/HRS recommendations, part III
// (Surawicz, Childers, Deal, Gettes, J Am Coll Cardiol 2009;53:976), its cut-offs
// from memory and secondary pages; "textbook" is common practice; "realism" is a
// demand of our own, so that a criterion is not met by an odd beat.
package criteria

import (
	"fmt"
	"math"
	"strings"
)

// Bound is one number and the range it must lie in.
type Bound struct {
	What      string
	Value     float64
	Low, High float64 // infinite where there is no limit
	Scale     float64 // how far outside counts as one unit of failure in a search
}

// Miss is how far outside the range the value is, in units of the scale; 0 inside.
func (b Bound) Miss() float64 {
	if math.IsNaN(b.Value) {
		return 10
	}
	return max(0, b.Low-b.Value, b.Value-b.High) / b.Scale
}

func within(what string, v, lo, hi, scale float64) Bound { return Bound{what, v, lo, hi, scale} }

func atLeast(what string, v, lo, scale float64) Bound { return Bound{what, v, lo, math.Inf(1), scale} }

func atMost(what string, v, hi, scale float64) Bound { return Bound{what, v, math.Inf(-1), hi, scale} }

// Verdict is one criterion and what a model made of it.
type Verdict struct {
	Condition, Criterion, Source string
	Bounds                       []Bound
}

// Name is unique among the verdicts.
func (v *Verdict) Name() string { return v.Condition + ": " + v.Criterion }

// Passed tells whether all bounds hold.
func (v *Verdict) Passed() bool { return v.Miss() == 0 }

// Miss sums the bounds' misses.
func (v *Verdict) Miss() float64 {
	sum := 0.0
	for _, b := range v.Bounds {
		sum += b.Miss()
	}
	return sum
}

// Reached is the values, as "QRS 104, axis -55".
func (v *Verdict) Reached() string {
	var out []string
	for _, b := range v.Bounds {
		out = append(out, strings.TrimSpace(fmt.Sprintf("%s %.3g", b.What, b.Value)))
	}
	return strings.Join(out, ", ")
}

package sweep

import (
	"context"
	"fmt"
	"math"

	"escapement/engine/pacer"
	"escapement/engine/plan"
)

// Question asks where along an axis an outcome changes.
type Question struct {
	Outcome   string   // a word, or a number with From
	From      *float64 // a number counts as "below" it or "from" it on
	Along     int      // 0: along x, 1: along y
	At        int      // which value of the other axis; 0 on a line
	Tolerance float64  // in the unit of the axis; 0: 0.1 for rates, else 1
	After     []int    // look only between these values and the next ones, in order; nil: everywhere
}

// Boundary is where one behaviour gives way to another: Low is the last value found
// with the one, High the first with the other, at most the tolerance apart.
type Boundary struct {
	Low    float64 `json:"low"`
	High   float64 `json:"high"`
	Before string  `json:"before"`
	After  string  `json:"after"`
	Form   *Form   `json:"closed_form"` // null: none near
}

// Form is the closed form of a limit, with how far it lies from the boundary found:
// 0 where it lies in it.
type Form struct {
	Name    string  `json:"name"`
	Label   string  `json:"label"`
	Value   float64 `json:"value"`
	Unit    string  `json:"unit"`
	Formula string  `json:"formula"`
	Numbers string  `json:"numbers"`
	Source  string  `json:"source"`
	Off     float64 `json:"off"`
}

// Boundaries finds, with the first seed, every change of an outcome between
// neighbouring values of an axis by halving, and puts beside each the closed form that
// gives it, where there is one. A behaviour that comes and goes between two
// neighbouring values is not found: the step of the axis decides that. Forms without a
// boundary near them come back as well: there the heart of this plan does otherwise
// than the form supposes, or the outcome does not show it. The error is the
// context's, or a plan.Diagnoses about the question.
func (w *Worker) Boundaries(ctx context.Context, q Question) ([]Boundary, []Form, error) {
	s, err := w.search(q)
	if err != nil {
		return nil, nil, err
	}
	if q.After != nil {
		for _, i := range q.After {
			if err := ctx.Err(); err != nil {
				return nil, nil, err
			}
			s.after(i)
		}
		alone := s.compare()
		return append([]Boundary{}, s.found...), append([]Form{}, alone...), nil
	}
	values := s.axis.Values
	last := ""
	for i, v := range values {
		word := s.word(v.Number)
		if err := ctx.Err(); err != nil {
			return nil, nil, err
		}
		if i > 0 && word != last {
			s.between(values[i-1].Number, last, v.Number, word)
		}
		last = word
	}
	if err := ctx.Err(); err != nil {
		return nil, nil, err
	}
	alone := s.compare()
	return append([]Boundary{}, s.found...), append([]Form{}, alone...), nil
}

// after looks between a value and the next.
func (s *search) after(i int) {
	low, high := s.axis.Values[i].Number, s.axis.Values[i+1].Number
	if before, after := s.word(low), s.word(high); before != after {
		s.between(low, before, high, after)
	}
}

// search is a question being answered.
type search struct {
	w     *Worker
	q     Question
	k     int // of the outcome
	axis  *plan.Axis
	at    []plan.Value
	found []Boundary
}

func (w *Worker) search(q Question) (*search, error) {
	s := &search{w: w, q: q, k: -1, at: w.g.At(0)}
	for k, o := range w.g.outcomes {
		if o.Name == q.Outcome && (o.Kind == plan.WordOutcome || o.Kind == plan.NumberOutcome && q.From != nil) {
			s.k = k
		}
	}
	axes := w.g.axes()
	if s.k < 0 {
		return nil, plan.Diagnoses{{Path: "sweep.outcomes", Found: fmt.Sprintf("%q", q.Outcome), Allowed: "an outcome of this sweep that is a word, or a number with a limit"}}
	}
	if q.Along < 0 || q.Along >= len(axes) {
		return nil, plan.Diagnoses{{Path: "sweep.y", Found: "nothing", Allowed: "an axis to look along"}}
	}
	s.axis = axes[q.Along]
	f := s.axis.Described()
	if f.Kind != plan.Number && s.axis.Range == nil {
		return nil, plan.Diagnoses{{Path: "sweep." + [...]string{"x", "y"}[q.Along], Found: s.axis.Name(), Allowed: "a number to look along"}}
	}
	if len(axes) > 1 {
		other := axes[1-q.Along]
		if q.At < 0 || q.At >= len(other.Values) {
			return nil, plan.Diagnoses{{Path: "sweep." + [...]string{"y", "x"}[q.Along], Found: fmt.Sprintf("value %d", q.At), Allowed: fmt.Sprintf("0 to %d", len(other.Values)-1)}}
		}
		s.at[1-q.Along] = other.Values[q.At]
	}
	for _, i := range q.After {
		if i < 0 || i >= len(s.axis.Values)-1 {
			return nil, plan.Diagnoses{{Path: "sweep." + [...]string{"x", "y"}[q.Along], Found: fmt.Sprintf("value %d", i), Allowed: fmt.Sprintf("0 to %d", len(s.axis.Values)-2)}}
		}
	}
	if q.Tolerance <= 0 {
		s.q.Tolerance = 1
		if f.Unit == "/min" {
			s.q.Tolerance = 0.1
		}
	}
	if f.Whole {
		s.q.Tolerance = max(1, s.q.Tolerance)
	}
	return s, nil
}

// word is the behaviour at a value of the axis.
func (s *search) word(x float64) string {
	s.at[s.q.Along] = plan.Value{Number: x}
	c := s.w.g.reduce([]run{s.w.run(s.at, s.w.g.seeds[0])})
	if c.Refused != "" {
		return "refused"
	}
	v := &c.Values[s.k]
	switch {
	case s.q.From == nil:
		return v.Word()
	case v.N == 0:
		return "no number"
	case v.Mean < *s.q.From:
		return "below"
	}
	return "from"
}

// between halves until neighbours that differ are near, and looks on both sides where
// a third behaviour turns up.
func (s *search) between(low float64, before string, high float64, after string) {
	if high-low <= s.q.Tolerance {
		s.found = append(s.found, Boundary{Low: low, High: high, Before: before, After: after})
		return
	}
	middle := low + (high-low)/2
	if f := s.axis.Described(); f.Whole {
		middle = math.Round(middle)
	}
	word := s.word(middle)
	if word != before {
		s.between(low, before, middle, word)
	}
	if word != after {
		s.between(middle, word, high, after)
	}
}

// quantities are the fields that closed forms are solved for.
var quantities = map[string]pacer.Quantity{
	"heart.sinus.rate_bpm":            pacer.VarySinusRate,
	"heart.av_node.fast.va_ms":        pacer.VaryVATime,
	"heart.atria.erp_ms":              pacer.VaryAtrialERP,
	"pacemaker.lower_rate_bpm":        pacer.VaryLowerRate,
	"pacemaker.max_tracking_rate_bpm": pacer.VaryUpperRate,
	"pacemaker.pvarp_ms":              pacer.VaryPVARP,
	"pacemaker.pvab_ms":               pacer.VaryPVAB,
	"pacemaker.sensed_av_ms":          pacer.VarySensedAV,
	"pacemaker.paced_av_ms":           pacer.VaryPacedAV,
}

// compare puts the closed forms beside the boundaries and gives those that are left.
func (s *search) compare() []Form {
	q, ok := quantities[s.axis.Field]
	if !ok {
		return nil
	}
	prog, err := s.w.program(s.at, s.w.g.seeds[0])
	if err != nil || prog.Device == nil {
		return nil
	}
	var alone []Form
	values := s.axis.Values
	for _, v := range pacer.Limits(&prog.Device.Settings, s.w.variants.Patient(), q) {
		if v.Amount < values[0].Number || v.Amount > values[len(values)-1].Number {
			continue
		}
		f := Form{Name: v.Name, Label: v.Label, Value: v.Amount, Unit: v.Unit, Formula: v.Formula, Numbers: v.Numbers, Source: v.Source}
		b := s.nearest(f.Value)
		if b == nil || b.off(f.Value) > s.q.Tolerance {
			alone = append(alone, f)
			continue
		}
		f.Off = b.off(f.Value)
		if b.Form == nil || b.Form.Off > f.Off {
			b.Form = &f
		}
	}
	return alone
}

func (s *search) nearest(x float64) *Boundary {
	var best *Boundary
	for i := range s.found {
		if b := &s.found[i]; best == nil || b.off(x) < best.off(x) {
			best = b
		}
	}
	return best
}

// off is how far a value lies outside the boundary.
func (b *Boundary) off(x float64) float64 { return max(b.Low-x, x-b.High, 0) }

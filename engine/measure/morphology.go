package measure

import (
	"fmt"

	"escapement/engine/lead"
)

// Slugs of the QRS patterns.
const (
	RBBB           = "right_bundle_branch_block"
	LBBB           = "left_bundle_branch_block"
	IncompleteRBBB = "incomplete_right_bundle_branch_block"
	IncompleteLBBB = "incomplete_left_bundle_branch_block"
	LAFB           = "left_anterior_fascicular_block"
	LPFB           = "left_posterior_fascicular_block"
	Nonspecific    = "nonspecific_intraventricular_delay"
)

// Morphology is one QRS shape judged from the leads.
type Morphology struct {
	QRS      float64           `json:"qrs_ms"`
	Axis     *float64          `json:"axis_deg"` // by area
	Letters  map[string]string `json:"letters"`  // "V1": "rSR'"
	Patterns []string          `json:"patterns"` // slugs whose required criteria all hold
	Criteria []Criterion       `json:"criteria"` // every criterion of every pattern
}

// Criterion is one line of the table: what it asks, what was found, whether it
// holds, and whether the pattern needs it or it only supports it.
type Criterion struct {
	Pattern  string `json:"pattern"`
	Asks     string `json:"asks"`
	Found    string `json:"found"`
	Holds    bool   `json:"holds"`
	Required bool   `json:"required"`
}

// Has tells whether the pattern was recognised.
func (m *Morphology) Has(slug string) bool {
	for _, p := range m.Patterns {
		if p == slug {
			return true
		}
	}
	return false
}

// key is equal for shapes that look the same to a reader.
func (m *Morphology) key() string {
	axis := "none"
	if m.Axis != nil {
		axis = fmt.Sprint(*m.Axis)
	}
	k := fmt.Sprint(m.QRS, axis, m.Patterns)
	for l := range lead.Name(lead.Count) {
		k += " " + m.Letters[l.String()]
	}
	return k
}

// Judge applies the criteria of AHA/ACCF/HRS 2009 part III (Surawicz et al.,
// JACC 2009;53:976), adults, to one complex. The limits are half-open: below
// 110 ms normal, from 110 to below 120 incomplete, from 120 complete; a delay
// without a bundle branch pattern is nonspecific above 110.
func Judge(c *lead.Complex) Morphology {
	x := newExam(c)
	m := Morphology{QRS: float64(x.qrs), Axis: x.axis, Letters: map[string]string{}, Patterns: []string{}}
	for l := range lead.Name(lead.Count) {
		m.Letters[l.String()] = x.fig[l].letters()
	}
	for _, p := range table {
		holds := true
		for _, rule := range p.rules {
			found, ok := rule.test(x)
			m.Criteria = append(m.Criteria, Criterion{p.slug, rule.asks, found, ok, !rule.supports})
			holds = holds && (ok || rule.supports)
		}
		if holds {
			m.Patterns = append(m.Patterns, p.slug)
		}
	}
	// Part III excludes the bundle branch patterns only; a fascicular block names
	// the cause of a width between 110 and 120 as well, so it is left out here too.
	delay := x.qrs > 110 && len(m.Patterns) == 0
	m.Criteria = append(m.Criteria, Criterion{Nonspecific, "QRS above 110 ms without one of the patterns above", fmt.Sprintf("%d ms", x.qrs), delay, true})
	if delay {
		m.Patterns = append(m.Patterns, Nonspecific)
	}
	return m
}

// exam is one complex prepared for the rules.
type exam struct {
	c    *lead.Complex
	fig  [lead.Count]figure
	qrs  int // ms
	axis *float64
}

func newExam(c *lead.Complex) *exam {
	x := &exam{c: c, qrs: c.Off - c.On}
	for l := range lead.Name(lead.Count) {
		x.fig[l] = figureOf(c, l)
	}
	x.axis, _ = axes(c)
	return x
}

type rule struct {
	asks     string
	supports bool // does not decide
	test     func(*exam) (found string, holds bool)
}

type pattern struct {
	slug  string
	rules []rule
}

// table is the whole of the classifier. The part III wording is from memory
// where the facts mark it so; the limits in milliseconds were read.
var table = []pattern{
	{RBBB, append([]rule{width("QRS at least 120 ms", 120, 1000)}, rightRules...)},
	{IncompleteRBBB, append([]rule{width("QRS from 110 to below 120 ms", 110, 120)}, rightRules...)},
	{LBBB, append([]rule{width("QRS at least 120 ms", 120, 1000)}, leftRules...)},
	{IncompleteLBBB, []rule{
		width("QRS from 110 to below 120 ms", 110, 120),
		{"R-peak time above 60 ms in V5 and V6", false, peakAbove(60, lead.V5, lead.V6)},
		{"no q in I, V5, V6", false, noQ},
	}},
	{LAFB, []rule{
		width("QRS below 120 ms", 0, 120),
		{"axis from -45 to -90 degrees", false, axisWithin(-90, -45)},
		{"qR in aVL", false, qR(lead.AVL)},
		{"R-peak time at least 45 ms in aVL", false, peakAbove(44, lead.AVL)},
		{"rS in II, III and aVF", true, rS(lead.II, lead.III, lead.AVF)},
	}},
	{LPFB, []rule{
		width("QRS below 120 ms", 0, 120),
		{"axis from +90 to +180 degrees", false, axisWithin(90, 180)},
		{"rS in I and aVL", false, rS(lead.I, lead.AVL)},
		{"qR in III and aVF", false, qR(lead.III, lead.AVF)},
	}},
}

var rightRules = []rule{
	{"rsr', rsR' or rSR' in V1 or V2, or a notched dominant R in V1 with R-peak time above 50 ms", false, terminalR},
	{"S longer than R or longer than 40 ms in I and V6", false, longS},
	{"R-peak time above 50 ms in V1", true, lastPeakV1},
	{"R-peak time normal (at most 50 ms) in V5 and V6", true, peakNormal},
}

var leftRules = []rule{
	{"broad R in I, aVL and V6 (RS allowed in V5 and V6), notched or slurred in two of I, aVL, V5, V6", false, broadR},
	{"no q in I, V5, V6", false, noQ},
	{"R-peak time above 60 ms in V5 and V6", false, peakAbove(60, lead.V5, lead.V6)},
	{"ST and T opposite to the QRS in I, V6 and V1", true, discordant},
}

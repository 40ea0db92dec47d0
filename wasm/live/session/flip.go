package session

import (
	"encoding/json"
	"slices"
	"strings"

	"escapement/engine/measure"
	"escapement/engine/plan"
	"escapement/engine/sim"
	"escapement/engine/tick"
)

// flipUpTo is the longest strip on which the place of a flip is looked for: each look
// is a run.
const flipUpTo = tick.Time(2 * tick.Minute)

// flipReply tells between which values, a step apart, the outcome changes. Low and
// High are as asked where it cannot be told.
type flipReply struct {
	Low  float64 `json:"low"`
	High float64 `json:"high"`
}

// flip looks for the value of the plan between low and high at which the findings
// change, by halving. There may be more than one; it gives one.
func flip(args []byte) []byte {
	var q struct {
		Plan json.RawMessage `json:"plan"`
		Path string          `json:"path"`
		Low  float64         `json:"low"`
		High float64         `json:"high"`
		Step float64         `json:"step"`
	}
	decode(args, &q)
	r := flipReply{q.Low, q.High}
	p, err := plan.Decode(q.Plan)
	if err != nil || !(q.Step > 0) || !(q.High > q.Low) {
		return encode(r)
	}
	low, ok := comesTo(p, q.Path, q.Low)
	high, also := comesTo(p, q.Path, q.High)
	if !ok || !also || low == high {
		return encode(r)
	}
	for r.High-r.Low > q.Step*1.001 {
		middle := q.Low + q.Step*float64(int((r.Low+r.High)/2/q.Step-q.Low/q.Step+0.5))
		if middle <= r.Low || middle >= r.High {
			break
		}
		got, ok := comesTo(p, q.Path, middle)
		switch {
		case !ok:
			return encode(r)
		case got == low:
			r.Low = middle
		default:
			r.High = middle
		}
	}
	return encode(r)
}

// comesTo is what a plan comes to with a value: its findings without their numbers, as
// the page compares them (site/model/flips.js).
func comesTo(p *plan.Plan, path string, v float64) (string, bool) {
	q, err := p.With(path, v)
	if err != nil {
		return "", false
	}
	prog, err := q.Compile()
	if err != nil || prog.Span > flipUpTo {
		return "", false
	}
	log, err := sim.Play(prog)
	if err != nil {
		return "", false
	}
	var slugs []string
	report := measure.Of(log, nil)
	for i := range report.Findings {
		slugs = append(slugs, strings.TrimSpace(report.Findings[i].Slug+" "+report.Findings[i].Ratio))
	}
	slices.Sort(slugs)
	return strings.Join(slugs, "; "), true
}

package plan

import (
	"encoding/json"
	"fmt"
	"math"
	"slices"
	"strings"
)

// Limits of a sweep; every limit is reported with its number.
const (
	MaxAxisValues = 2000
	MaxSeeds      = 1000
	MaxRuns       = 1000000 // points times seeds
)

// Sweep is a grid of runs: every value of X with every value of Y, each with every
// seed. It is part of a plan, as its "sweep".
type Sweep struct {
	X, Y     *Axis    // Y is nil for a line
	Seeds    []uint64 // empty: the plan's own
	Outcomes []string // names of [Outcomes]; empty: [DefaultOutcomes]
}

// DefaultOutcomes are those of a sweep that asks for none: all but the slow ones.
func DefaultOutcomes() []string {
	var names []string
	for _, o := range Outcomes() {
		if !o.Slow {
			names = append(names, o.Name)
		}
	}
	return names
}

// Axis is what a sweep varies: the value at Field, or, where Premature names a site,
// the coupling of an extra stimulus there to the first depolarisation of that site at
// or after AfterMS.
type Axis struct {
	Field     string // "heart.sinus.rate_bpm", "interventions[0].at_ms"
	Premature string
	AfterMS   float64
	Values    []Value // one or more, in the order of the grid

	Range *Steps // how Values was typed; nil: as a list
}

// Steps are values from one to another, the last included where a step falls on it.
type Steps struct{ From, To, Step float64 }

// values lays the steps out. Sums are rounded to a millionth, so that 60.3 is 60.3.
func (s *Steps) values() []Value {
	n := int(math.Floor(float64(s.To-s.From)/s.Step+1e-9)) + 1
	out := make([]Value, n)
	for i := range out {
		out[i].Number = math.Round(float64(s.From+float64(float64(i)*s.Step))*1e6) / 1e6
	}
	return out
}

// Name is the field, or "coupling at SITE".
func (a *Axis) Name() string {
	if a.Premature != "" {
		return "coupling at " + a.Premature
	}
	return a.Field
}

// coupling is what an axis of an extra stimulus holds.
var coupling = &Field{Path: "coupling", Label: "coupling", Unit: "ms", Kind: Number, Min: 1, Max: 60000}

// Described is the catalogue's word about what an axis varies.
func (a *Axis) Described() Field {
	if a.Premature != "" {
		return *coupling
	}
	return *byPath[general(a.Field)]
}

// Raw is a value of the axis as JSON has it.
func (a *Axis) Raw(v Value) any {
	f := a.Described()
	if f.Kind == Group && !v.Null {
		return v.Text
	}
	return v.json(&f)
}

// Text is a value of the axis in a table: as it stands in a file, text without quotes.
func (a *Axis) Text(v Value) string {
	if s, ok := a.Raw(v).(string); ok {
		return s
	}
	return show(a.Raw(v))
}

// general is the path in the catalogue of a path that may hold the number of an item.
func general(path string) string {
	field, _ := itemPath(path)
	return field
}

// ReadSweep decodes a sweep for this plan, as it stands under "sweep" in a plan file,
// and leaves the plan as it is. The error, a [Diagnoses], names every place that is
// wrong.
func (p *Plan) ReadSweep(data []byte) (*Sweep, error) {
	dec := json.NewDecoder(strings.NewReader(string(data)))
	dec.UseNumber()
	var raw any
	d := &decoder{p: p}
	if err := dec.Decode(&raw); err != nil {
		d.ds.add("sweep", "not JSON: "+err.Error(), "an object", "")
		return nil, d.ds
	}
	s := d.sweep(raw)
	return s, d.ds.err()
}

// sweep reads the section; it needs the rest of the plan to be there.
func (d *decoder) sweep(raw any) *Sweep {
	m, ok := raw.(map[string]any)
	if !ok {
		d.ds.add("sweep", show(raw), "an object with x, and perhaps y, seeds and outcomes", "")
		return nil
	}
	s := &Sweep{}
	for _, k := range keys(m) {
		switch k {
		case "x":
			s.X = d.axis("sweep.x", m[k])
		case "y":
			s.Y = d.axis("sweep.y", m[k])
		case "seeds":
			s.Seeds = d.seeds("sweep.seeds", m[k])
		case "outcomes":
			s.Outcomes = d.outcomes(m[k])
		default:
			d.ds.add("sweep."+k, "a field that is not known", "", meant(k, []string{"x", "y", "seeds", "outcomes"}))
		}
	}
	if _, ok := m["x"]; !ok {
		d.ds.add("sweep.x", "nothing", "an axis", `such as "x": {"field": "heart.sinus.rate_bpm", "from": 60, "to": 180, "step": 2}`)
	}
	if s.X != nil && s.Y != nil {
		if s.X.Name() == s.Y.Name() {
			d.ds.add("sweep.y.field", show(s.Y.Name()), "another field than that of x", "")
		}
		if s.X.Premature != "" && s.Y.Premature != "" {
			d.ds.add("sweep.y.premature", show(s.Y.Premature), "one extra stimulus in a sweep", "")
		}
	}
	if n := s.runs(); n > MaxRuns {
		d.ds.add("sweep", fmt.Sprintf("%d runs", n), fmt.Sprintf("up to %d", MaxRuns), "take fewer values or seeds")
	}
	return s
}

func (s *Sweep) runs() int {
	n := max(1, len(s.Seeds))
	for _, a := range []*Axis{s.X, s.Y} {
		if a != nil {
			n *= max(1, len(a.Values))
		}
	}
	return n
}

// seeds are a list, or a number of them from 1 on.
func (d *decoder) seeds(at string, raw any) []uint64 {
	f := byPath["seed"]
	if n, ok := number(raw); ok {
		if n < 1 || n > MaxSeeds || n != math.Trunc(n) {
			d.ds.add(at, show(raw), fmt.Sprintf("a list of seeds, or how many from 1 on: 1 to %d", MaxSeeds), "")
			return nil
		}
		out := make([]uint64, int(n))
		for i := range out {
			out[i] = uint64(i + 1)
		}
		return out
	}
	list, ok := raw.([]any)
	if !ok || len(list) == 0 || len(list) > MaxSeeds {
		d.ds.add(at, show(raw), fmt.Sprintf("a list of 1 to %d seeds, or how many from 1 on", MaxSeeds), "")
		return nil
	}
	var out []uint64
	for i, v := range list {
		if value, ok := d.leaf(fmt.Sprintf("%s[%d]", at, i), f, v); ok {
			out = append(out, uint64(value.Number))
		}
	}
	return out
}

func (d *decoder) outcomes(raw any) []string {
	var names, out []string
	for _, o := range Outcomes() {
		names = append(names, o.Name)
	}
	list, ok := raw.([]any)
	if !ok || len(list) == 0 {
		d.ds.add("sweep.outcomes", show(raw), "a list of "+strings.Join(names, ", "), "")
		return nil
	}
	for i, v := range list {
		s, _ := v.(string)
		if !slices.Contains(names, s) || slices.Contains(out, s) {
			d.ds.add(fmt.Sprintf("sweep.outcomes[%d]", i), show(v), "each once of "+strings.Join(names, ", "), meant(s, names))
			continue
		}
		out = append(out, s)
	}
	return out
}

// section is the sweep as it is written.
func (s *Sweep) section() *object {
	o := &object{}
	o.put("x", s.X.section())
	if s.Y != nil {
		o.put("y", s.Y.section())
	}
	if len(s.Seeds) > 0 {
		o.put("seeds", s.Seeds)
	}
	if len(s.Outcomes) > 0 {
		o.put("outcomes", s.Outcomes)
	}
	return o
}

func (a *Axis) section() *object {
	o := &object{}
	if a.Premature != "" {
		o.put("premature", a.Premature)
		o.put("after_ms", a.AfterMS)
	} else {
		o.put("field", a.Field)
	}
	if a.Range != nil {
		o.put("from", a.Range.From)
		o.put("to", a.Range.To)
		o.put("step", a.Range.Step)
		return o
	}
	values := make([]any, len(a.Values))
	for i, v := range a.Values {
		values[i] = a.Raw(v)
	}
	o.put("values", values)
	return o
}

// Encode is the sweep as it stands under "sweep" in a plan file.
func (s *Sweep) Encode() []byte {
	b, err := json.Marshal(s.section())
	if err != nil {
		panic("plan: a sweep that does not encode: " + err.Error())
	}
	return b
}

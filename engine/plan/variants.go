package plan

import (
	"strconv"
	"strings"

	"escapement/engine/heart"
	"escapement/engine/pacer"
)

// Variants compiles plans that differ from one in the values of a few fields. It
// solves a heart only for values that it has not met, and never for a change of the
// device or of what is done. Use it from one goroutine.
type Variants struct {
	plan    *Plan // its own; holds the values of the latest variant
	fields  []string
	reaches []bool // by field: the heart depends on it
	hearts  map[string]*heart.Heart
	solved  heart.Solutions
	key     []byte
	judged  bool // what numbers together must hold does
	rejudge bool // it may not with other values of the fields
	extra   bool // the last intervention is an extra stimulus
}

// mostHearts bounds the memory of solved hearts, some 30 kB each.
const mostHearts = 2000

// NewVariants prepares variants of a plan in the values at the fields.
func NewVariants(p *Plan, fields ...string) *Variants {
	v := &Variants{plan: p.Clone(), fields: fields, hearts: map[string]*heart.Heart{}}
	v.plan.Sweep, v.plan.Goals = nil, nil
	for _, f := range fields {
		v.reaches = append(v.reaches, v.plan.reachesHeart(f))
		// Numbers exclude each other by being there, not by their values; items and whole
		// parts of the heart are judged by what they are.
		if field := byPath[general(f)]; strings.Contains(f, "[") || field.Kind != Number || field.Nullable {
			v.rejudge = true
		}
	}
	return v
}

// reachesHeart tells whether the heart depends on a field: its own do, and what an
// intervention sets may.
func (p *Plan) reachesHeart(path string) bool {
	if strings.HasPrefix(path, "heart.") {
		return true
	}
	name, item := itemPath(path)
	if item < 0 || !strings.HasPrefix(name, "interventions[].") {
		return false
	}
	return p.Interventions[item]["do"].Text == "set" || name == "interventions[].do"
}

// Plan is the variant with the values, in the order of the fields, and a seed; extra
// is a stimulus to add, or nil. It is good until the next call.
func (v *Variants) Plan(values []Value, seed uint64, extra Item) *Plan {
	for i, path := range v.fields {
		field, item := itemPath(path)
		v.plan.set(field, item, values[i])
	}
	v.plan.values["seed"] = Value{Number: float64(seed)}
	if v.extra {
		v.plan.Interventions = v.plan.Interventions[:len(v.plan.Interventions)-1]
	}
	if v.extra = extra != nil; v.extra {
		v.plan.Interventions = append(v.plan.Interventions, extra)
	}
	return v.plan
}

// Extra is an intervention that stimulates a site at a time of the strip, in ms.
func Extra(site string, atMS float64) Item {
	return Item{"at_ms": {Number: atMS}, "do": {Text: "stimulate"}, "site": {Text: site}}
}

// Seed is the plan's own.
func (p *Plan) Seed() uint64 { return uint64(p.number("seed")) }

// Program compiles the variant. The error, a [Diagnoses], is that of a plan that
// cannot be.
func (v *Variants) Program(values []Value, seed uint64, extra Item) (*Program, error) {
	p := v.Plan(values, seed, extra)
	if !v.judged || v.rejudge {
		d := decoder{p: p}
		if d.together(); len(d.ds) > 0 {
			return nil, d.ds
		}
		v.judged = true
	}
	v.key = v.key[:0]
	for i, reaches := range v.reaches {
		if reaches {
			v.key = values[i].key(v.key)
		}
	}
	h, met := v.hearts[string(v.key)]
	prog, err := p.compile(h, &v.solved)
	if prog != nil && !met && len(v.hearts) < mostHearts {
		v.hearts[string(v.key)] = prog.Heart
	}
	return prog, err
}

// key appends what tells the value from others.
func (v Value) key(b []byte) []byte {
	if v.Null {
		b = append(b, 'n')
	}
	b = strconv.AppendFloat(b, v.Number, 'g', -1, 64)
	b = append(b, v.Text...)
	b = strconv.AppendBool(b, v.On)
	return append(b, 0)
}

// Patient is what a device's arithmetic asks of the latest variant.
func (v *Variants) Patient() pacer.Patient { return v.plan.Patient() }

// Key tells values and a seed from others.
func Key(values []Value, seed uint64) []byte {
	var b []byte
	for _, v := range values {
		b = v.key(b)
	}
	return strconv.AppendUint(b, seed, 10)
}

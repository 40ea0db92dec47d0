// Package plan is the document that a user edits: a heart in clinical numbers and
// what is done to it, as a JSON file. It knows every field's range, default and
// meaning ([Catalogue]), reads and writes the file ([Decode], [Plan.Encode]) and
// makes it ready to run ([Plan.Compile]).
//
// A plan holds only what was typed; everything else has the default of a healthy
// adult, so {"format":"escapement-plan/1"} is a valid plan. Units are in the names:
// _ms, _bpm, _s. No field holds a patient's identity.
//
// Values are kept by their path in the file ("heart.sinus.rate_bpm"): the file, the
// page, the errors and an intervention that changes a number all use the same name.
package plan

import (
	"maps"
	"strings"
)

// Format is the value of the plan's "format" field.
const Format = "escapement-plan/1"

// Value is what stands at a path.
type Value struct {
	Null   bool
	Number float64
	Text   string // Choice, Pattern
	On     bool   // Switch
	List   []float64
}

// Item is an element of a list: a focus, an accessory pathway or an intervention, by
// field name.
type Item map[string]Value

// Plan is a document.
type Plan struct {
	Title, Note   string
	values        map[string]Value
	Foci          []Item
	Pathways      []Item
	Interventions []Item
	Sweep         *Sweep // nil: none
	Goals         *Goals // nil: none
}

// Default is a healthy adult without interventions.
func Default() *Plan { return &Plan{values: map[string]Value{}} }

// Clone is an independent copy.
func (p *Plan) Clone() *Plan {
	q := *p
	q.values = maps.Clone(p.values)
	q.Foci = cloneItems(p.Foci)
	q.Pathways = cloneItems(p.Pathways)
	q.Interventions = cloneItems(p.Interventions)
	return &q
}

func cloneItems(items []Item) []Item {
	var out []Item
	for _, it := range items {
		out = append(out, maps.Clone(it))
	}
	return out
}

// given tells whether the plan itself says something at the path.
func (p *Plan) given(path string) bool { _, ok := p.values[path]; return ok }

// null tells whether the path or an object around it is null, by the plan or by
// default.
func (p *Plan) null(path string) bool {
	for at := path; at != ""; at = parent(at) {
		f := byPath[at]
		v, ok := p.values[at]
		if ok && v.Null {
			return true
		}
		if f != nil && f.IsNull && !ok && !p.anyGivenUnder(at) {
			return true
		}
	}
	return false
}

func (p *Plan) anyGivenUnder(path string) bool {
	for k := range p.values {
		if strings.HasPrefix(k, path+".") {
			return true
		}
	}
	return false
}

// number is the value at the path or its default; 0 where there is neither.
func (p *Plan) number(path string) float64 { return p.Or(path, 0) }

// Or is the value at the path, its default, or the last resort where there is
// neither.
func (p *Plan) Or(path string, last float64) float64 {
	if v, ok := p.values[path]; ok {
		return v.Number
	}
	if f := byPath[path]; f != nil && f.Default != nil {
		return *f.Default
	}
	return last
}

func (p *Plan) text(path string) string { return p.values[path].Text }

// number, or and text of an item.
func (it Item) number(list, name string) float64 {
	if v, ok := it[name]; ok {
		return v.Number
	}
	if f := byPath[list+"[]."+name]; f != nil && f.Default != nil {
		return *f.Default
	}
	return 0
}

func parent(path string) string {
	i := strings.LastIndexByte(path, '.')
	if i < 0 {
		return ""
	}
	return path[:i]
}

var (
	catalogue = fields()
	byPath    = index(catalogue)
	objects   = inner(catalogue)
)

func index(fs []*Field) map[string]*Field {
	m := make(map[string]*Field, len(fs))
	for _, f := range fs {
		m[f.Path] = f
	}
	return m
}

// inner is the set of paths that are objects because fields lie below them.
func inner(fs []*Field) map[string]bool {
	m := map[string]bool{}
	for _, f := range fs {
		for at := parent(f.Path); at != ""; at = parent(at) {
			m[strings.TrimSuffix(at, "[]")] = true
		}
	}
	return m
}

// Catalogue lists every field in the order of the file.
func Catalogue() []Field {
	out := make([]Field, len(catalogue))
	for i, f := range catalogue {
		out[i] = *f
	}
	return out
}

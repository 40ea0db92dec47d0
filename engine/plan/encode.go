package plan

import (
	"bytes"
	"encoding/json"
	"strings"
)

// Encode writes the plan as a file that [Decode] reads back to the same plan: only
// what was typed, in the order of the catalogue.
func (p *Plan) Encode() []byte {
	root := &object{}
	root.put("format", Format)
	if p.Title != "" {
		root.put("title", p.Title)
	}
	if p.Note != "" {
		root.put("note", p.Note)
	}
	for _, f := range catalogue {
		switch {
		case f.Path == "heart.foci[].site" && len(p.Foci) > 0:
			root.at("heart").put("foci", encodeItems("heart.foci[]", p.Foci))
		case f.Path == pathways+"[].atrium" && len(p.Pathways) > 0:
			root.at("heart").put("pathways", encodeItems(pathways+"[]", p.Pathways))
		case f.Path == "interventions[].at_ms" && len(p.Interventions) > 0:
			root.put("interventions", encodeItems("interventions[]", p.Interventions))
		}
		v, ok := p.values[f.Path]
		if !ok {
			continue
		}
		at, name := root.at(parent(f.Path)), f.Path[strings.LastIndexByte(f.Path, '.')+1:]
		if f.Kind == Group && !v.Null {
			at.at(name) // an object with what follows, or an empty one
			continue
		}
		at.put(name, v.json(f))
	}
	if p.Sweep != nil {
		root.put("sweep", p.Sweep.section())
	}
	if p.Goals != nil {
		root.put("goals", p.Goals.section())
	}
	var b bytes.Buffer
	enc := json.NewEncoder(&b)
	enc.SetEscapeHTML(false)
	enc.SetIndent("", "  ")
	if err := enc.Encode(root); err != nil {
		panic("plan: a plan that does not encode: " + err.Error())
	}
	return b.Bytes()
}

func (v Value) json(f *Field) any {
	switch {
	case v.Null:
		return nil
	case f.Kind == Switch:
		return v.On
	case f.Kind == List:
		return v.List
	case f.Kind == Choice, f.Kind == Pattern, f.Kind == ModeCode, f.Kind == Any && v.Text != "":
		return v.Text
	}
	return v.Number
}

func encodeItems(list string, items []Item) []*object {
	var out []*object
	for _, it := range items {
		o := &object{}
		for _, f := range catalogue {
			if name, ok := strings.CutPrefix(f.Path, list+"."); ok {
				if v, has := it[name]; has {
					o.put(name, v.json(f))
				}
			}
		}
		out = append(out, o)
	}
	return out
}

// object is a JSON object that keeps the order of its keys.
type object struct {
	names  []string
	values []any
}

func (o *object) put(name string, v any) {
	o.names = append(o.names, name)
	o.values = append(o.values, v)
}

// at finds or makes the object at a dotted path.
func (o *object) at(path string) *object {
	if path == "" {
		return o
	}
	name, rest, _ := strings.Cut(path, ".")
	for i, n := range o.names {
		if n == name {
			return o.values[i].(*object).at(rest)
		}
	}
	sub := &object{}
	o.put(name, sub)
	return sub.at(rest)
}

// MarshalJSON writes the keys in their order.
func (o *object) MarshalJSON() ([]byte, error) {
	var b bytes.Buffer
	enc := json.NewEncoder(&b)
	enc.SetEscapeHTML(false)
	b.WriteByte('{')
	for i, name := range o.names {
		if i > 0 {
			b.WriteByte(',')
		}
		if err := enc.Encode(name); err != nil {
			return nil, err
		}
		b.WriteByte(':')
		if err := enc.Encode(o.values[i]); err != nil {
			return nil, err
		}
	}
	b.WriteByte('}')
	return b.Bytes(), nil
}

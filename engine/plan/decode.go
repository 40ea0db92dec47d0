package plan

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"slices"
	"sort"
	"strings"
	"unicode/utf8"
)

// MaxBytes is the largest plan file that is read.
const MaxBytes = 4 << 20

// Decode reads a plan file. Unknown fields are refused. The error, a [Diagnoses],
// names every place that is wrong, what was found there and what is allowed.
func Decode(data []byte) (*Plan, error) {
	d := &decoder{p: Default()}
	if len(data) > MaxBytes {
		d.ds.add("", fmt.Sprintf("a file of %d bytes", len(data)), fmt.Sprintf("up to %d bytes", MaxBytes), "")
		return nil, d.ds
	}
	if !utf8.Valid(data) {
		d.ds.add("", "bytes that are not UTF-8", "UTF-8 text", "")
		return nil, d.ds
	}
	dec := json.NewDecoder(bytes.NewReader(data))
	dec.UseNumber()
	var raw any
	err := dec.Decode(&raw)
	if err == nil {
		if _, more := dec.Token(); !errors.Is(more, io.EOF) {
			err = errors.New("something after the end of the plan")
		}
	}
	if err != nil {
		d.ds.add("", "not JSON: "+err.Error()+place(data, err), "one JSON object", "")
		return nil, d.ds
	}
	top, ok := raw.(map[string]any)
	if !ok {
		d.ds.add("", show(raw), `an object such as {"format":"`+Format+`"}`, "")
		return nil, d.ds
	}
	d.top(top)
	if len(d.ds) == 0 {
		d.together()
	}
	if len(d.ds) == 0 {
		d.situationsTogether()
	}
	if len(d.ds) > 0 {
		return nil, d.ds
	}
	return d.p, nil
}

// place is the line and column of a syntax error.
func place(data []byte, err error) string {
	var syntax *json.SyntaxError
	if !errors.As(err, &syntax) {
		return ""
	}
	// Offset counts the byte that was wrong.
	before := data[:min(max(int(syntax.Offset)-1, 0), len(data))]
	return fmt.Sprintf(" (line %d, column %d)", 1+bytes.Count(before, []byte("\n")), len(before)-bytes.LastIndexByte(before, '\n'))
}

type decoder struct {
	p  *Plan
	ds Diagnoses
}

func keys(m map[string]any) []string {
	ks := make([]string, 0, len(m))
	for k := range m {
		ks = append(ks, k)
	}
	sort.Strings(ks)
	return ks
}

func (d *decoder) top(m map[string]any) {
	switch f := m["format"].(type) {
	case nil:
		d.ds.add("format", "nothing", `"`+Format+`"`, `add "format": "`+Format+`"`)
	case string:
		if f != Format {
			d.ds.add("format", show(f), `"`+Format+`"`, "")
		}
	default:
		d.ds.add("format", show(f), `"`+Format+`"`, "")
	}
	d.p.Title = d.line(m, "title", 200)
	d.p.Note = d.line(m, "note", 4000)
	d.object("", m, []string{"format", "title", "note", "sweep", "goals"})
	if raw, ok := m["sweep"]; ok {
		d.p.Sweep = d.sweep(raw)
	}
	if raw, ok := m["goals"]; ok {
		d.p.Goals = d.goals(raw)
	}
}

func (d *decoder) line(m map[string]any, key string, limit int) string {
	v, ok := m[key]
	if !ok {
		return ""
	}
	s, ok := v.(string)
	if !ok || utf8.RuneCountInString(s) > limit {
		d.ds.add(key, show(v), fmt.Sprintf("text of up to %d letters", limit), "")
		return ""
	}
	return s
}

// object reads the fields of an object at a path. also are keys read elsewhere.
func (d *decoder) object(at string, m map[string]any, also []string) {
	for _, k := range keys(m) {
		path := k
		if at != "" {
			path = at + "." + k
		}
		v := m[k]
		f := byPath[path]
		switch {
		case slices.Contains(also, k):
		case path == "heart.foci":
			d.p.Foci = d.items(path, v, MaxFoci)
		case path == pathways:
			d.p.Pathways = d.items(path, v, MaxPathways)
		case path == "interventions":
			d.p.Interventions = d.items(path, v, MaxInterventions)
		case f != nil && f.Kind != Group:
			if value, ok := d.leaf(path, f, v); ok {
				d.p.values[path] = value
			}
		case objects[path] && v == nil && f != nil && f.Nullable:
			d.p.values[path] = Value{Null: true}
		case objects[path]:
			sub, ok := v.(map[string]any)
			if !ok {
				d.ds.add(path, show(v), "an object", "")
				continue
			}
			if f != nil && f.IsNull {
				d.p.values[path] = Value{}
			}
			d.object(path, sub, nil)
		default:
			d.ds.add(path, "a field that is not known", "", meant(k, below(at)))
		}
	}
}

// below lists the names that may stand in the object at a path.
func below(at string) []string {
	prefix := at
	if at != "" {
		prefix += "."
	}
	var names []string
	for _, f := range catalogue {
		if rest, ok := strings.CutPrefix(f.Path, prefix); ok {
			name, _, _ := strings.Cut(rest, ".")
			name = strings.TrimSuffix(name, "[]")
			if len(names) == 0 || names[len(names)-1] != name {
				names = append(names, name)
			}
		}
	}
	if at == "" {
		names = append(names, "format", "title", "note", "sweep", "goals")
	}
	return names
}

func (d *decoder) items(at string, v any, limit int) []Item {
	list, ok := v.([]any)
	if !ok {
		d.ds.add(at, show(v), "a list", "")
		return nil
	}
	if len(list) > limit {
		d.ds.add(at, fmt.Sprintf("%d items", len(list)), fmt.Sprintf("up to %d", limit), "")
		return nil
	}
	var out []Item
	for i, v := range list {
		path := fmt.Sprintf("%s[%d]", at, i)
		m, ok := v.(map[string]any)
		if !ok {
			d.ds.add(path, show(v), "an object", "")
			continue
		}
		item := Item{}
		for _, k := range keys(m) {
			f := byPath[at+"[]."+k]
			if f == nil {
				d.ds.add(path+"."+k, "a field that is not known", "", meant(k, below(at+"[]")))
				continue
			}
			if value, ok := d.leaf(path+"."+k, f, m[k]); ok {
				item[k] = value
			}
		}
		out = append(out, item)
	}
	return out
}

// leaf reads one value and judges it by its field.
func (d *decoder) leaf(path string, f *Field, v any) (Value, bool) {
	value, allowed := judge(f, v)
	if allowed != "" {
		note := ""
		if s, ok := v.(string); ok && f.Kind == Choice {
			note = meant(s, f.Choices)
		}
		d.ds.add(path, show(v), allowed, note)
	}
	return value, allowed == ""
}

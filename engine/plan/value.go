package plan

import (
	"strconv"
	"strings"
)

// Stated gives what the plan itself says at the path of a single value, as text, and
// whether it says anything. Defaults are not statements.
func (p *Plan) Stated(path string) (text string, ok bool) {
	v, ok := p.values[path]
	f := byPath[path]
	if !ok || f == nil || f.Kind == Group || f.Kind == List {
		return "", false
	}
	switch {
	case v.Null:
		return "null", true
	case f.Kind == Switch:
		return strconv.FormatBool(v.On), true
	case f.Kind == Number:
		return plainNumber(v.Number), true
	}
	return v.Text, true
}

// State puts a value given as text at the path of a single value. The error, a
// [Diagnoses], names the path, the text and what is allowed.
func (p *Plan) State(path, text string) error {
	f := byPath[path]
	if f == nil || f.Kind == Group || f.Kind == List {
		return Diagnoses{{Path: path, Found: "a field that is not known", Note: meant(path, settable())}}
	}
	var raw any = text
	switch {
	case text == "null":
		raw = nil
	case f.Kind == Number:
		if x, err := strconv.ParseFloat(text, 64); err == nil {
			raw = x
		}
	case f.Kind == Switch:
		if on, err := strconv.ParseBool(text); err == nil {
			raw = on
		}
	}
	v, allowed := judge(f, raw)
	if allowed != "" {
		return Diagnoses{{Path: path, Found: clip(show(text)), Allowed: allowed}}
	}
	p.values[path] = v
	return nil
}

// Absent tells whether the path or an object around it is null, by the plan or by
// default.
func (p *Plan) Absent(path string) bool { return p.null(path) }

// FieldAt describes the value at a path with the places in lists filled in, such as
// "heart.foci[0].rate_bpm".
func FieldAt(path string) (Field, bool) {
	name := unplaced(path)
	for _, name := range [...]string{name, strings.TrimSuffix(name, "[]")} { // the second: a place in a list of numbers
		if f := byPath[name]; f != nil {
			return *f, true
		}
	}
	return Field{}, false
}

// unplaced is a path without the places in its lists: "heart.foci[].rate_bpm". By hand,
// for package regexp would be a tenth of what the page loads.
func unplaced(path string) string {
	out := make([]byte, 0, len(path))
	for i := 0; i < len(path); i++ {
		out = append(out, path[i])
		if path[i] != '[' {
			continue
		}
		j := i + 1
		for j < len(path) && path[j] >= '0' && path[j] <= '9' {
			j++
		}
		if j < len(path) && path[j] == ']' {
			i = j - 1
		}
	}
	return string(out)
}

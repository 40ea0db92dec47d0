package plan

import (
	"fmt"
	"maps"
	"slices"
	"strings"
)

// SettingChange is a setting in which two plans differ. Before and After are texts with
// units, as the file has them; "default" follows a value that only the default gives,
// and the empty text is an item of a list that the plan does not have.
type SettingChange struct {
	Path   string `json:"path"` // "heart.sinus.rate_bpm", "interventions[2].at_ms"
	Label  string `json:"label"`
	Before string `json:"before"`
	After  string `json:"after"`
}

// Changes lists what differs between two plans in the order of the file. A value that
// is typed in one and the same by default in the other does not differ. Items of a list
// are compared one by one between those at its beginning and its end that are the same.
func Changes(before, after *Plan) []SettingChange {
	out := []SettingChange{}
	for _, f := range catalogue {
		switch {
		case f.Path == "heart.foci[].site":
			out = append(out, itemChanges("heart.foci", before.Foci, after.Foci)...)
		case f.Path == "interventions[].at_ms":
			out = append(out, itemChanges("interventions", before.Interventions, after.Interventions)...)
		case strings.Contains(f.Path, "[]"):
		default:
			b, a := before.said(f), after.said(f)
			if strings.TrimSuffix(b, byDefault) != strings.TrimSuffix(a, byDefault) {
				out = append(out, SettingChange{f.Path, f.Label, b, a})
			}
		}
	}
	return out
}

const byDefault = " (default)"

// said writes the value that holds at a field's place.
func (p *Plan) said(f *Field) string {
	v, given := p.values[f.Path]
	switch {
	case given && f.Kind == Group && !v.Null, !given && f.Kind == Group && !f.IsNull, !given && p.anyGivenUnder(f.Path):
		return "present"
	case given:
		return v.text(f)
	case p.null(f.Path):
		return "none" + byDefault
	case f.Default != nil:
		return (Value{Number: *f.Default}).text(f) + byDefault
	case f.Kind == Switch:
		return (Value{On: f.On}).text(f) + byDefault
	case f.Word != "":
		return f.Word + byDefault
	}
	return "not given"
}

// text writes a value with its unit.
func (v Value) text(f *Field) string {
	unit := ""
	switch {
	case strings.HasPrefix(f.Unit, "/"):
		unit = f.Unit
	case f.Unit != "":
		unit = " " + f.Unit
	}
	switch j := v.json(f).(type) {
	case nil:
		if f.Null != "" {
			return "none: " + f.Null
		}
		return "none"
	case bool:
		if j {
			return "on"
		}
		return "off"
	case []float64:
		var parts []string
		for _, x := range j {
			parts = append(parts, plainNumber(x))
		}
		return strings.Join(parts, ", ") + unit
	case float64:
		return plainNumber(j) + unit
	case string:
		return j
	default:
		return fmt.Sprint(j)
	}
}

func itemChanges(list string, before, after []Item) []SettingChange {
	same := 0
	for same < min(len(before), len(after)) && before[same].equal(after[same]) {
		same++
	}
	tail := 0
	for tail < min(len(before), len(after))-same && before[len(before)-1-tail].equal(after[len(after)-1-tail]) {
		tail++
	}
	b, a := before[same:len(before)-tail], after[same:len(after)-tail]
	var out []SettingChange
	for i := range max(len(b), len(a)) {
		at := fmt.Sprintf("%s[%d]", list, same+i)
		switch {
		case i >= len(b):
			out = append(out, SettingChange{at, "added", "", a[i].said(list)})
		case i >= len(a):
			out = append(out, SettingChange{at, "taken away", b[i].said(list), ""})
		case b[i]["do"].Text != a[i]["do"].Text:
			out = append(out, SettingChange{at, "another", b[i].said(list), a[i].said(list)})
		default:
			out = append(out, b[i].changes(list, at, a[i])...)
		}
	}
	return out
}

func (it Item) equal(o Item) bool {
	return maps.EqualFunc(it, o, func(v, w Value) bool {
		return v.Null == w.Null && v.Number == w.Number && v.Text == w.Text && v.On == w.On && slices.Equal(v.List, w.List)
	})
}

// itemFieldsOf calls f for every field of the list's items, in the order of the file.
func itemFieldsOf(list string, f func(name string, f *Field)) {
	for _, field := range catalogue {
		if name, ok := strings.CutPrefix(field.Path, list+"[]."); ok {
			f(name, field)
		}
	}
}

func (it Item) changes(list, at string, after Item) []SettingChange {
	var out []SettingChange
	itemFieldsOf(list, func(name string, f *Field) {
		b, a := it.value(name, f), after.value(name, f)
		if b != a {
			out = append(out, SettingChange{at + "." + name, f.Label, b, a})
		}
	})
	return out
}

func (it Item) value(name string, f *Field) string {
	if v, ok := it[name]; ok {
		return v.text(f)
	}
	if f.Default != nil {
		return (Value{Number: *f.Default}).text(f)
	}
	if f.Kind == Switch {
		return "off"
	}
	return "not given"
}

// said describes an item: "stimulate, at 4000 ms, site rv_apex".
func (it Item) said(list string) string {
	var parts []string
	if do := it["do"].Text; do != "" {
		parts = append(parts, do)
	}
	itemFieldsOf(list, func(name string, f *Field) {
		if v, ok := it[name]; ok && name != "do" {
			parts = append(parts, f.Label+" "+v.text(f))
		}
	})
	return strings.Join(parts, ", ")
}

package report

import (
	"strconv"
	"strings"

	"escapement/engine/plan"
	"escapement/engine/scene"
)

// settings lists what the plan states and, assumed, the everyday numbers that it does
// not. What its mode has no use for and what lies in an absent part is left out.
func (c rows) settings() []scene.Setting {
	p := c.Plan
	var out []scene.Setting
	for _, f := range plan.Catalogue() {
		if strings.Contains(f.Path, "[]") || f.Kind == plan.List {
			continue
		}
		if s, ok := c.setting(&f); ok {
			out = append(out, s)
		}
	}
	out = append(out, items("Foci", "heart.foci[]", "site", p.Foci)...)
	return append(out, items("Interventions", "interventions[]", "at_ms", p.Interventions)...)
}

func (c rows) setting(f *plan.Field) (scene.Setting, bool) {
	p := c.Plan
	s := scene.Setting{Group: group(f.Path), Label: label(f)}
	if f.Kind == plan.Group {
		if !p.Absent(f.Path) || f.IsNull || parentAbsent(p, f.Path) {
			return s, false
		}
		s.Value, s.Word, s.State = f.Null, true, scene.Changed
		return s, true
	}
	text, stated := p.Stated(f.Path)
	if !stated {
		if f.Advanced || p.Absent(f.Path) || c.idle(f.Path) {
			return s, false
		}
		if s.Value = standing(f); s.Value == "" || s.Value == "0" {
			return s, false // none, or something that adds nothing
		}
		s.State = scene.Assumed
	} else {
		if parentAbsent(p, f.Path) {
			return s, false
		}
		if s.Value = text; text != standing(f) {
			s.State = scene.Changed
		}
		if text == "null" {
			s.Value, s.Word = f.Null, true
			return s, true
		}
	}
	s.Value = words(f, s.Value)
	s.Unit, s.Word = f.Unit, f.Kind != plan.Number
	if f.Normal != nil {
		s.Normal = between(f.Normal.Low, f.Normal.High, f.Unit)
	}
	return s, true
}

func parentAbsent(p *plan.Plan, path string) bool {
	i := strings.LastIndexByte(path, '.')
	return i > 0 && p.Absent(path[:i])
}

// standing is the default as text, or "" where there is none.
func standing(f *plan.Field) string {
	switch {
	case f.Kind == plan.Switch:
		return strconv.FormatBool(f.On)
	case f.Default != nil:
		return strconv.FormatFloat(*f.Default, 'f', -1, 64)
	}
	return f.Word
}

func words(f *plan.Field, text string) string {
	switch {
	case f.Kind == plan.Switch && text == "true":
		return "on"
	case f.Kind == plan.Switch:
		return "off"
	case f.Kind == plan.Choice:
		return strings.ReplaceAll(text, "_", " ")
	}
	return text
}

// idle tells whether nothing uses an everyday number that the plan does not state: the
// node's clinical numbers where its curve is given outright, and what the mode of the
// device has no use for.
func (c rows) idle(path string) bool {
	const fast = "heart.av_node.fast."
	if strings.HasPrefix(path, fast) {
		_, curve := c.Plan.Stated(fast + "min_ms")
		return curve || c.Plan.Absent(fast+"ah_ms") && path != fast+"va_ms"
	}
	name, of := strings.CutPrefix(path, "pacemaker.")
	if !of || c.Device == nil {
		return of
	}
	m := c.Device.Settings.Mode
	switch name {
	case "max_tracking_rate_bpm", "sensed_av_ms":
		return !m.Tracks()
	case "paced_av_ms", "base_timing":
		return !(m.PacesA() && m.PacesV())
	case "pvarp_ms", "pvab_ms":
		return !(m.SensesA() && m.PacesV())
	case "ventricular_refractory_ms":
		return !m.SensesV()
	}
	return false
}

var groups = []struct{ prefix, name string }{
	{"heart.sinus", "Sinus node"}, {"heart.atria", "Atria"}, {"heart.av_node", "AV node"},
	{"heart.his_purkinje", "His-Purkinje"}, {"heart.ventricles", "Ventricles"},
	{"pacemaker.leads", "Leads of the device"}, {"pacemaker", "Pacemaker"}, {"heart", "Heart"},
}

func group(path string) string {
	for _, g := range groups {
		if strings.HasPrefix(path, g.prefix) {
			return g.name
		}
	}
	return "Strip"
}

// label names a field together with the part that it belongs to, which the page
// shows around it.
func label(f *plan.Field) string {
	parts := strings.Split(f.Path, ".")
	var around []string
	for i := 2; i < len(parts)-1; i++ {
		switch parts[i] {
		case "fast", "exit", "leads":
			continue
		}
		w := strings.ReplaceAll(parts[i], "_", " ")
		around = append(around, strings.NewReplacer(" av", " AV", "pvarp", "PVARP").Replace(w))
	}
	if parts[0] == "pacemaker" && len(parts) == 3 {
		around = []string{strings.NewReplacer("_", " ", "av", "AV", "pvarp", "PVARP").Replace(parts[1])}
	}
	return strings.Join(append(around, f.Label), ", ")
}

// mostItems bounds how many foci or interventions are printed.
const mostItems = 40

// items lists foci or interventions, one a row: first the field that tells them apart,
// then the others that they state.
func items(name, list, first string, its []plan.Item) []scene.Setting {
	var out []scene.Setting
	for i, it := range its {
		if i == mostItems {
			out = append(out, scene.Setting{Group: name, Label: "and more", Word: true, Value: strconv.Itoa(len(its) - i)})
			break
		}
		s := scene.Setting{Group: name, Word: true, State: scene.Changed}
		var rest []string
		for _, f := range plan.Catalogue() {
			field, of := strings.CutPrefix(f.Path, list+".")
			v, has := it[field]
			if !of || !has {
				continue
			}
			text := valued(&f, v)
			switch {
			case field == first:
				s.Label = text
			case field == "do":
				rest = append(rest, text)
			default:
				rest = append(rest, f.Label+" "+text)
			}
		}
		s.Value = strings.Join(rest, ", ")
		out = append(out, s)
	}
	return out
}

func valued(f *plan.Field, v plan.Value) string {
	switch {
	case v.Null:
		return "none"
	case f.Kind == plan.Switch:
		return words(f, strconv.FormatBool(v.On))
	case f.Kind == plan.Choice:
		return words(f, v.Text)
	case v.Text != "":
		return v.Text
	case len(v.List) > 0:
		parts := make([]string, len(v.List))
		for i, x := range v.List {
			parts[i] = strconv.FormatFloat(x, 'f', -1, 64)
		}
		return strings.TrimSpace(strings.Join(parts, " ") + " " + f.Unit)
	}
	return strings.TrimSpace(strconv.FormatFloat(v.Number, 'f', -1, 64) + " " + f.Unit)
}

package plan

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"escapement/engine/heart"
)

// axis reads one axis of a sweep.
func (d *decoder) axis(at string, raw any) *Axis {
	m, ok := raw.(map[string]any)
	if !ok {
		d.ds.add(at, show(raw), "an object with field, and from, to and step or values", "")
		return nil
	}
	before := len(d.ds)
	for _, k := range keys(m) {
		if !slices.Contains(axisKeys, k) {
			d.ds.add(at+"."+k, "a field that is not known", "", meant(k, axisKeys))
		}
	}
	a := &Axis{}
	f := d.axisField(at, m, a)
	if f == nil {
		return nil
	}
	if list, ok := m["values"]; ok {
		d.axisList(at, f, m, list, a)
	} else {
		d.axisRange(at, f, m, a)
	}
	if len(d.ds) > before {
		return nil
	}
	return a
}

var axisKeys = []string{"field", "premature", "after_ms", "from", "to", "step", "values"}

// axisField reads what an axis varies.
func (d *decoder) axisField(at string, m map[string]any, a *Axis) *Field {
	site, extra := m["premature"]
	if extra {
		sites := &Field{Kind: Choice, Choices: heart.SiteNames()}
		v, ok := d.leaf(at+".premature", sites, site)
		if _, both := m["field"]; both {
			d.ds.add(at+".field", show(m["field"]), "field or premature, not both", "")
		}
		after := Value{}
		if raw, given := m["after_ms"]; given {
			var good bool
			after, good = d.leaf(at+".after_ms", byPath["interventions[].at_ms"], raw)
			ok = ok && good
		}
		if !ok {
			return nil
		}
		a.Premature, a.AfterMS = v.Text, after.Number
		return coupling
	}
	if _, given := m["after_ms"]; given {
		d.ds.add(at+".after_ms", show(m["after_ms"]), "with premature only", "")
	}
	if f := d.variable(at+".field", m["field"]); f != nil {
		a.Field = m["field"].(string)
		return f
	}
	return nil
}

// variable judges the path of a value of the plan that may take others.
func (d *decoder) variable(at string, raw any) *Field {
	const allowed = "the path of a field of the plan, such as heart.sinus.rate_bpm or interventions[0].at_ms"
	path, ok := raw.(string)
	if !ok {
		d.ds.add(at, show(raw), allowed, "")
		return nil
	}
	field, item := itemPath(path)
	f := byPath[field]
	items, what := d.p.list(field)
	switch {
	case f == nil || f.Kind == List || f.Kind == Group && path == device || (item >= 0) != strings.Contains(field, "[]"):
		d.ds.add(at, show(path), allowed, meant(path, sweepable()))
	case item >= len(items):
		d.ds.add(at, show(path), fmt.Sprintf("one of the %d %s of this plan", len(items), what), "")
	case strings.HasPrefix(path, device+".") && d.p.null(device):
		d.ds.add(at, show(path), "a field of the heart: this plan has no pacemaker", `"pacemaker": {} adds one`)
	default:
		return f
	}
	return nil
}

func sweepable() []string {
	var names []string
	for _, f := range catalogue {
		if f.Kind != List && f.Kind != Group {
			names = append(names, f.Path)
		}
	}
	return names
}

func (d *decoder) axisList(at string, f *Field, m map[string]any, raw any, a *Axis) {
	for _, k := range []string{"from", "to", "step"} {
		if _, given := m[k]; given {
			d.ds.add(at+"."+k, show(m[k]), "values, or from, to and step, not both", "")
		}
	}
	list, ok := raw.([]any)
	if !ok || len(list) == 0 || len(list) > MaxAxisValues {
		found := show(raw)
		if ok {
			found = fmt.Sprintf("%d values", len(list))
		}
		d.ds.add(at+".values", found, fmt.Sprintf("a list of 1 to %d values", MaxAxisValues), "")
		return
	}
	for i, v := range list {
		path := fmt.Sprintf("%s.values[%d]", at, i)
		if f.Kind == Group {
			if s, _ := v.(string); v != nil && s != "default" {
				d.ds.add(path, show(v), `null, or "default" for what it is without`, "")
			}
			value := Value{Null: v == nil}
			if v != nil {
				value.Text = "default"
			}
			a.Values = append(a.Values, value)
			continue
		}
		if value, ok := d.leaf(path, f, v); ok {
			a.Values = append(a.Values, value)
		}
	}
}

func (d *decoder) axisRange(at string, f *Field, m map[string]any, a *Axis) {
	if f.Kind != Number && f.Kind != Any {
		d.ds.add(at+".values", "nothing", "a list of values: a range is for numbers", "")
		return
	}
	s := &Steps{}
	good := true
	for _, e := range []struct {
		name string
		into *float64
	}{{"from", &s.From}, {"to", &s.To}} {
		v, ok := d.leaf(at+"."+e.name, f, m[e.name])
		if v.Null || v.Text != "" {
			d.ds.add(at+"."+e.name, show(m[e.name]), "a number", "")
			ok = false
		}
		*e.into, good = v.Number, good && ok
	}
	step, ok := number(m["step"])
	if s.Step = step; !ok || step <= 0 || f.Whole && step != math.Trunc(step) {
		allowed := "a number above 0"
		if f.Whole {
			allowed = "a whole number above 0"
		}
		d.ds.add(at+".step", show(m["step"]), allowed, "")
		good = false
	}
	switch {
	case !good:
	case s.To < s.From:
		d.ds.add(at+".to", show(m["to"]), "from ("+plainNumber(s.From)+") or more", "")
	case float64(s.To-s.From)/s.Step >= MaxAxisValues:
		d.ds.add(at+".step", fmt.Sprintf("%s, which gives %.0f values", plainNumber(s.Step), math.Floor(float64(s.To-s.From)/s.Step)+1), fmt.Sprintf("up to %d values", MaxAxisValues), "")
	default:
		a.Range, a.Values = s, s.values()
	}
}

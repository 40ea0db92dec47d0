package plan

import (
	"encoding/json"
	"fmt"
	"slices"
	"strings"
	"unicode/utf8"
)

// ReadGoals decodes goals for this plan, as they stand under "goals" in a plan file,
// and leaves the plan as it is. The error, a [Diagnoses], names every place that is
// wrong.
func (p *Plan) ReadGoals(data []byte) (*Goals, error) {
	dec := json.NewDecoder(strings.NewReader(string(data)))
	dec.UseNumber()
	var raw any
	q := *p
	d := &decoder{p: &q}
	if err := dec.Decode(&raw); err != nil {
		d.ds.add("goals", "not JSON: "+err.Error(), "an object", "")
		return nil, d.ds
	}
	q.Goals = d.goals(raw)
	if len(d.ds) == 0 {
		d.situationsTogether()
	}
	return q.Goals, d.ds.err()
}

const goalsHint = "an object with settings, situations, and must, prefer or both; perhaps seeds"

// goals reads the section; it needs the rest of the plan to be there.
func (d *decoder) goals(raw any) *Goals {
	m, ok := raw.(map[string]any)
	if !ok {
		d.ds.add("goals", show(raw), goalsHint, "")
		return nil
	}
	g := &Goals{}
	d.only("goals", m, "settings", "situations", "must", "prefer", "seeds")
	d.each("goals.settings", m["settings"], 1, MaxSettings, func(at string, m map[string]any) { d.setting(at, m, g) })
	d.each("goals.situations", m["situations"], 1, MaxSituations, func(at string, m map[string]any) { d.situation(at, m, g) })
	if _, given := m["must"]; given {
		d.each("goals.must", m["must"], 0, MaxGoals, func(at string, m map[string]any) { d.goal(at, m, g) })
	}
	if _, given := m["prefer"]; given {
		d.each("goals.prefer", m["prefer"], 0, MaxGoals, func(at string, m map[string]any) { d.wish(at, m, g) })
	}
	if raw, given := m["seeds"]; given {
		g.Seeds = d.seeds("goals.seeds", raw)
	}
	if len(g.Must)+len(g.Prefer) == 0 && len(d.ds) == 0 {
		d.ds.add("goals.must", "nothing", "a goal, or something to prefer", `such as "must": [{"outcome": "longest_pause_ms", "at_most": 1500}]`)
	}
	if len(d.ds) == 0 && float64(g.Combinations())*float64(g.Runs()) > MaxRuns {
		d.ds.add("goals", fmt.Sprintf("%d settings with %d runs each", g.Combinations(), g.Runs()), fmt.Sprintf("up to %d runs", MaxRuns), "take fewer values, situations or seeds")
	}
	return g
}

// only refuses keys besides those named.
func (d *decoder) only(at string, m map[string]any, names ...string) {
	for _, k := range keys(m) {
		if !slices.Contains(names, k) {
			d.ds.add(at+"."+k, "a field that is not known", strings.Join(names, ", "), meant(k, names))
		}
	}
}

// each reads a list of objects.
func (d *decoder) each(at string, raw any, least, most int, read func(at string, m map[string]any)) {
	list, ok := raw.([]any)
	if !ok || len(list) < least || len(list) > most {
		found := show(raw)
		switch {
		case raw == nil:
			found = "nothing"
		case ok:
			found = fmt.Sprintf("%d items", len(list))
		}
		d.ds.add(at, found, fmt.Sprintf("a list of %d to %d objects", least, most), "")
		return
	}
	for i, v := range list {
		path := fmt.Sprintf("%s[%d]", at, i)
		m, ok := v.(map[string]any)
		if !ok {
			d.ds.add(path, show(v), "an object", "")
			continue
		}
		read(path, m)
	}
}

func (d *decoder) setting(at string, m map[string]any, g *Goals) {
	if _, given := m["premature"]; given {
		d.ds.add(at+".premature", show(m["premature"]), "a field: a premature beat is no setting", "put it in a situation, under vary")
		return
	}
	a := d.axis(at, m)
	if a == nil {
		return
	}
	for i := range g.Settings {
		if g.Settings[i].Field == a.Field {
			d.ds.add(at+".field", show(a.Field), "another field than those before", "")
		}
	}
	g.Settings = append(g.Settings, *a)
}

func (d *decoder) situation(at string, m map[string]any, g *Goals) {
	d.only(at, m, "name", "set", "interventions", "vary")
	s := Situation{}
	s.Name, _ = m["name"].(string)
	if s.Name == "" || utf8.RuneCountInString(s.Name) > 80 {
		d.ds.add(at+".name", show(m["name"]), "a name of up to 80 letters", "")
	}
	for i := range g.Situations {
		if g.Situations[i].Name == s.Name {
			d.ds.add(at+".name", show(s.Name), "another name than those before", "")
		}
	}
	if raw, given := m["set"]; given {
		d.assigned(at+".set", raw, &s)
	}
	for _, a := range s.Set {
		for i := range g.Settings {
			if g.Settings[i].Field == a.Field {
				d.ds.add(at+".set."+a.Field, "a setting that is searched for", "a value that is not among the settings", "")
			}
		}
	}
	inner := &decoder{p: d.p}
	if raw, given := m["interventions"]; given {
		s.Then = inner.items("interventions", raw, MaxInterventions)
	}
	d.within(at, inner, 0)
	if raw, given := m["vary"]; given {
		inner = &decoder{p: d.p.In(&s)}
		s.Vary = inner.axis(at+".vary", raw)
		d.ds = append(d.ds, inner.ds...)
		if s.Vary != nil && s.Vary.Field != "" && slices.ContainsFunc(g.Settings, func(a Axis) bool { return a.Field == s.Vary.Field }) {
			d.ds.add(at+".vary.field", show(s.Vary.Field), "a value that is not among the settings", "")
		}
	}
	g.Situations = append(g.Situations, s)
}

// within takes over what was found wrong in a situation, whose interventions stand
// behind so many of the plan's own.
func (d *decoder) within(at string, inner *decoder, own int) {
	for _, x := range inner.ds {
		if rest, ok := strings.CutPrefix(x.Path, "interventions["); ok {
			n, tail := 0, ""
			if k, _ := fmt.Sscanf(rest, "%d]%s", &n, &tail); k > 0 && n >= own {
				x.Path = fmt.Sprintf("interventions[%d]%s", n-own, tail)
			}
		}
		x.Path = at + "." + x.Path
		d.ds = append(d.ds, x)
	}
}

// situationsTogether judges every situation as a plan of its own, once the plan itself
// is known to be good.
func (d *decoder) situationsTogether() {
	if d.p.Goals == nil {
		return
	}
	for i := range d.p.Goals.Situations {
		inner := &decoder{p: d.p.In(&d.p.Goals.Situations[i])}
		inner.together()
		d.within(fmt.Sprintf("goals.situations[%d]", i), inner, len(d.p.Interventions))
		// What together makes of a value that an intervention sets is kept.
		for k := range d.p.Goals.Situations[i].Then {
			d.p.Goals.Situations[i].Then[k] = inner.p.Interventions[len(d.p.Interventions)+k]
		}
	}
}

// assigned reads an object of paths and values.
func (d *decoder) assigned(at string, raw any, s *Situation) {
	m, ok := raw.(map[string]any)
	if !ok {
		d.ds.add(at, show(raw), `an object of paths and values, such as {"heart.sinus.rate_bpm": 150}`, "")
		return
	}
	for _, k := range keys(m) {
		f := d.variable(at+"."+k, k)
		if f == nil {
			continue
		}
		if f.Kind == Group {
			if word, _ := m[k].(string); m[k] != nil && word != "default" {
				d.ds.add(at+"."+k, show(m[k]), `null, or "default" for what it is without`, "")
				continue
			}
			v := Value{Null: m[k] == nil}
			if m[k] != nil {
				v.Text = "default"
			}
			s.Set = append(s.Set, Assigned{k, v})
			continue
		}
		if v, ok := d.leaf(at+"."+k, f, m[k]); ok {
			s.Set = append(s.Set, Assigned{k, v})
		}
	}
}

// situations reads the names of situations.
func (d *decoder) situations(at string, m map[string]any, g *Goals) []string {
	raw, given := m["in"]
	if !given {
		return nil
	}
	var names, out []string
	for i := range g.Situations {
		names = append(names, g.Situations[i].Name)
	}
	list, ok := raw.([]any)
	if !ok || len(list) == 0 {
		d.ds.add(at+".in", show(raw), "a list of names of situations", "")
		return nil
	}
	for i, v := range list {
		s, _ := v.(string)
		if !slices.Contains(names, s) || slices.Contains(out, s) {
			d.ds.add(fmt.Sprintf("%s.in[%d]", at, i), show(v), "each once of "+strings.Join(names, ", "), meant(s, names))
			continue
		}
		out = append(out, s)
	}
	return out
}

// outcome reads the name of an outcome.
func (d *decoder) outcome(at string, m map[string]any, fits func(Outcome) bool) (Outcome, bool) {
	var names []string
	for _, o := range Outcomes() {
		if fits(o) {
			names = append(names, o.Name)
		}
	}
	s, _ := m["outcome"].(string)
	if !slices.Contains(names, s) {
		found := show(m["outcome"])
		if _, given := m["outcome"]; !given {
			found = "nothing"
		}
		d.ds.add(at+".outcome", found, "one of "+strings.Join(names, ", "), meant(s, names))
		return Outcome{}, false
	}
	return OutcomeNamed(s), true
}

func (d *decoder) goal(at string, m map[string]any, g *Goals) {
	d.only(at, m, "name", "outcome", "in", "at_least", "at_most", "equal", "none_of")
	o, ok := d.outcome(at, m, func(Outcome) bool { return true })
	if !ok {
		return
	}
	x := Goal{Outcome: o.Name, In: d.situations(at, m, g)}
	if raw, given := m["name"]; given {
		x.Name, _ = raw.(string)
		if x.Name == "" || utf8.RuneCountInString(x.Name) > 80 {
			d.ds.add(at+".name", show(raw), "a name of up to 80 letters", "")
		}
	}
	takes := map[OutcomeKind][]string{NumberOutcome: {"at_least", "at_most", "equal"}, WordOutcome: {"equal", "none_of"}, WordsOutcome: {"none_of"}}[o.Kind]
	before, n := len(d.ds), 0
	for _, k := range []string{"at_least", "at_most", "equal", "none_of"} {
		raw, given := m[k]
		if !given {
			continue
		}
		n++
		if !slices.Contains(takes, k) {
			d.ds.add(at+"."+k, show(raw), o.Name+" takes "+strings.Join(takes, ", "), "")
			continue
		}
		d.condition(at+"."+k, k, raw, o, &x)
	}
	if n == 0 {
		d.ds.add(at, "a goal without a condition", strings.Join(takes, ", "), "")
	}
	if x.AtLeast != nil && x.AtMost != nil && *x.AtLeast > *x.AtMost {
		d.ds.add(at+".at_most", plainNumber(*x.AtMost), "at_least ("+plainNumber(*x.AtLeast)+") or more", "")
	}
	if len(d.ds) == before {
		g.Must = append(g.Must, x)
	}
}

func (d *decoder) condition(at, k string, raw any, o Outcome, x *Goal) {
	if o.Kind == NumberOutcome {
		v, ok := number(raw)
		if !ok {
			d.ds.add(at, show(raw), "a number", "")
			return
		}
		if k != "at_most" {
			x.AtLeast = &v
		}
		if k != "at_least" {
			x.AtMost = &v
		}
		return
	}
	var list []string
	if s, ok := raw.(string); ok && k == "equal" {
		list = []string{s}
	} else {
		items, _ := raw.([]any)
		for _, v := range items {
			s, _ := v.(string)
			list = append(list, s)
		}
	}
	if len(list) == 0 || len(list) > 20 || slices.ContainsFunc(list, func(s string) bool { return s == "" || len(s) > 80 }) {
		d.ds.add(at, show(raw), "a word, or a list of 1 to 20 words: "+o.Help, "")
		return
	}
	for _, s := range list {
		if known := wordsOf[o.Name]; known != nil && !slices.Contains(known, s) {
			d.ds.add(at, show(s), strings.Join(known, ", "), meant(s, known))
		}
	}
	if k == "equal" {
		x.Equal = list
	} else {
		x.NoneOf = list
	}
}

// wordsOf are the words of outcomes that have but a few.
var wordsOf = map[string][]string{
	"endless_loop": {"none", "brief", "ended", "sustained"},
	"va_synchrony": {"none", "ended", "sustained"},
}

func (d *decoder) wish(at string, m map[string]any, g *Goals) {
	d.only(at, m, "outcome", "setting", "in", "best")
	before := len(d.ds)
	w := Wish{In: d.situations(at, m, g)}
	if raw, given := m["setting"]; given {
		w.Setting, _ = raw.(string)
		i := slices.IndexFunc(g.Settings, func(a Axis) bool { return a.Field == w.Setting })
		if i < 0 || g.Settings[i].Described().Kind != Number {
			d.ds.add(at+".setting", show(raw), "the field of one of the settings, a number", "")
		}
		if _, both := m["outcome"]; both || w.In != nil {
			d.ds.add(at+".setting", show(raw), "setting alone, without outcome and in", "")
		}
	} else {
		o, _ := d.outcome(at, m, func(o Outcome) bool { return o.Kind == NumberOutcome })
		w.Outcome = o.Name
	}
	switch m["best"] {
	case "lowest":
	case "highest":
		w.Highest = true
	default:
		d.ds.add(at+".best", show(m["best"]), "lowest or highest", "")
	}
	if len(d.ds) == before {
		g.Prefer = append(g.Prefer, w)
	}
}

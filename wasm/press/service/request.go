package service

import (
	"bytes"
	"encoding/json"
	"fmt"
	"net/http"
	"net/url"
	"regexp"
	"slices"
	"strings"

	"escapement/engine/lead"
	"escapement/engine/plan"
	"escapement/engine/scene"
	"escapement/engine/signal"
	"escapement/presets"
)

// Request is a plan and how it is to be printed.
type Request struct {
	Plan    json.RawMessage // a plan, or the name of a preset
	Before  json.RawMessage // the other plan of a comparison
	Paper   string          // as in [scene.ParsePaper], or Roll; left out: A4, lying for strips and standing for reports
	Speed   float64         // mm/s
	Gain    float64         // mm/mV
	Leads   []string
	Lanes   []string // from top to bottom, by their names on the page; in place of Leads
	EGMGain float64  // of electrograms among the lanes, mm/mV
	Form    string   // the twelve leads as on paper, "3x4 + rhythm"; left out: 3x4 + rhythm for twelve, none elsewhere
	Ladder  string   // "full", "plain" or "none"; left out: full, and none below twelve leads
	Device  bool     // its lane, where the plan has one
	From    float64  // ms
	To      float64  // ms; 0 is the end of the strip
	Fill    bool     // a strip's window goes on to the end of its last line
	Dots    float64  // a millimetre, for PNG
	Page    int      // from 1, for SVG and PNG, which hold one
	Date    string   // as it stands on the print, or ""
	Version string   // likewise

	leads  []lead.Name
	paper  scene.Paper
	twelve scene.Form12
}

func usual() *Request {
	return &Request{Speed: 25, Gain: 10, EGMGain: 10, Device: true, Dots: 12, Page: 1}
}

// slot is a name of the request: what may stand there, and where it goes.
type slot struct {
	name    string
	allowed string
	quoted  bool // in a query it is a text and not a number or a switch
	into    func(*Request) any
	good    func(*Request) bool
}

var date = regexp.MustCompile(`^(\d{4}-(0[1-9]|1[0-2])-(0[1-9]|[12]\d|3[01]))?$`)

// fields is the table, in the order in which faults are told.
var fields = []slot{
	{"plan", "a plan, or the name of a preset", false, func(r *Request) any { return &r.Plan }, func(r *Request) bool { return true }},
	{"before", "a plan, or the name of a preset", false, func(r *Request) any { return &r.Before }, func(r *Request) bool { return true }},
	{"paper", "a4, letter, a3, each also with -landscape, a size such as 200x250 in mm, roll", true, func(r *Request) any { return &r.Paper }, (*Request).sized},
	{"speed_mm_s", "a number from 2.5 to 400", false, func(r *Request) any { return &r.Speed }, func(r *Request) bool { return r.Speed >= 2.5 && r.Speed <= 400 }},
	{"gain_mm_mv", "a number from 1 to 80", false, func(r *Request) any { return &r.Gain }, func(r *Request) bool { return r.Gain >= 1 && r.Gain <= 80 }},
	{"leads", "a list of I, II, III, aVR, aVL, aVF, V1 to V6", true, func(r *Request) any { return &r.Leads }, (*Request).named},
	{"lanes", "a list of lead:II, egm:HISd, membrane:his and the like, axis, ladder, device", true, func(r *Request) any { return &r.Lanes }, (*Request).laned},
	{"egm_gain", "a number from 1 to 80", false, func(r *Request) any { return &r.EGMGain }, func(r *Request) bool { return r.EGMGain >= 1 && r.EGMGain <= 80 }},
	{"paper_form", "3x4, 6x2, 12x1, each also with + rhythm, or nothing", true, func(r *Request) any { return &r.Form }, (*Request).formed},
	{"ladder", "full, plain, none", true, func(r *Request) any { return &r.Ladder }, func(r *Request) bool { return slices.Contains([]string{"full", "plain", "none"}, r.Ladder) }},
	{"device", "true, false", false, func(r *Request) any { return &r.Device }, func(r *Request) bool { return true }},
	{"from_ms", "a number from 0", false, func(r *Request) any { return &r.From }, func(r *Request) bool { return r.From >= 0 }},
	{"to_ms", "a number above from_ms; 0 for the end of the strip", false, func(r *Request) any { return &r.To }, func(r *Request) bool { return r.To == 0 || r.To > r.From }},
	{"fill", "true, false", false, func(r *Request) any { return &r.Fill }, func(r *Request) bool { return true }},
	{"dots_mm", "a number from 2 to 48", false, func(r *Request) any { return &r.Dots }, func(r *Request) bool { return r.Dots >= 2 && r.Dots <= 48 }},
	{"page", "a whole number from 1", false, func(r *Request) any { return &r.Page }, func(r *Request) bool { return r.Page >= 1 }},
	{"date", "a date as 2026-12-01, or nothing", true, func(r *Request) any { return &r.Date }, func(r *Request) bool { return date.MatchString(r.Date) }},
	{"version", "up to 40 letters", true, func(r *Request) any { return &r.Version }, func(r *Request) bool { return len([]rune(r.Version)) <= 40 }},
}

// Roll is the paper that is as large as the drawing.
const Roll = "roll"

func (r *Request) sized() bool {
	if r.Paper == Roll {
		return true
	}
	var err error
	r.paper, err = scene.ParsePaper(r.Paper)
	return err == nil
}

func (r *Request) named() bool {
	for _, name := range r.Leads {
		n, ok := lead.Parse(name)
		if !ok {
			return false
		}
		r.leads = append(r.leads, n)
	}
	return true
}

func (r *Request) laned() bool {
	for _, name := range r.Lanes {
		if !signal.Named(name) {
			return false
		}
	}
	return len(r.Lanes) > 0
}

func (r *Request) formed() bool {
	var ok bool
	r.twelve, ok = scene.ParseForm12(r.Form)
	return ok || r.Form == ""
}

// fromJSON reads a request, and tells all that is wrong with it at once.
func fromJSON(body []byte) (*Request, error) {
	var given map[string]json.RawMessage
	if err := json.Unmarshal(body, &given); err != nil || given == nil {
		note := ""
		if err != nil {
			note = err.Error()
		}
		return nil, refuse(http.StatusBadRequest, "", "no JSON object", `an object with a plan: {"plan":{...}}`, note)
	}
	r := usual()
	var found plan.Diagnoses
	for _, f := range fields {
		value, ok := given[f.name]
		delete(given, f.name)
		if !ok {
			continue
		}
		if err := json.Unmarshal(value, f.into(r)); err != nil || bytes.Equal(value, []byte("null")) || !f.good(r) {
			found = append(found, plan.Diagnosis{Path: f.name, Found: short(value), Allowed: f.allowed})
		}
	}
	for _, name := range sorted(given) {
		found = append(found, plan.Diagnosis{Path: name, Found: "a name that is not known", Allowed: names()})
	}
	if len(r.Plan) == 0 && len(found) == 0 {
		found = append(found, plan.Diagnosis{Path: "plan", Found: "nothing", Allowed: fields[0].allowed})
	}
	if len(found) > 0 {
		return nil, &refusal{http.StatusBadRequest, found}
	}
	return r, nil
}

// fromQuery reads the same names from a query.
func fromQuery(raw string) (*Request, error) {
	query, err := url.ParseQuery(raw)
	if err != nil {
		return nil, refuse(http.StatusBadRequest, "", "a query that cannot be read", "name=value&name=value", err.Error())
	}
	given := map[string]json.RawMessage{}
	for name, values := range query {
		if len(values) > 1 {
			return nil, refuse(http.StatusBadRequest, name, fmt.Sprintf("%d values", len(values)), "one", "")
		}
		given[name] = value(name, values[0])
	}
	body, err := json.Marshal(given)
	if err != nil {
		return nil, refuse(http.StatusBadRequest, "", "a query that cannot be read", names(), err.Error())
	}
	return fromJSON(body)
}

// value is a text of the query as JSON.
func value(name, text string) json.RawMessage {
	quote := func(v any) json.RawMessage {
		b, err := json.Marshal(v)
		if err != nil {
			panic("service: " + err.Error())
		}
		return b
	}
	i := slices.IndexFunc(fields, func(f slot) bool { return f.name == name })
	switch {
	case name == "leads" && text == "":
		return quote([]string{})
	case name == "leads" || name == "lanes":
		return quote(strings.Split(text, ","))
	case i >= 0 && !fields[i].quoted && json.Valid([]byte(text)):
		return json.RawMessage(text)
	}
	return quote(text)
}

// planOf decodes a plan, or the preset that is named in its place.
func planOf(raw json.RawMessage) (*plan.Plan, error) {
	var name string
	if json.Unmarshal(raw, &name) == nil {
		file, ok := presets.Read(name)
		if !ok {
			return nil, refuse(http.StatusBadRequest, "plan", short(raw), fields[0].allowed, "")
		}
		raw = file
	}
	return plan.Decode(raw)
}

func names() string {
	var all []string
	for _, f := range fields {
		all = append(all, f.name)
	}
	return strings.Join(all, ", ")
}

func sorted(given map[string]json.RawMessage) []string {
	var names []string
	for n := range given {
		names = append(names, n)
	}
	slices.Sort(names)
	return names
}

func short(raw []byte) string {
	const limit = 80
	if r := []rune(string(raw)); len(r) > limit {
		return string(r[:limit]) + "..."
	}
	return string(raw)
}

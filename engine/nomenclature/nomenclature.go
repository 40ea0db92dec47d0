// Package nomenclature writes a device's settings as a table in the open
// nomenclature IEEE 11073-10103, and reads such a table back.
//
// A row is a reference id and its code, a value and a unit. Only ids and codes that
// were read in public lists are used (a concept list and message samples with
// MDC_IDC codes, the CardX-CIED and MII guides); a setting without one stands under
// its own field name of the plan file. A setting that is not stated stays so: it is
// listed without a value, and reading a table never fills it in.
//
// The table says nothing about any maker's meaning of a setting.
package nomenclature

import (
	"encoding/csv"
	"fmt"
	"io"
	"strings"

	"escapement/engine/plan"
)

// Term is one setting.
type Term struct {
	Field string // path in the plan file
	ID    string // reference id, or "" where no list that was read has one
	Code  string // its code, or "" where only the name was read
	Unit  string // as the table writes it
}

// Row is a line of the table. Value is empty where the setting is not stated.
type Row struct {
	Term
	Value string
}

const leads = "pacemaker.leads."

// known are the ids and codes that were read. Channels: RA +0, RV +1, LA +2, LV +3.
var known = map[string]Term{
	"pacemaker.mode":                     {ID: "MDC_IDC_SET_BRADY_MODE", Code: "730752"},
	"pacemaker.lower_rate_bpm":           {ID: "MDC_IDC_SET_BRADY_LOWRATE", Code: "730880", Unit: "/min"},
	"pacemaker.max_tracking_rate_bpm":    {ID: "MDC_IDC_SET_BRADY_MAX_TRACKING_RATE", Code: "731136", Unit: "/min"},
	"pacemaker.max_sensor_rate_bpm":      {ID: "MDC_IDC_SET_BRADY_MAX_SENSOR_RATE", Code: "731200", Unit: "/min"},
	"pacemaker.sensed_av_ms":             {ID: "MDC_IDC_SET_BRADY_SAV_DELAY", Code: "731264", Unit: "ms"},
	"pacemaker.paced_av_ms":              {ID: "MDC_IDC_SET_BRADY_PAV_DELAY", Code: "731328", Unit: "ms"},
	"pacemaker.mode_switch.mode":         {ID: "MDC_IDC_SET_BRADY_AT_MODE_SWITCH_MODE", Code: "731392"},
	"pacemaker.mode_switch.rate_bpm":     {ID: "MDC_IDC_SET_BRADY_AT_MODE_SWITCH_RATE", Code: "731456", Unit: "/min"},
	leads + "atrial.sensitivity_mv":      {ID: "MDC_IDC_SET_LEADCHNL_RA_SENSING_SENSITIVITY", Code: "729536", Unit: "mV"},
	leads + "ventricular.sensitivity_mv": {ID: "MDC_IDC_SET_LEADCHNL_RV_SENSING_SENSITIVITY", Code: "729537", Unit: "mV"},
	leads + "atrial.amplitude_v":         {ID: "MDC_IDC_SET_LEADCHNL_RA_PACING_AMPLITUDE", Code: "729984", Unit: "V"},
	leads + "ventricular.amplitude_v":    {ID: "MDC_IDC_SET_LEADCHNL_RV_PACING_AMPLITUDE", Code: "729985", Unit: "V"},
	leads + "left.amplitude_v":           {ID: "MDC_IDC_SET_LEADCHNL_LV_PACING_AMPLITUDE", Code: "729987", Unit: "V"},
	leads + "atrial.width_ms":            {ID: "MDC_IDC_SET_LEADCHNL_RA_PACING_PULSEWIDTH", Code: "730048", Unit: "ms"},
	leads + "ventricular.width_ms":       {ID: "MDC_IDC_SET_LEADCHNL_RV_PACING_PULSEWIDTH", Code: "730049", Unit: "ms"},
}

// modes are the codes of modes that were read; the others are written by name.
var modes = map[string]string{"AAI": "754753", "DDD": "754760", "VVI": "754773"}

// Terms lists every setting of the device that is a single value, in the order of
// the plan file.
func Terms() []Term {
	var out []Term
	for _, f := range plan.Catalogue() {
		if !strings.HasPrefix(f.Path, "pacemaker.") || f.Kind == plan.List || f.Kind == plan.Group {
			continue
		}
		t := known[f.Path]
		t.Field = f.Path
		if t.ID == "" {
			t.Unit = f.Unit
		}
		out = append(out, t)
	}
	return out
}

// Rows is the table of a plan's device: every setting, those not stated without a
// value.
func Rows(p *plan.Plan) []Row {
	var out []Row
	for _, t := range Terms() {
		value, _ := p.Stated(t.Field)
		out = append(out, Row{t, value})
	}
	return out
}

// NotStated is what stands in the table for a setting that the plan does not state.
const NotStated = "not stated"

var head = []string{"reference_id", "code", "field", "value", "unit"}

// Write writes the table of a plan's device as CSV.
func Write(w io.Writer, p *plan.Plan) error {
	c := csv.NewWriter(w)
	if err := c.Write(head); err != nil {
		return err
	}
	for _, r := range Rows(p) {
		value := r.Value
		switch code := modes[value]; {
		case value == "":
			value = NotStated
		case code != "" && strings.HasSuffix(r.Field, "mode"):
			value += " (" + code + ")"
		}
		if err := c.Write([]string{r.ID, r.Code, r.Field, value, r.Unit}); err != nil {
			return err
		}
	}
	c.Flush()
	return c.Error()
}

// maxRows bounds a table that is read.
const maxRows = 10000

// Read puts the settings of a table into a plan. Rows are found by code, by reference
// id or by field, whichever is given; they must agree. It returns the settings of the
// device that the table does not state, which the plan then does not state either,
// and the rows it does not know. The error names the line.
func Read(r io.Reader, p *plan.Plan) (missing, unknown []string, err error) {
	c := csv.NewReader(r)
	c.FieldsPerRecord = -1
	got, err := c.Read()
	if err != nil {
		return nil, nil, fmt.Errorf("the table: %w", err)
	}
	if strings.Join(got, ",") != strings.Join(head, ",") {
		return nil, nil, fmt.Errorf("line 1: %q; the head of a table is %q", strings.Join(got, ","), strings.Join(head, ","))
	}
	stated := map[string]bool{}
	for n := 2; n < maxRows; n++ {
		row, err := c.Read()
		if err == io.EOF {
			break
		}
		if err != nil {
			return nil, nil, fmt.Errorf("the table: %w", err)
		}
		if len(row) != len(head) {
			return nil, nil, fmt.Errorf("line %d: %d columns, want %d", n, len(row), len(head))
		}
		t, err := find(row)
		if err != nil {
			return nil, nil, fmt.Errorf("line %d: %w", n, err)
		}
		value := strings.TrimSpace(row[3])
		switch {
		case t.Field == "":
			unknown = append(unknown, strings.TrimSpace(row[0]+" "+row[1]+" "+row[2]))
			continue
		case value == "" || value == NotStated:
			continue
		case row[4] != t.Unit:
			return nil, nil, fmt.Errorf("line %d: %s in %q; it is given in %q", n, t.Field, row[4], t.Unit)
		case stated[t.Field]:
			return nil, nil, fmt.Errorf("line %d: %s stands there twice", n, t.Field)
		}
		if err := p.State(t.Field, plainMode(value)); err != nil {
			return nil, nil, fmt.Errorf("line %d: %w", n, err)
		}
		stated[t.Field] = true
	}
	for _, t := range Terms() {
		if !stated[t.Field] {
			missing = append(missing, t.Field)
		}
	}
	return missing, unknown, nil
}

// find is the term of a row; an empty one where nothing in the row is known.
func find(row []string) (Term, error) {
	var found Term
	for i, of := range []func(Term) string{func(t Term) string { return t.ID }, func(t Term) string { return t.Code }, func(t Term) string { return t.Field }} {
		want := strings.TrimSpace(row[i])
		if want == "" {
			continue
		}
		for _, t := range Terms() {
			if of(t) != want {
				continue
			}
			if found.Field != "" && found.Field != t.Field {
				return Term{}, fmt.Errorf("%q is %s, but %s was named before it", want, t.Field, found.Field)
			}
			found = t
		}
	}
	return found, nil
}

// plainMode takes the code from "DDD (754760)".
func plainMode(value string) string {
	name, code, ok := strings.Cut(value, " (")
	if ok && modes[name] == strings.TrimSuffix(code, ")") {
		return name
	}
	for name, code := range modes {
		if value == code {
			return name
		}
	}
	return value
}

package session

import (
	"bytes"
	"encoding/json"
	"strings"

	"escapement/engine/nomenclature"
	"escapement/engine/plan"
)

// tabled is the reply of table: a device's settings as CSV, or a plan with the
// device of a table that was read, and what the table does not state or is not
// known. Fault is what is wrong with the plan or the table; the rest is empty then.
type tabled struct {
	Table   string          `json:"table,omitempty"`
	Plan    json.RawMessage `json:"plan,omitempty"`
	Missing []string        `json:"missing,omitempty"`
	Unknown []string        `json:"unknown,omitempty"`
	Fault   string          `json:"fault,omitempty"`
}

// table writes the settings of a plan's device, or reads a table into the plan.
func table(args []byte) []byte {
	var in struct {
		Plan json.RawMessage `json:"plan"`
		Read string          `json:"read"`
	}
	decode(args, &in)
	p, err := plan.Decode(in.Plan)
	if err != nil {
		return encode(tabled{Fault: err.Error()})
	}
	if in.Read == "" {
		var b bytes.Buffer
		if err := nomenclature.Write(&b, p); err != nil {
			return encode(tabled{Fault: err.Error()})
		}
		return encode(tabled{Table: b.String()})
	}
	missing, unknown, err := nomenclature.Read(strings.NewReader(in.Read), p)
	if err != nil {
		return encode(tabled{Fault: err.Error()})
	}
	return encode(tabled{Plan: p.Encode(), Missing: missing, Unknown: unknown})
}

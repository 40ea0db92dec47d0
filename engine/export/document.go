package export

import (
	"bytes"
	"encoding/json"
	"fmt"
	"io"

	"escapement/engine/measure"
	"escapement/engine/numbers"
	"escapement/engine/scene"
	"escapement/engine/timeline"
)

// Format is the value of the document's "format" field.
const Format = "escapement-strip/1"

// document is everything about a strip but its samples.
type document struct {
	Format      string            `json:"format"`
	About       string            `json:"about"`
	Caution     string            `json:"caution"`
	Plan        json.RawMessage   `json:"plan"` // as in a plan file
	SpanUS      int64             `json:"span_us"`
	Fingerprint string            `json:"fingerprint"` // of the events
	Events      []json.RawMessage `json:"events"`      // as the command line prints them
	Measured    []numbers.Number  `json:"measured"`    // medians with normal ranges
	Measure     *measure.Report   `json:"measure"`     // beats, findings, statement
	Device      *numbers.Device   `json:"device"`      // arithmetic, warnings; null without a pacemaker
}

// JSON writes one document: the plan, every event, all measures, the findings and the
// arithmetic. Times are microseconds in fields that end in _us and milliseconds in those
// that end in _ms.
func JSON(w io.Writer, s *timeline.Timeline) error {
	var lines bytes.Buffer
	if err := s.Log.WriteJSON(&lines); err != nil {
		return err
	}
	d := document{
		Format: Format, About: Computed, Caution: scene.CautionText, Plan: json.RawMessage(s.Plan.Encode()),
		SpanUS: int64(s.Log.Span), Fingerprint: fmt.Sprintf("%016x", s.Log.Fingerprint()), Events: []json.RawMessage{},
		Measured: numbers.Measured(&s.Measure.Summary), Measure: s.Measure, Device: s.Beside(),
	}
	for _, l := range bytes.Split(bytes.TrimSpace(lines.Bytes()), []byte{'\n'}) {
		if len(l) > 0 {
			d.Events = append(d.Events, json.RawMessage(l))
		}
	}
	enc := json.NewEncoder(w)
	enc.SetEscapeHTML(false)
	enc.SetIndent("", " ")
	return enc.Encode(d)
}

package session

import (
	"encoding/json"
	"fmt"
	"strings"
	"time"

	"escapement/engine/event"
	"escapement/engine/ladder"
	"escapement/engine/measure"
	"escapement/engine/numbers"
	"escapement/engine/plan"
	"escapement/engine/timeline"
)

type computeReply struct {
	OK        bool            `json:"ok"`
	Diagnoses []plan.Worded   `json:"diagnoses,omitempty"`
	Answer    *answer         `json:"answer,omitempty"`
	Scene     json.RawMessage `json:"scene,omitempty"`
}

type answer struct {
	Title       string           `json:"title"`
	Note        string           `json:"note"`
	Statement   []clause         `json:"statement"`
	Warnings    []string         `json:"warnings"`
	Measured    []numbers.Number `json:"measured"`
	Findings    []finding        `json:"findings"`
	Events      int              `json:"events"`
	Span        float64          `json:"span_ms"`
	Fingerprint string           `json:"fingerprint"`
	Overview    overview         `json:"overview"`
	Device      *numbers.Device  `json:"device"`  // null: none
	Took        float64          `json:"took_ms"` // the computation, without the scene
}

type clause struct {
	Text   string     `json:"text"`
	Events []event.ID `json:"events"`
}

type finding struct {
	Slug   string     `json:"slug"`
	Ratio  string     `json:"ratio"`
	Text   string     `json:"text"`
	Events []event.ID `json:"events"`
	T      float64    `json:"t_ms"`
	Note   string     `json:"note"`
	Rivals []string   `json:"rivals"`
}

func (s *Session) compute(args []byte) ([]byte, []float32) {
	var q struct {
		Plan   json.RawMessage `json:"plan"`
		Before json.RawMessage `json:"before"`
		view
	}
	decode(args, &q)
	began := time.Now()
	t, err := s.known(q.Plan)
	doubt := s.keep(q.Before)
	s.differs = nil
	if err != nil {
		return encode(computeReply{Diagnoses: plan.Told(err)}), nil
	}
	s.current = t
	a := t.answer()
	a.Warnings = append(a.Warnings, doubt...)
	a.Took = float64(time.Since(began).Microseconds()) / 1000
	meta, points := s.scene(&q.view)
	return t.reply(a, meta), points
}

// reply puts the parts together by hand: the scene is JSON already, and encoding/json
// would read it all again.
func (t *sheet) reply(a *answer, scene []byte) []byte {
	text := encode(a)
	out := make([]byte, 0, len(text)+len(scene)+64)
	out = append(append(out, `{"ok":true,"answer":`...), text...)
	out = append(append(out, `,"scene":`...), scene...)
	return append(out, '}')
}

func (s *Session) run(file []byte) (*sheet, error) {
	p, err := plan.Decode(file)
	if err != nil {
		return nil, err
	}
	t, err := timeline.Of(p, s.field)
	if err != nil {
		return nil, err
	}
	return &sheet{Timeline: t, file: file, drawn: pressed(t.Log, t.Record), diagrams: map[ladder.Form]*ladder.Diagram{}}, nil
}

func (t *sheet) answer() *answer {
	a := &answer{
		Title: t.Plan.Title, Note: t.Plan.Note,
		Statement: sentence(t.Measure.Statement, t.Measure.Clauses), Warnings: []string{}, Findings: []finding{},
		Measured: numbers.Measured(&t.Measure.Summary), Events: len(t.Log.Events), Span: t.Log.Span.MS(),
		Fingerprint: fmt.Sprintf("%016x", t.Log.Fingerprint()),
		Overview:    t.overview(),
		Device:      t.Beside(),
	}
	if t.Record == nil {
		a.Warnings = append(a.Warnings, numbers.NoLeads)
	}
	for i := range t.Measure.Findings {
		f := &t.Measure.Findings[i]
		out := finding{Slug: f.Slug, Ratio: f.Ratio, Text: f.Text, Events: list(f.Evidence), T: f.FromUS.MS(), Note: f.Note, Rivals: f.Rivals}
		if len(f.Evidence) > 0 {
			out.T = t.Log.At(f.Evidence[0]).T.MS()
		}
		if out.Rivals == nil {
			out.Rivals = []string{}
		}
		a.Findings = append(a.Findings, out)
	}
	return a
}

// evidenceLimit bounds how many events a clause points at; on a long strip it
// rests on thousands, and the first ones show what it means.
const evidenceLimit = 400

func list(ids []event.ID) []event.ID {
	if ids == nil {
		return []event.ID{}
	}
	return ids[:min(len(ids), evidenceLimit)]
}

// sentence cuts the statement at its clauses: text with the events it rests on,
// and what stands between as text that rests on none.
func sentence(text string, clauses []measure.Clause) []clause {
	out := []clause{}
	plain := func(s string) {
		if s != "" {
			out = append(out, clause{s, []event.ID{}})
		}
	}
	for _, c := range clauses {
		at := strings.Index(strings.ToLower(text), strings.ToLower(c.Text))
		if at < 0 || at+len(c.Text) > len(text) {
			continue
		}
		plain(text[:at])
		out = append(out, clause{text[at : at+len(c.Text)], list(c.Evidence)})
		text = text[at+len(c.Text):]
	}
	plain(text)
	return out
}

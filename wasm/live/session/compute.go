package session

import (
	"encoding/json"
	"fmt"
	"strings"
	"time"

	"escapement/engine/event"
	"escapement/engine/ladder"
	"escapement/engine/lead"
	"escapement/engine/measure"
	"escapement/engine/numbers"
	"escapement/engine/plan"
	"escapement/engine/signal"
	"escapement/engine/sim"
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
func (t *timeline) reply(a *answer, scene []byte) []byte {
	text := encode(a)
	out := make([]byte, 0, len(text)+len(scene)+64)
	out = append(append(out, `{"ok":true,"answer":`...), text...)
	out = append(append(out, `,"scene":`...), scene...)
	return append(out, '}')
}

func (s *Session) run(file []byte) (*timeline, error) {
	p, err := plan.Decode(file)
	if err != nil {
		return nil, err
	}
	prog, err := p.Compile()
	if err != nil {
		return nil, err
	}
	log, err := sim.Play(prog)
	if err != nil {
		return nil, err
	}
	var rec *lead.Record
	if log.Span <= numbers.LeadsUpTo {
		rec = s.field.Record(log)
	}
	return &timeline{file: file, plan: p, pacer: prog.Device, log: log, record: rec, drawn: pressed(log, rec), report: measure.Of(log, rec), diagrams: map[ladder.Form]*ladder.Diagram{},
		signals: signal.Of(prog, log, s.field)}, nil
}

func (t *timeline) answer() *answer {
	a := &answer{
		Title: t.plan.Title, Note: t.plan.Note,
		Statement: sentence(t.report.Statement, t.report.Clauses), Warnings: []string{}, Findings: []finding{},
		Measured: numbers.Measured(&t.report.Summary), Events: len(t.log.Events), Span: t.log.Span.MS(),
		Fingerprint: fmt.Sprintf("%016x", t.log.Fingerprint()),
		Overview:    t.overview(),
		Device:      numbers.OfDevice(t.plan, t.pacer, t.report),
	}
	if t.record == nil {
		a.Warnings = append(a.Warnings, numbers.NoLeads)
	}
	for i := range t.report.Findings {
		f := &t.report.Findings[i]
		out := finding{Slug: f.Slug, Ratio: f.Ratio, Text: f.Text, Events: list(f.Evidence), T: f.FromUS.MS(), Note: f.Note, Rivals: f.Rivals}
		if len(f.Evidence) > 0 {
			out.T = t.log.At(f.Evidence[0]).T.MS()
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

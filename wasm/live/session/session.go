// Package session is what the page asks of the engine: operations by name, JSON
// in, JSON and drawn points out. It remembers the last plan that could be
// computed, so that another view of it needs no new computation.
//
//	catalogue  {}                      fields of a plan, presets, sites, styles
//	compute    {plan, before, view, selected}  a plan's timeline: measures, statement, arithmetic, scene; or its diagnoses
//	layout     {view, selected}        another scene of the same timeline
//	contrast   {}                      how the timeline differs from the one before
//	account    {event}                 why an event came
//	listing    {from_ms, to_ms}        events as text
//	extra      {event}                 what came of a planned stimulus
//	scan       {item, start, tries}    the coupling of one swept through the cycle, in slices
//	gap        {t_ms}                  why the device gave no stimulus between two QRS complexes
//	flip       {plan, path, low, high, step}  between which values of a number the outcome changes
//	table      {plan, read}            the device's settings as a table, or the plan with a table read
//	sweep      {plan, points}          some points of the plan's sweep, in columns; or its diagnoses
//	sweep_plan {plan, point, seed}     the plan of one point
//	boundary   {plan, outcome, from, along, at, after}  where along an axis of the sweep an outcome changes
//	search     {plan, budget, most, state, keep, again}  a slice of the search for the plan's goals, and what it has found
//	search_plan {plan, combination, situation}  the plan with a combination of settings
//	sense      {plan, combination, numbers, count, again}  how far the heart may move under a combination
//	against    {plan, other, protocol, most}  the manoeuvres that tell two plans apart
//
// compute may name a plan to compare with. Its timeline is kept and drawn above the
// present one until compute names another or none; its events have negative ids.
//
// Every answer but those of operations that take a plan is null while nothing has been
// computed. An operation that does not exist and arguments that are not JSON are bugs of
// the page and panic.
package session

import (
	"encoding/json"

	"escapement/engine/event"
	"escapement/engine/field"
	"escapement/engine/handle"
	"escapement/engine/ladder"
	"escapement/engine/lead"
	"escapement/engine/scene"
	"escapement/engine/study"
	"escapement/engine/timeline"
)

// Session is one page's engine. Use it from one goroutine.
type Session struct {
	field     *field.Field
	current   *sheet     // nil until a plan was computed
	sweeping  *sweeping  // nil until a plan was swept
	searching *searching // nil until goals were searched for
	before    *sheet     // nil: there is nothing to compare with
	differs   *compared  // the two, compared when first asked for
	scanned   *study.Scan
}

// sheet is a timeline with what its drawings need.
type sheet struct {
	*timeline.Timeline
	file     []byte                          // the plan as it came
	begun    []event.ID                      // see first
	drawn    *lead.Record                    // the leads, with what a press on a wave selects
	diagrams map[ladder.Form]*ladder.Diagram // made when first drawn
	mover    *handle.Mover                   // likewise
	extents  scene.Extents
}

// New is a session without a timeline.
func New() *Session { return &Session{field: field.New()} }

// Call carries out an operation. points belong to the scene in the reply.
func (s *Session) Call(op string, args []byte) (reply []byte, points []float32) {
	switch op {
	case "catalogue":
		return encode(catalogue()), nil
	case "compute":
		return s.compute(args)
	case "layout":
		return s.layout(args)
	case "contrast":
		return s.contrasted(), nil
	case "account":
		return s.account(args), nil
	case "listing":
		return s.listing(args), nil
	case "table":
		return table(args), nil
	case "sweep":
		return s.sweep(args), nil
	case "sweep_plan":
		return s.sweptPlan(args), nil
	case "search":
		return s.search(args), nil
	case "search_plan":
		return s.searchPlan(args), nil
	case "sense":
		return s.sense(args), nil
	case "against":
		return against(args), nil
	case "boundary":
		return s.boundary(args), nil
	case "extra":
		return s.extra(args), nil
	case "scan":
		return s.scan(args), nil
	case "gap":
		return s.gap(args), nil
	case "flip":
		return flip(args), nil
	}
	panic("session: there is no operation " + op)
}

func decode(args []byte, into any) {
	if err := json.Unmarshal(args, into); err != nil {
		panic("session: arguments do not decode: " + err.Error() + ": " + string(args))
	}
}

func encode(v any) []byte {
	b, err := json.Marshal(v)
	if err != nil {
		panic("session: the reply does not encode: " + err.Error())
	}
	return b
}

// none is the reply where nothing has been computed.
var none = []byte("null")

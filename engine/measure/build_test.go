package measure

import (
	"slices"
	"strconv"
	"strings"
	"testing"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// network is a small heart in the text form of package event.
const network = `log span=%SPAN%
site sinus sinus
site right_atrium atrium
site atrial_septum atrium
site left_atrium atrium
site av_junction av_node
site his his
site right_bundle purkinje
site left_bundle purkinje
site rv_apex ventricle
site lv_septum ventricle
path sinoatrial sinus sinus right_atrium
path internodal atrium right_atrium atrial_septum
path interatrial atrium right_atrium left_atrium
path av_fast av_node atrial_septum av_junction
path lower_node av_node av_junction his
path his_right purkinje his right_bundle
path his_left purkinje his left_bundle
path right_bundle-rv_apex ventricle right_bundle rv_apex
path left_bundle-lv_septum ventricle left_bundle lv_septum
path rv_apex-lv_septum ventricle rv_apex lv_septum
`

// heart writes a log beat by beat. Times are milliseconds. Events may be added
// out of order; log sorts them and renumbers.
type heart struct {
	l      *event.Log
	events []event.Event // Cause holds a position in events plus one
}

func newHeart(span float64) *heart {
	l, err := event.Parse(strings.NewReader(strings.Replace(network, "%SPAN%", strconv.FormatInt(int64(tick.MS(span)), 10), 1)))
	if err != nil {
		panic(err)
	}
	return &heart{l: l}
}

func (h *heart) put(e event.Event) int {
	h.events = append(h.events, e)
	return len(h.events)
}

func (h *heart) time(ref int) tick.Time { return h.events[ref-1].T }

// fire: a focus at the site discharges at t.
func (h *heart) fire(t float64, site string) int {
	s := h.l.Site(site)
	at := tick.Time(tick.MS(t))
	d := h.put(event.Event{T: at, Kind: event.Discharge, Rule: event.Phase4, Site: s, Path: event.None})
	return h.put(event.Event{T: at, Kind: event.Activate, Rule: event.Fired, Cause: event.ID(d), Site: s, Path: event.None, Until: at})
}

// stimulate: a planned stimulus that captures.
func (h *heart) stimulate(t float64, site string) int {
	s := h.l.Site(site)
	at := tick.Time(tick.MS(t))
	d := h.put(event.Event{T: at, Kind: event.Stimulus, Rule: event.Premature, Captured: true, Site: s, Path: event.None})
	return h.put(event.Event{T: at, Kind: event.Activate, Rule: event.Captured, Cause: event.ID(d), Site: s, Path: event.None, Until: at})
}

// go on along a path for d milliseconds.
func (h *heart) along(from int, path string, d float64) int {
	p := h.l.Path(path)
	dir := event.Down
	if h.l.Paths[p].From != h.events[from-1].Site {
		dir = event.Up
	}
	at := h.time(from).Add(tick.MS(d))
	return h.put(event.Event{T: at, Kind: event.Activate, Rule: event.Conducted, Dir: dir, Cause: event.ID(from), Site: h.l.Paths[p].Exit(dir), Path: p, Until: at, Recovery: event.Unknown})
}

// stop in a path after d milliseconds.
func (h *heart) stop(from int, path string, rule event.Rule, d float64) int {
	p := h.l.Path(path)
	dir := event.Down
	if h.l.Paths[p].From != h.events[from-1].Site {
		dir = event.Up
	}
	e := event.Event{T: h.time(from).Add(tick.MS(d)), Kind: event.Block, Rule: rule, Dir: dir, Cause: event.ID(from), Site: h.events[from-1].Site, Path: p}
	if rule == event.PathRefractory {
		e.Depth, e.Recovery, e.Needed = 300, tick.MS(214), tick.MS(230)
	}
	return h.put(e)
}

// p is a sinus P that begins at t; the septum follows 30 ms later.
func (h *heart) p(t float64) int {
	return h.along(h.along(h.fire(t-60, "sinus"), "sinoatrial", 60), "internodal", 30)
}

// atrialBeat begins at the right atrium at t.
func (h *heart) atrialBeat(t float64) int {
	return h.along(h.stimulate(t, "right_atrium"), "internodal", 30)
}

// conduct carries a P whose septum is ref to the ventricles with the PR: HV is 45.
func (h *heart) conduct(ref int, pr float64) int {
	return h.ventricles(h.toHis(ref, pr))
}

func (h *heart) toHis(ref int, pr float64) int {
	return h.along(h.along(ref, "av_fast", pr-30-45-10), "lower_node", 10)
}

func (h *heart) ventricles(his int) int {
	r := h.along(h.along(his, "his_right", 25), "right_bundle-rv_apex", 20)
	h.along(h.along(his, "his_left", 25), "left_bundle-lv_septum", 22)
	return r
}

func (h *heart) dropNode(ref int)  { h.stop(ref, "av_fast", event.PathRefractory, 0) }
func (h *heart) dropBelow(ref int) { h.dropBundles(h.toHis(ref, 160)) }
func (h *heart) dropBundles(his int) {
	h.stop(his, "his_right", event.PathRefractory, 0)
	h.stop(his, "his_left", event.PathRefractory, 0)
}

// pvc from the right ventricular apex; it enters the node from below and stops
// there if conceal is set.
func (h *heart) pvc(t float64, conceal bool) int {
	v := h.fire(t, "rv_apex")
	h.along(v, "rv_apex-lv_septum", 60)
	if conceal {
		his := h.along(h.along(h.along(v, "right_bundle-rv_apex", 20), "his_right", 25), "lower_node", 10)
		h.stop(his, "av_fast", event.PathRefractory, 20)
	}
	return v
}

// retro is a ventricular beat that reaches the atria after the VA time, through
// the node; the right atrium comes last.
func (h *heart) retro(v int, va float64) int {
	j := h.along(h.along(h.along(v, "right_bundle-rv_apex", 20), "his_right", 25), "lower_node", 10)
	return h.along(h.along(j, "av_fast", va-55-30), "internodal", 30)
}

func (h *heart) escapeJunction(t float64) int {
	return h.ventricles(h.along(h.fire(t-45-10, "av_junction"), "lower_node", 10))
}

// log sorts by time and numbers; it must pass the validator.
func (h *heart) log(t testing.TB) *event.Log {
	t.Helper()
	order := make([]int, len(h.events))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(a, b int) int { return int(h.events[a].T - h.events[b].T) })
	id := make([]event.ID, len(h.events)+1)
	for n, i := range order {
		id[i+1] = event.ID(n + 1)
	}
	h.l.Events = nil
	for _, i := range order {
		e := h.events[i]
		e.ID, e.Cause = id[i+1], id[e.Cause]
		h.l.Events = append(h.l.Events, e)
	}
	for _, err := range event.Validate(h.l) {
		t.Fatal(err)
	}
	return h.l
}

func slugs(r *Report) []string {
	var s []string
	for _, f := range r.Findings {
		s = append(s, f.Slug)
	}
	return s
}

func (r *Report) finding(slug string) *Finding {
	for i := range r.Findings {
		if r.Findings[i].Slug == slug {
			return &r.Findings[i]
		}
	}
	return nil
}

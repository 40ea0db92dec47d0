package measure

import (
	"fmt"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// completeBlock recognises third-degree block over the whole strip: at least two
// P waves could have conducted and no P from above did.
func (f *finder) completeBlock(groups []avGroup) bool {
	var ps []int
	for _, g := range groups {
		if len(g.c) > 0 {
			return false
		}
		ps = append(ps, g.b...)
	}
	for i := range f.p {
		if f.p[i].to >= 0 && f.descending(i) {
			return false
		}
	}
	if len(ps) < 2 {
		return false
	}
	f.complete(ps, false)
	return true
}

// longTail is a run of at least four blocked P waves that reaches the end of the
// strip, or its start: AV conduction ceased there.
func (f *finder) longTail(g avGroup) bool {
	return len(g.b) >= 4 && (g.next < 0 && g.b[len(g.b)-1] >= len(f.p)-2 || len(g.c) == 0 && g.b[0] <= 1)
}

// complete adds the finding; part tells that the rest of the strip conducts.
func (f *finder) complete(ps []int, part bool) {
	ids := f.blocked(ps)
	from, to := f.p[ps[0]].t, f.p[ps[len(ps)-1]].t
	escapes := 0
	for j := range f.v {
		if f.own(j) && !f.begunByDevice(j) && f.v[j].t >= from && f.v[j].t <= to.Add(tick.Second) {
			ids = append(ids, f.v[j].id)
			escapes++
		}
	}
	stretch := ""
	if part {
		stretch = fmt.Sprintf(" from %.1f to %.1f s", from.Seconds(), to.Seconds())
	}
	surface, note := "undetermined", "Without a QRS the surface does not tell the level."
	if f.dev != nil {
		note = "Without an escape beat the surface does not tell the level."
	}
	if escapes > 0 {
		note = "A narrow escape near 40-60/min speaks for block at the AV node, a wide and slower one for block below it."
		surface = f.escapeLevel(ids)
	}
	rivals := []string(nil)
	if escapes > 0 {
		rivals = []string{"advanced AV block whose conducted beats fall outside this strip"}
	}
	f.add(orderBlock, Finding{
		Slug: "complete_av_block", Evidence: ids, Count: len(ps), Level: f.modelLevel(ps), Surface: surface, Note: note, Rivals: rivals,
		Text: fmt.Sprintf("No P conducts%s although %s the opportunity: consistent with complete (third-degree) AV block.",
			stretch, plural(len(ps), "had", "had")),
		clause: "complete AV block" + stretch,
	})
}

// escapeLevel judges by the escape beats' width, as a reader of the surface would.
func (f *finder) escapeLevel(ids []event.ID) string {
	for _, id := range ids {
		e := f.log.At(id)
		if e.Kind != event.Activate || f.log.Sites[e.Site].Chamber() != 'V' {
			continue
		}
		w := f.surf.vWave[f.mark[id].wave]
		switch {
		case w == nil:
		case w.Offset.Sub(w.Onset) >= 120*tick.Millisecond:
			return "infranodal_likely"
		default:
			return "nodal_likely"
		}
	}
	return "undetermined"
}

// alternating finds 2:1 conduction with a growing PR that ends in two or three
// blocked P waves (Amat-y-Leon et al., Am J Cardiol 1975;36:757: two blocked =
// type I above 2:1, three = 2:1 above type I). It takes its groups out of the
// others' hands by naming them oneToOne.
func (f *finder) alternating(groups []avGroup, kinds []behaviour) {
	var used []avGroup
	three := false
	for end := range groups {
		if kinds[end] != advanced || len(groups[end].c) != 1 || len(groups[end].b) > 3 || groups[end].next < 0 {
			continue
		}
		start := end
		for start > 0 && len(groups[start-1].c) == 1 && len(groups[start-1].b) == 1 && groups[start-1].next == groups[start].c[0] &&
			f.pr(groups[start].c[0])-f.pr(groups[start-1].c[0]) > steady {
			start--
		}
		if end == start || f.pr(groups[end].c[0])-f.pr(groups[end].next) <= steady {
			continue
		}
		for k := start; k <= end; k++ {
			used = append(used, groups[k])
			kinds[k] = oneToOne
		}
		three = three || len(groups[end].b) == 3
	}
	if used == nil {
		return
	}
	for i := range groups { // 2:1 beats of a period cut off by the strip's edge
		if kinds[i] == twoToOne {
			used = append(used, groups[i])
			kinds[i] = oneToOne
		}
	}
	ids, ps := f.evidence(used)
	kind := "two blocked at the end: type I above, 2:1 below"
	if three {
		kind = "three blocked at the end: 2:1 above, type I below"
	}
	f.add(orderBlock, Finding{
		Slug: "alternating_wenckebach", Evidence: ids, Count: len(used), Level: f.modelLevel(ps), Surface: "undetermined",
		Text:   fmt.Sprintf("2:1 conduction with growing PR that ends in more than one blocked P (%s): consistent with alternating Wenckebach periods, two levels of block in series.", kind),
		Note:   "Two or three blocked P waves at the end tell the order of the two levels, not their places.",
		Rivals: []string{"advanced AV block", "2:1 AV block with a changing PR"},
		clause: "2:1 AV block with growing PR ending in several blocked P waves (alternating Wenckebach)",
	})
}

package measure

import (
	"fmt"
	"slices"
	"strings"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// avBlock classifies AV conduction by the 2018 ACC/AHA/HRS definitions. They
// hold for a P rate below 100/min and for P waves that are not premature; a P
// without temporal opportunity counts for nothing.
func (f *finder) avBlock() {
	groups := f.avGroups()
	if f.completeBlock(groups) {
		return
	}
	kinds := f.sortAll(groups)
	f.alternating(groups, kinds)
	fast := func(g avGroup) bool { c := f.cycle(g); return c > 0 && c <= tick.PerMinute(physiological) }
	var byKind [untold + 1][]avGroup
	var quick []avGroup
	for i, g := range groups {
		switch {
		case kinds[i] != oneToOne && fast(g):
			quick = append(quick, g)
		case f.longTail(g):
			f.complete(g.b, true)
		default:
			byKind[kinds[i]] = append(byKind[kinds[i]], g)
		}
	}
	f.firstDegree(groups, kinds)
	f.mobitz1(byKind[mobitz1])
	f.mobitz2(byKind[mobitz2])
	f.twoToOne(byKind[twoToOne])
	f.advanced(byKind[advanced])
	f.unclassified(byKind[untold])
	f.functional(quick)
}

// ratios lists P:QRS of groups, the commonest first.
func ratios(groups []avGroup) string {
	var names []string
	var counts []int
	for _, g := range groups {
		if len(g.c) == 0 || g.open && g.next < 0 {
			continue
		}
		n := fmt.Sprintf("%d:%d", len(g.c)+len(g.b), len(g.c))
		if k := slices.Index(names, n); k >= 0 {
			counts[k]++
		} else {
			names, counts = append(names, n), append(counts, 1)
		}
	}
	order := make([]int, len(names))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(a, b int) int { return counts[b] - counts[a] })
	var out []string
	for _, i := range order {
		out = append(out, names[i])
	}
	switch n := len(out); {
	case n == 0:
		return ""
	case n > 3:
		return strings.Join(out[:3], ", ") + " and other"
	case n > 1:
		return strings.Join(out[:n-1], ", ") + " and " + out[n-1]
	}
	return out[0]
}

// closed are the groups whose conducted run is known from its first beat; if
// there is none, all of them. The strip's first group may have lost its start.
func closed(groups []avGroup) []avGroup {
	var out []avGroup
	for _, g := range groups {
		if !g.open {
			out = append(out, g)
		}
	}
	if out == nil {
		return groups
	}
	return out
}

// evidence of groups: conducted P waves with their QRS, blocked ones with what
// stopped them, and the first beat after.
func (f *finder) evidence(groups []avGroup) (ids []event.ID, blocked []int) {
	for _, g := range groups {
		ids = append(ids, f.conducted(g.c)...)
		ids = append(ids, f.blocked(g.b)...)
		if g.next >= 0 {
			ids = append(ids, f.conducted([]int{g.next})...)
		}
		blocked = append(blocked, g.b...)
	}
	return ids, blocked
}

// firstDegree looks at stretches of 1:1 conduction. A last stretch after a
// dropped beat is the beginning of another Wenckebach period, not 1:1.
func (f *finder) firstDegree(groups []avGroup, kinds []behaviour) {
	var ps []int
	for k, g := range groups {
		if kinds[k] != oneToOne || len(g.c) < 3 || !g.open && kinds[k-1] == mobitz1 || medianDur(f.prs(g.c)) <= 200*tick.Millisecond {
			continue
		}
		for _, i := range g.c {
			if f.pr(i) > 200*tick.Millisecond {
				ps = append(ps, i)
			}
		}
	}
	if len(ps) < 3 {
		return
	}
	pr := medianDur(f.prs(ps))
	level, note := f.slowPart(ps)
	f.add(orderBlock, Finding{
		Slug: "first_degree_av_block", Evidence: f.conducted(ps), Count: len(ps), PRs: []float64{pr.MS()},
		Text:  fmt.Sprintf("Every P conducts with a PR of %s ms (median of %d above 200 ms): consistent with first-degree AV block.", whole(pr), len(ps)),
		Level: level, Surface: "undetermined", Note: "A long PR alone does not tell the AV node from the His-Purkinje system." + note,
		clause: fmt.Sprintf("first-degree AV block with PR %s ms", whole(pr)),
	})
}

// slowPart says where long PR intervals lose their time: AH above 125 ms and HV
// above 55 ms are the outer bounds of normal (Alboni 1985; Josephson, from
// memory).
func (f *finder) slowPart(ps []int) (level, note string) {
	var ah, hv []tick.Dur
	for _, i := range ps {
		w := &f.p[i]
		his := f.log.At(w.his)
		septum := f.log.At(w.septum)
		if his != nil && septum != nil {
			ah = append(ah, his.T.Sub(septum.T))
			hv = append(hv, f.v[w.to].t.Sub(his.T))
		}
	}
	a, h := medianDur(ah), medianDur(hv)
	slowNode, slowBelow := a > 125*tick.Millisecond, h > 55*tick.Millisecond
	switch {
	case len(ah) == 0:
		return Unknown, ""
	case slowNode && slowBelow:
		level = Mixed
	case slowNode:
		level = Nodal
	case slowBelow:
		level = Infranodal
	default:
		level = Unknown
	}
	return level, fmt.Sprintf(" In the model AH is %s and HV %s ms.", whole(a), whole(h))
}

func (f *finder) mobitz1(groups []avGroup) {
	if len(groups) == 0 {
		return
	}
	ids, ps := f.evidence(groups)
	shown := closed(groups)
	longest := shown[0]
	for _, g := range shown {
		if len(g.c) > len(longest.c) {
			longest = g
		}
	}
	pr := f.prs(longest.c)
	ratio := ratios(shown)
	surface, note := "nodal_likely", "Growing PR before the blocked P with a narrow QRS is nearly always nodal."
	if f.wide(ids) {
		surface, note = "undetermined", "With a wide QRS the surface does not exclude Wenckebach periods below the AV node."
	}
	f.add(orderBlock, Finding{
		Slug: "mobitz_1", Evidence: ids, Count: len(groups), Ratio: ratio, PRs: msList(pr),
		Text: fmt.Sprintf("%s blocked one at a time, the PR before the pause longer than after it (PR %s ms): consistent with second-degree AV block, Mobitz type I (Wenckebach).%s",
			plural(len(ps), "P wave is", "P waves are"), wholes(pr), f.vagal(groups)),
		Level: f.modelLevel(ps), Surface: surface, Note: note,
		Rivals: []string{"Wenckebach periods in the His-Purkinje system, which need a His recording to tell"},
		clause: strings.TrimSpace(ratio + " AV block with growing PR (" + wholes(pr) + " ms)"),
	})
}

// vagal adds a remark where the sinus slows together with the block.
func (f *finder) vagal(groups []avGroup) string {
	for _, g := range groups {
		if len(g.c) > 1 && len(g.b) > 0 && g.c[0] > 0 {
			if f.pp(g.b[0])-f.pp(g.c[1]) > 120*tick.Millisecond {
				return " The PP interval lengthens as well, which fits vagal block."
			}
		}
	}
	return ""
}

func (f *finder) mobitz2(groups []avGroup) {
	if len(groups) == 0 {
		return
	}
	ids, ps := f.evidence(groups)
	pr := f.allPRs(groups)
	ratio := ratios(closed(groups))
	surface, note := "infranodal_likely", "A constant PR around a single blocked P suggests block below the AV node."
	if f.wide(ids) {
		note = "A constant PR around a single blocked P with a wide QRS suggests block below the AV node, in the bundles."
	} else if f.surf.any() {
		note += " With a narrow QRS that would be inside the His bundle."
	}
	f.add(orderBlock, Finding{
		Slug: "mobitz_2", Evidence: ids, Count: len(groups), Ratio: ratio, PRs: []float64{medianDur(pr).MS()},
		Text:  fmt.Sprintf("%s blocked one at a time, the PR before and after alike (%s ms): consistent with second-degree AV block, Mobitz type II.", plural(len(ps), "P wave is", "P waves are"), whole(medianDur(pr))),
		Level: f.modelLevel(ps), Surface: surface, Note: note,
		Rivals: []string{"Mobitz type I with increments too small to see", "a concealed junctional or His extrasystole that blocks the P (pseudo-block)"},
		clause: strings.TrimSpace(fmt.Sprintf("%s AV block with constant PR (%s ms)", ratio, whole(medianDur(pr)))),
	})
}

// allPRs are the PR intervals of the conducted beats of all groups.
func (f *finder) allPRs(groups []avGroup) []tick.Dur {
	var pr []tick.Dur
	for _, g := range groups {
		pr = append(pr, f.prs(g.c)...)
	}
	return pr
}

func (f *finder) twoToOne(groups []avGroup) {
	if len(groups) == 0 {
		return
	}
	ids, ps := f.evidence(groups)
	pr := f.allPRs(groups)
	f.add(orderBlock, Finding{
		Slug: "two_to_one_av_block", Evidence: ids, Count: len(groups), Ratio: "2:1", PRs: []float64{medianDur(pr).MS()},
		Text:  fmt.Sprintf("Every other P conducts (PR %s ms): consistent with 2:1 AV block, which is neither type I nor type II.", whole(medianDur(pr))),
		Level: f.modelLevel(ps), Surface: "undetermined", Note: "2:1 block cannot be typed from the surface: no two P waves in a row conduct, so the PR has nothing to be compared with.",
		Rivals: []string{"Mobitz type I with 2:1 periods", "Mobitz type II with 2:1 periods"},
		clause: fmt.Sprintf("2:1 AV block with PR %s ms", whole(medianDur(pr))),
	})
}

func (f *finder) advanced(groups []avGroup) {
	if len(groups) == 0 {
		return
	}
	ids, ps := f.evidence(groups)
	most := 0
	for _, g := range groups {
		most = max(most, len(g.b))
	}
	ratio := ratios(closed(groups))
	f.add(orderBlock, Finding{
		Slug: "advanced_av_block", Evidence: ids, Count: len(groups), Ratio: ratio,
		Text:  fmt.Sprintf("Up to %d P waves in a row are blocked while others conduct: consistent with advanced (high-grade) AV block.", most),
		Level: f.modelLevel(ps), Surface: "undetermined", Note: "Two or more blocked P waves in a row occur at either level; a wide QRS speaks for the lower one.",
		clause: strings.TrimSpace(ratio+" advanced AV block") + fmt.Sprintf(" (%d P waves in a row blocked)", most),
	})
}

func (f *finder) unclassified(groups []avGroup) {
	var with []avGroup
	for _, g := range groups {
		if len(g.c) > 0 || g.next >= 0 {
			with = append(with, g)
		}
	}
	if len(with) == 0 || f.anyBlockFinding() {
		return
	}
	ids, ps := f.evidence(with)
	f.add(orderBlock, Finding{
		Slug: "second_degree_av_block", Evidence: ids, Count: len(with),
		Text:  fmt.Sprintf("%s blocked, with too few beats around to compare PR intervals: consistent with second-degree AV block that cannot be typed on this strip.", plural(len(ps), "P wave is", "P waves are")),
		Level: f.modelLevel(ps), Surface: "undetermined", Note: "Typing needs conducted beats in a row before and after the blocked P.",
		clause: plural(len(ps), "blocked P", "blocked P waves"),
	})
}

func (f *finder) anyBlockFinding() bool {
	return slices.ContainsFunc(f.found, func(x Finding) bool { return x.order == orderBlock && x.Slug != "first_degree_av_block" })
}

// functional names block at a P rate to which the definitions of AV block do not
// apply: it may be what a healthy node does.
func (f *finder) functional(groups []avGroup) {
	if len(groups) == 0 || f.dev != nil && !f.conducts { // paced, a P or two say nothing
		return
	}
	ids, ps := f.evidence(groups)
	var cycles []tick.Dur
	for _, g := range groups {
		cycles = append(cycles, f.cycle(g))
	}
	ratio := ratios(closed(groups))
	grows, pr := "", []tick.Dur(nil)
	for _, g := range closed(groups) {
		if p := f.prs(g.c); len(p) > len(pr) {
			pr = p
		}
	}
	if len(pr) > 1 && pr[len(pr)-1]-pr[0] > steady {
		grows = " with growing PR (" + wholes(pr) + " ms)"
	}
	f.add(orderBlock, Finding{
		Slug: "functional_av_block", Evidence: ids, Count: len(groups), Ratio: ratio, PRs: msList(pr),
		Text: fmt.Sprintf("%s%s at a P rate of %s: consistent with block in a node driven faster than it can follow. The definitions of second-degree AV block ask for a P rate below 100/min and do not apply.",
			strings.TrimSpace(ratio+" AV conduction"), grows, perMinute(medianDur(cycles))),
		Level: f.modelLevel(ps), Surface: "undetermined",
		Rivals: []string{"AV block that would show at slower rates as well"},
		clause: strings.TrimSpace(ratio+" AV conduction") + grows,
	})
}

// wide tells whether any QRS among the events is at least 120 ms wide; false
// without leads.
func (f *finder) wide(ids []event.ID) bool {
	for _, id := range ids {
		e := f.log.At(id)
		if e == nil || e.Site < 0 || f.log.Sites[e.Site].Chamber() != 'V' {
			continue
		}
		if w := f.surf.vWave[f.mark[id].wave]; w != nil && w.Offset.Sub(w.Onset) >= 120*tick.Millisecond {
			return true
		}
	}
	return false
}

func (f *surface) any() bool { return len(f.shapes) > 0 }

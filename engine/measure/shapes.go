package measure

import (
	"fmt"
	"slices"
	"strings"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// shapeWords in the order in which they are reported.
var shapeWords = []struct{ slug, words string }{
	{RBBB, "right bundle branch block"},
	{LBBB, "left bundle branch block"},
	{IncompleteRBBB, "incomplete right bundle branch block"},
	{IncompleteLBBB, "incomplete left bundle branch block"},
	{LAFB, "left anterior fascicular block"},
	{LPFB, "left posterior fascicular block"},
	{Nonspecific, "nonspecific intraventricular conduction delay"},
}

// fromAbove tells whether a QRS came from a P or from the junction, so that its
// shape tells of the bundles. A beat that began in the ventricles is wide for
// another reason.
func (f *finder) fromAbove(j int) bool {
	return !f.v[j].accessory && !f.v[j].fusion && (!f.own(j) || f.vOrigin(j) == fromJunction)
}

// has tells whether beat j shows the pattern on the leads.
func (f *finder) shows(j int, slug string) bool {
	n := f.surf.shape[j]
	return n >= 0 && f.surf.shapes[n].Has(slug)
}

// shapes names QRS patterns of beats from above that are the strip's usual ones;
// beats that differ from the rest for their timing are aberrant instead.
func (f *finder) shapes() {
	total := 0
	for j := range f.v {
		if f.fromAbove(j) && f.surf.shape[j] >= 0 {
			total++
		}
	}
	for _, p := range shapeWords {
		var ids []event.ID
		var axis []float64
		var wide []tick.Dur
		for j := range f.v {
			if f.fromAbove(j) && f.shows(j, p.slug) {
				ids = append(ids, f.v[j].id)
				w := f.surf.vWave[j]
				wide = append(wide, w.Offset.Sub(w.Onset))
				if a := f.surf.shapes[f.surf.shape[j]].Axis; a != nil {
					axis = append(axis, *a)
				}
			}
		}
		if len(ids) == 0 || 3*len(ids) < total && !f.usual(p.slug) {
			continue
		}
		numbers := fmt.Sprintf("QRS %s ms", whole(medianDur(wide)))
		if a := middleAngle(axis); a != nil {
			numbers += fmt.Sprintf(", axis %.0f degrees", *a)
		}
		clause := p.words
		if len(ids) < total {
			clause += fmt.Sprintf(" in %d of %d beats", len(ids), total)
		}
		f.add(orderShape, Finding{
			Slug: p.slug, Evidence: ids, Count: len(ids),
			Text:   fmt.Sprintf("The leads meet the criteria in %d of %d beats from above (%s): consistent with %s.", len(ids), total, numbers, p.words),
			clause: clause,
		})
	}
	f.alternatingBundles()
}

// usual tells whether a pattern also comes at cycles no shorter than the median:
// then it is not the earliness of single beats that makes it.
func (f *finder) usual(slug string) bool {
	cycle := f.conductedCycle()
	for j := range f.v {
		if j > 0 && f.fromAbove(j) && f.shows(j, slug) && f.rr(j) >= cycle {
			return true
		}
	}
	return false
}

func (f *finder) alternatingBundles() {
	var right, left []event.ID
	for j := range f.v {
		if !f.fromAbove(j) || f.own(j) || f.p[f.v[j].p].premature {
			continue
		}
		if f.shows(j, RBBB) {
			right = append(right, f.v[j].id)
		}
		if f.shows(j, LBBB) {
			left = append(left, f.v[j].id)
		}
	}
	if len(right) == 0 || len(left) == 0 {
		return
	}
	f.add(orderShape, Finding{
		Slug: "alternating_bundle_branch_block", Evidence: append(right, left...), Count: len(right) + len(left),
		Text:   fmt.Sprintf("%d beats show right and %d left bundle branch block: consistent with alternating bundle branch block, disease of both bundles.", len(right), len(left)),
		clause: "alternating bundle branch block",
	})
}

// aberrant: a beat from above whose impulse was blocked in a bundle or fascicle
// because it came too early for it, while most beats pass there. With leads its
// QRS must differ from the usual one as well: 15 ms wider or another pattern.
func (f *finder) aberrant() {
	stops := f.bundleStops()
	usual := f.usualBeat(stops)
	if usual < 0 {
		return
	}
	var ids []event.ID
	n := 0
	text := ""
	for j := range f.v {
		if !f.fromAbove(j) || f.own(j) || len(stops[j]) == 0 || !f.differs(j, usual) {
			continue
		}
		n++
		ids = append(append(ids, f.v[j].id), stops[j]...)
		if text == "" && j > 1 {
			text = fmt.Sprintf(" The first of them follows an RR of %s ms after one of %s.", whole(f.rr(j)), whole(f.rr(j-1)))
		}
	}
	if n == 0 || 2*n > f.fromAboveCount() {
		return
	}
	f.add(orderShape, Finding{
		Slug: "aberrant_conduction", Evidence: ids, Count: n,
		Text:   fmt.Sprintf("%s one bundle or fascicle still refractory: consistent with aberrant conduction.%s", plural(n, "beat from above finds", "beats from above find"), text),
		Rivals: []string{"ventricular premature beats, if the P before them is not seen"},
		clause: "aberrant conduction in " + plural(n, "beat", "beats"),
	})
}

func (f *finder) fromAboveCount() int {
	n := 0
	for j := range f.v {
		if f.fromAbove(j) && !f.own(j) {
			n++
		}
	}
	return n
}

// bundleStops lists by QRS the blocks by recovery in bundles and fascicles that
// its own impulse met on the way down.
func (f *finder) bundleStops() [][]event.ID {
	stops := make([][]event.ID, len(f.v))
	for i := range f.p {
		if f.p[i].to < 0 {
			continue
		}
		for _, id := range f.p[i].blocks {
			e := f.log.At(id)
			if (e.Rule == event.PathRefractory || e.Rule == event.SiteRefractory) && f.log.Paths[e.Path].Tissue == event.Purkinje && !f.overtaken(id) {
				stops[f.p[i].to] = append(stops[f.p[i].to], id)
			}
		}
	}
	return stops
}

// overtaken tells whether the block met only the same beat coming from another
// side, which is no delay of its own.
func (f *finder) overtaken(id event.ID) bool {
	b := f.log.At(f.mark[id].blocker)
	e := f.log.At(id)
	return b != nil && f.mark[b.ID].origin == f.mark[id].origin && e.T.Sub(b.T) < ventricularSpread
}

// usualBeat is a conducted beat without such a stop, with leads if there are any.
func (f *finder) usualBeat(stops [][]event.ID) int {
	found := -1
	for j := range f.v {
		if f.fromAbove(j) && !f.own(j) && len(stops[j]) == 0 {
			if f.surf.vWave[j] != nil {
				return j
			}
			if found < 0 {
				found = j
			}
		}
	}
	return found
}

func (f *finder) differs(j, usual int) bool {
	a, b := f.surf.vWave[j], f.surf.vWave[usual]
	if a == nil || b == nil {
		return true
	}
	if a.Offset.Sub(a.Onset)-b.Offset.Sub(b.Onset) >= 15*tick.Millisecond {
		return true
	}
	return f.patterns(j) != f.patterns(usual)
}

func (f *finder) patterns(j int) string {
	if n := f.surf.shape[j]; n >= 0 {
		return strings.Join(slices.Clone(f.surf.shapes[n].Patterns), " ")
	}
	return ""
}

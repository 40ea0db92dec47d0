package measure

import (
	"fmt"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// tolerance of the pause arithmetic against the sinus cycle: 20 ms, half a small
// square on paper.
const pauseTolerance = 20 * tick.Millisecond

func (f *finder) prematureAtrial() {
	var ids []event.ID
	n, stopped, reset := 0, 0, 0
	var firstBlocked string
	for i := range f.p {
		w, basic := &f.p[i], f.local[i]
		if !w.premature || f.origin(w.id) == fromSinus {
			continue
		}
		n++
		ids = append(ids, w.id)
		switch {
		case w.to >= 0:
			ids = append(ids, f.v[w.to].id)
		case f.pacedOver(i) || f.tracked(i): // no opportunity to conduct
		default:
			stopped++
			ids = append(ids, f.deepest(i)...)
			if firstBlocked == "" {
				firstBlocked = f.level(i)
			}
		}
		if i > 0 && i+1 < len(f.p) && basic > 0 && Compensatory(f.pp(i), f.pp(i+1), basic, max(pauseTolerance, f.noise)) == LessThanFull {
			reset++
		}
	}
	if n == 0 {
		return
	}
	text := fmt.Sprintf("%s earlier than the cycle from outside the sinus node", plural(n, "P comes", "P waves come"))
	clause := plural(n, "atrial premature beat", "atrial premature beats")
	if stopped > 0 {
		text += fmt.Sprintf(", %d blocked", stopped)
		clause += fmt.Sprintf(" (%d blocked)", stopped)
	}
	if reset > 0 {
		text += fmt.Sprintf("; the pause is less than compensatory %s, the sinus node was reset", times(reset))
	}
	f.add(orderPremature, Finding{Slug: "premature_atrial", Evidence: ids, Count: n, Text: text + ": consistent with atrial premature beats.", clause: clause})
	if stopped > 0 {
		level := Nodal
		switch firstBlocked {
		case levelHis, levelBundles:
			level = Infranodal
		case "":
			level = Unknown
		}
		f.add(orderPremature, Finding{
			Slug: "blocked_premature_atrial", Evidence: ids, Count: stopped, Level: level, Surface: "undetermined",
			Note:   "Hidden in a T wave it is easily taken for a pause of the sinus node.",
			Text:   fmt.Sprintf("%s blocked: consistent with blocked atrial premature beats, which are not AV block.", plural(stopped, "premature P is", "premature P waves are")),
			Rivals: []string{"sinus pause", "sinoatrial exit block"},
		})
	}
}

// pauseFinding gathers premature beats by what followed them.
type pauseFinding struct {
	ids  []event.ID
	n    int
	sums []tick.Dur
}

func (f *finder) prematureVentricular() {
	var ids, junctional []event.ID
	n, nj := 0, 0
	var kinds [MoreThanFull + 1]pauseFinding
	for j := range f.v {
		if !f.v[j].premature {
			continue
		}
		if f.beganInJunction(j) {
			junctional = append(junctional, f.v[j].id, f.mark[f.v[j].id].origin)
			nj++
			continue
		}
		ids = append(ids, f.v[j].id, f.mark[f.v[j].id].origin)
		n++
		if k := f.pauseAfter(j); k != 0 {
			kinds[k].ids = append(kinds[k].ids, f.v[j-1].id, f.v[j].id, f.v[j+1].id)
			kinds[k].n++
			kinds[k].sums = append(kinds[k].sums, f.rr(j)+f.rr(j+1))
		}
	}
	if n > 0 {
		f.add(orderPremature, Finding{
			Slug: "premature_ventricular", Evidence: ids, Count: n,
			Text:   fmt.Sprintf("%s earlier than the cycle, begun below the His bundle: consistent with ventricular premature beats.", plural(n, "QRS comes", "QRS complexes come")),
			clause: plural(n, "ventricular premature beat", "ventricular premature beats"),
		})
	}
	if nj > 0 {
		f.add(orderPremature, Finding{
			Slug: "premature_junctional", Evidence: junctional, Count: nj,
			Text:   fmt.Sprintf("%s earlier than the cycle, begun in the AV junction: consistent with junctional premature beats.", plural(nj, "QRS comes", "QRS complexes come")),
			clause: plural(nj, "junctional premature beat", "junctional premature beats"),
		})
	}
	f.pauses(kinds[:])
}

func (f *finder) beganInJunction(j int) bool {
	t := f.stimulated(f.v[j].id)
	return f.vOrigin(j) == fromJunction || t == event.Node || t == event.His
}

// pauseAfter classifies the cycle around one premature beat between two
// conducted ones, or 0 where it stands otherwise. The P waves of its neighbours
// are compared with the sinus cycle, which takes the PR changes out of the RR
// sum: RR sum = PP sum + change of PR.
func (f *finder) pauseAfter(j int) Pause {
	if j == 0 || j+1 >= len(f.v) || f.own(j-1) || f.own(j+1) {
		return 0
	}
	a, b := int(f.v[j-1].p), int(f.v[j+1].p)
	basic := f.localCycle(a)
	if basic == 0 || f.p[b].retrograde || f.p[a].premature || f.p[b].premature {
		return 0
	}
	if f.p[a].retrograde || f.pOrigin(a) != f.pOrigin(b) {
		return 0
	}
	span := f.p[b].t.Sub(f.p[a].t)
	return Compensatory(span, 0, basic, max(pauseTolerance, f.noise))
}

// localCycle is the PP just before a P if both are ordinary, else the sinus cycle.
func (f *finder) localCycle(i int) tick.Dur {
	if f.plain(i) && !f.p[i].premature && !f.p[i-1].premature {
		c := f.local[i]
		if d := f.pp(i); c == 0 || 10*d > 7*c && 10*d < 13*c {
			return d
		}
	}
	return f.local[i]
}

func (f *finder) pauses(kinds []pauseFinding) {
	words := [...]struct{ slug, text, clause string }{
		Full:             {"full_compensatory_pause", "The beats on both sides lie two sinus cycles apart: consistent with a full compensatory pause, the sinus node undisturbed.", "full compensatory pause"},
		LessThanFull:     {"less_than_full_compensatory_pause", "The beats on both sides lie less than two sinus cycles apart: consistent with a sinus node that was reset from below.", "pause less than compensatory"},
		InterpolatedBeat: {"interpolated_ventricular", "The beats on both sides lie one sinus cycle apart (plus any change of PR): consistent with interpolated ventricular premature beats.", "interpolated"},
		MoreThanFull:     {"more_than_compensatory_pause", "The beats on both sides lie more than two sinus cycles apart: consistent with a sinus node slowed or a P blocked after the premature beat.", ""},
	}
	for k := range kinds {
		if kinds[k].n == 0 {
			continue
		}
		f.add(orderPremature, Finding{
			Slug: words[k].slug, Evidence: kinds[k].ids, Count: kinds[k].n,
			Text:   fmt.Sprintf("Around %s the RR intervals add up to %s ms. ", plural(kinds[k].n, "premature beat", "premature beats"), whole(medianDur(kinds[k].sums))) + words[k].text,
			clause: words[k].clause,
		})
	}
}

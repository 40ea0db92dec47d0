package measure

import (
	"fmt"
	"slices"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// round is the way by which an impulse came back to the atria it had started from.
type round uint8

const (
	_           round = iota
	typical           // through the AV node: down the slow pathway and up the fast one
	atypical          // through the AV node the other way round
	orthodromic       // down the node, through the ventricles, up an accessory pathway
	antidromic        // down an accessory pathway, up the node or another pathway
	throughNode       // through the ventricles and up the node by which it had come
	rounds
)

// roundBy is the way round of a P, or 0 where it did not come from the atrial wave before it.
func (s *strip) roundBy(i int) round {
	w := &s.p[i]
	switch {
	case !w.retrograde:
		return 0
	case w.echo && s.by(w.id) == "av_slow":
		return atypical
	case w.echo:
		return typical
	case w.from < 0 || s.own(int(w.from)):
		return 0
	case s.v[w.from].accessory && s.v[w.from].his == 0:
		return antidromic
	case s.overPathway(w.id):
		return orthodromic
	case s.v[w.from].accessory:
		return antidromic
	}
	return throughNode
}

// by is the name of the path over which an activation came.
func (s *strip) by(id event.ID) string {
	if e := s.log.At(id); e != nil && e.Path >= 0 {
		return s.log.Paths[e.Path].Name
	}
	return ""
}

func (s *strip) overPathway(id event.ID) bool {
	e := s.log.At(id)
	return e != nil && e.Path >= 0 && s.log.Paths[e.Path].Tissue == event.Accessory
}

// sister is the QRS that the same activation of the AV junction led to as an echo, or -1.
func (s *strip) sister(i int) int {
	w := &s.p[i]
	if !w.echo {
		return -1
	}
	junction := s.log.At(w.id).Cause
	from, _ := slices.BinarySearchFunc(s.v, w.t.Add(-tick.Second/2), func(v vwave, t tick.Time) int { return int(v.t - t) })
	for j := from; j < len(s.v) && s.v[j].t <= w.t.Add(tick.Second/2); j++ {
		if h := s.log.At(s.v[j].his); h != nil && h.Cause == junction {
			return j
		}
	}
	return -1
}

// Limits of the time from the first ventricular activation to the earliest atrial
// one. Under 70 ms there is no time for a way through the ventricles (Benditt et
// al., Ann Intern Med 1979;91:161, and Katritsis and Josephson 2016, both from
// memory; 70 as in a modern methods section that was read).
const throughVentricles = 70 * tick.Millisecond

// circuit gathers the turns of one kind.
type circuit struct {
	ids    []event.ID
	n      int
	cycles []tick.Dur // between turns that follow each other
	va     []tick.Dur // first ventricular to earliest atrial activation: RP
	pr     []tick.Dur // from there to the next QRS
}

// reentry names impulses that came back to the atria: one or two are echoes or
// reciprocal beats, three or more a tachycardia.
func (f *finder) reentry() {
	var all [rounds]circuit
	last := round(0)
	for i := range f.p {
		k := f.roundBy(i)
		if k > 0 {
			f.gatherTurn(&all[k], i, last == k)
		}
		last = k
	}
	for k := typical; k < rounds; k++ {
		if all[k].n > 0 {
			f.addCircuit(k, &all[k])
		}
	}
}

func (f *finder) gatherTurn(c *circuit, i int, goesOn bool) {
	w := &f.p[i]
	c.n++
	c.ids = append(c.ids, w.id)
	if goesOn {
		c.cycles = append(c.cycles, f.pp(i))
	}
	j := int(w.from)
	if j < 0 {
		j = f.sister(i)
	}
	if j < 0 {
		return
	}
	c.ids = append(c.ids, f.v[j].id)
	c.va = append(c.va, w.t.Sub(f.v[j].t))
	if w.to >= 0 {
		c.pr = append(c.pr, f.v[w.to].t.Sub(w.t))
	}
}

var circuits = [rounds]struct{ slug, words, short, one string }{
	typical:     {"av_nodal_reentry", "typical re-entry in the AV node (down the slow, up the fast pathway)", "typical AV-nodal re-entry", "av_nodal_echo"},
	atypical:    {"av_nodal_reentry_atypical", "atypical re-entry in the AV node (up the slow pathway)", "atypical AV-nodal re-entry", "av_nodal_echo"},
	orthodromic: {"orthodromic_reentry", "orthodromic re-entry (down the AV node, up an accessory pathway)", "orthodromic AV re-entry", "av_reentrant_beat"},
	antidromic:  {"antidromic_reentry", "antidromic re-entry (down an accessory pathway)", "antidromic AV re-entry", "av_reentrant_beat"},
	throughNode: {"av_reentry", "re-entry through atria and ventricles", "AV re-entry", "av_reentrant_beat"},
}

func (f *finder) addCircuit(k round, c *circuit) {
	name := circuits[k]
	x := Finding{Evidence: c.ids, Count: c.n, Rivals: rivals(k, c)}
	va := ""
	if len(c.va) > 0 {
		va = fmt.Sprintf(", earliest atrial activation %s ms after the start of the QRS", whole(medianDur(c.va)))
		if d := medianDur(c.va); d < 0 {
			va = fmt.Sprintf(", earliest atrial activation %s ms before the start of the QRS", whole(-d))
		}
	}
	if c.n < 3 {
		x.Slug, x.clause = name.one, "echo beats in the AV node"
		if k > atypical {
			x.clause = "reciprocal beats through the ventricles"
		}
		x.Text = fmt.Sprintf("%s back to the atria%s: consistent with %s; it did not go on.", plural(c.n, "impulse comes", "impulses come"), va, name.words)
		f.add(orderConduction, x)
		return
	}
	x.Slug, x.clause = name.slug, name.short
	if d := medianDur(c.cycles); d > 0 {
		x.clause += " " + perMinute(d)
		va = fmt.Sprintf(", cycle %s ms", whole(d)) + va
	}
	x.Text = fmt.Sprintf("%s back to the atria%s: consistent with %s.", plural(c.n, "impulse comes", "impulses come"), va, name.words)
	x.Note = surfaceRP(c)
	f.add(orderTachycardia, x)
}

// surfaceRP says what the surface shows of the order: RP against PR.
func surfaceRP(c *circuit) string {
	if len(c.va) == 0 || len(c.pr) == 0 {
		return ""
	}
	rp, pr := medianDur(c.va), medianDur(c.pr)
	switch {
	case rp < 0:
		return "The P is hidden in the QRS or begins just before it."
	case rp < throughVentricles:
		return fmt.Sprintf("RP %s ms: the P is hidden in the QRS or its end.", whole(rp))
	case rp < pr:
		return fmt.Sprintf("RP %s ms is shorter than PR %s ms: a short-RP tachycardia.", whole(rp), whole(pr))
	}
	return fmt.Sprintf("RP %s ms is longer than PR %s ms: a long-RP tachycardia.", whole(rp), whole(pr))
}

// rivals that fit the surface as well. With the atria reached within 70 ms of the QRS
// no accessory pathway can be part of the circuit.
func rivals(k round, c *circuit) []string {
	const node, pathway, septal, atrial = "re-entry in the AV node", "atrioventricular re-entry over an accessory pathway", "atypical re-entry in the AV node", "atrial tachycardia"
	quick := len(c.va) > 0 && medianDur(c.va) < throughVentricles
	switch {
	case k == typical && quick:
		return []string{"junctional tachycardia", atrial}
	case k <= atypical:
		return []string{pathway, atrial}
	case k == orthodromic && quick:
		return []string{node, atrial}
	case k == orthodromic:
		return []string{septal, atrial}
	case k == antidromic:
		return []string{"ventricular tachycardia", "re-entry in the AV node with a pathway as bystander", "atrial tachycardia with pre-excitation"}
	}
	return []string{node}
}

// preExcitation: QRS complexes of atrial beats that an accessory pathway began or
// helped to make. What the surface can tell of it are a PR under 120 ms and a QRS of
// 120 ms or more (AHA/ACCF/HRS 2009 part III, from memory; QRS at least 120 as read in
// a review).
func (f *finder) preExcitation() {
	var ids []event.ID
	var pr, qrs []float64
	n, shown, waves := 0, 0, 0
	for j := range f.v {
		if !f.v[j].accessory || f.own(j) || !f.descending(int(f.v[j].p)) {
			continue
		}
		n++
		ids = append(append(ids, f.v[j].id), f.v[j].roots...)
		d := 0.0
		if p := int(f.v[j].p); f.arrival(p) {
			waves++
		} else {
			d = f.v[j].t.Sub(f.p[p].t).MS()
			pr = append(pr, d)
		}
		if w := f.surf.vWave[j]; w != nil {
			q := w.Offset.Sub(w.Onset).MS()
			qrs = append(qrs, q)
			if d < 120 && q >= 120 {
				shown++
			}
		}
	}
	if n == 0 {
		return
	}
	what := plural(n, "QRS is entered", "QRS complexes are entered") + " over an accessory pathway"
	if len(pr) > 0 {
		what += fmt.Sprintf(", PR %.0f ms", *median(pr))
	}
	x := Finding{Slug: "pre_excitation", Evidence: ids, Count: n, clause: "pre-excitation"}
	if len(qrs) > 0 {
		what += fmt.Sprintf(", QRS %.0f ms", *median(qrs))
		x.Note = fmt.Sprintf("On the surface %d of them have both a PR under 120 ms and a QRS of 120 ms or more, with a slow start (delta wave).", shown)
		if waves == n {
			x.Note = fmt.Sprintf("On the surface %d of them have a QRS of 120 ms or more, with a slow start (delta wave); fibrillation has no PR to judge by.", shown)
		}
		if shown < n {
			x.Rivals = []string{"intraventricular conduction delay", "ventricular beats late in the cycle"}
		}
	}
	x.Text = what + ": consistent with pre-excitation."
	f.add(orderConduction, x)
}

package measure

import (
	"fmt"
	"slices"
	"strconv"
	"strings"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// arrival tells whether a P is a wave of fibrillation.
func (s *strip) arrival(i int) bool {
	o := s.log.At(s.mark[s.p[i].id].origin)
	return o != nil && o.Rule == event.Arrival
}

// inFibrillation tells whether the last atrial wave before t is one of fibrillation.
func (s *strip) inFibrillation(t tick.Time) bool {
	i, _ := slices.BinarySearchFunc(s.p, t, func(w pwave, t tick.Time) int { return int(w.t - t) })
	return i > 0 && s.arrival(i-1)
}

// driven tells whether a P comes from a driver of the atria.
func (s *strip) driven(i int) bool {
	o := s.log.At(s.mark[s.p[i].id].origin)
	return o != nil && (o.Rule == event.Arrival || o.Rule == event.Circuit)
}

// conductedFlutter adds how many waves come to one conducted QRS, where the ventricles
// follow: "2:1", or the range.
func (f *finder) conductedFlutter(x *Finding, waves []event.ID) {
	in := func(id event.ID) bool { _, ok := slices.BinarySearch(waves, id); return ok }
	last, ratios := -1, []int{}
	for i := range f.p {
		if !in(f.p[i].id) {
			last = -1
			continue
		}
		if f.p[i].to < 0 {
			continue
		}
		if last >= 0 {
			ratios = append(ratios, i-last)
		}
		last = i
	}
	if len(ratios) == 0 {
		x.Text = strings.TrimSuffix(x.Text, ".") + "; fewer than two of its waves reach the ventricles."
		return
	}
	lo, hi := slices.Min(ratios), slices.Max(ratios)
	usual := slices.Sorted(slices.Values(ratios))[len(ratios)/2]
	same := 0
	for _, r := range ratios {
		if r == usual {
			same++
		}
	}
	if 10*same >= 8*len(ratios) { // a choice: four fifths alike is a ratio
		x.Ratio = strconv.Itoa(usual) + ":1"
		x.clause += " conducted " + x.Ratio
	} else {
		x.Ratio = fmt.Sprintf("%d:1 to %d:1", lo, hi)
		x.clause += " with variable conduction, " + x.Ratio
	}
	v := f.following(in)
	x.clause += v
	x.Text = strings.TrimSuffix(x.Text, ".") + "; AV conduction " + x.Ratio + v + "."
	if x.Ratio == "2:1" {
		x.Rivals = []string{"sinus or atrial tachycardia at half the rate, every second wave hidden in the QRS or T", "re-entry in the AV node or over an accessory pathway"}
	}
}

// following is the mean rate of the QRS complexes that come one after the other from
// waves of a set, as a part of a clause.
func (f *finder) following(in func(event.ID) bool) string {
	var rr []tick.Dur
	for j := 1; j < len(f.v); j++ {
		if a, b := f.v[j-1].p, f.v[j].p; a >= 0 && b >= 0 && in(f.p[a].id) && in(f.p[b].id) {
			rr = append(rr, f.rr(j))
		}
	}
	if len(rr) == 0 {
		return ""
	}
	return ", ventricles " + perMinute(mean(rr))
}

// fibrillation is named from the arrivals that the model knows: the leads show
// irregular waves and an irregular ventricular rate. Counted at the right atrium.
// Intervals at one place 147-227 ms (Petrutiu et al. 2007).
func (f *finder) fibrillation() {
	var ids []event.ID
	var last tick.Time
	var d []tick.Dur
	for k := range f.log.Events {
		e := &f.log.Events[k]
		if e.Kind != event.Discharge || e.Rule != event.Arrival || e.Site != f.rightAtrium {
			continue
		}
		if len(ids) > 0 {
			d = append(d, e.T.Sub(last))
		}
		ids, last = append(ids, e.ID), e.T
	}
	if len(d) < 10 {
		return
	}
	var rr []tick.Dur
	for j := 1; j < len(f.v); j++ {
		if f.v[j-1].t >= f.log.At(ids[0]).T && f.v[j].t <= last {
			rr = append(rr, f.rr(j))
		}
	}
	text := fmt.Sprintf("%s arrive at the right atrium at irregular intervals, mean %s ms", plural(len(ids), "wave", "waves"), whole(mean(d)))
	x := Finding{Slug: "atrial_fibrillation", Evidence: ids, Count: len(ids), clause: "atrial fibrillation"}
	if len(rr) > 2 {
		lo, hi := slices.Min(rr), slices.Max(rr)
		text += fmt.Sprintf("; RR %s to %s ms", whole(lo), whole(hi))
		if hi-lo < 20*tick.Millisecond {
			text += ", regular: the ventricles do not follow"
		} else {
			x.Rivals = []string{"atrial flutter with variable conduction", "multifocal atrial tachycardia"}
		}
		x.clause += ", ventricles " + perMinute(mean(rr))
	}
	x.Text = text + ": consistent with atrial fibrillation."
	f.add(orderAtria, x)
	f.fastestPreExcited()
}

func mean(d []tick.Dur) tick.Dur {
	sum := tick.Dur(0)
	for _, x := range d {
		sum += x
	}
	return sum / tick.Dur(max(len(d), 1))
}

// fastestPreExcited gives the shortest RR between two pre-excited beats in
// fibrillation: 250 ms or less is taken for a risk (ESC 2019, from memory); mean 180
// with and 240 without ventricular fibrillation (Klein et al., NEJM 1979;301:1080).
func (f *finder) fastestPreExcited() {
	var ids []event.ID
	var least tick.Dur
	for j := 1; j < len(f.v); j++ {
		if f.v[j].accessory && f.v[j-1].accessory && !f.own(j) && !f.own(j-1) && (least == 0 || f.rr(j) < least) {
			least, ids = f.rr(j), []event.ID{f.v[j-1].id, f.v[j].id}
		}
	}
	if least == 0 {
		return
	}
	x := Finding{Slug: "pre_excited_fibrillation", Evidence: ids, clause: fmt.Sprintf("pre-excited with a shortest RR of %s ms", whole(least)),
		Text:   fmt.Sprintf("Shortest RR between pre-excited beats %s ms: consistent with fibrillation conducted over an accessory pathway.", whole(least)),
		Note:   "250 ms or less is taken for a risk (ESC 2019, from memory).",
		Rivals: []string{"polymorphic ventricular tachycardia", "atrial fibrillation with bundle branch block"}}
	f.add(orderAtria, x)
}

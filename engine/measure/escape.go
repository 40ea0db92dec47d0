package measure

import (
	"fmt"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// run is a row of ventricular beats from one place below the atria.
type run struct{ from, to int } // to is past the last

func (s *strip) runs() []run {
	var out []run
	for i := 0; i < len(s.v); {
		j := i + 1
		if s.own(i) {
			for j < len(s.v) && s.linked(j-1, j) {
				j++
			}
			out = append(out, run{i, j})
		}
		i = j
	}
	return out
}

// pace is the median interval inside the run; a lone beat has its escape interval.
func (s *strip) pace(r run) tick.Dur {
	var d []tick.Dur
	for i := r.from + 1; i < r.to; i++ {
		d = append(d, s.rr(i))
	}
	if d == nil {
		return s.rr(r.from)
	}
	return medianDur(d)
}

// rhythmName names a run by its origin and rate. Junctional: escape 40-60/min,
// accelerated 60-100, tachycardia above (read on two teaching pages).
// Ventricular: escape 20-50, accelerated 50-110, tachycardia above (the upper
// limits from memory; sources differ between 40-120 and 60-110).
func rhythmName(origin string, pace tick.Dur, beats int) (slug, words string) {
	bpm := pace.BPM()
	switch origin {
	case fromJunction:
		switch {
		case beats >= 3 && bpm > 100:
			return "junctional_tachycardia", "junctional tachycardia"
		case beats >= 3 && bpm > 60:
			return "accelerated_junctional_rhythm", "accelerated junctional rhythm"
		}
		return "junctional_escape", "junctional escape"
	case fromFascicle, fromVentricle:
		switch {
		case beats >= 3 && bpm > 110:
			return "ventricular_tachycardia", "ventricular tachycardia"
		case beats >= 3 && bpm > 50:
			return "accelerated_ventricular_rhythm", "accelerated ventricular rhythm"
		}
		if origin == fromFascicle {
			return "ventricular_escape", "fascicular escape"
		}
		return "ventricular_escape", "ventricular escape"
	case fromStimulus:
		return "ventricular_stimulation", "ventricular stimulation"
	}
	return "", ""
}

// gathered collects the runs that get the same name.
type gathered struct {
	slug, words string
	ids         []event.ID
	beats       int
	paces       []tick.Dur
}

// gather finds the entry with the name, or adds one.
func gather(all []gathered, slug, words string) ([]gathered, *gathered) {
	for k := range all {
		if all[k].words == words {
			return all, &all[k]
		}
	}
	all = append(all, gathered{slug: slug, words: words})
	return all, &all[len(all)-1]
}

func (f *finder) escapes() {
	var all []gathered
	for _, r := range f.runs() {
		n := r.to - r.from
		if f.begunByDevice(r.from) {
			continue // the device's rhythm has a name of its own
		}
		if n < 3 && f.v[r.from].premature {
			continue
		}
		if n < 3 && f.origin(f.v[r.from].id) == fromStimulus {
			continue
		}
		if f.v[r.from].circling && n < 3 {
			continue
		}
		pace := f.pace(r)
		origin := f.vOrigin(r.from)
		if n >= 3 && f.v[r.from+1].circling {
			origin = fromVentricle // one stimulus began it, and it goes on by itself
		}
		slug, words := rhythmName(origin, pace, n)
		if slug == "" {
			continue
		}
		var g *gathered
		all, g = gather(all, slug, words)
		g.beats += n
		if pace > 0 {
			g.paces = append(g.paces, pace)
		}
		for i := r.from; i < r.to; i++ {
			g.ids = append(g.ids, f.v[i].id, f.mark[f.v[i].id].origin)
		}
	}
	for _, g := range all {
		f.addRun(g)
	}
}

func (f *finder) addRun(g gathered) {
	at := ""
	if p := medianDur(g.paces); p > 0 {
		at = " " + perMinute(p)
		if g.beats == 1 {
			at = fmt.Sprintf(" after %s ms", whole(p))
		}
	}
	f.add(orderVentricles, Finding{
		Slug: g.slug, Evidence: g.ids, Count: g.beats,
		Text:   fmt.Sprintf("%s below the atria%s: consistent with %s.", plural(g.beats, "beat begins", "beats begin"), at, g.words),
		clause: g.words + at,
	})
}

// dissociation: at least two beats that began below the atria in their own time,
// and at least two P waves from above that did not conduct meanwhile. Fibrillation has
// no P waves.
func (f *finder) dissociation() {
	var ids []event.ID
	beats, waves := 0, 0
	var from, to tick.Time
	for j := range f.v {
		if f.own(j) && !f.v[j].premature && f.v[j].retro < 0 && !f.followsAtrium(j) && !f.inFibrillation(f.v[j].t) {
			if beats == 0 {
				from = f.v[j].t
			}
			to = f.v[j].t
			beats++
			ids = append(ids, f.v[j].id)
		}
	}
	if beats < 2 {
		return
	}
	var cycles []tick.Dur
	for i := range f.p {
		w := &f.p[i]
		if !w.retrograde && w.to < 0 && !w.premature && !f.tracked(i) && !f.arrival(i) && w.t >= from.Add(-tick.Second) && w.t <= to.Add(tick.Second) {
			waves++
			ids = append(ids, w.id)
			if i > 0 {
				cycles = append(cycles, f.pp(i))
			}
		}
	}
	if waves < 2 {
		return
	}
	var rrs []tick.Dur
	for j := range f.v {
		if j > 0 && f.own(j) && f.own(j-1) {
			rrs = append(rrs, f.rr(j))
		}
	}
	a, v := medianDur(cycles), medianDur(rrs)
	why, clause := "the beats from below come in time to leave the P waves no opportunity (interference)", "AV dissociation by interference"
	switch {
	case f.has("complete_av_block"):
		why, clause = "AV block keeps the two apart", "AV dissociation"
	case a > 0 && v > 0 && a >= v:
		why, clause = "the ventricles are the faster of the two (isorhythmic where the rates are close)", "AV dissociation, ventricles faster"
	}
	f.add(orderDissociation, Finding{
		Slug: "av_dissociation", Evidence: ids, Count: beats,
		Text:   fmt.Sprintf("P waves and %s from below run independently: consistent with AV dissociation; %s.", plural(beats, "beat", "beats"), why),
		clause: clause,
	})
}

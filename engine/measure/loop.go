package measure

import (
	"fmt"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// turn is once round an endless loop: a QRS, the P that came up from it, and the
// stimulus that the device gave for that P.
type turn struct {
	from   int // QRS
	p      int // P
	signal *marker
	vp     *marker
}

// turns lists the turns of endless loops in order of time.
func (f *finder) turns() []turn { return f.turnsInto(nil) }

func (f *finder) turnsInto(out []turn) []turn {
	for i := range f.dev.markers {
		m := &f.dev.markers[i]
		if !m.paced() || m.e.Channel != 'V' {
			continue
		}
		s := f.dev.marker(m.e.Cause)
		if s == nil || s.e.Channel != 'A' || s.e.Use != event.Tracked || s.wave < 0 {
			continue
		}
		if p := int(s.wave); f.p[p].retrograde && f.p[p].from >= 0 {
			out = append(out, turn{int(f.p[p].from), p, s, m})
		}
	}
	return out
}

// leastTurns make a loop: fewer may end by themselves (a choice of this package).
const leastTurns = 3

// loops finds endless-loop tachycardia: the device tracks the P that its own stimulus
// sent up. Sources: facts of Alasti et al., J Arrhythm 2018;34:485.
func (f *finder) loops() {
	all := f.turns()
	for i := 0; i < len(all); {
		j := i + 1
		for j < len(all) && all[j].from >= 0 && f.madeBy(all[j-1].vp, all[j].from) {
			j++
		}
		if j-i >= leastTurns {
			f.loop(all[i:j])
		}
		i = j
	}
}

// madeBy tells whether the stimulus has a part in the QRS.
func (f *finder) madeBy(vp *marker, j int) bool { return vp.wave >= 0 && int(vp.wave) == j }

func (f *finder) loop(turns []turn) {
	var ids []event.ID
	var cycle, va, av []tick.Dur
	held := 0
	for k, t := range turns {
		ids = append(ids, f.v[t.from].id, f.p[t.p].id, t.signal.e.ID, t.vp.e.ID)
		f.dev.looped[t.signal.e.ID], f.dev.looped[t.vp.e.ID] = true, true
		if k > 0 {
			cycle = append(cycle, t.vp.e.T.Sub(turns[k-1].vp.e.T))
		}
		va = append(va, t.signal.e.T.Sub(f.v[t.from].t))
		av = append(av, t.vp.e.T.Sub(t.signal.e.T))
		if t.vp.e.Field == "upper_rate" {
			held++
		}
	}
	start, startID := f.loopStart(turns[0])
	end, endID := f.loopEnd(turns[len(turns)-1])
	how := fmt.Sprintf("below the upper rate: VA %s + AV %s ms", whole(medianDur(va)), whole(medianDur(av)))
	if 2*held > len(turns) {
		how = fmt.Sprintf("at the upper rate: VA %s ms and the AV delay stretched to %s ms", whole(medianDur(va)), whole(medianDur(av)))
	}
	c := medianDur(cycle)
	f.add(orderDevice, Finding{
		Slug: "endless_loop_tachycardia", Evidence: append(ids, startID, endID), Count: len(turns), PRs: []float64{medianDur(av).MS()},
		Text: fmt.Sprintf("%s up from the beat before, sensed outside PVARP and tracked, cycle %s ms (%s), %s; started by %s; %s: consistent with endless-loop tachycardia.",
			plural(len(turns), "P comes", "P waves come"), whole(c), perMinute(c), how, start, end),
		Rivals: []string{"tracking of an atrial tachycardia at the upper rate", "sinus tachycardia tracked at the upper rate"},
		clause: fmt.Sprintf("endless-loop tachycardia %s (cycle %s ms) started by %s, %s", perMinute(c), whole(c), start, end),
	})
}

// loopStart says what let the first P come up: a QRS with no P from above before it.
func (f *finder) loopStart(t turn) (string, event.ID) {
	j := t.from
	m := f.dev.at(f.dev.vp[j])
	switch {
	case m == nil && f.own(j) && f.vOrigin(j) != fromJunction:
		return "a ventricular premature beat", f.v[j].id
	case m == nil && f.own(j):
		return "a junctional beat", f.v[j].id
	case m == nil:
		return "a conducted beat", f.v[j].id
	}
	a := f.dev.marker(m.e.Cause)
	switch {
	case a == nil:
		return "a ventricular stimulus without a P before it", m.e.ID
	case a.paced() && !a.e.Captured:
		return "an atrial stimulus without capture", a.e.ID
	case !a.paced() && natureOf(f.log, a.e) != ofBeat:
		return "an atrial signal that no P caused", a.e.ID
	case a.wave >= 0 && f.descending(int(a.wave)) && f.p[a.wave].premature:
		return "an atrial premature beat", a.e.ID
	case m.e.T.Sub(a.e.T) > noRoom:
		return "a long AV interval", a.e.ID
	}
	return "a ventricular stimulus", m.e.ID
}

// toTheEnd is the end of a loop that has none on the strip.
const toTheEnd = "to the end of the strip"

// loopEnd says what became of the last stimulus of a loop.
func (f *finder) loopEnd(t turn) (string, event.ID) {
	last := t.vp
	if last.wave < 0 {
		return "ended by loss of ventricular capture", last.e.ID
	}
	for _, w := range f.dev.windows {
		if w.Field == "withheld" && w.T > last.e.T && w.T.Sub(last.e.T) < tick.Second {
			return "ended by a ventricular stimulus left out", w.ID
		}
	}
	retro := f.v[last.wave].retro
	if retro < 0 {
		if f.log.Span.Sub(last.e.T) < tick.Second {
			return toTheEnd, 0
		}
		return "ended by block on the way up", last.e.ID
	}
	s := f.dev.at(f.dev.as[retro])
	switch {
	case f.log.Span.Sub(last.e.T) < tick.Second && (s == nil || s.e.Use == event.Tracked):
		return toTheEnd, 0
	case s == nil:
		return "ended by a P that was not sensed", f.p[retro].id
	case s.e.Use == event.Refractory || s.e.Use == event.Blanked:
		if w := f.log.At(s.e.By); w != nil && w.Why != "" {
			return fmt.Sprintf("ended by a PVARP of %s ms (%s)", whole(w.Until.Sub(w.T)), w.Why), s.e.ID
		}
		return "ended by a P in PVARP", s.e.ID
	}
	return "ended by another ventricular event", s.e.ID
}

// synchronies finds repetitive non-reentrant VA synchrony: each ventricular stimulus
// sends up a P that is refractory to the device, and the next atrial stimulus meets
// the atrium it left refractory. Source: facts of Heart Rhythm 2016;13:1739.
func (f *finder) synchronies() {
	var ids []event.ID
	var va, pa, short, cycle []tick.Dur
	n, row := 0, 0
	flush := func(from int) {
		if row < 2 {
			ids, va, pa, short = ids[:from], va[:len(va)-row], pa[:len(pa)-row], short[:len(short)-row]
		} else {
			n += row
		}
		row = 0
	}
	from := 0
	for i := range f.dev.markers {
		ap := &f.dev.markers[i]
		if !ap.paced() || ap.e.Channel != 'A' {
			continue
		}
		j, p, s, ok := f.synchronyBefore(ap)
		if !ok {
			flush(from)
			from = len(ids)
			continue
		}
		if row++; row > 1 {
			cycle = append(cycle, f.since(ap))
		}
		vp := f.dev.at(f.dev.vp[j])
		ids = append(ids, vp.e.ID, f.p[p].id, s.e.ID, ap.e.ID)
		va = append(va, s.e.T.Sub(f.v[j].t))
		pa = append(pa, ap.e.Recovery)
		short = append(short, ap.e.MissedBy())
	}
	flush(from)
	if n == 0 {
		return
	}
	for _, id := range ids {
		f.dev.looped[id] = true
	}
	c := medianDur(cycle)
	f.add(orderDevice, Finding{
		Slug: "repetitive_nonreentrant_va_synchrony", Evidence: ids, Count: n,
		Text: fmt.Sprintf("%s, the P that comes up from a ventricular stimulus (VA %s ms) falls in PVARP, and the atrial stimulus %s ms after it meets refractory atrium, %s ms too soon to capture: consistent with repetitive non-reentrant VA synchrony.",
			capital(times(n)), whole(medianDur(va)), whole(medianDur(pa)), whole(medianDur(short))),
		Rivals: []string{"atrial lead or threshold failure"},
		clause: fmt.Sprintf("repetitive non-reentrant VA synchrony %s, atrial stimuli without capture for refractory tissue", perMinute(c)),
	})
}

// synchronyBefore looks whether an atrial stimulus without capture met what a P from
// the device's own last QRS had left refractory.
func (f *finder) synchronyBefore(ap *marker) (j, p int, s *marker, ok bool) {
	if ap.e.Captured || ap.e.MissedBy() == 0 {
		return 0, 0, nil, false
	}
	for i := f.dev.of[ap.e.ID] - 1; i >= 0; i-- {
		m := &f.dev.markers[i]
		if m.e.Channel == 'V' && m.beat {
			break
		}
		if m.e.Channel != 'A' || m.e.Use != event.Refractory || m.wave < 0 {
			continue
		}
		w := &f.p[m.wave]
		if w.retrograde && w.from >= 0 && f.dev.vp[w.from] >= 0 {
			return int(w.from), int(m.wave), m, true
		}
	}
	return 0, 0, nil, false
}

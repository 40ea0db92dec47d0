package measure

import (
	"fmt"
	"strings"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// captures sorts the stimuli without capture by why.
func (f *finder) captures() {
	pseudo := f.pseudofusions()
	for _, ch := range []byte{'A', 'V'} {
		var functional, lost []event.ID
		var missed []tick.Dur
		why := ""
		for i := range f.dev.markers {
			m := &f.dev.markers[i]
			e := m.e
			switch {
			case !m.paced() || e.Captured || e.Channel != ch || f.dev.looped[e.ID]:
			case e.MissedBy() == 0:
				lost = append(lost, e.ID)
				if e.Outcome != 0 {
					why = strings.ReplaceAll(e.Outcome.String(), "_", " ")
				}
			case !contains(pseudo, e.ID):
				functional = append(functional, e.ID)
				missed = append(missed, e.MissedBy())
			}
		}
		if n := len(functional); n > 0 {
			f.add(orderFault, Finding{
				Slug: "functional_non_capture", Channel: string(rune(ch)), Evidence: functional, Count: n,
				Text: fmt.Sprintf("%s refractory tissue, %s ms too soon%s, without capture: consistent with functional non-capture.",
					plural(n, chamberOf(ch)+" stimulus meets", chamberOf(ch)+" stimuli meet"), whole(medianDur(missed)), oneOr(n, "", " (median)")),
				Rivals: []string{"loss of capture by threshold or lead"},
				clause: fmt.Sprintf("%s functional non-capture (%s)", chamberOf(ch), times(n)),
			})
		}
		if n := len(lost); n > 0 {
			if why == "" {
				why = "cause not on the record"
			}
			f.add(orderFault, Finding{
				Slug: "loss_of_capture", Channel: string(rune(ch)), Evidence: lost, Count: n,
				Text:   fmt.Sprintf("%s without capture into excitable tissue (%s): consistent with loss of %s capture.", plural(n, chamberOf(ch)+" stimulus", chamberOf(ch)+" stimuli"), why, chamberOf(ch)),
				clause: fmt.Sprintf("loss of %s capture (%s)", chamberOf(ch), times(n)),
			})
		}
	}
}

func contains(ids []event.ID, id event.ID) bool {
	for _, x := range ids {
		if x == id {
			return true
		}
	}
	return false
}

// pseudofusions are the ventricular stimuli that fell into tissue which the QRS of
// their own moment had depolarised already: on the QRS, without a part in it.
func (s *strip) pseudofusions() []event.ID {
	var ids []event.ID
	for i := range s.dev.markers {
		m := &s.dev.markers[i]
		if e := m.e; m.paced() && e.Channel == 'V' && !e.Captured && e.MissedBy() > 0 && s.onQRS(e) >= 0 {
			ids = append(ids, e.ID)
		}
	}
	return ids
}

// onQRS is the QRS that was under way at a stimulus without capture, else -1.
func (s *strip) onQRS(e *event.Event) int {
	lo := s.firstQRS(e.T + 1)
	if lo == 0 || e.T > s.v[lo-1].end {
		return -1
	}
	return lo - 1
}

func (f *finder) pseudo() {
	var ids []event.ID
	n := 0
	for _, id := range f.pseudofusions() {
		n++
		ids = append(ids, id, f.v[f.onQRS(f.log.At(id))].id)
	}
	if n == 0 {
		return
	}
	f.add(orderFault, Finding{
		Slug: "pseudofusion", Evidence: ids, Count: n,
		Text:   fmt.Sprintf("%s on a QRS already under way and has no part in it: consistent with pseudofusion, not with undersensing, since the impulse reaches the lead late.", plural(n, "ventricular stimulus falls", "ventricular stimuli fall")),
		Rivals: []string{"undersensing", "loss of capture"},
		clause: fmt.Sprintf("pseudofusion (%s)", times(n)),
	})
}

// vulnerableTime: stimuli of the device while the ventricles recover unevenly, as one
// may come that undersensing, an asynchronous mode or noise did not keep back.
func (f *finder) vulnerableTime() {
	var ids []event.ID
	var after []tick.Dur
	n, captured := 0, 0
	f.eachVulnerable(func(e *event.Event, wave int32) {
		if e.Rule != event.Timed || wave < 0 {
			return
		}
		n++
		ids = append(ids, f.v[wave].id, e.ID)
		after = append(after, e.T.Sub(f.v[wave].t))
		if e.Captured {
			captured++
		}
	})
	if n == 0 {
		return
	}
	capture := "none captures"
	if captured > 0 {
		capture = plural(captured, "captures", "capture")
	}
	f.add(orderFault, Finding{
		Slug: "stimulus_in_vulnerable_time", Channel: "V", Evidence: ids, Count: n,
		Text: fmt.Sprintf("%s about the T wave, %s ms after the start of the QRS before it, while part of the ventricles has recovered and part has not; %s: consistent with stimulation in the vulnerable time.",
			plural(n, "ventricular stimulus falls", "ventricular stimuli fall"), wholes(after), capture),
		Note:   "Such a stimulus can start a ventricular arrhythmia in a real heart, seldom; this model has no fibrillation of the ventricles.",
		clause: fmt.Sprintf("ventricular stimulus in the vulnerable time (%s)", times(n)),
	})
}

// modeChanges names each change of mode.
func (f *finder) modeChanges() {
	if len(f.dev.changes) == 0 {
		return
	}
	var ids []event.ID
	var words []string
	changes := f.dev.changes
	if changes[0].T == 0 {
		changes = changes[1:] // the mode it began with
	}
	if len(changes) == 0 {
		return
	}
	for k, m := range changes {
		ids = append(ids, m.ID, m.Cause)
		if k < 4 {
			words = append(words, fmt.Sprintf("%s to %s at %.1f s (%s)", m.Field, m.To, m.T.Seconds(), m.Why))
		}
	}
	if n := len(changes); n > 4 {
		words = append(words, fmt.Sprintf("and %d more", n-4))
	}
	far := 0
	for i := range f.dev.markers {
		if e := f.dev.markers[i].e; e.Kind == event.Sense && e.Channel == 'A' && e.Use != event.Blanked && natureOf(f.log, e) == ofFarField {
			far++
			ids = append(ids, e.ID)
		}
	}
	doubt, heard := "", ""
	var rivals []string
	if far > 0 {
		doubt = fmt.Sprintf("; %s the far field of the QRS, which counts as fast atrium", plural(far, "atrial signal was", "atrial signals were"))
		heard = " with far-field signals counted"
		rivals = []string{"double counting of far-field signals (spurious mode switch)"}
	}
	f.add(orderMode, Finding{
		Slug: "mode_switch", Evidence: ids, Count: len(changes), Rivals: rivals,
		Text:   fmt.Sprintf("The mode changed: %s%s: consistent with a change of mode by the device.", strings.Join(words, ", "), doubt),
		clause: "mode change " + words[0] + heard,
	})
}

// locked: P waves in PVARP that conduct, over and over: the refractory period after
// each conducted QRS takes in the next P, though the device could follow the rate.
// Source: Barold and Herweg, Europace 2012.
func (f *finder) locked() {
	var ids []event.ID
	var pr, pp, pvarp []tick.Dur
	row, n := 0, 0
	var pending []event.ID
	flush := func() {
		if row >= 3 {
			n += row
			ids = append(ids, pending...)
		} else {
			pr, pp, pvarp = pr[:len(pr)-row], pp[:len(pp)-row], pvarp[:len(pvarp)-row]
		}
		row, pending = 0, nil
	}
	for i := range f.p {
		s := f.dev.at(f.dev.as[i])
		if s == nil || s.e.Use != event.Refractory || f.p[i].to < 0 || !f.descending(i) {
			flush()
			continue
		}
		w := f.log.At(s.e.By)
		q := f.dev.at(f.dev.vs[f.p[i].to])
		if w == nil || w.Field != "pvarp" || q == nil || !q.beat {
			flush()
			continue
		}
		row++
		pending = append(pending, s.e.ID, w.ID, f.p[i].id, q.e.ID)
		// Intervals as the leads have them, which is what PVARP counts from.
		pr = append(pr, q.e.T.Sub(s.e.T))
		pp = append(pp, f.pp(i))
		pvarp = append(pvarp, w.Until.Sub(w.T))
	}
	flush()
	if n == 0 {
		return
	}
	a, b := medianDur(pr), medianDur(pvarp)
	f.add(orderMode, Finding{
		Slug: "refractory_p_locked", Evidence: ids, Count: n,
		Text: fmt.Sprintf("%s in PVARP after a conducted QRS, conduct and are not tracked: consistent with P waves locked in the refractory period. It lasts while PP (%s ms) is shorter than PR and PVARP together (%s + %s = %s ms).",
			plural(n, "P wave in a row falls", "P waves in a row fall"), whole(medianDur(pp)), whole(a), whole(b), whole(a+b)),
		Note:   "It looks like atrial undersensing; the signals are there and are refractory.",
		Rivals: []string{"atrial undersensing"},
		clause: fmt.Sprintf("P waves locked in PVARP (PP %s < PR %s + PVARP %s ms)", whole(medianDur(pp)), whole(a), whole(b)),
	})
}

// hysteresis: a longer escape after a sensed beat, that ran out.
func (f *finder) hysteresis() {
	var ids []event.ID
	var longer, usual []tick.Dur
	for i := range f.dev.markers {
		m := &f.dev.markers[i]
		if !m.paced() || m.e.Field != "lower_rate" && m.e.Field != "atrial_escape" {
			continue
		}
		c := f.log.At(m.e.Cause)
		if c == nil {
			continue
		}
		d := m.e.T.Sub(c.T)
		if m.e.Why == "hysteresis" || f.hysteretic(m) {
			longer = append(longer, d)
			ids = append(ids, c.ID, m.e.ID)
		} else {
			usual = append(usual, d)
		}
	}
	if len(longer) == 0 {
		return
	}
	than := ""
	if u := medianDur(usual); u > 0 {
		than = fmt.Sprintf(" instead of %s ms after a stimulus", whole(u))
	}
	f.add(orderMode, Finding{
		Slug: "hysteresis_pause", Evidence: ids, Count: len(longer),
		Text:   fmt.Sprintf("%s the device waited %s ms%s: consistent with rate hysteresis.", capital(times(len(longer))), whole(medianDur(longer)), than),
		Rivals: []string{"oversensing"},
		clause: fmt.Sprintf("hysteresis pause of %s ms", whole(medianDur(longer))),
	})
}

// hysteretic looks at the window whose end brought the stimulus: the stimulus's own
// reason may be about its capture.
func (f *finder) hysteretic(m *marker) bool {
	c := f.log.At(m.e.Cause)
	w := f.dev.window(c.ID, c.T, m.e.Field)
	return w != nil && w.Why == "hysteresis"
}

func capital(s string) string { return strings.ToUpper(s[:1]) + s[1:] }

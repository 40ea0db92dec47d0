package search

import (
	"fmt"

	"escapement/engine/pacer"
	"escapement/engine/plan"
	"escapement/engine/tick"
)

// excluded looks for a closed form that shows, without a run, that a goal cannot hold;
// refused is why the plan of the combination cannot be in some situation.
//
// Only what follows from the rules of tracking alone, from any beginning, is used: an
// atrium that beats steadily whatever the device does (plan.Steady), a heart that
// conducts neither way, and a device in DDD with nothing on that bends its timers. Then
//
//   - below TARP no two P waves in a row are tracked, and above the upper rate only
//     pacer.LongestRow of them: where the last half of the strip holds more P waves than
//     that, its pattern is not 1:1;
//   - no two ventricular stimuli are nearer than MTRI, so the ventricular rate is not
//     above the upper rate.
//
// A property of the tests holds the answer together with and without this.
func (w *worker) excluded(settings []plan.Value) (b *Bound, refused string) {
	for room := range w.s.rooms {
		r := &w.s.rooms[room]
		for k := range r.at.Runs() {
			prog, err := w.variants[room].Program(w.in(r, settings, k), w.s.seeds[0], nil)
			if err != nil {
				return nil, r.at.Name + ": " + err.Error()
			}
			varied := r.at.Vary
			if varied != nil && varied.Premature != "" {
				break
			}
			p := w.variants[room].Plan(w.in(r, settings, k), w.s.seeds[0], nil)
			if prog.Device != nil && p.Steady() && simple(prog.Device) {
				for _, g := range r.must {
					if by, text := impossible(&w.s.Goals.Must[g], &prog.Device.Settings, p); by != "" {
						return &Bound{Goal: g, Situation: room, By: by, Text: text}, ""
					}
				}
			}
			if varied == nil {
				break
			}
		}
	}
	return nil, ""
}

// simple tells whether the timers of a device are those of plain DDD.
func simple(d *plan.Device) bool {
	s := &d.Settings
	if s.Mode != (pacer.Mode{Paced: 'D', Sensed: 'D', Response: 'D', Rate: 'O', Multisite: 'O'}) || s.Base != pacer.VentricularBase {
		return false
	}
	off := s.LongerAV.By == 0 && s.ShorterAV.By == 0 && s.Noise.Window == 0 && s.ChangeLimit == (pacer.ChangeLimit{}) && s.Night.Rate == 0 && s.Switch.Rate == 0 &&
		s.Loop.Beats == 0 && s.Fall.From == 0 && s.Stabilise.By == 0 && s.Backup.Misses == 0 && s.Magnet.Mode == (pacer.Mode{}) && s.AtrialDelay == 0 && s.Hysteresis.Rate == 0 && s.PostPVC == 0
	a, v := &d.Leads[pacer.RA], &d.Leads[pacer.RV]
	return off && a.Senses && v.Senses && d.FarField == 0 && d.TWave == 0 && d.Cross == 0
}

// impossible says by which bound a goal cannot hold, or "".
func impossible(g *plan.Goal, s *pacer.Settings, p *plan.Plan) (by, text string) {
	rate, _ := p.Amount("heart.sinus.rate_bpm")
	pp, mtri, lri := tick.PerMinute(rate), tick.PerMinute(s.UpperRate), lowest(s)
	if s.UpperRate <= 0 || lri < mtri {
		return "", ""
	}
	if g.Outcome == "v_rate_bpm" && g.AtLeast != nil && *g.AtLeast > s.UpperRate+0.5 {
		return "upper_rate", fmt.Sprintf("the ventricular rate is not above the upper rate of %s/min", num(s.UpperRate))
	}
	// The atrium is never paced: each P outside PVARP is tracked, and the next one after
	// PVARP comes before the atrial escape ends.
	if g.Outcome != "pattern" || !only(g, "1:1") || lri-s.PacedAV <= s.PVARP+pp+tick.Millisecond {
		return "", ""
	}
	sav, pvarp := s.SensedAV, s.PVARP
	if s.AdaptiveAV.To > 0 {
		sav = max(10*tick.Millisecond, sav-max(0, s.PacedAV-s.AdaptiveAV.Shortest))
	}
	if s.AdaptivePVARP.To > 0 {
		pvarp = min(pvarp, s.AdaptivePVARP.Shortest)
	}
	// 2 ms of each bound are left to rounding, and P waves at both ends to the strip.
	row := pacer.LongestRow(pp, mtri-2*tick.Millisecond, sav, pvarp-2*tick.Millisecond)
	span, _ := p.Amount("span_ms")
	first, _ := p.Amount("heart.sinus.first_ms")
	there := int((tick.MS(span-first)-2*tick.Second)/pp)/2 - 1
	switch {
	case row == 0 || there <= row:
		return "", ""
	case row == 1:
		return "two_to_one", fmt.Sprintf("P-P of %s ms is shorter than TARP of %s ms: no two P waves in a row are tracked", num(pp.MS()), num((sav + pvarp).MS()))
	}
	return "upper_rate", fmt.Sprintf("P-P of %s ms is shorter than the upper-rate interval of %s ms: at most %d P waves in a row are tracked", num(pp.MS()), num(mtri.MS()), row)
}

package search

import (
	"fmt"
	"slices"
	"strconv"

	"escapement/engine/pacer"
	"escapement/engine/plan"
	"escapement/engine/tick"
)

// Form is a goal by a closed form: what has to be at least what, in the goal's own
// terms. It speaks of an idealised heart; that the goal holds is for simulation to say.
type Form struct {
	Name   string  `json:"name"`   // stable: "tarp"
	Slack  float64 `json:"slack"`  // how much there is to spare, below 0 where it fails
	Unit   string  `json:"unit"`   // "ms" or "/min"
	Text   string  `json:"text"`   // "SAV + PVARP = 120 + 305 = 425 ms is longer than P-P = 400 ms"
	Source string  `json:"source"` //
	strict bool    // a slack of 0 fails
}

func (f *Form) holds() bool { return f.Slack > 0 || f.Slack == 0 && !f.strict }

// Sources, as the fact sheet names and tags them.
const (
	sourceUpper   = "Furman 1985, upper rate behavior (abstract read)"
	sourceLoop    = "Alasti 2018 (read): VA time and PVARP"
	sourceSync    = "Heart Rhythm 2016;13:1739 (read); inequality derived"
	sourceCycle   = "derived from the definition of the timing cycle"
	sourceFlutter = "Goethals 2003 (read)"
)

// forms are the closed forms of a goal in a room for settings at value k of what
// varies; none where the heart conducts in a way that they do not foresee. The worst
// stands first. The error is that of a plan that cannot be.
func (w *worker) forms(goal, room int, settings []plan.Value, k int) ([]Form, error) {
	s := w.s
	g, r := &s.Goals.Must[goal], &s.rooms[room]
	prog, err := w.variants[room].Program(w.in(r, settings, k), s.seeds[0], nil)
	if err != nil || prog.Device == nil {
		return nil, err
	}
	p := w.variants[room].Patient()
	for _, it := range r.plan.Interventions {
		if it["do"].Text == "set" && it["field"].Text == "heart.sinus.rate_bpm" && it["to"].Number > 0 {
			p.PP = min(p.PP, tick.PerMinute(it["to"].Number))
		}
	}
	if !r.plan.ConductsUp() {
		p.VA = 0
	}
	fs := closed(g, &prog.Device.Settings, &p, r.plan.ConductsDown())
	slices.SortStableFunc(fs, func(a, b Form) int {
		switch {
		case a.Slack < b.Slack:
			return -1
		case a.Slack > b.Slack:
			return 1
		}
		return 0
	})
	return fs, nil
}

// only tells whether a goal takes one word and no other.
func only(g *plan.Goal, word string) bool { return len(g.Equal) == 1 && g.Equal[0] == word }

// refuses tells whether a goal does not take a word.
func refuses(g *plan.Goal, word string) bool {
	return len(g.Equal) > 0 && !slices.Contains(g.Equal, word) || slices.Contains(g.NoneOf, word)
}

func closed(g *plan.Goal, s *pacer.Settings, p *pacer.Patient, down bool) []Form {
	tracks := s.Mode.Tracks()
	switch g.Outcome {
	case "pattern":
		if tracks && !down && only(g, "1:1") {
			return tracking(s, p.PP)
		}
	case "v_rate_bpm":
		if tracks && !down && g.AtLeast != nil && s.UpperRate > 0 {
			return []Form{form("upper_rate", s.UpperRate-*g.AtLeast, "/min", sourceUpper, "the upper tracking rate of %s/min is %s the %s/min asked for", num(s.UpperRate), than(s.UpperRate-*g.AtLeast, "lower than", "not lower than"), num(*g.AtLeast))}
		}
	case "av_min_ms":
		if tracks && !down && g.AtLeast != nil {
			sav := s.SensedAVAt(p.PP)
			slack := sav.MS() - *g.AtLeast
			return []Form{form("sensed_av", slack, "ms", sourceCycle, "the sensed AV delay at %s/min, %s ms, is %s %s ms", num(p.PP.BPM()), num(sav.MS()), than(slack, "shorter than", "not shorter than"), num(*g.AtLeast))}
		}
	case "endless_loop":
		if tracks && p.VA > 0 && s.PostPVC == 0 && s.AdaptivePVARP.To == 0 && refuses(g, "sustained") {
			slack := (s.PVARP - p.VA).MS()
			f := form("pvarp_over_va", slack, "ms", sourceLoop, "PVARP, %s ms, is %s the VA time of %s ms", num(s.PVARP.MS()), than(slack-0.0001, "not longer than", "longer than"), num(p.VA.MS()))
			f.strict = true
			return []Form{f}
		}
	case "va_synchrony":
		if lri := lowest(s); s.Mode.Paced == 'D' && s.Mode.SensesA() && p.VA > 0 && p.VA < s.PVARP && p.AtrialERP > 0 && refuses(g, "sustained") {
			gap, erp := lri-s.PacedAV-p.VA, p.AtrialERPAt(lri)
			slack := (gap - erp).MS()
			return []Form{form("synchrony_gap", slack, "ms", sourceSync, "LRI - PAV - VA = %s - %s - %s = %s ms is %s the atrial refractory period of %s ms", num(lri.MS()), num(s.PacedAV.MS()), num(p.VA.MS()), num(gap.MS()), than(slack, "shorter than", "not shorter than"), num(erp.MS()))}
		}
	case "longest_pause_ms":
		if s.Mode.PacesV() && g.AtMost != nil {
			lri := lowest(s)
			if r := s.Hysteresis.Rate; r > 0 && r < s.LowerRate {
				lri = tick.PerMinute(r)
			}
			slack := *g.AtMost - lri.MS()
			return []Form{form("lower_rate", slack, "ms", sourceCycle, "the escape interval of the lower rate, %s ms, is %s %s ms", num(lri.MS()), than(slack, "longer than", "not longer than"), num(*g.AtMost))}
		}
	case "mode_switches":
		if tracks && p.Flutter > 0 && g.AtLeast != nil {
			deaf := s.SensedAV + s.PVAB
			slack := (p.Flutter - deaf).MS()
			return []Form{form("flutter_margin", slack, "ms", sourceFlutter, "SAV + PVAB = %s + %s = %s ms is %s the flutter cycle of %s ms", num(s.SensedAV.MS()), num(s.PVAB.MS()), num(deaf.MS()), than(slack, "longer than", "not longer than"), num(p.Flutter.MS()))}
		}
	}
	return nil
}

// tracking is 1:1 at an atrial cycle: not above the upper rate, nor above the 2:1 point.
func tracking(s *pacer.Settings, pp tick.Dur) []Form {
	sav, pvarp := s.SensedAVAt(pp), s.PVARPAt(pp)
	tarp := sav + pvarp
	pulse := fmt.Sprintf("P-P = 60000 / %s = %s ms", num(pp.BPM()), num(pp.MS()))
	slack := (pp - tarp).MS()
	fs := []Form{form("tarp", slack, "ms", sourceUpper, "SAV + PVARP = %s + %s = %s ms is %s %s", num(sav.MS()), num(pvarp.MS()), num(tarp.MS()), than(slack, "longer than", "not longer than"), pulse)}
	if s.UpperRate > 0 {
		mtri := tick.PerMinute(s.UpperRate)
		slack := (pp - mtri).MS()
		fs = append(fs, form("mtri", slack, "ms", sourceUpper, "MTRI = 60000 / %s = %s ms is %s %s", num(s.UpperRate), num(mtri.MS()), than(slack, "longer than", "not longer than"), pulse))
	}
	return fs
}

func form(name string, slack float64, unit, source, format string, args ...any) Form {
	return Form{Name: name, Slack: slack, Unit: unit, Source: source, Text: fmt.Sprintf(format, args...)}
}

func lowest(s *pacer.Settings) tick.Dur { return tick.PerMinute(s.LowerRate) }

func than(slack float64, bad, good string) string {
	if slack < 0 {
		return bad
	}
	return good
}

// num has one decimal, and none where that is 0.
func num(x float64) string {
	s := strconv.FormatFloat(x, 'f', 1, 64)
	if s[len(s)-2:] == ".0" {
		return s[:len(s)-2]
	}
	return s
}

// slack is the worst closed form of a goal over all situations that it is for, with
// whether there is one in any.
func (w *worker) slack(goal int, settings []plan.Value) (worst Form, ok bool) {
	for room := range w.s.rooms {
		if !slices.Contains(w.s.rooms[room].must, goal) {
			continue
		}
		for k := range w.s.rooms[room].at.Runs() {
			fs, err := w.forms(goal, room, settings, k)
			if err != nil {
				return Form{}, false
			}
			if len(fs) > 0 && (!ok || fs[0].Slack < worst.Slack) {
				worst, ok = fs[0], true
			}
			if v := w.s.rooms[room].at.Vary; v == nil || v.Premature != "" {
				break // a premature beat changes none of the numbers
			}
		}
	}
	return worst, ok
}

// order is the situations with those first in which closed forms expect a goal to
// fail: what is given up early costs less so. It does not change what is found.
func (w *worker) order(settings []plan.Value) []int {
	var first, later []int
	for room := range w.s.rooms {
		bad := false
		for _, g := range w.s.rooms[room].must {
			fs, err := w.forms(g, room, settings, w.s.rooms[room].at.Runs()-1)
			bad = bad || err == nil && len(fs) > 0 && !fs[0].holds()
		}
		if bad {
			first = append(first, room)
		} else {
			later = append(later, room)
		}
	}
	return append(first, later...)
}

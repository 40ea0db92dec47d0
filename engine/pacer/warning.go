package pacer

import "escapement/engine/tick"

// Warning is something about the settings that deserves a look; the strip stands all
// the same.
type Warning struct {
	Name string // stable: "two_to_one_below_upper_rate"
	Text string
}

// Limits of warnings, from memory where no source stands.
const (
	shortAlert = 100 * tick.Millisecond // an alert window in which few P waves are seen: keep 100 to 150 ms
	vaMargin   = 25 * tick.Millisecond  // PVARP above VA: 25 to 50 ms, as VA time lengthens with the rate
	usualPVARP = 250 * tick.Millisecond // the least of the usual settings, 250 to 300
	longAV     = 300 * tick.Millisecond // AV intervals above it are like a long PR: Barold and Herweg, Europace 2012, read
)

// warner gathers warnings in the order in which they are said.
type warner struct {
	s    *Settings
	p    *Patient
	list []Warning
}

func (w *warner) say(bad bool, name, text string) {
	if bad {
		w.list = append(w.list, Warning{name, text})
	}
}

func inMS(d tick.Dur) string { return number(d.MS()) + " ms" }

// Warnings looks at the settings, and at the heart as far as it is known.
func Warnings(s *Settings, p Patient) []Warning {
	w := &warner{s: s, p: &p}
	if s.Mode.Tracks() {
		w.upperRate()
		w.loops()
		w.flutter()
	}
	if s.Mode.dual() && s.Mode.SensesA() {
		w.alert()
		w.synchrony()
	}
	w.conduction()
	w.lowerRate()
	w.signals()
	w.asynchronous()
	return w.list
}

func (w *warner) upperRate() {
	s := w.s
	mtri, tarp, with := interval(s.UpperRate), s.shortestTracked(), ""
	if s.adapts() {
		with = ", AV delay and PVARP being shorter at that rate,"
	}
	w.say(mtri > 0 && mtri < tarp, "two_to_one_below_upper_rate", "TARP of "+inMS(tarp)+with+" is longer than the upper-rate interval of "+inMS(mtri)+
		": 2:1 begins at "+number(tarp.BPM())+"/min and the upper tracking rate of "+number(s.UpperRate)+"/min is never reached")
	w.say(mtri > 0 && mtri == tarp, "no_wenckebach", "the upper-rate interval equals TARP, "+inMS(tarp)+": 1:1 turns into 2:1 at once, without Wenckebach behaviour")
	w.say(s.Switch.Rate > 0 && s.UpperRate > 0 && s.Switch.Rate <= s.UpperRate, "switch_below_upper_rate", "the mode switches from an atrial rate of "+number(s.Switch.Rate)+
		"/min, not above the upper tracking rate of "+number(s.UpperRate)+"/min: a sinus that may be tracked can switch it")
}

func (w *warner) loops() {
	s, p, mtri := w.s, w.p, interval(w.s.UpperRate)
	if p.VA == 0 {
		// 258 ± 65 ms among 250 implants for AV block, of whom 30 % conducted back: PubMed 23639463.
		w.say(s.PVARP > 0 && s.PVARP < usualPVARP, "pvarp_short_if_va", "PVARP of "+inMS(s.PVARP)+" is shorter than most VA times (258 ± 65 ms), and this plan gives none"+
			": in a patient who conducts back to the atria an endless loop could run, so test VA conduction first")
		return
	}
	cycle := s.loopCycle(p.VA, mtri)
	at, pvarp := "", s.PVARP
	if cycle > 0 && s.PVARPAt(cycle) < s.PVARP {
		pvarp = s.PVARPAt(cycle)
		at = ", as it is at " + number(cycle.BPM()) + "/min,"
	}
	but := ""
	if s.PostPVC > p.VA {
		but = ", though not from a PVC, after which PVARP is " + inMS(s.PostPVC)
	}
	w.say(p.VA >= pvarp, "pvarp_shorter_than_va", "PVARP of "+inMS(pvarp)+at+" does not cover the VA time of "+inMS(p.VA)+": an endless loop can run"+but)
	w.say(p.VA < pvarp && pvarp < p.VA+vaMargin, "pvarp_close_to_va", "PVARP of "+inMS(pvarp)+" is only "+inMS(pvarp-p.VA)+" longer than the VA time of "+inMS(p.VA)+
		": VA time lengthens with the rate, and a loop could run then; a margin of 25 to 50 ms is usual")
	if s.Loop.Beats == 0 || cycle == 0 {
		return
	}
	seen := mtri + s.Loop.RateMargin
	w.say(cycle > seen, "loop_not_found", "the loop would run at "+number(cycle.BPM())+"/min, cycle "+inMS(cycle)+": below the upper rate of "+number(s.UpperRate)+
		"/min, and the loop detector looks only at intervals up to "+inMS(seen))
	w.say(!s.Loop.Withhold && s.Loop.PVARP <= p.VA, "loop_pvarp_too_short", "the loop detector's PVARP of "+inMS(s.Loop.PVARP)+" does not cover the VA time of "+inMS(p.VA)+": it does not end the loop")
}

func (w *warner) flutter() {
	s, p := w.s, w.p
	deaf := s.SensedAV + s.PVAB
	if p.Flutter == 0 || deaf <= p.Flutter || s.Switch.Rate > 0 && (2*p.Flutter).BPM() >= s.Switch.Rate {
		return
	}
	what := "the mode does not switch"
	if s.Switch.Rate == 0 {
		what = "a mode switch would not see it"
	}
	w.say(true, "flutter_hidden", "AV delay and PVAB of "+inMS(deaf)+" together are longer than the flutter cycle of "+inMS(p.Flutter)+": every second wave is hidden and "+what)
}

// fastest is the shortest interval at which the device paces the atrium.
func (s *Settings) fastest() tick.Dur {
	lri := interval(s.LowerRate)
	if s.Mode.Rate == 'R' && s.Sensor.Slope > 0 {
		return min(lri, interval(s.Sensor.Limit))
	}
	return lri
}

func (w *warner) alert() {
	s, fast := w.s, w.s.fastest()
	left := fast - s.AdaptiveAV.at(s.PacedAV, fast) - s.PVARPAt(fast)
	w.say(left <= 0, "no_alert_window", "at "+number(fast.BPM())+"/min PVARP reaches the atrial stimulus: no P is sensed before it")
	w.say(left > 0 && left < shortAlert, "short_alert_window", "at "+number(fast.BPM())+"/min only "+inMS(left)+
		" are left to sense a P before the atrial stimulus, which may follow a P that PVARP has hidden; 100 to 150 ms are usual")
}

// synchrony: the retrograde P in PVARP and the atrial stimulus after it, at the lower
// rate and at the sensor's.
func (w *warner) synchrony() {
	s, p := w.s, w.p
	for _, at := range []tick.Dur{interval(s.LowerRate), s.fastest()} {
		gap := max(s.AtrialDelay, at-s.AdaptiveAV.at(s.PacedAV, at)-p.VA)
		if erp := p.AtrialERPAt(at); p.VA > 0 && erp > 0 && p.VA < s.PVARPAt(at) && gap < erp {
			w.say(true, "va_synchrony", "at "+number(at.BPM())+"/min a retrograde P in PVARP leaves "+inMS(gap)+" to the atrial stimulus, less than the atrial refractory period of "+inMS(erp)+
				": once it begins, each stimulus is lost and the next beat conducts back again")
			return
		}
	}
}

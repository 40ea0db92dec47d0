package pacer

import "escapement/engine/tick"

// Warning is something about the settings that deserves a look; the strip stands all
// the same.
type Warning struct {
	Name string // stable: "two_to_one_below_upper_rate"
	Text string
}

// shortAlert is an alert window in which few P waves are seen: keep 100 to 150 ms,
// from memory.
const shortAlert = 100 * tick.Millisecond

// Warnings looks at the settings, and at the heart as far as it is known.
func Warnings(s *Settings, p Patient) []Warning {
	var ws []Warning
	say := func(bad bool, name, text string) {
		if bad {
			ws = append(ws, Warning{name, text})
		}
	}
	lri, mtri, tarp := interval(s.LowerRate), interval(s.UpperRate), s.SensedAV+s.PVARP
	n := func(d tick.Dur) string { return number(d.MS()) + " ms" }
	if s.Mode.Tracks() {
		say(mtri > 0 && mtri < tarp, "two_to_one_below_upper_rate", "TARP of "+n(tarp)+" is longer than the upper-rate interval of "+n(mtri)+
			": 2:1 begins at "+number(tarp.BPM())+"/min and the upper tracking rate is never reached")
		say(mtri > 0 && mtri == tarp, "no_wenckebach", "the upper-rate interval equals TARP: 1:1 turns into 2:1 at once, without Wenckebach behaviour")
		say(p.VA > 0 && s.PVARP <= p.VA, "pvarp_shorter_than_va", "PVARP of "+n(s.PVARP)+" does not cover the VA time of "+n(p.VA)+": an endless loop can run")
		say(p.VA > 0 && s.PVARP > p.VA && s.PVARP < p.VA+25*tick.Millisecond, "pvarp_close_to_va", "PVARP of "+n(s.PVARP)+" is less than 25 ms above the VA time of "+n(p.VA))
		say(p.Flutter > 0 && s.SensedAV+s.PVAB > p.Flutter, "flutter_hidden", "AV delay and PVAB of "+n(s.SensedAV+s.PVAB)+" together are longer than the flutter cycle of "+n(p.Flutter)+
			": every second wave is hidden and the mode does not switch")
		say(p.PR > 0 && p.PP > 0 && p.PP < p.PR+s.PVARP && p.PP >= tarp && p.PR > s.SensedAV, "p_may_lock", "P-P of "+n(p.PP)+" is shorter than PR and PVARP of "+n(p.PR+s.PVARP)+
			" together: after a premature beat P waves can stay in PVARP")
	}
	if s.Mode.dual() && s.Mode.SensesA() {
		fast := lri
		if s.Mode.Rate == 'R' && s.Sensor.Slope > 0 {
			fast = min(lri, interval(s.Sensor.Limit))
		}
		alert := fast - s.AdaptiveAV.at(s.PacedAV, fast) - s.AdaptivePVARP.at(s.PVARP, fast)
		say(alert <= 0, "no_alert_window", "at "+number(fast.BPM())+"/min PVARP reaches the atrial stimulus: no P is sensed before it")
		say(alert > 0 && alert < shortAlert, "short_alert_window", "at "+number(fast.BPM())+"/min only "+n(alert)+" are left to sense a P before the atrial stimulus")
		gap := lri - s.PacedAV - p.VA
		say(p.VA > 0 && p.AtrialERP > 0 && p.VA < s.PVARP && gap < p.AtrialERP, "va_synchrony", "a retrograde P in PVARP leaves "+n(gap)+
			" to the atrial stimulus, less than the atrial refractory period of "+n(p.AtrialERP)+": the stimulus is lost and the next beat conducts back again")
	}
	say(s.Mode.dual() && s.Mode.SensesV() && !s.SafetyStimulus, "no_safety_stimulus", "crosstalk after an atrial stimulus inhibits the ventricular one: the safety stimulus is off")
	say(s.Mode.Sensed == 'O' && s.Mode.Paced != 'O', "asynchronous", "asynchronous pacing may stimulate in a T wave")
	return ws
}

package pacer

import "escapement/engine/tick"

// conduction: AV delays beside the heart's own conduction.
func (w *warner) conduction() {
	s, p, mtri := w.s, w.p, interval(w.s.UpperRate)
	av := max(s.PacedAV, s.SensedAV)
	if s.Mode.Paced == 'V' {
		av = s.SensedAV
	}
	paces := s.Mode.PacesV() && (s.Mode.dual() || s.Mode.Tracks()) && s.Backup.Misses == 0
	w.say(paces && av > longAV, "long_av", "an AV delay of "+inMS(av)+" that ends in a ventricular stimulus is like a PR above 300 ms: atrial systole falls near the QRS before, and retrograde conduction finds the AV node recovered")
	if !s.Mode.Tracks() || p.PR == 0 {
		return
	}
	tarp := s.TARPAt(p.PP)
	w.say(p.PP > 0 && p.PP < p.PR+s.PVARPAt(p.PP) && p.PP >= tarp && p.PR > s.SensedAV, "p_may_lock", "P-P of "+inMS(p.PP)+" is shorter than PR and PVARP together, "+plus(p.PR, s.PVARPAt(p.PP))+" = "+inMS(p.PR+s.PVARPAt(p.PP))+
		": after a premature beat P waves can stay in PVARP though 1:1 tracking is possible")
	if s.Mode.Multisite == 'V' {
		w.say(p.PR <= s.SensedAV, "conducts_before_av_delay", "the heart conducts in "+inMS(p.PR)+", within the sensed AV delay of "+inMS(s.SensedAV)+": the conducted beat comes first and is not biventricular")
		w.say(p.PR > s.SensedAV && mtri > 0 && p.PR < mtri-s.PVARPAt(mtri), "biventricular_lost_above_upper_rate", "above the upper tracking rate of "+number(s.UpperRate)+
			"/min the stimulus has to wait and the conducted QRS, "+inMS(p.PR)+" after the P, comes before it: biventricular pacing is lost until the sinus is slower again")
		return
	}
	w.say(paces && p.PR > s.SensedAV && p.PR < longAV && s.LongerAV.By == 0, "paces_before_conduction", "the heart conducts in "+inMS(p.PR)+" but the sensed AV delay ends after "+inMS(s.SensedAV)+
		": the ventricle is paced or fused though it need not be")
}

// lowerRate: a sinus slower than the device.
func (w *warner) lowerRate() {
	s, p := w.s, w.p
	longest := interval(s.LowerRate)
	if h := s.Hysteresis.Rate; h > 0 && h < s.LowerRate {
		longest = interval(h)
	}
	if p.PP == 0 || p.PP <= longest || s.Mode.Sensed == 'O' {
		return
	}
	rates := "the lower rate of " + number(s.LowerRate) + "/min is above the sinus rate of " + number(p.PP.BPM()) + "/min: "
	switch {
	case s.Mode.PacesA():
		w.say(true, "lower_rate_above_sinus", rates+"the atrium is paced")
	case s.Mode.PacesV():
		w.say(true, "lower_rate_above_sinus", rates+"the ventricles are paced without regard to the P waves")
	}
}

// signals: what a lead hears besides the beats of its chamber, and which window would
// have hidden it. A signal exactly at the end of a window is sensed.
func (w *warner) signals() {
	s, p := w.s, w.p
	dual := s.Mode.SensesA() && s.Mode.PacesV()
	w.say(dual && p.FarField > 0 && p.FarField >= s.PVAB && p.FarField < s.PVARP, "far_field_counted", "the far field of the QRS comes "+inMS(p.FarField)+" after it, and PVAB ends at "+inMS(s.PVAB)+
		": it is heard as an atrial signal in PVARP, and the device counts two for each P"+w.switching())
	w.say(dual && p.FarField >= s.PVARP && p.FarField > 0, "far_field_tracked", "the far field of the QRS comes "+inMS(p.FarField)+" after it, and PVARP ends at "+inMS(s.PVARP)+": it is taken for a P")
	if s.Mode.SensesV() && p.TWave > 0 {
		more := "the interval between stimuli is " + plus(p.TWave, interval(s.LowerRate)) + " = " + inMS(p.TWave+interval(s.LowerRate))
		if s.Mode.SensesA() {
			more = "it is taken for a premature beat"
		}
		w.say(p.TWave >= s.VentricularRefractory, "t_wave_sensed", "the T wave is heard "+inMS(p.TWave)+" after the QRS, and the ventricular refractory period ends at "+inMS(s.VentricularRefractory)+": "+more)
	}
	if !s.Mode.PacesA() || !s.Mode.SensesV() {
		return
	}
	w.crosstalk()
}

func (w *warner) switching() string {
	if w.s.Switch.Rate > 0 {
		return "; the mode may switch in sinus rhythm"
	}
	return ""
}

func (w *warner) crosstalk() {
	s, p := w.s, w.p
	safe := s.SafetyStimulus && p.Cross < s.Crosstalk
	heard := "the atrial stimulus is heard on the ventricular channel " + inMS(p.Cross) + " after it, and PAVB ends at " + inMS(s.PAVB) + ": "
	w.say(p.Cross > 0 && p.Cross >= s.PAVB && safe, "crosstalk", heard+"each time a safety stimulus follows at "+inMS(min(s.Crosstalk, s.PacedAV)))
	w.say(p.Cross > 0 && p.Cross >= s.PAVB && !safe, "crosstalk_inhibits", heard+"it keeps the ventricular stimulus back, and nothing paces the ventricles")
	w.say(s.Mode.dual() && !s.SafetyStimulus && (p.Cross == 0 || p.Cross < s.PAVB), "no_safety_stimulus", "the safety stimulus is off: crosstalk later than PAVB, "+inMS(s.PAVB)+", after an atrial stimulus would keep the ventricular one back")
}

// asynchronous: stimuli that no beat keeps back.
func (w *warner) asynchronous() {
	m := w.s.Magnet
	w.say(w.s.Mode.Sensed == 'O' && w.s.Mode.Paced != 'O', "asynchronous", "asynchronous pacing in "+w.s.Mode.String()+" may stimulate in a T wave")
	w.say(m.Mode != (Mode{}) && m.Mode.PacesV() && m.To > m.From, "magnet_asynchronous", "while the magnet is there "+m.Mode.String()+" at "+number(m.Rate)+"/min may stimulate in a T wave")
	w.say(w.p.PP > 0 && w.s.VentricularRefractory > w.p.PP-100*tick.Millisecond && w.s.Mode.SensesV(), "ventricle_not_heard", "the ventricular refractory period of "+inMS(w.s.VentricularRefractory)+
		" leaves less than 100 ms of a sinus cycle of "+inMS(w.p.PP)+" to sense a conducted QRS")
}

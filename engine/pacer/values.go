package pacer

import "escapement/engine/tick"

// tarpValues: TARP and the 2:1 point. Where the AV delay or PVARP shortens with the
// rate, TARP at rest is not what ends 1:1.
func (s *Settings) tarpValues(mtri tick.Dur) []Value {
	tarp := s.SensedAV + s.PVARP
	if !s.adapts() {
		return []Value{length("tarp", "total atrial refractory period (TARP)", tarp, "SAV + PVARP", plus(s.SensedAV, s.PVARP), sourceUpper),
			rate("two_to_one", "2:1 point", tarp, "60000 / TARP", "60000 / "+number(tarp.MS()), sourceUpper)}
	}
	vs := []Value{length("tarp", "total atrial refractory period (TARP) at rest", tarp, "SAV + PVARP", plus(s.SensedAV, s.PVARP), sourceUpper)}
	if mtri > 0 {
		vs = append(vs, length("tarp_upper", "TARP at the upper rate", s.TARPAt(mtri), "SAV + PVARP, both as they are at that rate", plus(s.SensedAVAt(mtri), s.PVARPAt(mtri)), sourceUpper))
	}
	end, back := s.shortestTracked(), s.shortestReturn()
	vs = append(vs, rate("two_to_one", "2:1 point", end, "60000 / TARP, as it is at that rate", "60000 / ("+plus(s.SensedAVAt(end), s.PVARPAt(end))+")", sourceUpper))
	if back > end {
		vs = append(vs, rate("two_to_one_ends", "2:1, once begun, ends below", back, "60000 / TARP, as it is at half that rate, the one that the device has in 2:1",
			"60000 / ("+plus(s.SensedAVAt(2*back), s.PVARPAt(2*back))+")", sourceDerived))
	}
	return vs
}

func upperValues(s *Settings, p Patient, mtri tick.Dur) []Value {
	tarp, pvarp, at := s.TARPAt(mtri), s.PVARPAt(mtri), ""
	if s.adapts() {
		at = ", with TARP at the upper rate"
	}
	vs := []Value{
		length("mtri", "upper-rate interval (MTRI)", mtri, "60000 / upper rate", "60000 / "+number(s.UpperRate), sourceDerived),
		length("wenckebach", "Wenckebach interval (W)", mtri-tarp, "MTRI - TARP"+at, less(mtri, tarp), sourceUpper),
	}
	if mtri > tarp {
		vs = append(vs, length("longest_av", "longest AV delay at the upper rate", mtri-pvarp, "MTRI - PVARP", less(mtri, pvarp), sourceDerived))
	}
	if p.PP > 0 && p.PP <= s.slowestTracked() {
		vs = append(vs, patternValues(s, p.PP, mtri)...)
	}
	return vs
}

// slowestTracked is the longest sinus cycle that keeps atrial stimuli, or in VDD the
// ventricular ones of the lower rate, away.
func (s *Settings) slowestTracked() tick.Dur {
	lri := interval(s.LowerRate)
	switch {
	case s.Mode.Paced == 'V':
		return lri
	case s.Base == AtrialBase:
		return lri
	}
	return lri - max(0, s.PacedAV-s.SensedAV)
}

func loopValues(s *Settings, p Patient, mtri tick.Dur) []Value {
	var vs []Value
	if cycle := s.loopCycle(p.VA, mtri); cycle > 0 {
		sum := "the longer of " + number(mtri.MS()) + " and " + plus(p.VA, s.SensedAVAt(cycle))
		vs = append(vs, length("loop_cycle", "cycle of an endless loop", cycle, "max(MTRI, VA + SAV), as VA >= PVARP", sum, sourceLoop))
	}
	if p.PR > 0 {
		vs = append(vs, length("locked_below", "conducted P waves may stay in PVARP while PP is below", p.PR+s.PVARP, "PR + PVARP, PR at the leads", plus(p.PR, s.PVARP), sourceLocked))
	}
	if p.Flutter > 0 {
		vs = append(vs, length("flutter_margin", "flutter cycle less the deaf time; below 0 every second wave is hidden",
			p.Flutter-s.SensedAV-s.PVAB, "flutter cycle - SAV - PVAB", less(p.Flutter, s.SensedAV)+" - "+number(s.PVAB.MS()), sourceFlutter))
	}
	return vs
}

// loopCycle is the cycle of an endless loop, 0 where none can run.
func (s *Settings) loopCycle(va, mtri tick.Dur) tick.Dur {
	if va == 0 || va < s.PVARPAt(max(mtri, va+s.SensedAV)) {
		return 0
	}
	cycle := max(mtri, va+s.SensedAV)
	for range 100 { // an AV delay that shortens with the rate settles
		next := max(mtri, va+s.SensedAVAt(cycle))
		if next == cycle {
			break
		}
		cycle = next
	}
	if va < s.PVARPAt(cycle) {
		return 0
	}
	return cycle
}

// escapeValues: what makes an escape interval another than the lower rate's.
func escapeValues(s *Settings, p Patient, lri tick.Dur) []Value {
	var vs []Value
	if h := s.Hysteresis.Rate; h > 0 && h < s.LowerRate {
		vs = append(vs, length("hysteresis_interval", "escape interval after a sensed beat", interval(h), "60000 / hysteresis rate", "60000 / "+number(h), sourceDerived))
	}
	if s.Mode.Paced == 'V' && s.Mode.Sensed == 'V' && p.TWave >= s.VentricularRefractory && p.TWave > 0 {
		vs = append(vs, length("t_wave_interval", "between stimuli, with the T wave sensed", p.TWave+lri, "T wave + LRI", plus(p.TWave, lri), sourceDerived))
	}
	if !s.Mode.dual() || p.AR == 0 || p.AR >= s.PacedAV || s.Base != VentricularBase {
		return vs
	}
	aei := lri - s.PacedAV
	vs = append(vs, rate("conducted_rate", "atrial paced rate while the heart conducts", aei+p.AR, "60000 / (AEI + AR), as AR < PAV; counted from the ventricle", "60000 / ("+plus(aei, p.AR)+")", sourceMemory))
	if s.Mode.Rate == 'R' && s.Sensor.Slope > 0 {
		fast := interval(s.Sensor.Limit)
		if pav := s.AdaptiveAV.at(s.PacedAV, fast); p.AR < pav {
			vs = append(vs, rate("conducted_sensor_rate", "the same at the upper sensor rate", fast-pav+p.AR, "60000 / (upper sensor interval - PAV + AR)",
				"60000 / ("+less(fast, pav)+" + "+number(p.AR.MS())+")", sourceMemory))
		}
	}
	return vs
}

func rhythmValues(s *Settings, p Patient, lri tick.Dur) []Value {
	if !s.Mode.dual() || !s.Mode.SensesA() || p.VA == 0 || p.VA >= s.PVARP {
		return nil
	}
	gap := lri - s.PacedAV - p.VA
	label := "retrograde P to atrial stimulus; shorter than the atrial refractory period, the stimulus is lost"
	if erp := p.AtrialERPAt(lri); erp > 0 {
		label = "retrograde P to atrial stimulus; shorter than the atrial refractory period, " + number(erp.MS()) + " ms at this cycle, the stimulus is lost"
	}
	if s.AtrialDelay > gap {
		return []Value{length("synchrony_gap", label, s.AtrialDelay, "the longer of LRI - PAV - VA and the delay after a refractory P", "the longer of "+number(gap.MS())+" and "+number(s.AtrialDelay.MS()), sourceSync)}
	}
	return []Value{length("synchrony_gap", label, gap, "LRI - PAV - VA, as VA < PVARP", less(lri, s.PacedAV)+" - "+number(p.VA.MS()), sourceSync)}
}

package pacer

import "escapement/engine/tick"

// SensedAVAt is the AV delay after a sensed P at an atrial interval, with the
// shortening at high rates; what the heart's own conduction teaches is left out.
func (s *Settings) SensedAVAt(interval tick.Dur) tick.Dur {
	return max(shortestAV, s.SensedAV-s.PacedAV+s.AdaptiveAV.at(s.PacedAV, interval))
}

// PVARPAt is PVARP at an atrial interval, with the shortening at high rates.
func (s *Settings) PVARPAt(interval tick.Dur) tick.Dur { return s.AdaptivePVARP.at(s.PVARP, interval) }

// LongestRow is a bound on how many P waves in a row can be tracked at an atrial cycle
// that does not change, from any beginning: each stimulus comes at least MTRI after the
// one before, so the AV delay grows by MTRI - PP a beat from SensedAV on, and a P is
// tracked only while PVARP has ended: AV + PVARP <= PP. 0: there is no bound. sav and
// pvarp are the shortest that can occur.
//
// It is the N of the fact sheet's floor((PP - TARP) / (MTRI - PP)) + 2, and 1 below TARP.
func LongestRow(pp, mtri, sav, pvarp tick.Dur) int {
	switch tarp := sav + pvarp; {
	case pp < tarp:
		return 1
	case pp >= mtri:
		return 0
	default:
		return int((pp-tarp)/(mtri-pp)) + 2
	}
}

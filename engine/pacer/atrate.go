package pacer

import "escapement/engine/tick"

// SensedAVAt is the AV delay after a sensed P at an atrial interval, with the
// shortening at high rates; what the heart's own conduction teaches is left out.
func (s *Settings) SensedAVAt(interval tick.Dur) tick.Dur {
	return max(shortestAV, s.SensedAV-s.PacedAV+s.AdaptiveAV.at(s.PacedAV, interval))
}

// PVARPAt is PVARP at an atrial interval, with the shortening at high rates.
func (s *Settings) PVARPAt(interval tick.Dur) tick.Dur { return s.AdaptivePVARP.at(s.PVARP, interval) }

// TARPAt is the total atrial refractory period at an atrial interval.
func (s *Settings) TARPAt(interval tick.Dur) tick.Dur {
	return s.SensedAVAt(interval) + s.PVARPAt(interval)
}

// adapts tells whether the AV delay or PVARP shortens with the rate.
func (s *Settings) adapts() bool {
	return s.AdaptiveAV.To > s.AdaptiveAV.From || s.AdaptivePVARP.To > s.AdaptivePVARP.From
}

// shortestTracked is the atrial cycle below which 1:1 tracking of a rate that rises gives
// way to 2:1: where PP = TARP with the AV delay and PVARP of that rate.
func (s *Settings) shortestTracked() tick.Dur { return s.tracked(1) }

// shortestReturn is the atrial cycle from which 2:1 gives way to 1:1 as the rate falls:
// in 2:1 the device's atrial interval is twice PP, so a delay that shortens with the
// rate is longer than it was in 1:1.
func (s *Settings) shortestReturn() tick.Dur { return s.tracked(2) }

// tracked is the longest cycle that TARP at k times that cycle does not fall short of.
// TARP never grows as the cycle shortens, so the steps go down to it from TARP at rest.
func (s *Settings) tracked(k tick.Dur) tick.Dur {
	pp := s.SensedAV + s.PVARP
	for range 10000 {
		next := s.TARPAt(k * pp)
		if next >= pp {
			break
		}
		pp = next
	}
	return pp
}

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

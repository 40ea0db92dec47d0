package measure

import "escapement/engine/tick"

// Exit is what a series of PP intervals ending in a pause tells about block
// between the sinus node and the atrium.
type Exit struct {
	Type  int      // 1: PP shortens before the pause; 2: the pause is a multiple of PP
	Cycle tick.Dur // the sinus cycle that must be behind it
	Beats int      // sinus discharges in the group, the blocked ones counted
}

// InferExit reads PP intervals, the last of which is the pause. Type I (2018
// ACC/AHA/HRS): PP shortens before the pause; the group's length divided by the
// number of discharges is the sinus cycle, and the pause is shorter than twice
// the shortest PP. Type II: steady PP and a pause that is an integer multiple of
// it. Differences within the tolerance count as none. ok is false if neither fits.
func InferExit(pp []tick.Dur, tolerance tick.Dur) (e Exit, ok bool) {
	n := len(pp) - 1
	if n < 1 {
		return e, false
	}
	before, pause := pp[:n], pp[n]
	shortest, longest := before[0], before[0]
	falls := n >= 2
	total := pause
	for i, d := range before {
		total += d
		shortest, longest = min(shortest, d), max(longest, d)
		falls = falls && (i == 0 || d < before[i-1]+tolerance)
	}
	if shortest <= 0 || pause <= longest+tolerance {
		return e, false
	}
	if falls && before[0]-before[n-1] > tolerance && pause < 2*shortest {
		return Exit{1, total / tick.Dur(n+2), n + 2}, true
	}
	mean := (total - pause) / tick.Dur(n)
	k := (pause + mean/2) / mean
	if longest-shortest <= tolerance && k >= 2 && abs(float64(pause-k*mean)) <= float64(tolerance*k) {
		return Exit{2, mean, n + int(k)}, true
	}
	return e, false
}

// Zone is how the sinus node answered an atrial premature beat (Strauss et al.,
// Circulation 1973;47:86; formulas from memory).
type Zone int

const (
	_            Zone = iota
	Nonreset          // zone I: coupling and return make two cycles
	Reset             // zone II: less than two, the return does not depend on the coupling
	Interpolated      // zone III: one cycle
	Reentrant         // zone IV: less than one
)

// AtrialReset predicts the return cycle after an atrial premature beat at the
// coupling: basic is the sinus cycle, through the conduction into and out of the
// sinus node together. Coupling longer than basic - through does not reach the
// node in time (zone I).
func AtrialReset(basic, through, coupling tick.Dur) (ret tick.Dur, z Zone) {
	if coupling > basic-through {
		return 2*basic - coupling, Nonreset
	}
	return basic + through, Reset
}

// StraussZone names the zone from what was measured.
func StraussZone(basic, coupling, ret, tolerance tick.Dur) Zone {
	switch sum := coupling + ret; {
	case sum >= 2*basic-tolerance:
		return Nonreset
	case sum < basic-tolerance:
		return Reentrant
	case sum <= basic+tolerance:
		return Interpolated
	}
	return Reset
}

// SACT is a sinoatrial conduction time. Narula's own abstract gives totals, in
// and out; the usual number is the half.
type SACT struct{ Total, OneWay tick.Dur }

// StraussSACT from a return cycle in zone II: A2A3 - A1A1 is the total.
func StraussSACT(basic, ret tick.Dur) SACT { return SACT{ret - basic, (ret - basic) / 2} }

// NarulaSACT from the interval after eight beats paced at most 10/min above the
// sinus rate (Narula et al., Circulation 1978;58:706).
func NarulaSACT(basic, afterPacing tick.Dur) SACT { return StraussSACT(basic, afterPacing) }

// Recovery is a sinus node recovery time and its judgements.
type Recovery struct {
	SNRT, Corrected tick.Dur
	Ratio           float64 // SNRT / sinus cycle, per cent
	OverNarula      bool    // corrected above 525 ms: Narula, Samet, Javier, Circulation 1972;45:140
	OverJosephson   bool    // corrected above 550 ms: Josephson, from memory
	OverRatio       bool    // ratio above 160 per cent; 115-159 is normal in a dictionary entry, 150-160 in use
}

// RecoveryTime judges the interval from the last paced atrial beat to the first
// sinus beat against the sinus cycle, which must be positive.
func RecoveryTime(snrt, cycle tick.Dur) Recovery {
	c := snrt - cycle
	ratio := 100 * float64(snrt) / float64(cycle)
	return Recovery{snrt, c, ratio, c > 525*tick.Millisecond, c > 550*tick.Millisecond, ratio > 160}
}

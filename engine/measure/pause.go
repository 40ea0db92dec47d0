package measure

import "escapement/engine/tick"

// Pause is how the cycle around a premature beat compares with the basic cycle.
type Pause int

const (
	_                Pause = iota
	Full                   // coupling and pause make two basic cycles: the sinus node was not reset
	LessThanFull           // less than two: the sinus node was reset
	InterpolatedBeat       // one cycle: no pause
	MoreThanFull           // more than two
)

// Compensatory compares coupling + pause with the basic cycle, within the
// tolerance. Source: two teaching pages read for the facts (full = twice PP;
// shorter when the sinus node is reset; interpolated = PP plus the extra PR of
// the next beat, which falls in the tolerance here or is taken off beforehand).
func Compensatory(coupling, pause, basic, tolerance tick.Dur) Pause {
	switch sum := coupling + pause; {
	case sum > 2*basic+tolerance:
		return MoreThanFull
	case sum >= 2*basic-tolerance:
		return Full
	case sum <= basic+tolerance:
		return InterpolatedBeat
	}
	return LessThanFull
}

package pacer

import "escapement/engine/tick"

// upperInterval is MTRI, the shortest interval to a tracked or triggered stimulus; 0
// for no limit.
func (d *Device) upperInterval() tick.Dur { return interval(d.s.UpperRate) }

// interval is the interval of a rate, 0 for one that is off.
func interval(bpm float64) tick.Dur {
	if bpm <= 0 {
		return 0
	}
	return tick.PerMinute(bpm)
}

// trackable is the earliest instant for a tracked stimulus and the timer that says so.
func (d *Device) trackable() (tick.Time, Timer) {
	if !d.v.known {
		return 0, UpperTimer
	}
	at, timer := d.v.at.Add(d.upperInterval()), UpperTimer
	if c := d.s.ChangeLimit.Shorter; c > 0 && d.vv > 0 {
		if t := d.v.at.Add(min(d.vv-share(d.vv, c), d.lowerInterval())); t > at {
			at, timer = t, ChangeTimer
		}
	}
	return at, timer
}

// share is so many per cent of a length.
func share(length tick.Dur, percent float64) tick.Dur {
	return tick.Dur(float64(float64(length)*percent)/100 + 0.5)
}

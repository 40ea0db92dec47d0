package pacer

import "escapement/engine/tick"

// sensorState is the rate that the sensor asks for, moving towards its target.
type sensorState struct {
	at    tick.Time
	rate  float64
	level float64
	next  int // index of the next entry of the profile
}

func (s *sensorState) start(set *Settings, now tick.Time) {
	*s = sensorState{at: now, rate: set.LowerRate}
}

// advance moves the rate along the profile up to now: straight lines towards the
// target of each level, steep as the rise and fall times say.
func (s *sensorState) advance(set *Settings, now tick.Time) {
	profile := set.Sensor.Activity
	for s.next < len(profile) && profile[s.next].At <= now {
		s.approach(set, max(s.at, profile[s.next].At))
		s.level = profile[s.next].Level
		s.next++
	}
	s.approach(set, now)
}

func (s *sensorState) approach(set *Settings, until tick.Time) {
	target := min(set.LowerRate+float64(set.Sensor.Slope*s.level), set.Sensor.Limit)
	target = max(target, set.LowerRate)
	span := set.Sensor.Limit - set.LowerRate
	elapsed := float64(until.Sub(s.at))
	switch {
	case s.rate < target:
		s.rate = min(target, s.rate+step(span, elapsed, set.Sensor.Rise))
	case s.rate > target:
		s.rate = max(target, s.rate-step(span, elapsed, set.Sensor.Fall))
	}
	s.at = until
}

func step(span, elapsed float64, whole tick.Dur) float64 {
	if whole <= 0 {
		return span
	}
	return float64(span*elapsed) / float64(whole)
}

// sensorInterval is the interval that the sensor asks for, or 0.
func (d *Device) sensorInterval() tick.Dur {
	if d.mode.Rate != 'R' || d.s.Sensor.Slope <= 0 {
		return 0
	}
	d.sensor.advance(&d.s, d.now)
	if d.sensor.rate <= d.s.LowerRate {
		return 0
	}
	return interval(d.sensor.rate)
}

package pacer

import (
	"fmt"

	"escapement/engine/tick"
)

// Faults says which settings cannot be run together, one sentence each. Ranges of
// single numbers are the plan's; here is only what one setting asks of another.
func (s *Settings) Faults() []string {
	var out []string
	say := func(bad bool, format string, args ...any) {
		if bad {
			out = append(out, fmt.Sprintf(format, args...))
		}
	}
	m := s.Mode
	lri, mtri := interval(s.LowerRate), interval(s.UpperRate)
	say(s.LowerRate <= 0, "the lower rate must be above 0")
	say(m.dual() && lri > 0 && lri <= s.PacedAV, "the paced AV delay of %v ms leaves nothing of the lower-rate interval of %v ms", s.PacedAV, lri)
	say(m.Tracks() && mtri > lri, "the upper tracking rate of %v is below the lower rate of %v", s.UpperRate, s.LowerRate)
	say(m.SensesA() && m.PacesV() && s.PVAB > s.PVARP, "PVAB of %v ms is longer than PVARP of %v ms", s.PVAB, s.PVARP)
	say(m.SensesV() && m.PacesV() && s.VentricularRefractory >= lri && lri > 0, "the ventricular refractory period of %v ms leaves no time to sense in the lower-rate interval of %v ms", s.VentricularRefractory, lri)
	say(m.atrialOnly() && m.SensesA() && s.AtrialRefractory >= lri && lri > 0, "the atrial refractory period of %v ms leaves no time to sense in the lower-rate interval of %v ms", s.AtrialRefractory, lri)
	say(s.SafetyStimulus && m.PacesA() && m.SensesV() && s.Crosstalk <= s.PAVB, "the crosstalk window ends at %v ms, before the ventricular blanking of %v ms", s.Crosstalk, s.PAVB)
	say(s.Hysteresis.Rate > 0 && s.Hysteresis.Rate >= s.LowerRate, "the hysteresis rate of %v is not below the lower rate of %v", s.Hysteresis.Rate, s.LowerRate)
	say(m.Rate == 'R' && s.Sensor.Slope > 0 && s.Sensor.Limit < s.LowerRate, "the sensor's limit of %v is below the lower rate of %v", s.Sensor.Limit, s.LowerRate)
	say(m.dual() && m.Rate == 'R' && s.Sensor.Slope > 0 && interval(s.Sensor.Limit) > 0 && interval(s.Sensor.Limit) <= s.AdaptiveAV.at(s.PacedAV, interval(s.Sensor.Limit)), "at the sensor's limit of %v the paced AV delay leaves nothing of the interval", s.Sensor.Limit)
	for i := 1; i < len(s.Sensor.Activity); i++ {
		say(s.Sensor.Activity[i].At < s.Sensor.Activity[i-1].At, "activity %d begins before the one ahead of it", i+1)
	}
	if s.Switch.Rate > 0 {
		to := s.Switch.Mode.String()
		say(s.Switch.Mode != (Mode{}) && to[:3] != "DDI" && to[:3] != "VVI", "the mode switch goes to DDI or VVI, not %s", to)
		say(s.Switch.Mode.PacesA() && !m.PacesA(), "the mode switch from %v goes to VVI, as it does not pace the atrium", m)
		say(!m.Tracks(), "the mode switch leaves a tracking mode, which %v is not", m)
		say(s.Switch.Of > 32 || s.Switch.Short > 32, "the mode switch counts at most 32 intervals")
	}
	if s.Backup.Misses > 0 {
		say(m.String()[:3] != "DDD", "atrial pacing with ventricular backup needs DDD, not %v", m)
		say(s.Backup.Of > 32 || s.Backup.Misses > 32, "backup pacing counts at most 32 cycles")
	}
	if s.Magnet.Mode != (Mode{}) {
		say(s.Magnet.Mode.Response != 'O' || s.Magnet.Mode.Sensed != 'O', "a magnet makes the pacing asynchronous: AOO, VOO or DOO, not %v", s.Magnet.Mode)
		say(s.Magnet.Mode.PacesA() && !m.PacesA() || s.Magnet.Mode.PacesV() && !m.PacesV(), "the magnet's %v paces a chamber that %v does not", s.Magnet.Mode, m)
		say(s.Magnet.To < s.Magnet.From, "the magnet goes before it comes")
	}
	say(s.Sites.Only && !s.Sites.Left, "left-only pacing needs a left lead")
	say(tick.Dur(max(s.Sites.Offset, -s.Sites.Offset)) >= 200*tick.Millisecond, "the offset of %v ms between the ventricles is too long", s.Sites.Offset)
	return out
}

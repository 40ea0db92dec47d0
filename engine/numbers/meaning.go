package numbers

// Meaning says of something that stands beside a strip what it is, what is normal and
// who says so. Its Name is the number's own, with what it is before a colon:
// "number:pr_ms", "sum:tarp", "interval:AS-VP", "row:RR, mean", "finding:mobitz_1".
type Meaning struct {
	Name   string `json:"name"`
	Text   string `json:"text"`
	Normal string `json:"normal"` // empty where there is no normal value
	Source string `json:"source"`
}

const (
	practice = "Common practice."
	modelled = "As this project defines it."
	guide    = "2018 ACC/AHA/HRS guideline on bradycardia and conduction delay."
	part3    = "AHA/ACCF/HRS 2009 part III."
	timing   = "From the definition of the timing cycle."
)

// Meanings are those of sums, intervals of the device, rows of a comparison and
// findings, in the order in which they are written here. Those of measured numbers and
// of counts stand beside their values in [Number].
func Meanings() []Meaning {
	var out []Meaning
	for _, part := range [...]struct {
		kind string
		all  []Meaning
	}{{"sum:", sums}, {"interval:", intervals}, {"row:", rows}, {"finding:", findings}} {
		for _, m := range part.all {
			m.Name = part.kind + m.Name
			out = append(out, m)
		}
	}
	return out
}

// sums carry their own sources, formula by formula.
var sums = []Meaning{
	{"lower_rate_interval", "The longest the device waits for the next beat before it stimulates, without hysteresis.", "", ""},
	{"aei", "From a ventricular event to the atrial stimulus, if no P is sensed before.", "", ""},
	{"alert_window", "The part of the atrial escape interval after PVARP, in which a P is sensed and starts an AV delay.", "", ""},
	{"tarp", "After each sensed P the atrial channel follows no other P for so long.", "", ""},
	{"tarp_upper", "The same at the upper rate, where AV delay and PVARP that follow the rate are at their shortest.", "", ""},
	{"two_to_one_ends", "The atrial rate to which it must fall before every P is followed again, once 2:1 has begun.", "", ""},
	{"two_to_one", "The atrial rate at which every second P falls into PVARP.", "", ""},
	{"mtri", "The shortest interval between ventricular stimuli that follow P waves.", "", ""},
	{"wenckebach", "By how much the cycle may be shorter than the upper-rate interval while AV delays grow step by step; 0 or less, and 2:1 comes at once.", "", ""},
	{"longest_av", "The longest AV delay before the next P falls into PVARP.", "", ""},
	{"pattern", "P waves to ventricular stimuli at the present atrial rate.", "", ""},
	{"mean_rate", "Mean rate of the ventricles in that pattern.", "", ""},
	{"av_growth", "What each AV delay of the pattern is longer than the one before.", "", ""},
	{"pause", "From stimulus to stimulus about the P that is not followed.", "", ""},
	{"loop_cycle", "The cycle at which a retrograde P after each stimulus would start the next one.", "", ""},
	{"locked_below", "P waves with a cycle below this can fall into PVARP after every conducted QRS and stay unfollowed.", "", ""},
	{"flutter_margin", "What is left of the flutter's cycle when the AV delay and the blanking after the stimulus have run.", "", ""},
	{"synchrony_gap", "From the retrograde P, which PVARP hides, to the next atrial stimulus.", "", ""},
	{"hysteresis_interval", "How long the device waits after a beat of the heart, longer than after a stimulus.", "", ""},
	{"t_wave_interval", "The interval between stimuli where each T wave is sensed and starts the lower-rate interval again.", "", ""},
	{"conducted_rate", "The rate of atrial pacing while the heart conducts: the escape interval runs from the sensed R, which comes before the AV delay would end.", "", ""},
	{"conducted_sensor_rate", "The same at the upper sensor rate.", "", ""},
	{"atrial_threshold", "The least amplitude that captures the atrium at this pulse width.", "", ""},
	{"ventricular_threshold", "The least amplitude that captures the ventricle at this pulse width.", "", ""},
	{"left_threshold", "The least amplitude that captures the left ventricle at this pulse width.", "", ""},
	{"atrial_safety_margin", "By how much the output exceeds the threshold.", "2:1 in amplitude is usual in long-term pacing (common practice)", ""},
	{"ventricular_safety_margin", "By how much the output exceeds the threshold.", "2:1 in amplitude is usual in long-term pacing (common practice)", ""},
	{"left_safety_margin", "By how much the output exceeds the threshold.", "", ""},
	{"ventricular_muscle_threshold", "The least amplitude that captures the muscle beside the conduction system at this pulse width.", "", ""},
}

// intervals run between markers of the device; there is no normal value, as they are
// set or follow from the patient's rate.
var intervals = []Meaning{
	{"AS-VP", "From a sensed P to the ventricular stimulus it started: the sensed AV delay, longer where the upper rate holds the stimulus back.", "", timing},
	{"AS-VS", "From a sensed P to a sensed R: AV conduction of the heart, from where the atrial lead senses.", "", timing},
	{"AP-VP", "From an atrial to a ventricular stimulus: the paced AV delay.", "", timing},
	{"AP-VS", "From an atrial stimulus to a sensed R: AV conduction of the heart after atrial pacing.", "", timing},
	{"VP-AS", "From a ventricular stimulus to the next sensed P.", "", timing},
	{"VP-AP", "From a ventricular to the next atrial stimulus: the atrial escape interval.", "", timing},
	{"VS-AS", "From a sensed R to the next sensed P.", "", timing},
	{"VS-AP", "From a sensed R to the next atrial stimulus: the atrial escape interval.", "", timing},
	{"VP-VP", "From one ventricular stimulus to the next.", "", timing},
	{"VP-VS", "From a ventricular stimulus to the next sensed R.", "", timing},
	{"VS-VP", "From a sensed R to the next ventricular stimulus: the escape interval.", "", timing},
	{"VS-VS", "From one sensed R to the next.", "", timing},
	{"AP-AP", "From one atrial stimulus to the next.", "", timing},
	{"AP-AS", "From an atrial stimulus to the next sensed P.", "", timing},
	{"AS-AP", "From a sensed P to the next atrial stimulus.", "", timing},
	{"AS-AS", "From one sensed P to the next.", "", timing},
	{"V-V", "From one ventricular marker of the device to the next, sensed or stimulated.", "", timing},
	{"A-A", "From one atrial marker of the device to the next, sensed or stimulated.", "", timing},
}

// rows of a comparison that are no median of [Measured].
var rows = []Meaning{
	{"PR, shortest", "The shortest PR on the strip.", "120–200 ms", statpearls},
	{"PR, mean", "The mean PR of all conducted beats.", "120–200 ms", statpearls},
	{"PR, longest", "The longest PR on the strip.", "120–200 ms", statpearls},
	{"RR, shortest", "The shortest interval between QRS complexes.", "", practice},
	{"RR, mean", "The mean interval between QRS complexes.", "600–1000 ms, which is 60–100/min", practice},
	{"RR, longest", "The longest interval between QRS complexes.", "", practice},
	{"longest without QRS", "Between QRS complexes, or to an end of the strip.", "", modelled},
	{"P waves", "How many P waves are on the strip.", "", modelled},
	{"QRS complexes", "How many QRS complexes are on the strip.", "", modelled},
	{"P waves conducted", "How many P waves reached the ventricles.", "all of them", practice},
	{"P waves without a partner", "P waves of one strip that the other does not have.", "", modelled},
	{"QRS complexes without a partner", "QRS complexes of one strip that the other does not have.", "", modelled},
	{"P waves moved", "P waves that both strips have, at another time.", "", modelled},
	{"QRS complexes moved", "QRS complexes that both strips have, at another time.", "", modelled},
}

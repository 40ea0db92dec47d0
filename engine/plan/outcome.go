package plan

// OutcomeKind says what an outcome is made of.
type OutcomeKind string

const (
	NumberOutcome OutcomeKind = "number"
	WordOutcome   OutcomeKind = "word"  // one of a few words
	WordsOutcome  OutcomeKind = "words" // any number of words
)

// Outcome is something that one run of a plan comes to, which a sweep or a goal may
// ask for: the single place where its name, unit and meaning stand.
type Outcome struct {
	Name   string      `json:"name"` // stable: "longest_pause_ms"
	Label  string      `json:"label"`
	Unit   string      `json:"unit,omitempty"`
	Kind   OutcomeKind `json:"kind"`
	Help   string      `json:"help"`
	Source string      `json:"source,omitempty"`
	Slow   bool        `json:"slow,omitempty"` // needs the whole report, ten times the work
}

// Outcomes lists every outcome.
func Outcomes() []Outcome {
	n := func(name, label, unit, help string) Outcome {
		return Outcome{Name: name, Label: label, Unit: unit, Kind: NumberOutcome, Help: help}
	}
	w := func(name, label, help string) Outcome {
		return Outcome{Name: name, Label: label, Kind: WordOutcome, Help: help}
	}
	synchronous := n("av_synchronous_percent", "AV synchronous", "%", "QRS complexes with a P from above at most 300 ms before them.")
	synchronous.Source = "limit: Circulation 2024;150:439"
	vulnerable := n("vulnerable_stimuli", "stimuli in the vulnerable time", "", "Ventricular stimuli that come after the first ventricular muscle of a beat has recovered and before the last has: while recovery is uneven, about the T wave.")
	vulnerable.Source = "uneven recovery of excitability: Han and Moe, Circ Res 1964;14:44, from memory"
	loop := w("endless_loop", "endless loop", `"none"; "brief", fewer than three turns; "ended", three or more and then cured or blocked; "sustained" to the end of the strip.`)
	loop.Source = "definition: facts of Alasti et al., J Arrhythm 2018;34:485"
	sync := w("va_synchrony", "non-reentrant VA synchrony", `"none"; "ended"; "sustained": the last two atrial stimuli of the strip still meet what a P from below left refractory.`)
	sync.Source = "definition: facts of Heart Rhythm 2016;13:1739"
	return []Outcome{
		w("pattern", "P waves to ventricular beats", `Settled pattern of P waves from above, as "4:3": the shortest row that repeats over the last half of the strip. "4:0" is none; "varies" is no such row; "none" fewer than four P waves there.`),
		n("v_rate_bpm", "ventricular rate", "/min", "60000 divided by the mean interval between QRS complexes."),
		n("v_interval_min_ms", "shortest V-V", "ms", "Between QRS complexes."),
		n("v_interval_max_ms", "longest V-V", "ms", "Between QRS complexes."),
		n("longest_pause_ms", "longest without QRS", "ms", "Between QRS complexes, or to an end of the strip."),
		n("av_min_ms", "shortest AV", "ms", "From a P or atrial stimulus to the ventricular beat that came of it, by conduction or by the device."),
		n("av_max_ms", "longest AV", "ms", "From a P or atrial stimulus to the ventricular beat that came of it, by conduction or by the device."),
		n("atrial_paced_percent", "atrium paced", "%", "AP of AS and AP."),
		n("ventricular_paced_percent", "ventricle paced", "%", "VP of VS and VP."),
		synchronous,
		n("fusion_percent", "fused beats", "%", "QRS complexes made by a stimulus and another impulse together."),
		loop,
		n("loop_cycle_ms", "cycle of the loop", "ms", "Median interval between the stimuli of an endless loop."),
		sync,
		n("mode_switches", "mode changes", "", "Changes of mode after the beginning."),
		n("atrial_no_capture_count", "atrial stimuli without capture", "", "Stimuli of the device."),
		n("ventricular_no_capture_count", "ventricular stimuli without capture", "", "Stimuli of the device."),
		vulnerable,
		{Name: "findings", Label: "findings", Kind: WordsOutcome, Slow: true, Help: "Stable names of what the strip is consistent with."},
		{Name: "warnings", Label: "warnings", Kind: WordsOutcome, Help: "Stable names of the warnings about the settings."},
	}
}

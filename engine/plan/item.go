package plan

import "escapement/engine/heart"

// Limits on lists: a plan is a strip that a person reads, and every limit is
// reported with its number.
const (
	MaxFoci          = 32
	MaxPathways      = 8
	MaxInterventions = 500
	MaxStimuli       = 20000
)

// itemFields describe the items of the lists.
func itemFields() []*Field {
	site := func(path string) *Field {
		return &Field{Path: path, Label: "site", Kind: Choice, Choices: heart.SiteNames()}
	}
	const f, i = "heart.foci[]", "interventions[]"
	return append([]*Field{
		site(f + ".site"),
		num(f+".rate_bpm", "rate", "/min", 40, 1, 400).help("Its own rate when nothing resets it. Junction 40-60, ventricle 20-40: common practice."),
		num(f+".jitter_ms", "cycle variation", "ms", 0, 0, 2000),
		opt(f+".first_ms", "first discharge", "ms", 1, 86400000, "If nothing resets it before. Left out: after one full cycle."),
		{Path: f + ".protected", Label: "protected", Kind: Switch, Help: "Entrance block: other impulses do not reset it."},
		num(f+".overdrive", "overdrive suppression", "", 0, 0, 1),
		num(f+".overdrive_tau_s", "suppression fades over", "s", 10, 0.1, 600),
	}, append(pathwayFields(), []*Field{
		num(i+".at_ms", "at", "ms", 0, 0, 86400000),
		{Path: i + ".do", Label: "what", Kind: Choice, Choices: []string{"stimulate", "train", "set", "lose_capture", "undersense", "signal", "fracture", "dislodge"}},
		site(i + ".site"),
		{Path: i + ".channel", Label: "channel", Kind: Choice, Choices: []string{"A", "V"}, Help: "Of the device: atrial or ventricular."},
		opt(i+".for_ms", "for", "ms", 1, 86400000, "How long the fault lasts."),
		opt(i+".cycle_ms", "cycle", "ms", 20, 10000, "Interval between the stimuli of a train or the signals of a burst."),
		opt(i+".count", "stimuli", "", 1, MaxStimuli, "Stimuli of a train, without extrastimuli; signals of a burst.").whole(),
		{Path: i + ".extras_ms", Label: "extrastimuli", Unit: "ms", Kind: List, Min: 20, Max: 10000, Help: "Coupling intervals after the last of the train."},
		{Path: i + ".field", Label: "number", Kind: Choice, Help: "The number to change, as it stands in the plan file."},
		{Path: i + ".to", Label: "to", Kind: Any, Nullable: true},
		opt(i+".over_ms", "over", "ms", 0, 86400000, "The change goes in a straight line over this time; left out: at once."),
	}...)...)
}

// needs lists what each kind of intervention must and may have besides at_ms and do.
var needs = map[string]struct{ must, may []string }{
	"stimulate":    {must: []string{"site"}},
	"train":        {must: []string{"site", "cycle_ms", "count"}, may: []string{"extras_ms"}},
	"set":          {must: []string{"field", "to"}, may: []string{"over_ms"}},
	"lose_capture": {must: []string{"channel", "for_ms"}},
	"undersense":   {must: []string{"channel", "for_ms"}},
	"fracture":     {must: []string{"channel", "for_ms"}},
	"dislodge":     {must: []string{"channel", "site"}},
	"signal":       {must: []string{"channel"}, may: []string{"cycle_ms", "count"}},
}

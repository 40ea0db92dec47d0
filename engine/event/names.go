package event

import "strings"

// The names below are part of the command line's contract and of the text form:
// lower case, stable, one word a value.

var kindNames = [...]string{Discharge: "discharge", Activate: "activate", Block: "block", Stimulus: "stimulus", Change: "change",
	Sense: "sense", Window: "window", Mode: "mode"}

var ruleNames = [...]string{
	Phase4: "phase4", Fired: "fired", Captured: "captured", Conducted: "conducted",
	PathRefractory: "path_refractory", SiteRefractory: "site_refractory", Collision: "collision",
	OneWay: "one_way", Dropped: "dropped", Premature: "premature", Train: "train", Planned: "planned",
	Timed: "timed", Signal: "signal", Opened: "opened", Switched: "switched", Circuit: "circuit", Arrival: "arrival",
}

var dirNames = [...]string{Down: "down", Up: "up"}

var tissueNames = [...]string{
	Sinus: "sinus", Atrium: "atrium", Node: "av_node", His: "his", Purkinje: "purkinje",
	Ventricle: "ventricle", Accessory: "accessory",
}

var useNames = [...]string{
	Tracked: "tracked", Resets: "resets", Inhibits: "inhibits", Refractory: "refractory", Blanked: "blanked",
	Noise: "noise", Safety: "safety", Triggers: "triggers", Observed: "observed",
}

var outcomeNames = [...]string{
	MuscleOnly: "muscle_only", ConductionOnly: "conduction_only", BelowThreshold: "below_threshold",
	CaptureLost: "capture_lost", Overtaken: "overtaken",
}

func name(names []string, i int) string {
	if i <= 0 || i >= len(names) {
		return "invalid"
	}
	return names[i]
}

func index(names []string, s string) int {
	for i, n := range names {
		if n == s && n != "" {
			return i
		}
	}
	return 0
}

func (k Kind) String() string    { return name(kindNames[:], int(k)) }
func (r Rule) String() string    { return name(ruleNames[:], int(r)) }
func (u Use) String() string     { return name(useNames[:], int(u)) }
func (o Outcome) String() string { return name(outcomeNames[:], int(o)) }
func (d Dir) String() string     { return name(dirNames[:], int(d)) }
func (t Tissue) String() string  { return name(tissueNames[:], int(t)) }

// Chamber is A for a site whose depolarisation makes a P wave, V for one whose
// depolarisation makes a QRS, and 0 for the rest.
func (s *Site) Chamber() byte {
	switch s.Tissue {
	case Atrium:
		return 'A'
	case Ventricle:
		return 'V'
	}
	return 0
}

// plain tells whether a name can stand as one word in the text form.
func plain(s string) bool { return s != "" && !strings.ContainsAny(s, " \t\n\r\"") }

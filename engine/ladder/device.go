package ladder

import (
	"escapement/engine/event"
	"escapement/engine/tick"
)

// Device is what a device did: the signals and stimuli it marked, and what it
// waited for or was deaf to between them.
//
// A bar is one window of the record, in a row of its kind: what keeps the atrial
// channel from reacting, the timers, what keeps the ventricular channel. Bars of
// one row meet only where they say different things (a deaf first part of a
// refractory period). An AV delay stands twice: as a timer, and in the atrial row,
// since the atrial channel does not react while it runs.
type Device struct {
	Rows    []Row    // from the top
	Windows []Window // in order of time
	Markers []Marker
}

// Row is one line of bars.
type Row struct {
	Label  string // for people: "A refractory"
	Short  string // where there is little room
	Timers bool   // it holds timers, drawn as lines
}

// Hearing says what a bar means for signals. The zero value is invalid.
type Hearing uint8

const (
	_       Hearing = iota
	Deaf            // signals are not seen at all
	Ignores         // signals are seen and not reacted to
	Watches         // signals are reacted to in a special way
	Timer           // the device waits; it says nothing of signals
	hearings
)

// Window is a bar: a window of the device.
type Window struct {
	Event    event.ID // the window
	Name     string   // as in the record: "pvarp"
	Label    string   // for people: "PVARP"
	Hearing  Hearing
	Row      int
	T0, T1   tick.Time // T1 is not past the end of the strip
	Ended    bool      // by an event; otherwise it ran out
	Cut      bool      // the strip ended first
	Held     tick.Time // an AV delay that was over: until when the stimulus was held back; or 0
	HeldBy   event.ID  // the stimulus or signal at Held
	Why      string    // what changed its usual length, or empty
	Hits     []Hit     // signals that it decided about
	Differs  bool      // its usual length was changed, or it is a timer that ran out later or sooner than the one before it
	Priority int       // the higher, the later its text is left out for want of room
}

// Hit is a signal that fell into a bar.
type Hit struct {
	Event event.ID
	T     tick.Time
}

// Marker is a signal, a stimulus or a change of mode at its time.
type Marker struct {
	Event      event.ID
	T          tick.Time
	Channel    byte   // A or V; 0 for a change of mode
	Label      string // AS, AP, AR, VS, VP, VR or a word; empty where the device heard nothing
	Paced      bool
	Refractory bool
	Unheard    bool // a signal in a deaf window
}

// kind is how windows of one name are drawn.
type kind struct {
	name, label string
	hearing     Hearing
	group       group
	priority    int
}

// group gathers windows that share rows; the order is from the top.
type group uint8

const (
	groupAtrium group = iota
	groupCycle
	groupUpper
	groupLower
	groupVentricle
	groupCount
)

var groupRows = [groupCount]Row{
	groupAtrium:    {Label: "A refractory", Short: "A refr."},
	groupCycle:     {Label: "AV, escape", Short: "AV, esc.", Timers: true},
	groupUpper:     {Label: "upper rate", Short: "upper", Timers: true},
	groupLower:     {Label: "lower rate", Short: "lower", Timers: true},
	groupVentricle: {Label: "V refractory", Short: "V refr."},
}

// kinds lists the names that devices use on the record. The texts are the trade's
// terms: post-ventricular atrial refractory period and blanking, post-atrial
// ventricular blanking, atrial escape interval.
var kinds = [...]kind{
	{"av_delay", "AV", Timer, groupCycle, 80},
	{"atrial_escape", "escape", Timer, groupCycle, 60},
	{"atrial_delay", "A delay", Timer, groupCycle, 70},
	{"backup_delay", "backup", Timer, groupCycle, 70},
	{"withheld", "withheld", Timer, groupCycle, 75},
	{"upper_rate", "", Timer, groupUpper, 40},
	{"lower_rate", "", Timer, groupLower, 60},
	{"pvarp", "PVARP", Ignores, groupAtrium, 30},
	{"pvab", "PVAB", Deaf, groupAtrium, 10},
	{"atrial_blanking", "blank", Deaf, groupAtrium, 10},
	{"atrial_refractory", "ARP", Ignores, groupAtrium, 30},
	{"atrial_noise", "noise", Watches, groupAtrium, 20},
	{"pavb", "PAVB", Deaf, groupVentricle, 10},
	{"crosstalk", "crosstalk", Watches, groupVentricle, 20},
	{"ventricular_refractory", "VRP", Ignores, groupVentricle, 30},
	{"noise", "noise", Watches, groupVentricle, 20},
}

// kindOf finds how a window is drawn; one that is not known is a timer, under its
// own name.
func kindOf(name string) kind {
	for i := range kinds {
		if kinds[i].name == name {
			return kinds[i]
		}
	}
	return kind{name, name, Timer, groupCycle, 20}
}

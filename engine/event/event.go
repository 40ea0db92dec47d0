// Package event is the vocabulary of a timeline: what can happen, what caused
// it, and the [Log] that records it.
//
// It knows no heart and no device. A log can be read, checked ([Validate]),
// compared ([Log.Fingerprint]) and written as text or JSON without a simulator.
//
// Every event carries the id of the event that led to it and the [Rule] that
// applied, so "why did this happen?" is a walk along [Event.Cause]. The chain
// always ends at an event without a cause: a focus that discharged for the
// first time, an intervention, or the start of the strip.
package event

import "escapement/engine/tick"

// ID numbers the events of a log from 1; 0 means none.
type ID int32

// SiteID and PathID index [Log.Sites] and [Log.Paths]; -1 means none.
type (
	SiteID int16
	PathID int16
)

// None is the absent site or path.
const None = -1

// Kind says what sort of event it is. The zero Kind is invalid.
type Kind uint8

const (
	_         Kind = iota
	Discharge      // a focus reached threshold by itself
	Activate       // a site depolarised
	Block          // an impulse stopped
	Stimulus       // an artificial stimulus was delivered
	Change         // the plan changed a number of the heart at this time
	Sense          // the device noticed a signal on one of its channels
	Window         // a window or timer of the device began
	Mode           // the device went over to another mode
)

// Rule names why an event came when it did. The zero Rule is invalid.
type Rule uint8

const (
	_              Rule = iota
	Phase4              // the focus completed its cycle (Discharge)
	Fired               // the site was depolarised by its own focus (Activate)
	Captured            // the site was depolarised by a stimulus (Activate)
	Conducted           // an impulse arrived along a path (Activate)
	PathRefractory      // the path had not recovered (Block)
	SiteRefractory      // the site at the end had not recovered (Block)
	Collision           // two opposite impulses met in a path (Block)
	OneWay              // the path does not conduct in this direction (Block)
	Dropped             // a drop pattern put on the path stopped the impulse (Block)
	Premature           // a single planned stimulus (Stimulus)
	Train               // a stimulus of a planned train (Stimulus)
	Planned             // a planned change of a number (Change)
	Timed               // a timer of the device ended (Stimulus)
	Signal              // a signal above sensitivity arrived (Sense)
	Opened              // the device began to wait for something, or to be deaf (Window)
	Switched            // the device changed its mode (Mode)
	Circuit             // a re-entrant driver came round (Discharge)
	Arrival             // a wave of fibrillation arrived (Discharge)
)

// Dir is the direction along a path. Down is from [Path.From] to [Path.To],
// which in the conduction system is from the sinus towards the ventricles.
type Dir uint8

const (
	_ Dir = iota
	Down
	Up
)

// Event is one thing that happened. Fields that do not apply to its kind hold
// None (sites, paths) or zero.
type Event struct {
	ID    ID
	Cause ID // the event that led to this one; 0 for none
	T     tick.Time
	Kind  Kind
	Rule  Rule
	Dir   Dir    // Activate by conduction, Block: direction of the impulse
	Site  SiteID // Discharge, Activate, Stimulus: the site. Block: the site the impulse came from
	Path  PathID // Activate: the path it came by, or None. Block: the path it stopped in or at the end of

	// Depth is how far along the path a blocked impulse came, in thousandths:
	// 0 is at the entrance, 1000 at the far end (the site there was refractory).
	Depth uint16

	// Captured tells whether a Stimulus depolarised its site.
	Captured bool

	// Outcome says what was particular about the capture of a Stimulus by Timed.
	Outcome Outcome

	// Recovery is the time since an impulse last left the path, and Needed the
	// time it needed to conduct again, for an impulse that met the path's recovery
	// (Activate by conduction, Block by PathRefractory or Collision). For
	// SiteRefractory and a stimulus they are the time since the site was last
	// depolarised and its refractory period. Recovery is negative when another
	// impulse was still inside, and Unknown when none had passed yet.
	Recovery, Needed tick.Dur

	// Until is the end of the refractory period that an Activate began.
	Until tick.Time

	// Field and To are what a Change set, as they stand in the plan file. Field is the
	// name of a Window, and of the timer that ended for a Stimulus by Timed; Field and
	// To are the modes that a Mode left and entered, and Why the reason.
	Field, To, Why string

	// Channel is A or V for a Sense, and for what a Stimulus by Timed meant to pace.
	Channel byte

	// Use is what the device did with a Sense.
	Use Use

	// By is, for a Sense, the window that decided its use; for a Window, the event
	// that ended it before its time, at Until. 0 is none: the window ran out.
	By ID
}

// Outcome tells which tissue answered a stimulus, or why none did although it was
// excitable when the stimulus came. The zero Outcome says nothing particular.
type Outcome uint8

const (
	_              Outcome = iota
	MuscleOnly             // of two tissues under one tip, the muscle
	ConductionOnly         // of two tissues under one tip, the conduction system
	BelowThreshold         // the output is below the threshold
	CaptureLost            // a fault of the lead
	Overtaken              // another impulse came first, during the latency
)

// Use is what a device does with a signal it sensed. The zero Use is invalid for a
// Sense.
type Use uint8

const (
	_          Use = iota
	Tracked        // an atrial signal that began an AV delay
	Resets         // began the device's timing anew
	Inhibits       // kept back a stimulus that was due
	Refractory     // in a refractory period: noted, nothing more
	Blanked        // not seen at all
	Noise          // in the noise window: taken for interference
	Safety         // in the crosstalk window: answered by a safety stimulus
	Triggers       // answered by a stimulus at once
	Observed       // a mode that only looks on
)

// Unknown is the Recovery of a path that no impulse has passed yet.
const Unknown tick.Dur = -1 << 50

// MissedBy is by how much a Block missed conduction, or 0 where recovery was
// not the reason or is not known.
func (e *Event) MissedBy() tick.Dur {
	if e.Needed == 0 || e.Recovery == Unknown || e.Recovery >= e.Needed {
		return 0
	}
	return e.Needed - e.Recovery
}

// Tissue groups sites and paths, for tiers, colours and words.
type Tissue uint8

const (
	_         Tissue = iota
	Sinus            // the sinus node and its exit path
	Atrium           // atrial muscle
	Node             // the AV node and the junction below its pathways
	His              // the His bundle
	Purkinje         // bundles and fascicles
	Ventricle        // ventricular muscle
	Accessory        // accessory pathways
)

// Site is a piece of tissue that can be depolarised.
type Site struct {
	Name   string // stable, as in the plan file: "right_atrium"
	Label  string // for people: "right atrium"
	Tissue Tissue
}

// Path joins two sites.
type Path struct {
	Name     string // stable: "av_fast"
	Label    string // for people: "AV node, fast pathway"
	Tissue   Tissue
	From, To SiteID // in the direction Down
}

// Log is what happened, in order.
type Log struct {
	Sites  []Site
	Paths  []Path
	Span   tick.Time // the strip ends here; no event is later
	Events []Event   // Events[i].ID == i+1
}

// At returns the event with the id, or nil for 0 and ids the log does not hold.
func (l *Log) At(id ID) *Event {
	if id < 1 || int(id) > len(l.Events) {
		return nil
	}
	return &l.Events[id-1]
}

// Site finds a site by name, or None.
func (l *Log) Site(name string) SiteID {
	for i := range l.Sites {
		if l.Sites[i].Name == name {
			return SiteID(i)
		}
	}
	return None
}

// Path finds a path by name, or None.
func (l *Log) Path(name string) PathID {
	for i := range l.Paths {
		if l.Paths[i].Name == name {
			return PathID(i)
		}
	}
	return None
}

// Entry and Exit are the ends of a path for an impulse travelling in direction d.
func (p *Path) Entry(d Dir) SiteID {
	if d == Up {
		return p.To
	}
	return p.From
}

// Exit is the site that an impulse travelling in direction d reaches.
func (p *Path) Exit(d Dir) SiteID {
	if d == Up {
		return p.From
	}
	return p.To
}

// Chain is the event and its causes, nearest first, back to one without a cause.
func (l *Log) Chain(id ID) []ID {
	var ids []ID
	for e := l.At(id); e != nil; e = l.before(e) {
		ids = append(ids, e.ID)
	}
	return ids
}

// before is the cause of an event, or nil. A cause that is not earlier, in a log
// that [Validate] would refuse, counts as none: a walk must end.
func (l *Log) before(e *Event) *Event {
	if e.Cause >= e.ID {
		return nil
	}
	return l.At(e.Cause)
}

// Origin is the last event of [Log.Chain] that a focus or a stimulus made: where
// the impulse that led to the event began. A focus discharges because an earlier
// event began its cycle, so the walk stops at the first Discharge or Stimulus.
func (l *Log) Origin(id ID) *Event {
	for e := l.At(id); e != nil; e = l.before(e) {
		if e.Kind == Discharge || e.Kind == Stimulus || e.Cause == 0 {
			return e
		}
	}
	return nil
}

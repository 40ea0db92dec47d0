// Package ladder turns a timeline into a ladder diagram: time runs to the right,
// the conduction system from the sinus node down to the ventricles, and every
// impulse is a stroke whose slope is its speed.
//
// [Build] reads nothing but the [event.Log]. A conducted impulse is a stroke from
// the time and place of the event that sent it to the time and place where it
// arrived, antegrade and retrograde alike; a blocked one ends at the depth it
// reached. So block, echo, re-entry, fusion and dissociation need no rules of
// their own: they are how the strokes lie.
//
// Muscle is drawn simply. A wave of the ventricles is one stroke through its
// tier, from the first to the last activation of the wave; a wave that entered
// from above and from below at once is two strokes that meet. Inside the atria
// the right atrium is the top of the tier and the low septum, where the impulse
// leaves for the AV node, its bottom; the left atrium lies between and is drawn
// only where something starts there or goes on from there. In the bundles and
// fascicles only the first way down to the muscle is drawn on each side, and
// every other one that was blocked.
//
// Where the log has a device, [Diagram.Device] holds what it sensed, gave and waited
// for, on the same axis of time.
//
// Heights are in units from the top of the diagram, times are [tick.Time]. The
// package knows no millimetres and no fonts: see package scene.
package ladder

import (
	"escapement/engine/event"
	"escapement/engine/tick"
)

// Form is which tiers a diagram has. The zero value is invalid.
type Form uint8

const (
	_     Form = iota
	Full       // sinus, atria, AV node, His-Purkinje, ventricles
	Plain      // A, AV, V: the sinus node is left out
)

// Options are the choices of a diagram.
type Options struct{ Form Form }

// Diagram is a ladder diagram.
type Diagram struct {
	Form    Form
	Span    tick.Time
	Tiers   []Tier // from the top
	Strokes []Stroke
	Marks   []Mark
	Dims    []Dim
	Device  *Device // nil where the log has none
}

// Height is the height of the whole diagram.
func (d *Diagram) Height() float64 {
	if len(d.Tiers) == 0 {
		return 0
	}
	return d.Tiers[len(d.Tiers)-1].Y1
}

// Tier is one horizontal band.
type Tier struct {
	Name   string // stable: "av_node"
	Label  string // for people: "AV node"
	Short  string // where there is little room: "N"
	Y0, Y1 float64
}

// Branch tells apart strokes that run side by side in one tier.
type Branch uint8

const (
	Trunk Branch = iota // nothing runs beside it
	Left                // left bundle and its fascicles
	Right               // right bundle
	Slow                // slow pathway of the AV node
)

// End is how a stroke ends. The zero value is invalid.
type End uint8

const (
	_        End = iota
	Arrived      // at its site
	Blocked      // there is a mark Bar at its end
	Collided     // an opposite impulse or the rest of a fused wave met it
)

// Stroke is an impulse from T0,Y0 to T1,Y1. It goes up where Y1 < Y0.
type Stroke struct {
	Event  event.ID // the activation or block at its end; for a ventricular wave its first activation
	T0, T1 tick.Time
	Y0, Y1 float64
	Tissue event.Tissue
	Branch Branch
	End    End
}

// Sign says what a mark means. The zero value is invalid.
type Sign uint8

const (
	_        Sign = iota
	Focus         // a focus discharged
	Stimulus      // a stimulus without capture
	Capture       // a stimulus that captured
	Bar           // an impulse, a discharge or a stimulus stopped here
	Tail          // tissue left refractory by a concealed impulse, from T to Until
)

// Mark is a sign at a time and height.
type Mark struct {
	Sign   Sign
	Event  event.ID
	T      tick.Time
	Y      float64
	Tissue event.Tissue
	Branch Branch
	Until  tick.Time // Tail only
	Label  string    // Bar: the part that blocked, where the tier does not tell ("RBB"); or empty
	Up     bool      // Bar: the impulse was going up
	Missed tick.Dur  // Bar: by how much it missed conduction; 0 where not known
}

// Measure names an interval. The zero value is invalid.
type Measure uint8

const (
	_      Measure = iota
	PP             // between the starts of two P waves
	RR             // between the starts of two QRS complexes
	PR             // start of P to start of the QRS it conducted to
	VA             // start of QRS to the right atrium, which it reached backwards
	AH             // low septal right atrium to His bundle
	HV             // His bundle to first ventricular activation
	HA             // His bundle back to low septal right atrium
	NodeUp         // junction back to low septal right atrium, where the His bundle took no part
	NodeIn         // low septal right atrium to junction, where the His bundle was not reached
	Escape         // a focus's wait from the impulse that reset it to its discharge
)

// Dim is a measured interval.
type Dim struct {
	Measure  Measure
	T0, T1   tick.Time
	Y0, Y1   float64  // heights of its ends
	Event    event.ID // the event at its end
	Priority int      // the higher, the later it is left out for want of room
	Tissue   event.Tissue
}

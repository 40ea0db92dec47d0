// Package heart is the model of conduction: sites, the paths between them, and
// foci. It holds parameters only; package sim lets time pass.
//
//   - A site is a piece of tissue that is either excitable or refractory. Its
//     refractory period depends on the preceding cycle.
//   - A path joins two sites and carries an impulse with a delay, in each
//     direction by a recovery curve ([Curve]). Both directions share one state of
//     recovery: whatever leaves the path, at either end, starts it anew.
//   - A focus is a site that also discharges by itself.
//
// Everything clinical (block, Wenckebach periods, aberration, echo, compensatory
// pauses) comes from these three. What is not modelled: voltage, anatomy below
// the level of a site, and slow changes of the AV node over minutes (facilitation
// and fatigue).
//
// Lengths of time are [tick.Dur]; curve parameters are milliseconds, as they are
// typed, and become time only through [Curve.Delay] and [Curve.Refractory].
package heart

import (
	"escapement/engine/event"
	"escapement/engine/tick"
)

// Cycled is a length that follows the preceding cycle in a straight line: At
// the reference cycle it is BaseMS, and it changes by PerCycle ms for each ms of
// cycle. It never falls below FloorMS, and cycles over CapMS count as CapMS: the
// published slopes were measured on drives of 400 to 1000 ms, and a pause must not
// stretch a refractory period without end.
type Cycled struct {
	BaseMS   float64 // at CycleMS
	PerCycle float64 // ms per ms; 0 for a constant
	CycleMS  float64 // the reference cycle
	FloorMS  float64 // lower bound, ms
	CapMS    float64 // longest cycle that counts; 0 is CycleCapMS
}

// At gives the length after a preceding cycle.
func (c *Cycled) At(cycle tick.Dur) tick.Dur {
	if c.PerCycle == 0 {
		return tick.MS(c.BaseMS)
	}
	top := c.CapMS
	if top == 0 {
		top = CycleCapMS
	}
	ms := min(cycle.MS(), top)
	return tick.MS(max(c.BaseMS+float64(c.PerCycle*(ms-c.CycleMS)), c.FloorMS))
}

// CycleCapMS is the longest preceding cycle that still lengthens the refractory
// period of a path; MuscleCapMS that of a site, whose action potential reaches its
// plateau at cycles of 800 to 1000 ms (Franz et al., JCI 1988;82:972).
const (
	CycleCapMS  = 2000
	MuscleCapMS = 1000
)

// Conduct is how a path conducts in one direction.
type Conduct struct {
	Open bool // false: impulses do not pass in this direction
	Curve

	// Reach is how deep an impulse enters where the direction is not open, in
	// thousandths; 0 means that it stops at the entrance and leaves nothing behind.
	Reach uint16

	// Anew tells that what comes out here is a beat of its own, which muscle that the
	// beat before has just crossed may carry: the sinus node's exit, the AV node,
	// accessory pathways and a bundle that is climbed. False on silent paths.
	Anew bool
}

// Path is a connection between two sites. Down is from From to To.
type Path struct {
	event.Path
	Down, Up Conduct
	Drop     Drop

	// Silent paths (muscle, and the Purkinje endings in it) report no blocks: an
	// impulse that meets tissue already depolarised by the same beat just ends.
	Silent bool
}

// Dir gives the parameters of a direction.
func (p *Path) Dir(d event.Dir) *Conduct {
	if d == event.Up {
		return &p.Up
	}
	return &p.Down
}

// Drop is a pattern put on a path for block whose cause is not modelled. Of every
// Of impulses going down that the path would have let in, the first Pass are
// conducted. Phase is how many of the group have come already at the start. The
// zero Drop lets all pass.
type Drop struct {
	Of, Pass, Phase int

	// Chance is the probability of dropping each impulse, drawn from the path's own
	// stream of random numbers; 0 for none. It is not combined with a pattern.
	Chance float64
}

// Site is a piece of tissue.
type Site struct {
	event.Site
	Refractory Cycled
}

// Focus is a site that discharges by itself.
type Focus struct {
	Site      event.SiteID
	Rate      Rate     // over the whole strip
	Jitter    tick.Dur // each cycle varies by up to this, both ways, uniformly
	Protected bool     // entrance block: other impulses do not reset it

	// First is the first discharge if nothing resets the focus before; 0 for one
	// full cycle after the start of the strip.
	First tick.Dur

	// OverdriveGain is what one cycle cut to nothing adds to the suppression S; the
	// next cycle lasts 1+S times as long, and S decays with the time constant
	// OverdriveTau. 0 is none. (In the spirit of Kunysz, Shrier and Glass 1995: number
	// and frequency of forced beats set the suppression. The formula is our own.)
	OverdriveGain float64
	OverdriveTau  tick.Dur

	// Driver is what discharges instead of phase 4; 0 for phase 4.
	Driver      Driver
	From, Until tick.Time // a driver acts from From and before Until; Until 0 is without end

	EndsBelow   tick.Dur // Reentry: another impulse that comes sooner after the last turn ends it
	Least, Mean tick.Dur // Arrivals: shortest and mean interval
}

// Driver is an atrial rhythm that no single site makes.
type Driver uint8

const (
	_        Driver = iota
	Reentry         // a circuit that passes the site once a cycle: flutter
	Arrivals        // waves from anywhere: fibrillation
)

// Heart is the whole network. Sites and Paths are indexed by event.SiteID and
// event.PathID.
type Heart struct {
	Sites []Site
	Paths []Path
	Foci  []Focus

	// Apart is the time in which the atria fibrillate: no front crosses them, and a
	// path of atrial muscle lets nothing in from From and before Until. Until 0 where
	// they do not.
	Apart struct{ From, Until tick.Time }

	// Basic is the cycle that the heart is taken to have had before the strip: the
	// preceding cycle of every first beat.
	Basic tick.Dur

	// Quantum rounds every delay, refractory period and discharge up to a multiple of
	// itself; 1 microsecond in use. Tests set it coarser, to compare with a
	// fixed-step simulation exactly.
	Quantum tick.Dur
}

// Site finds a site by name, or event.None.
func (h *Heart) Site(name string) event.SiteID {
	for i := range h.Sites {
		if h.Sites[i].Name == name {
			return event.SiteID(i)
		}
	}
	return event.None
}

// Path finds a path by name, or nil.
func (h *Heart) Path(name string) *Path {
	for i := range h.Paths {
		if h.Paths[i].Name == name {
			return &h.Paths[i]
		}
	}
	return nil
}

// Package contrast compares two timelines: what the second has that the first has not,
// what is missing, what came earlier or later, and what that does to the numbers.
//
// [Of] takes two sides, before and after. Events are paired in order of time among
// those of one kind at one place (a site, a path and direction, a channel, a timer's
// name): two belong together if neither has a nearer neighbour on the other side, and
// they are at most [Reach] apart. Planned stimuli are paired in their order where both
// sides have as many: a train that was moved stays one train. Names decide, not
// numbers, so two hearts with other sites or paths can be compared as well.
//
// It is a comparison of what happened, not of why: a beat that took the place of
// another within [Reach] is the same beat, moved. Comparing the other way round gives
// the same with before and after exchanged, and a timeline does not differ from itself.
package contrast

import (
	"slices"

	"escapement/engine/event"
	"escapement/engine/measure"
	"escapement/engine/plan"
	"escapement/engine/tick"
)

// Reach is how far apart two events may be and still be one that moved. It is a choice
// of this package: half a cycle at 75/min.
const Reach = 400 * tick.Millisecond

// Sign says how a thing differs. The zero Sign does not differ.
type Sign uint8

const (
	Same    Sign = iota
	Gone         // only before
	New          // only after
	Earlier      // after comes earlier, or is less
	Later        // after comes later, or is more
	Altered      // at the same time, but another: see What
)

var signNames = [...]string{Same: "same", Gone: "gone", New: "new", Earlier: "earlier", Later: "later", Altered: "altered"}

// String is the stable name.
func (s Sign) String() string { return signNames[s] }

// MarshalText gives the stable name to JSON.
func (s Sign) MarshalText() ([]byte, error) { return []byte(s.String()), nil }

// Side is one of two timelines. Log and Report are needed; without a Plan no settings
// are compared.
type Side struct {
	Log      *event.Log
	Report   *measure.Report
	Plan     *plan.Plan
	Warnings []string // about the settings, in words
}

// Contrast is how two timelines differ.
type Contrast struct {
	Events []Difference         // in order of time
	Beats  []Beat               // every P and QRS of either side, in order of time
	Rows   []Row                // the table of differences
	Shared tick.Time            // the length that both have
	Change []plan.SettingChange // settings
}

// Difference is an event that one side has alone, or that moved or became another.
type Difference struct {
	Sign          Sign
	Before, After event.ID // 0: none
	By            tick.Dur // after less before, for a pair
	Longer        tick.Dur // of a window: how much longer it is
	What          string   // what else differs, in words; may be empty
}

// Of compares two timelines over the length that both have.
func Of(before, after Side) *Contrast {
	c := &Contrast{Events: events(before.Log, after.Log), Beats: beats(before, after), Shared: min(before.Log.Span, after.Log.Span)}
	if before.Plan != nil && after.Plan != nil {
		c.Change = plan.Changes(before.Plan, after.Plan)
	}
	c.Rows = c.table(before, after)
	return c
}

// when is the time by which differences are ordered: the earlier of a pair.
func when(before, after *event.Log, b, a event.ID) tick.Time {
	switch {
	case b == 0:
		return after.At(a).T
	case a == 0:
		return before.At(b).T
	}
	return min(before.At(b).T, after.At(a).T)
}

// inOrder sorts by time; of the same instant what is gone stands first.
func inOrder[T any](list []T, at func(*T) (tick.Time, Sign)) {
	slices.SortStableFunc(list, func(x, y T) int {
		t, s := at(&x)
		u, r := at(&y)
		if t != u {
			return int(min(max(t-u, -1), 1))
		}
		return int(s) - int(r)
	})
}

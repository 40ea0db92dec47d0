// Package export writes a computed strip in open formats, for other programs: the leads
// with everything that happened as an EDF+ file ([EDF]), the events as a table ([CSV]),
// and all of it as one JSON document ([JSON]).
//
// Nothing that is written names a person, and nothing is read from a clock. Each form
// says that the strip was computed: a file that leaves the program may be taken for a
// recording.
package export

import (
	"escapement/engine/event"
	"escapement/engine/lead"
	"escapement/engine/measure"
	"escapement/engine/numbers"
	"escapement/engine/plan"
)

// Strip is what is exported. Record is nil where there are no leads, Device where there
// is no pacemaker.
type Strip struct {
	Plan    *plan.Plan
	Log     *event.Log
	Record  *lead.Record
	Measure *measure.Report
	Device  *numbers.Device
}

// Computed stands in every export.
const Computed = "Computed by a model, not recorded from a person."

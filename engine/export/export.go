// Package export writes a computed strip in open formats, for other programs: the leads
// with everything that happened as an EDF+ file ([EDF]), the events as a table ([CSV]),
// and all of it as one JSON document ([JSON]).
//
// Nothing that is written names a person, and nothing is read from a clock. Each form
// says that the strip was computed: a file that leaves the program may be taken for a
// recording.
package export

// Computed stands in every export.
const Computed = "Computed by a model, not recorded from a person."

package export

import (
	"errors"
	"io"
	"slices"
	"strings"
	"time"

	"escapement/engine/account"
	"escapement/engine/export/edf"
	"escapement/engine/ladder"
	"escapement/engine/lead"
	"escapement/engine/scene"
	"escapement/engine/tick"
	"escapement/engine/timeline"
)

// EDFOptions are the choices of [EDF].
type EDFOptions struct {
	Leads   []lead.Name // in this order; nil: all twelve
	Start   time.Time   // zero: the file has no date
	Version string      // of the program, for the equipment field
}

// ErrNoLeads says that the strip is too long to have leads.
var ErrNoLeads = errors.New("export: this strip has no leads to write; they are computed for strips of up to 15 min")

// EDF writes the leads as an EDF+ file, at 1000 samples a second in steps of 0.5
// microvolts. Its annotations, in order of time, are:
//
//	P, QRS           the beginning of a wave
//	AS AP AR VS VP VR  what the device marked
//	Finding: ...     a part of the rhythm, over the time that it covers
//	any sentence     an event, as in the listing of the page
func EDF(w io.Writer, s *timeline.Timeline, o EDFOptions) error {
	if s.Record == nil {
		return ErrNoLeads
	}
	leads := o.Leads
	if leads == nil {
		for n := range lead.Name(lead.Count) {
			leads = append(leads, n)
		}
	}
	r := &edf.Recording{Start: o.Start, Equipment: "escapement", Transducer: "computed lead", Annotations: annotations(s)}
	if o.Version != "" {
		r.Equipment += " " + o.Version
	}
	for _, n := range leads {
		r.Signals = append(r.Signals, edf.Signal{Label: "ECG " + n.String(), MV: s.Record.MV[n]})
	}
	return edf.Write(w, r)
}

// annotations are all that happened, in order of time; at one time the caution comes
// first, then findings, waves and markers, then events.
func annotations(s *timeline.Timeline) []edf.Annotation {
	out := []edf.Annotation{{Text: Computed + " " + scene.CautionText}}
	for i := range s.Measure.Findings {
		f := &s.Measure.Findings[i]
		out = append(out, edf.Annotation{Onset: f.FromUS, Duration: max(f.UntilUS.Sub(f.FromUS), 0), Text: "Finding: " + f.Text})
	}
	for i := range s.Measure.Beats {
		b := &s.Measure.Beats[i]
		out = append(out, edf.Annotation{Onset: b.T, Text: b.Kind})
	}
	if d := ladder.Build(s.Log, ladder.Options{Form: ladder.Plain}).Device; d != nil {
		for i := range d.Markers {
			if m := &d.Markers[i]; m.Label != "" {
				out = append(out, edf.Annotation{Onset: m.T, Text: m.Label})
			}
		}
	}
	for _, l := range account.Listing(s.Log, 0, s.Log.Span) {
		text := l.Text
		if _, rest, ok := strings.Cut(text, " s: "); ok { // the annotation has its own time
			text = rest
		}
		out = append(out, edf.Annotation{Onset: l.T, Text: text})
	}
	slices.SortStableFunc(out, func(a, b edf.Annotation) int { return compare(a.Onset, b.Onset) })
	return out
}

func compare(a, b tick.Time) int {
	switch {
	case a < b:
		return -1
	case a > b:
		return 1
	}
	return 0
}

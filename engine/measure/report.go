// Package measure reads intervals off a timeline and says what rhythm they are
// consistent with.
//
// [Of] takes a log and, where there is one, the surface leads, and returns a
// [Report]: one [Beat] per P and per QRS, a [Summary], the [Finding]s with the
// events that are their evidence, and a plain sentence. PP, PR, RR, PA, AH, H,
// HV and VA come from the log; P and QRS duration, QT, axes and QRS shape come
// from the leads and are null without them. QRS shape is judged from the leads
// alone, never from what the log knows about the bundles.
//
// Definitions are those of the 2018 ACC/AHA/HRS guideline on bradycardia and
// conduction delay (Kusumoto et al.) and, for QRS shape, of the 2009
// AHA/ACCF/HRS recommendations part III (Surawicz et al.). For AV block a
// finding keeps apart what the model knows (the tissue in which the impulse
// stopped) and what the surface alone can tell.
//
// The package also has the arithmetic that the trade does by hand, each piece
// usable alone: [Correct], [Group], [InferExit], [Compensatory], [AtrialReset],
// [StraussSACT], [NarulaSACT], [RecoveryTime].
//
// With a pacemaker the report has a [Device], and AV conduction is judged only from
// P waves with an opportunity: not from those that the device paced over.
package measure

import (
	"escapement/engine/event"
	"escapement/engine/lead"
	"escapement/engine/tick"
)

// Report is everything measured on one strip. Its JSON names are stable: other
// programs read them. Intervals are milliseconds; a number that could not be
// measured is null.
type Report struct {
	Beats      []Beat       `json:"beats"` // in order of time
	Summary    Summary      `json:"summary"`
	Findings   []Finding    `json:"findings"`
	Statement  string       `json:"statement"` // one sentence made of the clauses
	Clauses    []Clause     `json:"clauses"`
	Morphology []Morphology `json:"morphologies"` // distinct QRS shapes, Beat.Shape points here
	Device     *Device      `json:"device"`       // null without a pacemaker
	Overdrive  []Overdrive  `json:"overdrive"`    // ventricular trains during a tachycardia
}

// Beat is one P or one QRS.
type Beat struct {
	T      tick.Time  `json:"t_us"`
	Kind   string     `json:"kind"` // "P" or "QRS"
	ID     event.ID   `json:"id"`   // its first activation
	Origin string     `json:"origin"`
	Begun  event.ID   `json:"origin_id"` // the discharge or stimulus it came from
	Roots  []event.ID `json:"roots"`     // activations by which it entered the chamber

	Conducted  bool       `json:"conducted"` // P: reached the ventricles. QRS: came from a P
	From       event.ID   `json:"conducted_from"`
	To         event.ID   `json:"conducted_to"`
	Premature  bool       `json:"premature"`
	Retrograde bool       `json:"retrograde"`  // P that entered the atria from below
	Fusion     bool       `json:"fusion"`      // QRS from two origins
	Level      string     `json:"block_level"` // P that was blocked: av_node, his, bundles, or empty
	Interfered bool       `json:"interfered"`  // P blocked by what a beat from elsewhere left behind
	Blocks     []event.ID `json:"blocks"`

	Paced    bool     `json:"paced,omitempty"`     // a stimulus of the device has a part in it
	DeviceID event.ID `json:"device_id,omitempty"` // that stimulus, or the signal by which the device had it

	PP *float64 `json:"pp_ms"`
	PR *float64 `json:"pr_ms"`
	RR *float64 `json:"rr_ms"`
	PA *float64 `json:"pa_ms"`
	AH *float64 `json:"ah_ms"`
	H  *float64 `json:"h_ms"`
	HV *float64 `json:"hv_ms"`
	VA *float64 `json:"va_ms"`

	PDur *float64 `json:"p_ms"`
	QRS  *float64 `json:"qrs_ms"`
	QT   *float64 `json:"qt_ms"`
	QTc
	Axis    *float64 `json:"axis_deg"`     // of this wave, by area
	AxisNet *float64 `json:"axis_net_deg"` // by net amplitude
	Shape   *int     `json:"morphology"`

	returned bool // QRS: the P it came from had come up
}

// QTc is the corrected QT by the four named formulas, null where not measured.
type QTc struct {
	Bazett     *float64 `json:"qtc_bazett_ms"`
	Fridericia *float64 `json:"qtc_fridericia_ms"`
	Framingham *float64 `json:"qtc_framingham_ms"`
	Hodges     *float64 `json:"qtc_hodges_ms"`
}

// Summary holds medians over the strip and counts. In fibrillation VRate is that of the
// mean RR.
type Summary struct {
	PRate   *float64 `json:"p_rate_bpm"`
	VRate   *float64 `json:"v_rate_bpm"`
	PR      *float64 `json:"pr_ms"`
	P       *float64 `json:"p_ms"`
	QRS     *float64 `json:"qrs_ms"`
	QT      *float64 `json:"qt_ms"`
	QRSAxis *float64 `json:"qrs_axis_deg"`
	PAxis   *float64 `json:"p_axis_deg"`
	AH      *float64 `json:"ah_ms"`
	HV      *float64 `json:"hv_ms"`
	VA      *float64 `json:"va_ms"`
	QTc
	PCount    int `json:"p_count"`
	QRSCount  int `json:"qrs_count"`
	Conducted int `json:"conducted_count"`
}

// Finding is one thing the strip is consistent with.
type Finding struct {
	Slug     string     `json:"slug"`
	Text     string     `json:"text"`
	Evidence []event.ID `json:"evidence"`
	FromUS   tick.Time  `json:"from_us"` // the part of the strip it covers
	UntilUS  tick.Time  `json:"until_us"`
	Count    int        `json:"count"`
	Ratio    string     `json:"ratio,omitempty"` // P:QRS of the groups, "4:3"
	PRs      []float64  `json:"pr_list_ms,omitempty"`

	Channel string `json:"channel,omitempty"` // A or V, of a device's fault in one chamber

	Level   string   `json:"level,omitempty"`         // where, as the model knows it: nodal, infranodal
	Surface string   `json:"surface_level,omitempty"` // where, as the surface alone can tell
	Note    string   `json:"surface_note,omitempty"`  // why the surface tells that much
	Rivals  []string `json:"rivals,omitempty"`        // mechanisms that fit the surface as well

	clause string
	order  int
}

// Clause is a part of the statement with the events it rests on.
type Clause struct {
	Text     string     `json:"text"`
	Evidence []event.ID `json:"evidence"`
	Slug     string     `json:"slug"`
}

// Of measures a log that [event.Validate] accepts. The record may be nil.
func Of(log *event.Log, rec *lead.Record) *Report {
	s := read(log)
	s.dev = s.readDevice()
	s.judge()
	r := &Report{Beats: []Beat{}, Findings: []Finding{}, Clauses: []Clause{}, Morphology: []Morphology{}}
	surf := s.surface(rec, r)
	r.Beats = s.beats(surf)
	r.Summary = s.summarise(r.Beats)
	r.Device = s.deviceReport()
	r.Overdrive = s.overdrives()
	f := &finder{strip: s, surf: surf, report: r}
	f.all()
	r.Statement, r.Clauses = statement(f.found)
	if r.Findings = f.found; r.Findings == nil {
		r.Findings = []Finding{}
	}
	return r
}

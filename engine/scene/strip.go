package scene

import (
	"math"
	"strings"

	"escapement/engine/event"
	"escapement/engine/ladder"
	"escapement/engine/lead"
	"escapement/engine/tick"
)

// CautionText stands on every page and print.
const CautionText = "Planning and teaching aid. Idealised heart and generic device. Not a medical device; not for treating a patient. " +
	"Check against the device's own manual, the patient's own measurements, local policy and a licensed clinician."

// Input is what a strip shows. Record and Diagram may be nil: then there are no
// leads, or no ladder.
type Input struct {
	Log     *event.Log
	Record  *lead.Record
	Diagram *ladder.Diagram
	Signals []Sampled // electrograms and action potentials that [Options.Lanes] may name

	// Extents remembers how far signals reach from one drawing of the same input to the
	// next; nil looks anew each time. A signal must not change while it is remembered.
	Extents *Extents
}

// Options say what of it is drawn, and how large. Zero means the default where
// one is given.
type Options struct {
	From, To  tick.Time // the window; To 0 is the end of the strip
	MMPerS    float64   // default 25
	MMPerMV   float64   // default 10
	Leads     []lead.Name
	Margin    float64 // mm left of the window for names; default wide enough for them
	FontMM    float64 // em size of usual text, mm; default 2.8
	LadderMM  float64 // height of the ladder's tiers, mm; default by font
	ColumnMM  float64 // a lead keeps two points for each so many mm; default 0.1
	Grid      bool    // paper grid behind the leads
	Title     string
	Statement string
	Legend    bool   // what the signs of the ladder mean
	Caution   bool   // the scales and CautionText at the foot
	Imprint   string // date and version of a print, after the scales at the foot
	Selected  event.ID
	NoDevice  bool // leave the device's lane out

	// Lanes is which lanes are drawn, from top to bottom, by the names that they
	// have in the scene; names of what the strip does not have are passed over. Nil is
	// the leads, the axis, the ladder and the device.
	Lanes []string

	// Closer moves the lanes of signals together by so many millimetres in all. Traces
	// keep their scale and may then run into their neighbours' lanes; no lane is made
	// narrower than its name needs.
	Closer float64

	// Pulse sees that one lane of leads at least has room for the pulse of 1 mV, as a print
	// needs it; without, only lanes that are high enough anyway have one.
	Pulse bool

	// Fill lets the window on pages go on to the end of its last line; where the strip
	// ends before that, the window begins earlier.
	Fill bool
	end  tick.Time // of the strip

	// Paper is the form in which [Paper12] sets the twelve leads.
	Paper Form12

	// What [Stack] asks of each half.
	noAxis bool       // the other half has the time axis
	lonely []event.ID // sorted: events without a partner, that a broad mark of class alone marks
	alone  Class
}

// Limits on sizes, so that no option can make an endless drawing.
const (
	minMMPerS, maxMMPerS = 0.01, 5000
	minFont, maxFont     = 0.5, 20
	maxWidth             = 60000
)

func (o *Options) fill(in *Input) {
	clamp := func(v *float64, low, high, zero float64) {
		if *v == 0 || math.IsNaN(*v) {
			*v = zero
		}
		*v = min(max(*v, low), high)
	}
	if o.To == 0 && in.Log != nil {
		o.To = in.Log.Span
	}
	o.To = max(o.To, o.From+1)
	clamp(&o.MMPerS, minMMPerS, maxMMPerS, 25)
	clamp(&o.MMPerMV, 0.1, 200, 10)
	clamp(&o.FontMM, minFont, maxFont, 2.8)
	clamp(&o.ColumnMM, 0.01, 10, 0.1)
	seconds := float64(o.To-o.From) / 1e6
	o.MMPerS = min(o.MMPerS, maxWidth/seconds)
	clamp(&o.Margin, 0, 200, 0)
	if o.Margin == 0 {
		o.Margin = defaultMargin(in, o)
	}
	if in.Diagram != nil {
		clamp(&o.LadderMM, 1, 2000, in.Diagram.Height()*max(7, 2.9*o.FontMM))
	}
}

func defaultMargin(in *Input, o *Options) float64 {
	w := AxisText.Width(axisLabel, o.FontMM)
	for _, l := range o.Leads {
		w = max(w, LaneLabel.Width(l.String(), o.FontMM)+pulseRoom)
	}
	for _, lane := range o.Lanes {
		if name, ok := strings.CutPrefix(lane, "lead:"); ok {
			w = max(w, LaneLabel.Width(name, o.FontMM)+pulseRoom)
		}
	}
	for i := range in.Signals {
		w = max(w, LaneLabel.Width(in.Signals[i].Label, o.FontMM))
	}
	if in.Diagram != nil {
		for i := range in.Diagram.Tiers {
			if !o.has("ladder") {
				break
			}
			w = max(w, TierLabel.Width(in.Diagram.Tiers[i].Label, o.FontMM))
		}
		if d := in.Diagram.Device; d != nil && !o.NoDevice && o.has("device") {
			for i := range d.Rows {
				w = max(w, TierLabel.Width(d.Rows[i].Label, o.FontMM))
			}
		}
	}
	return w + 2*pad
}

// pad is the sheet's inner edge, mm.
const pad = 1.5

// sheet is a strip in the making.
type sheet struct {
	*Scene
	in    *Input
	o     Options
	room  *room
	y     float64 // everything above is laid out
	right float64 // end of the window, mm
	halo  []Mark  // of the selected event
	over  []Mark  // the ladder's own marks, painted over halos
}

// Strip lays out its lanes one below the other on one axis.
func Strip(in Input, o Options) *Scene { return begin(&in, o).finish(nil) }

func begin(in *Input, o Options) *sheet {
	o.fill(in)
	s := &sheet{Scene: &Scene{Marks: make([]Mark, 0, 2048), FontMM: o.FontMM, Axis: Axis{T0: o.From, X0: o.Margin, MMPerS: o.MMPerS}}, in: in, o: o, y: pad}
	s.right = s.Axis.X(o.To)
	s.Width = max(s.right+pad, 24*o.FontMM)
	s.room = newRoom(s.Width)
	return s
}

// finish lays out the lanes. rows are those of a page of twelve leads, which stand
// above all others.
func (s *sheet) finish(rows []row) *Scene {
	s.heading()
	rows, rest := s.lanes(rows)
	s.closer(rows)
	for len(rest) > 0 || len(rows) > 0 {
		if n := alike(rows, rest); n > 0 {
			s.signals(rows[:n])
			rows, rest = rows[n:], rest[n:]
			continue
		}
		switch rest[0] {
		case "axis":
			if !s.o.noAxis {
				s.axis()
			}
		case "ladder":
			s.ladder()
		case "device":
			s.device()
		}
		rest = rest[1:]
	}
	if s.o.Legend && s.signs() {
		s.legend()
	}
	if s.o.Caution {
		s.foot()
	}
	s.Height = s.y + pad
	return s.Scene
}

func (s *sheet) heading() {
	if s.o.Title != "" {
		s.paragraph(Title, s.o.Title)
	}
	if s.o.Statement != "" {
		s.paragraph(Statement, s.o.Statement)
	}
	if s.y > pad {
		s.y += s.o.FontMM * 0.6
	}
}

func (s *sheet) foot() {
	s.y += s.o.FontMM * 0.4
	s.paragraph(Note, strings.TrimSpace(s.scales()+" "+s.o.Imprint))
	s.paragraph(Caution, CautionText)
}

// paragraph sets a text over the width of the sheet and moves on.
func (s *sheet) paragraph(c Class, text string) {
	h := c.height(s.o.FontMM)
	for _, line := range wrap(c, text, s.o.FontMM, s.Width-2*pad) {
		s.place(Mark{Shape: Text, Class: c, X: pad, Y: s.y + ascent*h, Text: line})
		s.y += leading * h
	}
}

// place puts a text down if its box is free, and tells whether it did.
func (s *sheet) place(m Mark) bool {
	b := s.TextBox(&m)
	if !s.room.free(b) {
		return false
	}
	s.room.box(b)
	s.Marks = append(s.Marks, m)
	return true
}

func (s *sheet) mark(m Mark) { s.Marks = append(s.Marks, m) }

func (s *sheet) lane(name, label string, y0, y1 float64) {
	s.Lanes = append(s.Lanes, Lane{Name: name, Label: label, Y0: y0, Y1: y1})
}

// trim writes a number with at most two decimals.
func trim(v float64) string {
	t := strings.TrimRight(twoDecimals(v), "0")
	return strings.TrimSuffix(t, ".")
}

// Package scene is one drawing in millimetres: marks that a painter puts down
// in order. Layout is done once, here; the page's canvas, SVG, PDF and PNG paint
// the same marks at the same places.
//
// The origin is the top left corner, x to the right, y down. A mark has a
// [Class], which names its look ([Style]); it may belong to an event, which makes
// it selectable. Everything is already clipped to the sheet and in the order in
// which it is to be painted.
//
// # Wire form
//
// [Encode] gives a painter on the other side of a message two things. meta is
// JSON:
//
//	{"width":262,"height":118.5,"font_mm":3,
//	 "axis":{"t0_us":0,"x0":12,"mm_per_s":25},
//	 "lanes":[{"name":"lead:II","label":"II","y0":10,"y1":35},...],
//	 "marks":1234,"classes":["grid-minor",...],"texts":["II",...]}
//
// All lengths are millimetres. Lanes are named "lead:II" (several leads side by side:
// "lead:I,aVR,V1,V4"), "egm:HISd" for an electrogram, "membrane:his" for an action
// potential, "axis", "ladder" and, where there is a device, "device". An instant t_us
// stands at x0 + (t_us - t0_us)/1e6*mm_per_s. numbers is one array: first eleven for
// each mark,
//
//	shape, class (place in classes), x, y, x2, y2, r, text (place in texts from 1; 0 none), anchor, event, points
//
//	shape 1 line    from x,y to x2,y2
//	      2 poly    open polyline through its points
//	      3 rect    x,y to x2,y2, filled
//	      4 disc    filled circle, radius r at x,y
//	      5 ring    open circle, radius r at x,y
//	      6 text    at x,y: x by anchor, y is the baseline
//	anchor 0 start, 1 middle, 2 end
//	event  id of the event the mark belongs to, 0 for none; negative: of the strip before,
//	       in a scene of two ([Stack]), whose lanes are named "before:lead:II"
//
// and then x, y of the points of all polylines, in the order of the marks.
// [Describe] is the same for people to read.
//
// [StylesJSON] tells how to paint a class: lines, polylines and rings with
// stroke, width (mm) and dash (mm); discs and rects with fill; texts with fill,
// weight and an em size of size*font_mm, in a sans with tabular figures. Where a
// colour is missing nothing is painted; such marks are there for hit testing.
package scene

import (
	"escapement/engine/event"
	"escapement/engine/tick"
)

// Shape says how the coordinates of a mark are read. The zero value is invalid.
type Shape uint8

const (
	_    Shape = iota
	Line       // from X,Y to X2,Y2
	Poly       // through Points, open
	Rect       // X,Y to X2,Y2, filled
	Disc       // filled circle of radius R at X,Y
	Ring       // open circle of radius R at X,Y
	Text       // Text at X,Y (baseline), see Anchor
)

// Anchor is where X stands in a text.
type Anchor uint8

const (
	Start Anchor = iota
	Middle
	End
)

// Point is a place in millimetres.
type Point struct{ X, Y float32 }

// Mark is one thing to paint.
type Mark struct {
	Shape  Shape
	Class  Class
	X, Y   float64
	X2, Y2 float64
	R      float64
	Points []Point
	Text   string
	Anchor Anchor
	Event  event.ID // 0 for marks that belong to no event
}

// Lane is a horizontal band of the scene, top to bottom: a lead, the ladder, the
// time axis.
type Lane struct {
	Name   string // stable: "lead:II", "axis", "ladder", "device"
	Label  string
	Y0, Y1 float64
}

// Axis is the only map between time and millimetres.
type Axis struct {
	T0     tick.Time // the instant at X0
	X0     float64   // mm
	MMPerS float64
}

// X is the place of an instant.
func (a Axis) X(t tick.Time) float64 { return a.X0 + float64(float64(t-a.T0)/1e6*a.MMPerS) }

// Scene is a finished drawing.
type Scene struct {
	Width, Height float64
	FontMM        float64 // em size of text of size 1; see [Style]
	Axis          Axis
	Lanes         []Lane
	Tiers         []Lane // of the ladder, by the names of [ladder.Tier]; not on the wire
	Marks         []Mark
}

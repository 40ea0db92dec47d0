// Package scene is one drawing in millimetres: marks that a painter puts down
// in order. Layout is done once, here; the page's canvas, SVG, PDF and PNG paint
// the same marks at the same places.
//
// The origin is the top left corner, x to the right, y down. A mark has a
// [Class], which names its look ([Style]); it may belong to an event, which makes
// it selectable.
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
	Name   string // stable: "lead:II", "ladder", "axis"
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
func (a Axis) X(t tick.Time) float64 { return a.X0 + float64(t-a.T0)/1e6*a.MMPerS }

// Scene is a finished drawing.
type Scene struct {
	Width, Height float64
	Axis          Axis
	Lanes         []Lane
	Marks         []Mark
}

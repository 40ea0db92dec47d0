package main

import "gonum.org/v1/gonum/spatial/r3"

// Parameters is everything that shapes the model. World axes: x to the left,
// y to the back, z up, millimetres, origin at the centre of the torso. Times are
// milliseconds, speeds millimetres per millisecond (= m/s), angles degrees.
//
// The ventricles are star-shaped about the long axis of the left ventricle:
// theta turns around it (0 the middle of the septum, positive towards the front,
// 180 lateral, -90 inferior) and height runs from 0 near the apex to 1 at the base.
type Parameters struct {
	Ventricles Ventricles
	Speeds     Speeds
	Recovery   Recovery
	Terminals  []Terminal
	Regions    []Region
	Electrodes Heights
	Conductor  Conductor
	Atria      Atria
}

// Ventricles is the shape of the two ventricles.
type Ventricles struct {
	Columns, Rings      int     // mesh around and along the long axis
	FirstRing, LastRing float64 // polar angle of the ring next to the apex and of the base

	Centre                   r3.Vec
	Azimuth, Elevation, Roll float64 // direction of the long axis, base to apex, and the turn about it

	InnerRadius, InnerLength float64 // half axes of the left cavity
	OuterRadius, OuterLength float64 // half axes of the outer surface

	RightFrom, RightTo float64 // theta between which the right ventricle is attached
	RightGap           float64 // largest distance of its free wall from the septum
	RightSkew          float64 // how much further the gap is in front than behind
	RightWall          float64 // thickness of its free wall
	RightRow           int     // ring at which it begins
}

// Speeds of conduction.
type Speeds struct {
	Along, Across, Through float64 // along the fibre, across it in the layer, through the wall
	Inner, InnerAround     float64 // Purkinje-coupled left endocardium; factor on its speed around the axis
	InnerRight             float64 // right endocardium and right side of the septum
	InnerBase              float64 // either, above BaseFrom
	BaseFrom               float64 // height above which the Purkinje network is sparse
	FibreInner, FibreOuter float64 // helix angle at the inner and outer surface
}

// Recovery is the action potential and how its duration varies over the
// ventricles, plus the shape of the transmembrane potential.
type Recovery struct {
	Duration    float64 // at the left endocardium at mid height, in milliseconds
	Outer       float64 // change from inner to outer surface
	Base        float64 // change from apex to base
	Right       float64 // change in the free wall of the right ventricle
	PerMS       float64 // change per millisecond of later activation in the normal beat
	Rise        float64 // logistic rate of the upstroke, 1/ms
	Fall, Fall2 float64 // the two logistic rates of repolarisation, 1/ms
}

// Terminal is a place where the Purkinje network enters muscle.
type Terminal struct {
	Name          string
	Fascicle      string // the site of the conduction system it belongs to
	Layer         Layer
	Theta, Height float64
	At            float64 // ms after depolarisation of the His bundle in the normal beat
}

// Region is a ventricular site of the network, at one node of the muscle.
type Region struct {
	Name  string
	Layer Layer
	Theta float64
	Ring  int // -1: the apex node of the layer
	Why   string
}

// Heights of the chest electrodes, which vary between people and recorders.
type Heights struct {
	V1V2, V4V5V6 float64 // mm; V3 is half way
}

// Conductor is the torso as a volume conductor.
type Conductor struct {
	Half           r3.Vec  // half axes of the superellipsoid
	Flat, Tall     float64 // its exponents across and along the body
	Lower          float64 // how far its centre lies below the origin
	BloodRatio     float64 // conductivity of blood over that of the torso
	BloodInset     float64 // distance of the blood surface from muscle, mm
	Amplitude      float64 // conductivity of muscle over that of the torso, fitted to usual voltages
	PotentialSwing float64 // rest to plateau, mV
	Subdivision    int     // of the icosahedron that meshes the torso
}

// Atria is the shape and conduction of the two atria, thin ellipsoid shells.
type Atria struct {
	RightFrom, LeftFrom r3.Vec // centre from the ventricles' centre: -x along the axis, y towards the septum, z to the front
	RightHalf, LeftHalf r3.Vec // half axes
	Wall                float64
	Speed               float64 // of the walls
	SpeedBachmann       float64
	SpeedCrista         float64 // crista terminalis
	SpeedInternodal     float64 // band of the septum between the sinus exit and the inputs of the AV node
	Valve               float64 // cosine of the half angle cut out for the valve
	Amplitude           float64 // factor on Conductor.Amplitude
	Duration            float64 // of the action potential
	Fall, Fall2         float64
	Exit                r3.Vec  // direction of the sinus exit from the right atrium's centre
	Septum              r3.Vec  // direction of the inputs of the AV node
	Lateral             r3.Vec  // direction of the lateral left atrium from its centre
	Fossa, Sinus        float64 // extra delay of the two lower links between the atria
	SinusInput          float64 // delay from the septal site to the mouth of the coronary sinus
}

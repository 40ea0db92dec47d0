package heart

import "escapement/engine/tick"

// Published slopes of refractoriness against the preceding cycle, ms per ms:
// Denes et al., Circulation 1974;49:32-41 (24 patients).
const (
	SlopeAtrium = 0.155
	SlopeNode   = -0.177
	SlopeBundle = 0.270
)

// SlopeVentricle is the change of ventricular action potential duration with the
// cycle, +23 ms per 100 ms (Franz et al., JCI 1988;82:972, n=17), taken for the
// refractory period as well.
const SlopeVentricle = 0.23

// DriveMS is the drive cycle at which refractory periods are measured and typed.
const DriveMS = 600

// Numbers are what a clinician measures, from which [New] makes a heart. Lengths
// are milliseconds. There is one field for each number of the plan file.
type Numbers struct {
	Sinus      SinusNumbers
	AtriumERP  Cycled
	Fast, Slow NodeNumbers
	AHCycleMS  float64 // the 1:1 cycle at which AH was measured
	ERPCycleMS float64 // the drive at which the node's ERP was measured
	Lower      Lower
	HVMS       float64 // His to the first ventricular activation
	Right      BundleNumbers
	Left       BundleNumbers
	Anterior   BundleNumbers
	Posterior  BundleNumbers
	Septal     BundleNumbers
	VentricERP Cycled
	Foci       []FocusNumbers
	Pathways   []PathwayNumbers
	Rhythm     AtrialRhythm
	QuantumUS  tick.Dur   // 0 is 1 microsecond
	Solved     *Solutions // of nodes met before; nil: none
}

// SinusNumbers describe the sinus node and its exit path.
type SinusNumbers struct {
	Rate          Rate
	JitterMS      float64
	FirstMS       float64 // the first discharge, from the start of the strip
	OverdriveGain float64
	OverdriveTauS float64
	Exit          Direct
}

// NodeNumbers describe one pathway of the AV node, either by clinical numbers or
// by its curve.
type NodeNumbers struct {
	Absent  bool // neither direction exists
	ByCurve bool
	Direct  // the curve, when ByCurve

	NoDown    bool    // complete antegrade block
	AHMS      float64 // atrial septum to His at Numbers.AHCycleMS
	ERPMS     float64 // longest coupling of an atrial extrastimulus, at a drive of Numbers.ERPCycleMS, that does not reach the His bundle
	WCLMS     float64 // Wenckebach cycle length: 1:1 conduction ends below it
	FRPMS     float64 // shortest interval between two impulses reaching the His bundle at that drive; 0 if not measured
	NoUp      bool    // no retrograde conduction
	VAMS      float64 // first ventricular activation to right atrium, pacing the right ventricular apex at DriveMS
	VADefault bool    // VAMS was not typed: it may give way to a long HV
	VAWCL     float64 // retrograde Wenckebach cycle length; 0 if not measured

	Inner   float64 // share of theta from which a blocked impulse is concealed; 1 for none
	UpReach float64 // where nothing is conducted upwards, depth 0 to 1 to which impulses come

	DownReach float64 // likewise downwards
	Drop      Drop
}

// Direct is a curve given outright, and the same for the other direction.
type Direct struct {
	MinMS, AlphaMS, TauMS, ThetaMS float64
	ThetaPerCycle                  float64
	Inner                          float64
	Up                             *Direct // nil: the same values upwards
	NoUp                           bool
	Drop                           Drop
}

// Lower is the path from the AV junction to the His bundle.
type Lower struct{ Direct }

// BundleNumbers describe a bundle or fascicle.
type BundleNumbers struct {
	Closed        bool    // conducts in neither direction
	ERPMS         float64 // longest His-His coupling that does not pass, at a drive of DriveMS; 0: as long as the tissue itself
	ThetaPerCycle float64
	DelayMS       float64 // added conduction time
	Drop          Drop
}

// FocusNumbers describe a focus other than the sinus node.
type FocusNumbers struct {
	Site          string
	Rate          Rate
	JitterMS      float64
	FirstMS       float64 // first discharge if nothing resets it; 0: after one full cycle
	Protected     bool
	OverdriveGain float64
	OverdriveTauS float64
}

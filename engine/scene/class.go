package scene

// Class names the look of a mark. The zero Class is invalid.
//
// One class serves every shape of its kind: a line of class Atrium is an impulse
// in the atria, a disc of it an atrial focus that discharged.
type Class uint8

const (
	_           Class = iota
	GridMinor         // fine paper grid
	GridMajor         // coarse paper grid
	Second            // a whole second, drawn through the ladder
	Trace             // a lead
	Wave              // the area of a P or QRS-T: not painted, for hit testing
	LevelLine         // a potential through the lane of a signal
	Calibration       // the pulse that shows 1 mV
	AxisLine          // the time axis and its ticks
	AxisText          // seconds
	LaneLabel         // the name of a lead or of the ladder
	TierEdge          // the line between two tiers
	TierLabel         // the name of a tier
	Sinus             // impulses and foci, by tissue
	Atrium
	Node
	NodeSlow // in the slow pathway
	His
	BundleLeft
	BundleRight
	Ventricle
	Accessory
	Block      // the bar across a stroke
	BlockLabel // where it was blocked
	Tail       // what a concealed impulse left refractory
	Stimulus   // ring; a disc of this class inside it marks capture
	Spike      // a stimulus on a lead
	Signal     // a signal that the device sensed
	Window     // a bar: the device hears but does not react
	WindowArea // the area of another bar: not painted, for hit testing
	WindowEdge // the outline of a bar, open where it ran out
	WindowEnd  // where an event ended it; a stimulus among the markers
	Hatch      // in a bar: the device is deaf
	Timer      // a timer of the device
	Held       // after it: the stimulus was held back
	WindowText // name or length of a window
	MarkerText // what the device marked: AS, VP
	Dim        // dimension line with its end ticks
	DimText    // the number on it
	Selected   // halo beneath the marks of the selected event
	Gone       // of two timelines: beneath what only the one before has, and its tick between them
	New        // beneath what only the one after has
	Moved      // between two timelines: from a beat to its partner that came earlier or later
	Kept       // to one that came at the same time
	GoneText   // the sign of what is gone
	NewText
	MovedText // by how many milliseconds
	Title
	Statement
	Caution
	Note    // scales, legend
	Heading // of a part of a page
	Body    // usual text of a page
	Strong  // numbers to be seen first
	Rule    // a line between parts of a page
	classEnd
)

var classNames = [classEnd]string{
	GridMinor: "grid-minor", GridMajor: "grid-major", Second: "second",
	Trace: "trace", Wave: "wave", LevelLine: "level", Calibration: "calibration",
	AxisLine: "axis", AxisText: "axis-text", LaneLabel: "lane-label",
	TierEdge: "tier-edge", TierLabel: "tier-label",
	Sinus: "sinus", Atrium: "atrium", Node: "node", NodeSlow: "node-slow", His: "his",
	BundleLeft: "bundle-left", BundleRight: "bundle-right", Ventricle: "ventricle", Accessory: "accessory",
	Block: "block", BlockLabel: "block-label", Tail: "tail", Stimulus: "stimulus",
	Spike: "spike", Signal: "signal", Window: "window", WindowArea: "window-area", WindowEdge: "window-edge", WindowEnd: "window-end",
	Hatch: "hatch", Timer: "timer", Held: "held", WindowText: "window-text", MarkerText: "marker-text",
	Dim: "dim", DimText: "dim-text", Selected: "selected",
	Gone: "gone", New: "new", Moved: "moved", Kept: "kept", GoneText: "gone-text", NewText: "new-text", MovedText: "moved-text",
	Title: "title", Statement: "statement", Caution: "caution", Note: "note",
	Heading: "heading", Body: "body", Strong: "strong", Rule: "rule",
}

// String is the stable name, as in the wire form and the styles.
func (c Class) String() string {
	if c == 0 || c >= classEnd {
		return "invalid"
	}
	return classNames[c]
}

// Classes lists all classes, for tests and legends.
func Classes() []Class {
	var all []Class
	for c := GridMinor; c < classEnd; c++ {
		all = append(all, c)
	}
	return all
}

package field

import (
	_ "embed"
	"sync"

	"escapement/engine/event"
	"escapement/engine/field/tissue"
	"escapement/engine/tick"
)

//go:embed electrodes.bin
var electrodesFile []byte

// bipoles decodes the embedded electrodes once.
var bipoles = sync.OnceValue(func() []tissue.Bipole {
	b, err := tissue.DecodeBipoles(electrodesFile, parts())
	if err != nil {
		panic("field: the embedded electrodes do not decode; run go generate ./engine/field: " + err.Error())
	}
	return b
})

// Electrode is a pair of electrodes within the heart.
type Electrode struct {
	Name  string // stable, and short enough for a lane's margin: "HISd"
	Label string
	Site  string // the network's site that it lies on, for a device's lead; may be empty
}

var electrodes = []Electrode{
	{"HRA", "high right atrium", "right_atrium"},
	{"HISp", "His bundle, proximal", "atrial_septum"},
	{"HISd", "His bundle, distal", "his"},
	{"CS9-10", "coronary sinus 9-10, at its mouth", ""},
	{"CS7-8", "coronary sinus 7-8", ""},
	{"CS5-6", "coronary sinus 5-6", ""},
	{"CS3-4", "coronary sinus 3-4", ""},
	{"CS1-2", "coronary sinus 1-2, at the side of the left atrium", "left_atrium"},
	{"RVA", "right ventricular apex", "rv_apex"},
	{"RVS", "right ventricular septum", "rv_septum"},
	{"RVOT", "right ventricular outflow tract", "rv_outflow"},
	{"LV", "left ventricular lateral vein", "lv_lateral"},
}

// Shapes are the action potentials of the ventricles and the atria.
func Shapes() (ventricles, atria tissue.Shape) { return parts()[0].Shape, parts()[1].Shape }

// Electrodes lists the pairs in the usual order of a recording.
func Electrodes() []Electrode { return append([]Electrode(nil), electrodes...) }

// Electrogram is the signal between a pair of electrodes over the strip, in
// millivolts at the leads' sampling times, or nil if there is no such pair. It
//  1. takes the same waves over the muscle as the leads, at the electrodes instead,
//  2. adds the front in the His bundle and the two bundles, which moves from one
//     site of the network to the next between their events (a blocked one to where it stopped), and
//  3. passes the sum through the usual 30 Hz high pass.
//
// What is not in it: the AV node and the fascicles, whose signals are too small or too
// far away; muscle of the veins; noise; stimuli, which are drawn as signs.
func (f *Field) Electrogram(log *event.Log, name string) []float32 {
	k, ok := bipoleIndex(name)
	if !ok {
		return nil
	}
	b := &bipoles()[k]
	out := make([]float32, int(log.Span/tickStep))
	for p, c := range []*chamber{f.ventricles, f.atria} {
		groups := c.groups(log)
		first, cycles := c.beats(groups)
		for i, g := range groups {
			layOne(out, c.electrogram(c.complex(g, cycles[i]), k, &b.Rows[p]), first[i])
		}
	}
	conduction(out, log, b)
	highPass(out)
	return out
}

func bipoleIndex(name string) (int, bool) {
	for k := range bipoles() {
		if bipoles()[k].Name == name {
			return k, true
		}
	}
	return 0, false
}

// electrogram is a wave's part of a pair's signal, computed or remembered.
func (c *chamber) electrogram(w *remembered, k int, row *tissue.Row) []float32 {
	if s, ok := w.local[k]; ok {
		return s
	}
	if c.local == nil {
		c.local = tissue.NewLocal(c.muscle.Part)
	}
	at := c.muscle.Activation(w.seeds)
	c.until = c.muscle.Part.Until(c.until, at, w.stretch)
	if w.local == nil {
		w.local = map[int][]float32{}
	}
	s := c.local.Signal(c.muscle.Part, row, at, c.until)
	w.local[k] = s
	return s
}

// highPass is a single pole at 30 Hz, forwards in time like a recorder's: it takes
// away repolarisation and what comes from afar, and delays nothing. Recorders in
// laboratories usually pass 30 to 500 Hz (common practice); 500 Hz is half of the
// sampling rate here.
func highPass(x []float32) {
	const keep = 1 / (1 + 2*3.141592653589793*0.030) // of a millisecond at 30 Hz
	y, last := 0.0, 0.0
	for i, v := range x {
		now := float64(v)
		y = float64(keep * (y + now - last))
		last = now
		x[i] = float32(y)
	}
}

// hisTime is how long the front takes through the His bundle where HV leaves room
// for it: H lasts 17 +/- 4 ms (Alboni et al., Eur Heart J 1985;6:602, n=20).
const hisTime = 13 * tick.Millisecond

// sideOf tells the strand of a bundle by its site, or 0.
func sideOf(site string) int {
	switch site {
	case "right_bundle":
		return 1
	case "left_bundle":
		return 2
	}
	return 0
}

// Package lead is the surface ECG as sampled numbers: twelve leads on one time
// axis and the waves found in them. The field makes a [Record]; measuring,
// drawing and export read it. It knows neither how the leads were computed nor
// what a heart is.
//
// Amplitudes are millivolts. Leads follow the usual definitions: II = I + III,
// aVR = -(I+II)/2, aVL = I - II/2, aVF = II - I/2 (Einthoven and Goldberger;
// common practice).
package lead

import (
	"escapement/engine/event"
	"escapement/engine/tick"
)

// Name is one of the twelve leads, in the usual order.
type Name uint8

const (
	I Name = iota
	II
	III
	AVR
	AVL
	AVF
	V1
	V2
	V3
	V4
	V5
	V6
	Count = 12
)

var names = [Count]string{"I", "II", "III", "aVR", "aVL", "aVF", "V1", "V2", "V3", "V4", "V5", "V6"}

func (n Name) String() string { return names[n] }

// Parse finds a lead by its usual name, case as written there.
func Parse(s string) (Name, bool) {
	for i, n := range names {
		if n == s {
			return Name(i), true
		}
	}
	return 0, false
}

// Step is the sampling interval of every record: 1000 samples a second.
const Step = tick.Millisecond

// Record is twelve leads over the whole strip, sample k at k*Step from its start.
type Record struct {
	MV    [Count][]float32
	Waves []Wave // in order of onset
}

// WaveKind tells atrial from ventricular waves. The zero value is invalid.
type WaveKind uint8

const (
	_ WaveKind = iota
	P
	QRS // with its ST segment and T wave
)

// Wave is one P or one QRS-T on the strip.
type Wave struct {
	Kind    WaveKind
	Sources []event.ID // the activations that started it, in order of time
	T       tick.Time  // time of the first source
	Onset   tick.Time  // first and last time at which the depolarisation alone
	Offset  tick.Time  // passes the threshold in any lead (0.04 mV for QRS)
	End     tick.Time  // QRS: end of the T wave; P: same as Offset
	Complex *Complex   // the wave by itself; shared between equal waves, not to be changed
}

// Complex is one wave alone on a flat line, without its neighbours: what a
// classifier judges. Indices count samples of Step from its start.
type Complex struct {
	MV           [Count][]float32
	Depol        [Count][]float32 // the part that depolarisation alone makes
	On, Off, End int
}

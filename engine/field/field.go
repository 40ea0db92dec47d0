// Package field turns a timeline into the surface ECG: when every bit of muscle
// is depolarised, and what that makes of the twelve leads.
//
// A [event.Log] says when the fascicles fired and where else an impulse entered
// muscle (a captured stimulus, a focus, an accessory pathway). From there the
// field spreads it over a net of about 950 ventricular and 300 atrial nodes,
// gives each node an action potential, and sums the surface's contributions at
// the electrodes. Nothing is drawn from templates: bundle branch block, pacing
// and pre-excitation differ only in which sources there are and when.
//
// The model is computed beforehand by the command in generate and embedded; it
// is one healthy adult heart, found by fitting to published ECG criteria, in a
// torso of three conductivities. It does not know: lungs, uneven anisotropy,
// block or slowing inside muscle, ischaemia, or another person's shape. Muscle
// is taken as excitable wherever a wave comes, so a wave started inside the last
// one's refractory tail is drawn as if it spread freely.
//
// Times are milliseconds and microseconds, amplitudes millivolts. Results are
// the same bits natively and in WebAssembly.
package field

import (
	_ "embed"
	"sync"

	"escapement/engine/event"
	"escapement/engine/field/tissue"
	"escapement/engine/lead"
)

//go:generate go run ./generate -root ../..

//go:embed muscle.bin
var muscleFile []byte

// parts decodes the embedded model once.
var parts = sync.OnceValue(func() []*tissue.Part {
	p, err := tissue.Decode(muscleFile)
	if err != nil || len(p) != 2 {
		panic("field: the embedded model does not decode; run go generate ./engine/field")
	}
	return p
})

// Field computes records. It remembers waves it has computed, so that strips
// that differ little are quick; what it remembers never changes a result. Use
// one per goroutine.
type Field struct {
	ventricles, atria *chamber
}

// New makes a field of the embedded model.
func New() *Field {
	p := parts()
	return of(p[0], p[1])
}

func of(ventricles, atria *tissue.Part) *Field {
	return &Field{newChamber(ventricles, lead.QRS, tissue.VentricularLimits), newChamber(atria, lead.P, tissue.AtrialLimits)}
}

// Record is the strip's twelve leads and the waves in them.
func Record(log *event.Log) *lead.Record { return New().Record(log) }

// Record is the strip's twelve leads and the waves in them. It
//  1. finds the sources in the log and groups them into waves,
//  2. computes, or remembers, each wave by itself, with its action potentials
//     adapted to the cycles before it,
//  3. adds the waves up on the 1 kHz grid and derives the other four leads, and
//  4. lists the waves in order of onset.
//
// A wave that reaches beyond the strip is cut off; its marks may lie past the end.
func (f *Field) Record(log *event.Log) *lead.Record {
	r := &lead.Record{}
	n := int(log.Span / tickStep)
	for _, l := range tissue.Independent {
		r.MV[l] = make([]float32, n)
	}
	for _, c := range []*chamber{f.atria, f.ventricles} {
		for _, w := range c.waves(log) {
			lay(r, &w)
			r.Waves = append(r.Waves, w)
		}
	}
	tissue.LimbLeads(&r.MV)
	sortWaves(r.Waves)
	return r
}

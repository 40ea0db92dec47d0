package field

import (
	"cmp"
	"encoding/binary"
	"slices"

	"escapement/engine/event"
	"escapement/engine/field/tissue"
	"escapement/engine/lead"
	"escapement/engine/tick"
)

const (
	tickStep     = tick.Time(lead.Step)
	sourceStep   = 100 * tick.Microsecond // relative source times are rounded to this
	rememberMost = 96                     // waves kept for each chamber, about 60 kB each
)

// chamber is the ventricles or the atria, with the waves computed so far.
type chamber struct {
	muscle *tissue.Muscle
	kind   lead.WaveKind
	group  tick.Dur
	known  map[string]*remembered // by rounded source times and cycle
	order  []string               // of known, oldest first
	key    []byte
	seeds  []tissue.Seed
	local  *tissue.Local // nil until an electrogram is asked for
	until  []int32
}

// remembered is a wave and what else was asked of it.
type remembered struct {
	wave    *lead.Complex
	seeds   []tissue.Seed
	stretch int32
	local   map[int][]float32 // its part of electrograms, by bipole
}

func newChamber(p *tissue.Part, kind lead.WaveKind, limits tissue.Thresholds) *chamber {
	c := &chamber{muscle: tissue.NewMuscle(p, limits), kind: kind, group: ventricularGroup, known: map[string]*remembered{}}
	if kind == lead.P {
		c.group = atrialGroup
	}
	return c
}

// waves are the chamber's waves on the strip.
func (c *chamber) waves(log *event.Log) []lead.Wave {
	groups := c.groups(log)
	first, cycles := c.beats(groups)
	out := make([]lead.Wave, len(groups))
	for i, g := range groups {
		w := &out[i]
		w.Kind, w.T, w.Complex = c.kind, first[i], c.complex(g, cycles[i]).wave
		for _, s := range g {
			w.Sources = append(w.Sources, s.id)
		}
		w.Onset, w.Offset, w.End = mark(w, w.Complex.On), mark(w, w.Complex.Off), mark(w, w.Complex.End)
	}
	return out
}

// beats gives each group's first source and effective cycle.
func (c *chamber) beats(groups []group) (first []tick.Time, cycles []tick.Dur) {
	first = make([]tick.Time, len(groups))
	for i, g := range groups {
		first[i] = g[0].at
	}
	if c.kind == lead.QRS {
		return first, effectiveCycles(first)
	}
	return first, make([]tick.Dur, len(groups)) // atrial repolarisation is left as it is
}

// complex is the wave of a group of sources at an effective cycle. Everything
// is computed from the rounded numbers that are also the key, so a remembered
// wave is the wave that would be computed.
func (c *chamber) complex(g group, cycle tick.Dur) *remembered {
	c.key = binary.LittleEndian.AppendUint32(c.key[:0], uint32(cycle/effectiveStep))
	c.seeds = c.seeds[:0]
	for _, s := range g {
		late := roundTo(s.at.Sub(g[0].at), sourceStep)
		c.key = append(c.key, byte(s.entry))
		c.key = binary.LittleEndian.AppendUint32(c.key, uint32(late/sourceStep))
		for _, port := range c.muscle.Part.Entries[s.entry].Ports {
			c.seeds = append(c.seeds, tissue.Seed{Node: port.Node, At: int32(late) + port.At})
		}
	}
	if w, ok := c.known[string(c.key)]; ok {
		return w
	}
	longer := tick.Dur(0)
	if c.kind == lead.QRS {
		longer = stretch(cycle)
	}
	w := &remembered{wave: c.muscle.Wave(c.seeds, int32(longer)), seeds: slices.Clone(c.seeds), stretch: int32(longer)}
	if len(c.order) == rememberMost {
		delete(c.known, c.order[0])
		c.order = append(c.order[:0], c.order[1:]...)
	}
	key := string(c.key)
	c.known[key], c.order = w, append(c.order, key)
	return w
}

// lay adds a wave to the strip's eight independent leads. It starts between two
// samples as a rule; the strip's samples are then read off the wave by linear
// interpolation.
func lay(r *lead.Record, w *lead.Wave) {
	for _, l := range tissue.Independent {
		layOne(r.MV[l], w.Complex.MV[l], w.T)
	}
}

// layOne adds a signal whose sample LeadIn belongs to the time t.
func layOne(out, in []float32, t tick.Time) {
	start := t - tissue.LeadIn*tickStep
	first := int(floor(start))
	late := float32(start-tick.Time(first)*tickStep) / float32(tickStep)
	from, to := max(-first, 0), min(len(in), len(out)-first)
	if from >= to {
		return
	}
	out = out[first+from : first+to]
	last := float32(0)
	if from > 0 {
		last = in[from-1]
	}
	for k, now := range in[from:to] {
		out[k] += now + float32(late*(last-now))
		last = now
	}
}

// floor is the number of the sample at or before a time, which may be negative.
func floor(t tick.Time) tick.Time {
	q := t / tickStep
	if t%tickStep < 0 {
		q--
	}
	return q
}

// sortWaves orders by onset; of two at once the atrial comes first.
func sortWaves(w []lead.Wave) {
	slices.SortStableFunc(w, func(a, b lead.Wave) int {
		return cmp.Or(cmp.Compare(a.Onset, b.Onset), cmp.Compare(a.Kind, b.Kind))
	})
}

// mark is the time on the strip of a sample of the wave.
func mark(w *lead.Wave, sample int) tick.Time {
	return w.T + tick.Time(sample-tissue.LeadIn)*tickStep
}

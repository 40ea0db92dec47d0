package measure

import (
	"math"

	"escapement/engine/event"
	"escapement/engine/lead"
	"escapement/engine/tick"
)

// surface holds what the leads say about each wave: by index of the P or QRS.
// A nil record leaves all of it empty.
type surface struct {
	pWave, vWave []*lead.Wave
	shape        []int // by QRS: index into Report.Morphology, or -1
	shapes       []Morphology
}

// surface matches the waves of the record to those of the log, by the
// activations they share, and judges each distinct QRS once.
func (s *strip) surface(rec *lead.Record, r *Report) *surface {
	f := &surface{pWave: make([]*lead.Wave, len(s.p)), vWave: make([]*lead.Wave, len(s.v)), shape: make([]int, len(s.v))}
	for j := range f.shape {
		f.shape[j] = -1
	}
	if rec == nil {
		return f
	}
	seen := map[*lead.Complex]int{} // looked up only, never ranged over
	same := map[string]int{}        // waves that differ in their T wave only are one shape
	for i := range rec.Waves {
		w := &rec.Waves[i]
		g := s.waveOf(w)
		switch {
		case g < 0:
		case w.Kind == lead.P && g < len(s.p) && f.pWave[g] == nil:
			f.pWave[g] = w
		case w.Kind == lead.QRS && g < len(s.v) && f.vWave[g] == nil:
			f.vWave[g] = w
			if !usable(w.Complex) {
				continue
			}
			n, ok := seen[w.Complex]
			if !ok {
				m := Judge(w.Complex)
				if n, ok = same[m.key()]; !ok {
					n = len(f.shapes)
					same[m.key()] = n
					f.shapes = append(f.shapes, m)
				}
				seen[w.Complex] = n
			}
			f.shape[g] = n
		}
	}
	if f.shapes != nil {
		r.Morphology = f.shapes
	}
	return f
}

// waveOf finds the wave of the log that a wave of the record shows, or -1: the
// one that holds one of its sources, or that a source in a bundle or fascicle
// led to.
func (s *strip) waveOf(w *lead.Wave) int {
	chamber := byte('A')
	if w.Kind == lead.QRS {
		chamber = 'V'
	}
	for _, id := range w.Sources {
		e := s.log.At(id)
		if e == nil || e.Kind != event.Activate {
			continue
		}
		switch m := &s.mark[id]; {
		case m.wave >= 0 && s.log.Sites[e.Site].Chamber() == chamber:
			return int(m.wave)
		case m.led >= 0 && chamber == 'V':
			return int(m.led)
		}
	}
	return -1
}

func (f *surface) p(i int, b *Beat) {
	w := f.pWave[i]
	if w == nil {
		return
	}
	b.PDur = ms(w.Offset.Sub(w.Onset))
	b.Axis, b.AxisNet = axes(w.Complex)
}

func (f *surface) v(j int, rr tick.Dur, b *Beat) {
	w := f.vWave[j]
	if w == nil {
		return
	}
	b.QRS = ms(w.Offset.Sub(w.Onset))
	qt := w.End.Sub(w.Onset)
	b.QT = ms(qt)
	if rr > 0 {
		c := Correct(qt, rr)
		b.QTc = QTc{hundredth(c.Bazett), hundredth(c.Fridericia), hundredth(c.Framingham), hundredth(c.Hodges)}
	}
	b.Axis, b.AxisNet = axes(w.Complex)
	if n := f.shape[j]; n >= 0 {
		b.Shape = &n
	}
}

func hundredth(v float64) *float64 {
	v = math.Round(v*100) / 100
	return &v
}

// usable tells whether the complex has samples between its marks in every lead.
func usable(c *lead.Complex) bool {
	if c == nil || c.On < 0 || c.Off < c.On {
		return false
	}
	for l := range c.Depol {
		if c.Off >= len(c.Depol[l]) {
			return false
		}
	}
	return true
}

// axes is the frontal axis of the depolarisation in degrees, by area and by net
// amplitude, null for a wave without a frontal component. With lead I along 0
// and aVF along 90 degrees, and aVF an augmented lead, the components are I and
// 2/sqrt(3) aVF (Einthoven's triangle).
func axes(c *lead.Complex) (area, net *float64) {
	if !usable(c) {
		return nil, nil
	}
	return angle(c, c.On, c.Off, areaOf), angle(c, c.On, c.Off, netOf)
}

func angle(c *lead.Complex, from, to int, of func([]float32) float64) *float64 {
	x := of(c.Depol[lead.I][from : to+1])
	y := of(c.Depol[lead.AVF][from:to+1]) * 2 / math.Sqrt(3)
	if math.Hypot(x, y) < 1e-6 || math.IsNaN(x) || math.IsNaN(y) {
		return nil
	}
	a := math.Round(math.Atan2(y, x)*1800/math.Pi) / 10
	return &a
}

func areaOf(v []float32) float64 {
	sum := 0.0
	for _, x := range v {
		sum += float64(x)
	}
	return sum
}

func netOf(v []float32) float64 {
	lo, hi := 0.0, 0.0
	for _, x := range v {
		lo, hi = min(lo, float64(x)), max(hi, float64(x))
	}
	return lo + hi
}

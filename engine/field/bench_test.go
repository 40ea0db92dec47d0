package field

import (
	"testing"
	"time"

	"escapement/engine/field/tissue"
	"escapement/engine/tick"
)

// BenchmarkWave times the two halves of a wave that is not remembered, and gives
// the share that finding the arrival times takes.
func BenchmarkWave(b *testing.B) {
	for _, c := range []struct {
		name  string
		part  int
		seeds []tissue.Seed
	}{
		{"ventricles", 0, modelSet().Seeds("normal")},
		{"atria", 1, parts()[1].Entry("right_atrium").Ports},
	} {
		b.Run(c.name, func(b *testing.B) {
			m := tissue.NewMuscle(parts()[c.part], tissue.VentricularLimits)
			var arrive, all time.Duration
			for range b.N {
				t0 := time.Now()
				m.Activation(c.seeds)
				t1 := time.Now()
				m.Wave(c.seeds, 0)
				arrive, all = arrive+t1.Sub(t0), all+time.Since(t1)
			}
			b.ReportMetric(float64(arrive)/float64(all), "arrivals/wave")
			b.ReportMetric(float64(arrive.Microseconds())/float64(b.N), "arrivals-us")
			b.ReportMetric(float64(all.Microseconds())/float64(b.N), "wave-us")
		})
	}
}

// BenchmarkRecord times a minute of sinus rhythm: with every wave new, and with
// all but the first remembered; the ratio is what remembering saves.
func BenchmarkRecord(b *testing.B) {
	s := newStrip(60000000)
	for k := range 72 {
		s.sinus(300000 + 800000*tick.Time(k))
	}
	log := s.log(b)
	f := New()
	f.Record(log)
	var fresh, known time.Duration
	for range b.N {
		t0 := time.Now()
		f.Record(log)
		t1 := time.Now()
		Record(log)
		known, fresh = known+t1.Sub(t0), fresh+time.Since(t1)
	}
	b.ReportMetric(float64(known)/float64(fresh), "known/fresh")
	b.ReportMetric(float64(known.Microseconds())/float64(b.N), "known-us")
}

package sim

import (
	"testing"

	"escapement/engine/plan"
	"escapement/engine/tick"
	"escapement/presets"
)

// healthy is the heart of the preset "normal".
func healthy(b *testing.B, span tick.Dur) *plan.Program {
	b.Helper()
	text, ok := presets.Read("normal")
	if !ok {
		b.Fatal("no preset normal")
	}
	p, err := plan.Decode(text)
	if err != nil {
		b.Fatal(err)
	}
	prog, err := p.Compile()
	if err != nil {
		b.Fatal(err)
	}
	prog.Span = tick.Time(span)
	return prog
}

// BenchmarkDay runs 24 hours and keeps nothing. 24h/s is days simulated per second.
func BenchmarkDay(b *testing.B) {
	prog := healthy(b, 24*60*tick.Minute)
	events := 0
	b.ReportAllocs()
	for b.Loop() {
		m := New(prog)
		for done := false; !done; {
			done = m.Run(4096)
			events += len(m.Log().Events)
			m.Drain()
		}
	}
	seconds := b.Elapsed().Seconds()
	b.ReportMetric(float64(events)/seconds, "events/s")
	b.ReportMetric(float64(b.N)/seconds, "24h/s")
}

// BenchmarkTenSeconds runs the strip of ten seconds that a search would, with the
// plan compiled once.
func BenchmarkTenSeconds(b *testing.B) {
	prog := healthy(b, 10*tick.Second)
	b.ReportAllocs()
	var player Player
	for b.Loop() {
		if _, err := player.Play(prog); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(float64(b.N)/b.Elapsed().Seconds(), "runs/s")
}

// BenchmarkTenSecondsDDD runs ten seconds of a device, with the plan compiled once: P
// waves at 75/min tracked, with conduction back to the atria, and the endless loop that
// a premature beat starts in the same heart. runs/s is what a search of settings does.
func BenchmarkTenSecondsDDD(b *testing.B) {
	heart := sinusAt(500, 800) + "," + conductsBack(300, 380)
	b.Run("tracked", func(b *testing.B) { tenSeconds(b, program(b, 10000, heart, `"mode":"DDD","lower_rate_bpm":50`)) })
	b.Run("loop", func(b *testing.B) {
		tenSeconds(b, program(b, 10000, heart, `"mode":"DDD","lower_rate_bpm":50`, stimulus(3300, "rv_apex")))
	})
}

func tenSeconds(b *testing.B, prog *plan.Program) {
	events := 0
	var player Player
	b.ReportAllocs()
	for b.Loop() {
		l, err := player.Play(prog)
		if err != nil {
			b.Fatal(err)
		}
		events += len(l.Events)
	}
	seconds := b.Elapsed().Seconds()
	b.ReportMetric(float64(b.N)/seconds, "runs/s")
	b.ReportMetric(float64(events)/seconds, "events/s")
}

// BenchmarkReference is the fixed-step simulation on the same strip: what the
// queue saves.
func BenchmarkReference(b *testing.B) {
	prog := healthy(b, 10*tick.Second)
	prog.Heart.Quantum = step
	for b.Loop() {
		referenceLog(prog)
	}
	b.ReportMetric(float64(b.N)/b.Elapsed().Seconds(), "runs/s")
}

package sweep

import "testing"

// searched is what a search of settings runs: ten seconds of a DDD device with
// conduction back, in an endless loop in a part of the grid, by two of its numbers.
func searched(t testing.TB, outcomes string) *Grid {
	return grid(t, 10000, `"sinus":{"rate_bpm":54.5,"first_ms":440},"av_node":{"fast":{"ah_ms":null,"erp_ms":380,"va_ms":300,"concealed_from":1}}`,
		`{"mode":"DDD","lower_rate_bpm":50}`, `{"at_ms":3300,"do":"stimulate","site":"rv_apex"}`,
		`"x":{"field":"pacemaker.pvarp_ms","from":200,"to":400,"step":10},"y":{"field":"pacemaker.max_tracking_rate_bpm","from":100,"to":150,"step":5},"outcomes":[`+outcomes+`]`)
}

func bench(b *testing.B, g *Grid) {
	w := g.NewWorker()
	n := 0
	b.ReportAllocs()
	for b.Loop() {
		w.Point(n % g.Len())
		n++
	}
	b.ReportMetric(float64(n)/b.Elapsed().Seconds(), "runs/s")
}

// BenchmarkPoints reduces runs to the lean outcomes, on one core.
func BenchmarkPoints(b *testing.B) {
	bench(b, searched(b, `"pattern","v_rate_bpm","longest_pause_ms","endless_loop","va_synchrony","vulnerable_stimuli","ventricular_paced_percent"`))
}

// BenchmarkPointsWithFindings makes the whole report of each run besides.
func BenchmarkPointsWithFindings(b *testing.B) { bench(b, searched(b, `"pattern","findings"`)) }

// BenchmarkPlayedOnly is the run by itself, compiled once: what reduction costs.
func BenchmarkPlayedOnly(b *testing.B) {
	g := searched(b, `"pattern"`)
	w := g.NewWorker()
	prog, err := w.program(g.At(0), 1)
	if err != nil {
		b.Fatal(err)
	}
	b.ReportAllocs()
	for b.Loop() {
		if _, err := w.player.Play(prog); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(float64(b.N)/b.Elapsed().Seconds(), "runs/s")
}

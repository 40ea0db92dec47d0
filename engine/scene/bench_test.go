package scene_test

import (
	"testing"

	"escapement/engine/field"
	"escapement/engine/ladder"
	"escapement/engine/lead"
	"escapement/engine/scene"
	"escapement/engine/sim/simtest"
)

// BenchmarkTwelveLeads lays out and encodes 30 s of twelve leads with the ladder
// at the columns of a screen.
func BenchmarkTwelveLeads(b *testing.B) {
	l := simtest.Body(b, `"span_ms":30000`).Log
	in := scene.Input{Log: l, Record: field.Record(l)}
	var o scene.Options
	o.Grid, o.ColumnMM = true, 0.26
	for n := range lead.Name(lead.Count) {
		o.Leads = append(o.Leads, n)
	}
	b.Run("ladder", func(b *testing.B) {
		for b.Loop() {
			in.Diagram = ladder.Build(l, ladder.Options{Form: ladder.Full})
		}
	})
	var s *scene.Scene
	b.Run("strip", func(b *testing.B) {
		for b.Loop() {
			s = scene.Strip(in, o)
		}
	})
	b.Run("encode", func(b *testing.B) {
		for b.Loop() {
			meta, points := scene.Encode(s)
			b.ReportMetric(float64(len(meta)), "meta=bytes")
			b.ReportMetric(float64(len(points)/2), "points")
		}
	})
}

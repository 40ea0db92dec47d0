package handle

import (
	"testing"

	"escapement/engine/event"
	"escapement/presets"
)

// An event of an accessory pathway, of flutter and of fibrillation named no setting, or
// that of an ordinary focus at the same site.
func TestEventsOfPathwaysAndDriversNameTheirSettings(t *testing.T) {
	accessory := func(rule event.Rule, kind event.Kind, dir event.Dir) func(*event.Log, *event.Event) bool {
		return func(l *event.Log, e *event.Event) bool {
			return e.Kind == kind && e.Rule == rule && e.Dir == dir && e.Path >= 0 && l.Paths[e.Path].Tissue == event.Accessory
		}
	}
	driver := func(rule event.Rule) func(*event.Log, *event.Event) bool {
		return func(_ *event.Log, e *event.Event) bool { return e.Kind == event.Discharge && e.Rule == rule }
	}
	for _, c := range []struct {
		name   string
		preset string
		which  func(*event.Log, *event.Event) bool
		want   map[string]float64
	}{
		{"conducted down", "wpw-sinus", accessory(event.Conducted, event.Activate, event.Down), map[string]float64{"heart.pathways[0].down_ms": 30}},
		{"conducted up", "avrt-orthodromic", accessory(event.Conducted, event.Activate, event.Up), map[string]float64{"heart.pathways[0].up_ms": 40}},
		{"refractory", "wpw-fibrillation", accessory(event.PathRefractory, event.Block, event.Down), map[string]float64{"heart.pathways[0].down_erp_ms": 0}},
		{"one way", "avrt-orthodromic", accessory(event.OneWay, event.Block, event.Down), map[string]float64{"heart.pathways[0].concealed_down": 0}},
		{"flutter", "flutter-2-1", driver(event.Circuit), map[string]float64{"heart.atria.flutter.cycle_ms": 240}},
		{"fibrillation", "atrial-fibrillation", driver(event.Arrival), map[string]float64{"heart.atria.fibrillation.cycle_ms": 0, "heart.atria.fibrillation.shortest_ms": 110}},
	} {
		t.Run(c.name, func(t *testing.T) {
			file, _ := presets.Read(c.preset)
			p, log, m := run(t, string(file))
			for i := range log.Events {
				e := &log.Events[i]
				if !c.which(log, e) {
					continue
				}
				got := m.Settings(e.ID)
				if len(got) != len(c.want) {
					t.Fatalf("event %d: %+v, want %v", e.ID, got, c.want)
				}
				for _, s := range got {
					want, ok := c.want[s.Path]
					if want == 0 {
						want = m.set.or(s.Path)
					}
					if !ok || s.Value != want || s.Label == "" {
						t.Errorf("event %d: %+v, want %v", e.ID, s, c.want)
					}
				}
				return
			}
			t.Fatalf("no such event in %s (%v)", c.preset, p != nil)
		})
	}
}

// The numbers of a pathway were read as 0.
func TestThePathwaysOwnNumberIsRead(t *testing.T) {
	_, _, m := run(t, `{"format":"escapement-plan/1","span_ms":3000,"heart":{"pathways":[{"atrium":"left_atrium","ventricle":"lv_lateral","down_erp_ms":311}]}}`)
	for path, want := range map[string]float64{"heart.pathways[0].down_erp_ms": 311, "heart.pathways[0].up_erp_ms": 260} {
		if got := m.set.at(path, 0).value; got != want {
			t.Errorf("%s: %v, want %v", path, got, want)
		}
	}
}

// Beats of flutter move with its cycle.
func TestAFlutterWaveMovesWithItsCycle(t *testing.T) {
	file, _ := presets.Read("flutter-2-1")
	_, log, m := run(t, string(file))
	n := 0
	for _, h := range m.In(0, log.Span) {
		if h.Path == "heart.atria.flutter.cycle_ms" {
			n++
		}
	}
	if n == 0 {
		t.Error("no handle moves the flutter cycle")
	}
}

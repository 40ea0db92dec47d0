package handle

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"escapement/engine/event"
	"escapement/engine/plan"
	"escapement/engine/sim"
	"escapement/engine/sim/simtest"
	"escapement/engine/tick"
	"escapement/presets"
)

func run(t *testing.T, file string) (*plan.Plan, *event.Log, *Mover) {
	t.Helper()
	p := simtest.Play(t, file)
	return p.Plan, p.Log, New(p.Plan, p.Program.Device, p.Log)
}

// same tells whether two logs hold the same things in the same order up to an event.
func same(a, b *event.Log, id event.ID) bool {
	if int(id) > len(b.Events) {
		return false
	}
	for i := range a.Events[:id] {
		x, y := &a.Events[i], &b.Events[i]
		if x.Kind != y.Kind || x.Site != y.Site || x.Path != y.Path || x.Rule != y.Rule || x.Field != y.Field || x.Cause != y.Cause || x.Kind == event.Window && x.Why != y.Why {
			return false
		}
	}
	return true
}

// The promise of a handle: with the value that it gives for a time, the event stands
// at that time, to within half a step of the value, wherever the change leaves the
// order of events as it was.
func TestAnEventStandsWhereItsHandleWasMovedTo(t *testing.T) {
	held, kinds := 0, map[string]int{}
	for _, e := range presets.List() {
		file, _ := presets.Read(e.Name)
		p, log, m := run(t, string(file))
		// Times of conduction count as they are: where one grows with the rate, as in
		// an exit block, a P stands some milliseconds off.
		for i, h := range m.In(0, min(log.Span, tick.Time(8*tick.Second))) {
			if i%3 != 0 && h.Path != "heart.sinus.rate_bpm" || h.Fixed || log.At(h.Event).Kind == event.Activate && strings.HasPrefix(e.Name, "sa-exit") {
				continue
			}
			by := 5 * tick.Millisecond
			if i%2 == 0 {
				by = -by
			}
			h.Step = 0.001
			v := h.At(h.T.Add(by))
			q, err := p.With(h.Path, v)
			if err != nil || v == h.Min || v == h.Max {
				continue
			}
			next, err := sim.Run(q)
			if err != nil || !same(log, next, h.Event) {
				continue
			}
			n := next.At(h.Event)
			at := n.T
			if h.End {
				at = n.Until
			}
			held++
			kinds[h.Path]++
			if off := math.Abs(at.Sub(h.T.Add(by)).MS()); off > 1+0.12*math.Abs(by.MS()) {
				t.Errorf("%s: %s (%s %d) from %v moved by %v ms to %v %s: it stands %.2f ms off", e.Name, h.Label, h.Path, h.Event, h.T.MS(), by.MS(), v, h.Unit, off)
			}
		}
	}
	if held < 500 {
		t.Errorf("only %d handles could be tried", held)
	}
	for _, path := range []string{"heart.sinus.rate_bpm", "heart.sinus.first_ms", "heart.foci[0].rate_bpm", "pacemaker.pvarp_ms", "pacemaker.pvab_ms", "pacemaker.sensed_av_ms",
		"pacemaker.lower_rate_bpm", "pacemaker.max_tracking_rate_bpm", "pacemaker.ventricular_refractory_ms", "pacemaker.hysteresis.rate_bpm", "pacemaker.crosstalk_window_ms"} {
		if kinds[path] == 0 {
			t.Errorf("no handle of %s was tried", path)
		}
	}
}

const device = `{"format":"escapement-plan/1","span_ms":8000,"heart":{"sinus":{"rate_bpm":75}},"pacemaker":{"mode":"DDD","lower_rate_bpm":60,"sensed_av_ms":120}}`

func TestTheTenthPGoesTenTimesAsFar(t *testing.T) {
	_, log, m := run(t, device)
	n := 0
	for _, h := range m.In(0, log.Span) {
		if h.Path != "heart.sinus.rate_bpm" || log.At(h.Event).Kind != event.Discharge {
			continue
		}
		n++
		if h.Per != float64(n) { // the first is moved by heart.sinus.first_ms
			t.Errorf("discharge %d goes %v times as far, want %d", n+1, h.Per, n)
		}
		// 75/min is 800 ms. The n-th interval's end, 10n ms later, asks for 810: 74.07.
		h.Step = 0.01
		if got := h.At(h.T.Add(tick.Dur(n) * 10 * tick.Millisecond)); got != 74.07 {
			t.Errorf("discharge %d: %v /min, want 74.07", n+1, got)
		}
	}
	if n < 8 {
		t.Errorf("%d discharges with a handle", n)
	}
}

func TestEachWindowIsMovedByItsSetting(t *testing.T) {
	for _, c := range []struct {
		name, file, window, path string
		value                    float64
	}{
		{"sensed AV", device, "av_delay", "pacemaker.sensed_av_ms", 120},
		{"PVARP", device, "pvarp", "pacemaker.pvarp_ms", 250},
		{"upper rate", device, "upper_rate", "pacemaker.max_tracking_rate_bpm", 120},
		{"paced AV", strings.Replace(device, `"rate_bpm":75`, `"rate_bpm":40`, 1), "av_delay", "pacemaker.paced_av_ms", 200},
		{"atrial escape", strings.Replace(device, `"rate_bpm":75`, `"rate_bpm":40`, 1), "atrial_escape", "pacemaker.lower_rate_bpm", 60},
		{"changed on the strip", strings.Replace(device, `"pacemaker":{`, `"interventions":[{"at_ms":100,"do":"set","field":"pacemaker.pvarp_ms","to":300}],"pacemaker":{`, 1), "pvarp", "interventions[0].to", 300},
	} {
		_, log, m := run(t, c.file)
		found := false
		for _, h := range m.In(tick.Time(2*tick.Second), log.Span) {
			if e := log.At(h.Event); h.End && e.Field == c.window {
				found = true
				if h.Path != c.path || h.Value != c.value || !(h.Min <= h.Value && h.Value <= h.Max) || h.Step <= 0 || h.Label == "" {
					t.Errorf("%s: %+v, want %s = %v", c.name, h, c.path, c.value)
				}
				break
			}
		}
		if !found {
			t.Errorf("%s: no handle at the end of %s", c.name, c.window)
		}
	}
}

// With ventricular timing the stimulus of the ventricle keeps its place when the paced
// AV delay changes: that of the atrium gives way. The hand then sets the length.
func TestAPacedAVDelayWhoseEndStaysIsSetByItsLength(t *testing.T) {
	_, log, m := run(t, strings.Replace(device, `"rate_bpm":75`, `"rate_bpm":40`, 1))
	for _, h := range m.In(tick.Time(4*tick.Second), log.Span) {
		if h.Path == "pacemaker.paced_av_ms" {
			if !h.Fixed || h.Per != 1 || h.At(h.T.Add(-50*tick.Millisecond)) != 150 {
				t.Errorf("%+v", h)
			}
			return
		}
	}
	t.Error("the paced AV delay has no handle")
}

func TestStimuliOfATrain(t *testing.T) {
	_, log, m := run(t, `{"format":"escapement-plan/1","interventions":[{"at_ms":3000,"do":"train","site":"right_atrium","cycle_ms":500,"count":3,"extras_ms":[300]}]}`)
	var got []string
	for _, h := range m.In(0, log.Span) {
		if log.At(h.Event).Kind == event.Stimulus {
			got = append(got, fmt.Sprintf("%s=%v x%v", h.Path, h.Value, h.Per))
		}
	}
	want := "interventions[0].at_ms=3000 x1, interventions[0].cycle_ms=500 x1, interventions[0].cycle_ms=500 x2, interventions[0].extras_ms[0]=300 x1"
	if strings.Join(got, ", ") != want {
		t.Errorf("got  %s\nwant %s", strings.Join(got, ", "), want)
	}
}

func TestTheValueIsHeldAtTheEndOfItsRange(t *testing.T) {
	_, log, m := run(t, device)
	for _, h := range m.In(0, log.Span) {
		if h.Path == "pacemaker.pvarp_ms" {
			if got := h.At(h.T.Add(5 * tick.Second)); got != 600 {
				t.Errorf("far right: %v, want 600", got)
			}
			if m.Find(h.Event) == nil || m.Find(h.Event).Path != h.Path {
				t.Error("it is not found by its event")
			}
			return
		}
	}
	t.Error("PVARP has no handle")
}

package account

import (
	"strings"
	"testing"

	"escapement/engine/event"
	"escapement/engine/sim/simtest"
	"escapement/engine/tick"
)

// run makes a log from the body of a plan.
func run(t testing.TB, body string) *event.Log {
	t.Helper()
	return simtest.Body(t, body).Log
}

const (
	block = `"av_node":{"fast":{"ah_ms":null,"va_ms":null}}`
	slow  = `"sinus":{"rate_bpm":40}`

	// 4:3 at the upper rate (facts, check 5): P at 360 + 460 k; AV 150, 190, 230, then
	// PVARP of 250 takes in the next.
	wenckebach = `"span_ms":6000,"heart":{"sinus":{"rate_bpm":130.43478260869566},` + block + `},"pacemaker":{"mode":"DDD"}`
)

// find is the n-th event that fits, counted from 1.
func find(t testing.TB, l *event.Log, n int, fits func(*event.Event) bool) *event.Event {
	t.Helper()
	for i := range l.Events {
		if fits(&l.Events[i]) {
			if n--; n == 0 {
				return &l.Events[i]
			}
		}
	}
	t.Fatal("no such event")
	return nil
}

func sensed(ch byte, u event.Use) func(*event.Event) bool {
	return func(e *event.Event) bool { return e.Kind == event.Sense && e.Channel == ch && e.Use == u }
}

func timed(field string) func(*event.Event) bool {
	return func(e *event.Event) bool {
		return e.Kind == event.Stimulus && e.Rule == event.Timed && e.Field == field
	}
}

func lostStimulus(ch byte) func(*event.Event) bool {
	return func(e *event.Event) bool {
		return e.Kind == event.Stimulus && e.Rule == event.Timed && e.Channel == ch && !e.Captured
	}
}

func named(field string) func(*event.Event) bool {
	return func(e *event.Event) bool { return e.Kind == event.Window && e.Field == field }
}

func TestDeviceSentences(t *testing.T) {
	const signal = `"interventions":[{"at_ms":1400,"do":"signal","channel":"V"}]`
	for _, c := range []struct {
		name, plan string
		n          int
		fits       func(*event.Event) bool
		says       string
		margin     float64 // -1 for none, -2 for any
	}{
		{"refractory P", wenckebach, 1, sensed('A', event.Refractory), "Atrial signal at 1.740 s: in PVARP, which began with the ventricular stimulus at 1.510 s and runs to 1.760 s: refractory, not tracked; 20 ms later it would have been.", -2},
		{"tracked P", wenckebach, 2, sensed('A', event.Tracked), "tracked: it began an AV delay of 150 ms, to 0.970 s. The stimulus cannot come before the upper-rate interval since the ventricular stimulus at 0.510 s ends at 1.010 s, 40 ms after the AV delay.", -2},
		{"AV delay", wenckebach, 1, timed("av_delay"), "Ventricular stimulus at 0.510 s: the AV delay of 150 ms that began with the sensed P at 0.360 s ended without a ventricular event.", -1},
		{"held back", wenckebach, 1, timed("upper_rate"), "the AV delay of 150 ms that began with the sensed P at 0.820 s ended at 0.970 s without a ventricular event; held back 40 ms to the end of the upper-rate interval of 500 ms since the ventricular stimulus at 0.510 s.", -2},
		{"window", wenckebach, 3, named("pvarp"), "PVARP began at 1.510 s with the ventricular stimulus. It lasted 250 ms and ran out at 1.760 s. It decided the signal at 1.740 s (refractory).", -1},
		{"ended window", wenckebach, 1, named("atrial_escape"), "The atrial escape interval began at 0.000 s with the start of the strip. After 360 ms, at 0.360 s, the sensed P ended it before its time.", -1},
		{"escape", `"span_ms":6000,"heart":{` + slow + `,` + block + `},"pacemaker":{"mode":"DDD"}`, 1, timed("atrial_escape"), "the atrial escape interval of 800 ms that began with the ventricular stimulus at 0.510 s ended without an atrial event that counts", -2},
		{"strip's start", `"span_ms":6000,"heart":{` + block + `},"pacemaker":{"mode":"VVI"}`, 1, timed("lower_rate"), "the lower-rate interval of 1000 ms that began with the start of the strip ended without a ventricular event that counts", -1},
		{"safety", `"span_ms":6000,"heart":{` + slow + `},"pacemaker":{"mode":"DDD","paced_av_ms":180,"pavb_ms":40},` + signal, 1, timed("safety"), "a signal in the crosstalk window at 1.400 s brought a safety stimulus, 110 ms after the atrial stimulus at 1.330 s", -2},
		{"in the crosstalk window", `"span_ms":6000,"heart":{` + slow + `},"pacemaker":{"mode":"DDD","paced_av_ms":180,"pavb_ms":40},` + signal, 1, sensed('V', event.Safety), "No depolarisation caused it: it was interference.", -2},
		{"lost", `"span_ms":6000,"heart":{` + block + `},"pacemaker":{"mode":"VVI"},"interventions":[{"at_ms":1500,"do":"lose_capture","channel":"V","for_ms":1000}]`, 1, lostStimulus('V'), "It did not capture although the right ventricular apex was excitable: loss of capture.", -1},
		{"refractory tissue", `"span_ms":9000,"heart":{},"pacemaker":{"mode":"VVI"},"interventions":[{"at_ms":3000,"do":"undersense","channel":"V","for_ms":3000}]`, 1, lostStimulus('V'), "refractory tissue, missed by", -2},
		{"unsensed", `"span_ms":9000,"heart":{},"pacemaker":{"mode":"VVI"},"interventions":[{"at_ms":3000,"do":"undersense","channel":"V","for_ms":3000}]`, 1, lostStimulus('V'), "The device had no signal of that beat when it gave the stimulus.", -2},
		{"hysteresis", `"span_ms":9000,"heart":{"sinus":{"rate_bpm":45}},"pacemaker":{"mode":"VVI","lower_rate_bpm":70,"hysteresis":{"rate_bpm":50}}`, 1, timed("lower_rate"), "the lower-rate interval of 1200 ms that began with the sensed R at", -2},
		{"T wave", `"span_ms":9000,"heart":{` + block + `},"pacemaker":{"mode":"VVI","leads":{"t_wave_ms":320}}`, 1, sensed('V', event.Resets), "It was the T wave of the ventricular depolarisation 320 ms before", -2},
		{"oversensing", `"span_ms":9000,"heart":{` + block + `},"pacemaker":{"mode":"VVI","leads":{"t_wave_ms":320}}`, 1, sensed('V', event.Resets), "the next stimulus comes later than the heart needs it (oversensing).", -2},
		{"kept back", `"span_ms":9000,"heart":{` + block + `},"pacemaker":{"mode":"VVI","leads":{"t_wave_ms":320}}`, 1, sensed('V', event.Resets), "at the length of the last one that ran out (1000 ms) that was 680 ms off", 680},
		{"far field", `"span_ms":9000,"heart":{` + block + `},"pacemaker":{"mode":"DDD","pvab_ms":30,"leads":{"far_field_ms":80}}`, 1, sensed('A', event.Refractory), "It was the far field of the ventricular depolarisation 80 ms before", -2},
		{"mode", `"span_ms":9000,"heart":{},"pacemaker":{"mode":"DDD","magnet":{"mode":"DOO","from_ms":3000,"to_ms":6000}}`, 1, func(e *event.Event) bool { return e.Kind == event.Mode }, "At 3.000 s the device went over from DDD to DOO: magnet.", -1},
	} {
		l := run(t, c.plan)
		e := find(t, l, c.n, c.fits)
		a := Of(l, e.ID)
		if text := strings.Join(a.Sentences, " "); !strings.Contains(text, c.says) {
			t.Errorf("%s: got %q, want %q in it", c.name, text, c.says)
		}
		switch {
		case c.margin == -1 && a.Margin != nil, c.margin == -2 && a.Margin == nil:
			t.Errorf("%s: margin got %v", c.name, a.Margin)
		case c.margin >= 0 && (a.Margin == nil || a.Margin.MS != c.margin):
			t.Errorf("%s: margin got %v, want %v", c.name, a.Margin, c.margin)
		}
	}
}

// What a sentence leaves out where it would be wrong.
func TestDeviceSentencesAtTheEdges(t *testing.T) {
	const early = `"interventions":[{"at_ms":%,"do":"stimulate","site":"right_atrium"}]`
	at := func(ms string) string { return strings.ReplaceAll(early, "%", ms) }
	flutter := `"span_ms":9000,"heart":{` + block + `,"foci":[{"site":"left_atrium","rate_bpm":250}]},"pacemaker":{"mode":"DDD","sensed_av_ms":107,"pvab_ms":105,"atrial_blanking_ms":50,"pvarp_ms":300,"max_tracking_rate_bpm":130,"mode_switch":{"rate_bpm":170,"short":4,"of":7}}`
	for _, c := range []struct {
		name, plan string
		n          int
		fits       func(*event.Event) bool
		says, not  string
	}{
		{"second P in an AV delay", `"span_ms":3000,"heart":{` + block + `},"pacemaker":{"mode":"DDD","sensed_av_ms":300},` + at("620"), 1, sensed('A', event.Refractory), "a P before it had begun the AV delay already", "later it would have been"},
		{"blanked, then still refractory", `"span_ms":3000,"heart":{` + block + `},"pacemaker":{"mode":"DDD","pvab_ms":150},` + at("620"), 1, sensed('A', event.Blanked), "PVAB ends 40 ms later, but PVARP runs on to 0.760 s.", "PVAB ends 140"},
		{"refractory in a mode that does not track", flutter, 3, sensed('A', event.Refractory), "refractory, noted and nothing more", "not tracked"},
		{"the upper rate in time", `"span_ms":3000,"heart":{"sinus":{"rate_bpm":109.0909},` + block + `},"pacemaker":{"mode":"DDD"}`, 2, sensed('A', event.Tracked), "it began an AV delay of 150 ms", "cannot come before"},
		{"no interval of that reason ran out", `"span_ms":6000,"heart":{},"pacemaker":{"mode":"VVI","lower_rate_bpm":65,"hysteresis":{"rate_bpm":50}},"interventions":[{"at_ms":0,"do":"undersense","channel":"V","for_ms":3000}]`, 2, sensed('V', event.Resets), "It kept back the ventricular stimulus", "that ran out"},
	} {
		l := run(t, c.plan)
		text := strings.Join(Of(l, find(t, l, c.n, c.fits).ID).Sentences, " ")
		if !strings.Contains(text, c.says) || strings.Contains(text, c.not) {
			t.Errorf("%s: got %q, want %q and not %q in it", c.name, text, c.says, c.not)
		}
	}
}

// Every event of strips with devices can be accounted for, and every chain ends at a
// focus, a planned stimulus or where the strip began.
func TestDeviceChains(t *testing.T) {
	for _, body := range []string{
		wenckebach,
		`"span_ms":6000,"heart":{` + slow + `,` + block + `},"pacemaker":{"mode":"DDD"}`,
		`"span_ms":6000,"heart":{},"pacemaker":{"mode":"DOO"}`,
		`"span_ms":6000,"heart":{},"pacemaker":{"mode":"DDDOV"}`,
		`"span_ms":9000,"heart":{` + block + `},"pacemaker":{"mode":"VVI","noise":{"window_ms":100}},"interventions":[{"at_ms":3000,"do":"signal","channel":"V","cycle_ms":80,"count":30}]`,
	} {
		l := run(t, body)
		for id := event.ID(1); int(id) <= len(l.Events); id++ {
			check(t, l, id)
			c := Of(l, id).Chain
			last := l.At(c[len(c)-1].ID)
			if last.Cause != 0 && last.Kind != event.Discharge && len(c) < longest {
				before := l.At(c[max(0, len(c)-2)].ID)
				if before.Kind != event.Discharge { // whose cycle had a beginning
					t.Fatalf("chain of %d ends at %d: %s", id, last.ID, c[len(c)-1].Text)
				}
			}
		}
		for _, line := range Listing(l, 0, l.Span) {
			if !strings.HasSuffix(line.Text, ".") || strings.Contains(line.Text, "_") {
				t.Fatalf("line %q", line.Text)
			}
		}
	}
}

// The chain of a stimulus runs through its timer to the focus.
func TestChainThroughTheTimer(t *testing.T) {
	l := run(t, wenckebach)
	e := find(t, l, 1, timed("av_delay"))
	var got []string
	for _, s := range Of(l, e.ID).Chain {
		got = append(got, s.Text)
	}
	want := []string{
		"Ventricular stimulus (end of the AV delay): captured.",
		"Atrial signal: tracked.",
		"The impulse reached the right atrium 60 ms after the sinus node.",
		"The sinus node was depolarised by its own discharge.",
		"The sinus node discharged by itself.",
	}
	if strings.Join(got, "\n") != strings.Join(want, "\n") {
		t.Errorf("got\n%s\nwant\n%s", strings.Join(got, "\n"), strings.Join(want, "\n"))
	}
}

func TestWhyNotTracked(t *testing.T) {
	l := run(t, wenckebach)
	e := find(t, l, 1, sensed('A', event.Refractory))
	n := WhyNotTracked(l, e.ID)
	if n == nil || n.Margin == nil || n.Margin.Text != "20 ms later it would have been tracked." || len(n.Evidence) != 3 {
		t.Fatalf("got %+v", n)
	}
	if got := WhyNotTracked(l, e.Cause); got == nil || got.Sentences[0] != n.Sentences[0] {
		t.Errorf("asked of the P itself: got %+v", got)
	}
	if got := WhyNotTracked(l, find(t, l, 1, sensed('A', event.Tracked)).ID); got != nil {
		t.Errorf("a tracked P: got %+v", got)
	}
	for _, c := range []struct{ name, plan, says string }{
		{"not a mode that tracks", `"span_ms":6000,"heart":{` + block + `},"pacemaker":{"mode":"DDI"}`, "the mode in force does not track P waves"},
		{"deaf", `"span_ms":6000,"heart":{` + block + `},"pacemaker":{"mode":"DDD"},"interventions":[{"at_ms":0,"do":"undersense","channel":"A","for_ms":900}]`, "the device had no signal of it"},
	} {
		l := run(t, c.plan)
		e := find(t, l, 1, func(e *event.Event) bool {
			return e.Kind == event.Activate && l.Sites[e.Site].Name == "right_atrium"
		})
		n := WhyNotTracked(l, e.ID)
		if n == nil || !strings.Contains(strings.Join(n.Sentences, " "), c.says) {
			t.Errorf("%s: got %+v, want %q", c.name, n, c.says)
		}
	}
}

func TestWhyGap(t *testing.T) {
	l := run(t, `"span_ms":9000,"heart":{`+block+`},"pacemaker":{"mode":"VVI","leads":{"t_wave_ms":320}}`)
	n := WhyGap(l, tick.Time(tick.MS(1000)), tick.Time(tick.MS(2320)))
	want := []string{
		"The lower-rate interval began at 1.000 s with the ventricular stimulus; the ventricular signal ended it after 320 ms, at 1.320 s. It was the T wave of the ventricular depolarisation 320 ms before, by the impulse of the ventricular stimulus (1.000 s).",
		"The lower-rate interval began at 1.320 s with the ventricular signal and runs 1000 ms to 2.320 s.",
	}
	if strings.Join(n.Sentences, "\n") != strings.Join(want, "\n") {
		t.Errorf("got\n%s\nwant\n%s", strings.Join(n.Sentences, "\n"), strings.Join(want, "\n"))
	}
	l = run(t, `"span_ms":9000,"heart":{"sinus":{"rate_bpm":45}},"pacemaker":{"mode":"VVI","lower_rate_bpm":70,"hysteresis":{"rate_bpm":50}}`)
	if n = WhyGap(l, tick.Time(tick.MS(600)), tick.Time(tick.MS(1700))); !strings.Contains(n.Sentences[0], "its length set by: hysteresis and runs 1200 ms") {
		t.Errorf("hysteresis: got %v", n.Sentences)
	}
	l = run(t, wenckebach)
	p := find(t, l, 1, sensed('A', event.Refractory))
	for _, s := range WhyGap(l, p.T, p.T+500000).Sentences {
		if strings.Contains(s, "1.740") {
			t.Errorf("the gap begins after its first event: got %q", s)
		}
	}
	if WhyGap(parse(t, small), 0, 1000000) != nil {
		t.Error("a gap of a device that is not there")
	}
}

func TestDeviceListing(t *testing.T) {
	var got []string
	for _, s := range Listing(run(t, wenckebach), tick.Time(tick.MS(355)), tick.Time(tick.MS(365))) {
		got = append(got, s.Text)
	}
	want := []string{
		"0.360 s: The atria begin at the right atrium, reached from the sinus node.",
		"0.360 s: Atrial signal: tracked.",
		"0.360 s: With the sensed P began: atrial blanking to 0.460 s, the AV delay to 0.510 s.",
	}
	if strings.Join(got, "\n") != strings.Join(want, "\n") {
		t.Errorf("got\n%s\nwant\n%s", strings.Join(got, "\n"), strings.Join(want, "\n"))
	}
}

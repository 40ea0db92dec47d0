package measure

import (
	"encoding/json"
	"slices"
	"strings"
	"testing"

	"escapement/engine/event"
	"escapement/engine/lead"
	"pgregory.net/rapid"
)

// FuzzOf: whatever log the validator accepts, Of returns a report that can be
// written as JSON and whose evidence is in the log.
func FuzzOf(f *testing.F) {
	f.Add(conducts(800, 160, 200, 0, 160, -1, -1, 160).log(f).Text())
	h := newHeart(5000)
	h.conduct(h.p(500), 160)
	h.retro(h.pvc(1200, false), 150)
	h.pvc(2000, true)
	f.Add(h.log(f).Text())
	f.Add("log span=1000000\nsite a atrium\nsite v ventricle\npath x accessory a v\n1 10 discharge phase4 from=0 site=v\n2 10 activate fired from=1 site=v until=20\n3 20 activate conducted from=2 site=a path=x dir=up until=30\n4 30 activate conducted from=3 site=v path=x dir=down until=50\n")
	f.Fuzz(func(t *testing.T, text string) {
		l, err := event.Parse(strings.NewReader(text))
		if err != nil || len(event.Validate(l)) > 0 {
			return
		}
		checkReport(t, l, Of(l, nil))
		waves := &lead.Record{}
		for i := range l.Events {
			waves.Waves = append(waves.Waves, lead.Wave{Kind: lead.QRS, Sources: []event.ID{l.Events[i].ID}}, lead.Wave{Kind: lead.P, Sources: []event.ID{l.Events[i].ID}})
		}
		Of(l, waves)
	})
}

func checkReport(t interface{ Fatalf(string, ...any) }, l *event.Log, r *Report) {
	if _, err := json.Marshal(r); err != nil {
		t.Fatalf("JSON: %v", err)
	}
	for _, f := range r.Findings {
		for _, id := range f.Evidence {
			if l.At(id) == nil {
				t.Fatalf("%s: evidence %d is not in the log", f.Slug, id)
			}
		}
	}
	if r.Summary.PCount+r.Summary.QRSCount != len(r.Beats) {
		t.Fatalf("%d P and %d QRS in %d beats", r.Summary.PCount, r.Summary.QRSCount, len(r.Beats))
	}
}

// random draws a strip of beats of all sorts. They do not follow physiology; the
// log is valid all the same.
func random(rt *rapid.T) *heart {
	h := newHeart(100000)
	at := 500.0
	for range rapid.IntRange(0, 40).Draw(rt, "beats") {
		at += float64(rapid.IntRange(320, 1800).Draw(rt, "step"))
		switch rapid.IntRange(0, 7).Draw(rt, "kind") {
		case 0, 1, 2:
			h.conduct(h.p(at), float64(rapid.IntRange(120, 320).Draw(rt, "pr")))
		case 3:
			h.dropNode(h.p(at))
		case 4:
			h.dropBelow(h.p(at))
		case 5:
			h.pvc(at, rapid.Bool().Draw(rt, "conceal"))
		case 6:
			h.retro(h.pvc(at, false), float64(rapid.IntRange(120, 300).Draw(rt, "va")))
		case 7:
			h.conduct(h.atrialBeat(at), 180)
		}
	}
	return h
}

// Moving the whole strip in time changes no interval and no finding.
func TestShiftingTimeChangesNothing(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		h := random(rt)
		a := Of(h.log(t), nil)
		checkReport(rt, h.l, a)
		before := moving(a)
		for i := range h.events {
			h.events[i].T += 1234567
			h.events[i].Until += 1234567
		}
		h.l.Span += 1234567
		b := Of(h.log(t), nil)
		if got := moving(b); !slices.Equal(got, before) {
			rt.Fatalf("got %v, want %v", got, before)
		}
	})
}

// moving are the findings that depend on the beats alone: sinus arrest is judged
// from the start of the strip, which does not move along.
func moving(r *Report) []string {
	return slices.DeleteFunc(slugs(r), func(s string) bool { return s == "sinus_arrest" })
}

func BenchmarkOf(b *testing.B) {
	var prs []float64
	for range 2000 {
		prs = append(prs, 180, 260, 300, 0, 160)
	}
	l := conducts(800, prs...).log(b)
	events := float64(len(l.Events))
	for b.Loop() {
		Of(l, nil)
	}
	b.ReportMetric(events*float64(b.N)/b.Elapsed().Seconds(), "events/s")
}

package scene

import (
	"slices"
	"strings"
	"testing"

	"escapement/engine/event"
	"escapement/engine/ladder"
	"escapement/engine/lead"
)

// bumps is a record with one wave of 1 mV up and 1 mV down in every lead.
func bumps(l *event.Log) *lead.Record {
	r := &lead.Record{}
	for n := range r.MV {
		r.MV[n] = make([]float32, l.Span/1000)
		r.MV[n][100+n], r.MV[n][150+n] = 1, -1
	}
	return r
}

func laned(t *testing.T, lay func(Input, Options) *Scene, o Options) *Scene {
	t.Helper()
	l := logs(t)["device_upper_rate.log"]
	in := Input{Log: l, Record: bumps(l), Diagram: ladder.Build(l, ladder.Options{})}
	egm := make([]float32, l.Span/1000)
	egm[200], egm[210] = 0.3, -3
	in.Signals = []Sampled{
		{Name: "egm:HISd", Label: "HISd", MV: egm, MMPerMV: 20, ClipMM: 9},
		{Name: "membrane:his", Label: "His", MV: egm, MMPerMV: 1, Levels: []Level{{0, "0"}}, Arrows: []Arrow{{200000, 3}}},
	}
	return lay(in, o)
}

func names(s *Scene) string {
	var out []string
	for _, l := range s.Lanes {
		out = append(out, l.Name)
	}
	return strings.Join(out, " ")
}

func TestLanesStandInTheOrderAskedFor(t *testing.T) {
	leads := []lead.Name{lead.I, lead.II}
	for _, c := range []struct {
		name  string
		lanes []string
		want  string
	}{
		{"default", nil, "lead:I lead:II axis ladder device"},
		{"turned over", []string{"device", "ladder", "axis", "egm:HISd", "lead:II"}, "device ladder axis egm:HISd lead:II"},
		{"kinds mixed", []string{"lead:I", "egm:HISd", "membrane:his", "lead:V1", "axis"}, "lead:I egm:HISd membrane:his lead:V1 axis"},
		{"what is not there", []string{"egm:nowhere", "lead:X", "axis", "axis"}, "axis"},
		{"none", []string{}, ""},
	} {
		s := laned(t, Strip, Options{Leads: leads, Lanes: c.lanes})
		if got := names(s); got != c.want {
			t.Errorf("%s: lanes %q, want %q", c.name, got, c.want)
		}
		y := 0.0
		for _, l := range s.Lanes {
			if l.Y0 < y-1e-9 || l.Y1 <= l.Y0 {
				t.Errorf("%s: lane %s from %v to %v begins above %v", c.name, l.Name, l.Y0, l.Y1, y)
			}
			y = l.Y1
		}
	}
}

func TestTwelveLeadsInThreeForms(t *testing.T) {
	for _, c := range []struct{ form, want string }{
		{"3x4 + rhythm", "lead:I,aVR,V1,V4 lead:II,aVL,V2,V5 lead:III,aVF,V3,V6 lead:II axis ladder device"},
		{"6x2", "lead:I,V1 lead:II,V2 lead:III,V3 lead:aVR,V4 lead:aVL,V5 lead:aVF,V6 axis ladder device"},
		{"12x1", "lead:I lead:II lead:III lead:aVR lead:aVL lead:aVF lead:V1 lead:V2 lead:V3 lead:V4 lead:V5 lead:V6 axis ladder device"},
	} {
		form, ok := ParseForm12(c.form)
		if !ok {
			t.Fatalf("%s is not read", c.form)
		}
		if got := names(laned(t, Paper12, Options{Paper: form})); got != c.want {
			t.Errorf("%s: %q, want %q", c.form, got, c.want)
		}
	}
	for _, bad := range []string{"", "4x3", "3x4 + II", " + rhythm"} {
		if f, ok := ParseForm12(bad); ok {
			t.Errorf("%q is read as %v", bad, f)
		}
	}
}

// Moved closer, the lanes take so much less room; traces keep their scale.
func TestCloserLanesKeepTheirScale(t *testing.T) {
	o := Options{Leads: []lead.Name{lead.I, lead.II, lead.V1, lead.V6}}
	wide := laned(t, Strip, o)
	o.Closer = 20
	near := laned(t, Strip, o)
	if d := wide.Height - near.Height; d < 20 || d > 28 {
		t.Errorf("%.1f mm less, want 20 and what whole millimetres take", d)
	}
	tall := func(s *Scene) (out []float64) {
		for i := range s.Marks {
			if m := &s.Marks[i]; m.Class == Trace {
				top := slices.MinFunc(m.Points, func(a, b Point) int { return int(1e4 * (a.Y - b.Y)) })
				out = append(out, float64(m.Points[0].Y-top.Y))
			}
		}
		return out
	}
	for _, h := range append(tall(wide), tall(near)...) {
		if h < 9.99 || h > 10.01 {
			t.Errorf("1 mV is %.2f mm high, want 10", h)
		}
	}
	o.Closer = 1000
	s := laned(t, Strip, o)
	for _, l := range s.Lanes[:4] {
		if l.Y1-l.Y0 < 1.4*s.FontMM {
			t.Errorf("lane %s is %.1f mm high, too little for its name", l.Name, l.Y1-l.Y0)
		}
	}
	for i := range s.Marks {
		for _, p := range s.Marks[i].Points {
			if p.Y < 0 || float64(p.Y) > s.Height {
				t.Fatalf("a trace leaves the sheet at %v", p)
			}
		}
	}
}

func TestElectrogramIsCutOffAndBlockedImpulseMarked(t *testing.T) {
	s := laned(t, Strip, Options{Lanes: []string{"egm:HISd", "membrane:his"}, Caution: true})
	lane := s.Lanes[0]
	if h := lane.Y1 - lane.Y0; h > 20 {
		t.Errorf("the lane is %.1f mm high", h)
	}
	bars := 0
	for i := range s.Marks {
		m := &s.Marks[i]
		if m.Class == Block && m.Event == 3 {
			bars++
		}
	}
	if bars != 2 {
		t.Errorf("%d lines mark the blocked impulse, want 2", bars)
	}
	if !slices.ContainsFunc(s.Marks, func(m Mark) bool { return strings.Contains(m.Text, "HISd 20 mm/mV") }) {
		t.Error("the foot does not tell the electrogram's scale")
	}
}

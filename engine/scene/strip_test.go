package scene

import (
	"math"
	"os"
	"path/filepath"
	"testing"

	"escapement/engine/event"
	"escapement/engine/ladder"
	"escapement/engine/lead"
	"escapement/engine/tick"
)

// logs reads the hand-written logs of package ladder.
func logs(t *testing.T) map[string]*event.Log {
	t.Helper()
	files, err := filepath.Glob("../ladder/testdata/*.log")
	if err != nil || len(files) == 0 {
		t.Fatalf("no logs: %v", err)
	}
	all := map[string]*event.Log{}
	for _, name := range files {
		f, err := os.Open(name)
		if err != nil {
			t.Fatal(err)
		}
		l, err := event.Parse(f)
		f.Close()
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		all[filepath.Base(name)] = l
	}
	return all
}

func near(a, b float64) bool { return math.Abs(a-b) < 1e-9 }

// Every stroke and sign of the diagram stands on the sheet at axis.X of its time.
func TestPlacesAreTimes(t *testing.T) {
	for name, l := range logs(t) {
		d := ladder.Build(l, ladder.Options{Form: ladder.Full})
		s := Strip(Input{Log: l, Diagram: d}, Options{MMPerS: 73})
		for _, k := range d.Strokes {
			if k.End != ladder.Collided && !holdsLine(s, k.Event, s.Axis.X(k.T0), s.Axis.X(k.T1)) {
				t.Errorf("%s: stroke of event %d from %v to %v is not at its place", name, k.Event, k.T0, k.T1)
			}
		}
		for _, m := range d.Marks {
			shape := map[ladder.Sign]Shape{ladder.Focus: Disc, ladder.Stimulus: Ring, ladder.Capture: Ring}[m.Sign]
			if shape != 0 && !holdsRound(s, shape, m.Event, s.Axis.X(m.T)) {
				t.Errorf("%s: sign %d of event %d at %v is not at its place", name, m.Sign, m.Event, m.T)
			}
			if m.Sign == ladder.Bar && !holdsBar(s, &m) {
				t.Errorf("%s: bar of event %d at %v is not at its place", name, m.Event, m.T)
			}
		}
	}
}

func holdsLine(s *Scene, id event.ID, x, x2 float64) bool {
	for _, m := range s.Marks {
		if m.Shape == Line && m.Event == id && near(m.X, x) && near(m.X2, x2) {
			return true
		}
	}
	return false
}

func holdsRound(s *Scene, shape Shape, id event.ID, x float64) bool {
	for _, m := range s.Marks {
		if m.Shape == shape && m.Event == id && near(m.X, x) {
			return true
		}
	}
	return false
}

// A bar lies across its time; one of a bundle ends there, on its own side.
func holdsBar(s *Scene, b *ladder.Mark) bool {
	x := s.Axis.X(b.T)
	for _, m := range s.Marks {
		if m.Class != Block || m.Event != b.Event {
			continue
		}
		switch b.Branch {
		case ladder.Right:
			return near(m.X, x) && m.X2 > x
		case ladder.Left:
			return near(m.X2, x) && m.X < x
		}
		return near(m.X+m.X2, 2*x)
	}
	return false
}

// Two impulses that collide leave a gap of twice gapMM, around the meeting.
func TestCollisionLeavesAGap(t *testing.T) {
	l := logs(t)["pvc.log"]
	d := ladder.Build(l, ladder.Options{Form: ladder.Full})
	s := Strip(Input{Log: l, Diagram: d}, Options{})
	var ends []Mark
	for _, k := range d.Strokes {
		if k.End != ladder.Collided {
			continue
		}
		for _, m := range s.Marks {
			if m.Shape == Line && m.Class == Node && m.Event == k.Event {
				ends = append(ends, m)
			}
		}
	}
	if len(ends) != 2 {
		t.Fatalf("%d strokes collide, want 2", len(ends))
	}
	gap := math.Hypot(ends[0].X2-ends[1].X2, ends[0].Y2-ends[1].Y2)
	if gap < gapMM || gap > 2*gapMM+1e-9 {
		t.Errorf("gap is %v mm, want up to %v", gap, 2*gapMM)
	}
}

// Decimated traces hold only samples, at their own times, and lose no extreme.
func TestTraceKeepsPeaks(t *testing.T) {
	const n = 30000
	rec := &lead.Record{}
	for i := range rec.MV {
		rec.MV[i] = make([]float32, n)
	}
	mv := rec.MV[lead.II]
	for k := range mv {
		mv[k] = float32(math.Sin(float64(k) / 9))
	}
	mv[7777], mv[7778] = 3.5, -2.5 // one sample each
	l := &event.Log{Span: tick.Time(n-1) * tick.Time(lead.Step)}
	for _, c := range []struct {
		name   string
		mmPerS float64
		most   int // points
	}{{"overview", 5, 2*1500 + 4}, {"paper", 25, 2*7500 + 4}, {"close", 400, n}} {
		s := Strip(Input{Log: l, Record: rec}, Options{MMPerS: c.mmPerS, Leads: []lead.Name{lead.II}})
		lane := s.Lanes[0]
		zero := math.NaN()
		for _, m := range s.Marks {
			if m.Class != Trace {
				continue
			}
			zero = float64(m.Points[0].Y)
			if len(m.Points) > c.most {
				t.Errorf("%s: %d points, want at most %d", c.name, len(m.Points), c.most)
			}
			high, low := 0.0, 0.0
			for _, p := range m.Points {
				k := int(math.Round((float64(p.X) - s.Axis.X0) / c.mmPerS * 1000))
				if want := s.Axis.X(tick.Time(k) * tick.Time(lead.Step)); math.Abs(want-float64(p.X)) > 1e-3 {
					t.Fatalf("%s: point %v lies between samples", c.name, p)
				}
				if want := zero - float64(mv[k])*10; math.Abs(want-float64(p.Y)) > 1e-4 {
					t.Fatalf("%s: point %v is not sample %d", c.name, p, k)
				}
				high, low = max(high, zero-float64(p.Y)), min(low, zero-float64(p.Y))
			}
			if math.Abs(high-35) > 1e-3 || math.Abs(low+25) > 1e-3 {
				t.Errorf("%s: peaks are %v and %v mm, want 35 and -25", c.name, high, low)
			}
		}
		if math.IsNaN(zero) || zero-35 < lane.Y0 || zero+25 > lane.Y1 {
			t.Errorf("%s: lane %+v does not hold its trace about %v", c.name, lane, zero)
		}
	}
}

func TestNearestFindsStrokesSignsAndWaves(t *testing.T) {
	l := logs(t)["normal.log"]
	d := ladder.Build(l, ladder.Options{Form: ladder.Full})
	rec := &lead.Record{Waves: []lead.Wave{{Kind: lead.P, Sources: []event.ID{3}, Onset: 160000, Offset: 260000, End: 260000}}}
	for i := range rec.MV {
		rec.MV[i] = make([]float32, 2000)
	}
	s := Strip(Input{Log: l, Diagram: d, Record: rec}, Options{Leads: []lead.Name{lead.II}})
	for i := range s.Marks {
		m := &s.Marks[i]
		if m.Event == 0 || m.Shape != Line || m.Class == Dim || m.Class == Selected {
			continue
		}
		if got, ok := s.Nearest((m.X+m.X2)/2, (m.Y+m.Y2)/2, 0.5); !ok || s.Marks[i].Class != Class(0) && got == 0 {
			t.Errorf("nothing near the middle of %+v", *m)
		}
	}
	lane := s.Lanes[0]
	if got, ok := s.Nearest(s.Axis.X(200000), lane.Y0+1, 1); !ok || got != 3 {
		t.Errorf("in the P wave: event %d, %v, want 3", got, ok)
	}
	if got, ok := s.Nearest(s.Axis.X(1900000), lane.Y0+1, 1); ok {
		t.Errorf("between waves: event %d, want none", got)
	}
	focus := l.At(1)
	if got, _ := s.Nearest(s.Axis.X(focus.T), s.Lanes[2].Y0, 20); got == 0 {
		t.Error("nothing near the ladder's top")
	}
}

// The selected event gets a halo under its own marks, in the ladder and the leads.
func TestSelectedHasAHalo(t *testing.T) {
	l := logs(t)["node_block.log"]
	d := ladder.Build(l, ladder.Options{Form: ladder.Full})
	for _, id := range []event.ID{1, 3, 31} {
		s := Strip(Input{Log: l, Diagram: d}, Options{Selected: id})
		halo, own := -1, -1
		for i, m := range s.Marks {
			if m.Event == id && m.Class == Selected {
				halo = i
			} else if m.Event == id && own < 0 {
				own = i
			}
		}
		if halo < 0 || own < halo {
			t.Errorf("event %d: halo at %d, mark at %d", id, halo, own)
		}
	}
}

// Labels that matter stay longer when the sheet gets small.
func TestLessImportantLabelsGoFirst(t *testing.T) {
	l := logs(t)["node_block.log"]
	d := ladder.Build(l, ladder.Options{Form: ladder.Full})
	had := 1 << 30
	for _, mm := range []float64{60, 25, 12, 6, 3} {
		s := Strip(Input{Log: l, Diagram: d}, Options{MMPerS: mm})
		n, pause := 0, false
		for _, m := range s.Marks {
			if m.Class == DimText || m.Class == BlockLabel {
				n++
				pause = pause || m.Text == "1295"
			}
		}
		if n > had {
			t.Errorf("%v mm/s has %d numbers, more than at the larger scale (%d)", mm, n, had)
		}
		if had = n; mm >= 12 && !pause {
			t.Errorf("the pause has no number at %v mm/s", mm)
		}
	}
	if had > 4 {
		t.Errorf("%d numbers are left at the smallest scale", had)
	}
}

// The legend explains the strokes of a pathway where the strip has one.
func TestLegendShowsPathwaysOfTheStrip(t *testing.T) {
	for _, c := range []struct {
		name, log   string
		slow, aside bool
	}{
		{"none", "pvc.log", false, false},
		{"a slow pathway", "reentry.log", true, false},
		{"an accessory pathway", "accessory.log", false, true},
	} {
		l := logs(t)[c.log]
		s := Strip(Input{Log: l, Diagram: ladder.Build(l, ladder.Options{Form: ladder.Full})}, Options{Legend: true})
		slow, aside := false, false
		for _, m := range s.Marks {
			slow = slow || m.Class == Note && m.Text == "slow pathway"
			aside = aside || m.Class == Note && m.Text == "accessory pathway"
		}
		if slow != c.slow || aside != c.aside {
			t.Errorf("%s: slow %v, accessory %v", c.name, slow, aside)
		}
	}
}

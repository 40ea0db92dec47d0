package scene

import (
	"errors"
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"escapement/engine/ladder"
	"escapement/engine/lead"
	"escapement/engine/tick"
)

// anyPrint draws a strip with options and a paper.
func anyPrint(r *rapid.T) (Input, Options, Paper) {
	l := anyLog(r)
	l.Span += tick.Time(rapid.Int64Range(0, 60e6).Draw(r, "longer"))
	rec := &lead.Record{}
	for i := range rec.MV {
		rec.MV[i] = make([]float32, int(l.Span)/int(lead.Step)+1)
	}
	in := Input{Log: l, Record: rec}
	if rapid.Bool().Draw(r, "ladder") {
		in.Diagram = ladder.Build(l, ladder.Options{Form: ladder.Full})
	}
	o := Options{
		MMPerS: rapid.Float64Range(5, 200).Draw(r, "speed"), MMPerMV: rapid.Float64Range(2, 20).Draw(r, "gain"), Leads: []lead.Name{lead.II, lead.V1},
		Grid: true, Legend: true, Caution: true, Title: "Of no great length", Statement: strings.Repeat("A statement. ", rapid.IntRange(0, 30).Draw(r, "sentences")), Imprint: "Printed.",
	}
	paper, err := ParsePaper(rapid.SampledFrom([]string{"a4", "a4-landscape", "letter", "letter-landscape", "a3", "a3-landscape", "130x400"}).Draw(r, "paper"))
	if err != nil {
		r.Fatal(err)
	}
	return in, o, paper
}

// Whatever is printed stands within the edges of its paper, at the scale that was
// asked for; the parts of a strip follow each other without a gap; the caution is on
// every page.
func TestPagesKeepTheirEdgesAndTheirScale(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		in, o, p := anyPrint(r)
		pages, err := Sheets(in, o, p, StripForm)
		var room *RoomError
		if err != nil {
			if !errors.As(err, &room) || room.Need <= room.Has || room.Error() == "" {
				r.Fatal(err)
			}
			return
		}
		for i, s := range pages {
			if s.Width != p.Width || s.Height != p.Height {
				r.Fatalf("page %d measures %v by %v mm", i+1, s.Width, s.Height)
			}
			if s.Axis.MMPerS != o.MMPerS {
				r.Fatalf("page %d runs at %v mm/s, want %v", i+1, s.Axis.MMPerS, o.MMPerS)
			}
			var said []string
			for k := range s.Marks {
				m := &s.Marks[k]
				if m.Class == Caution {
					said = append(said, m.Text)
				}
				b := Box{min(m.X, m.X2), min(m.Y, m.Y2), max(m.X, m.X2), max(m.Y, m.Y2)}
				switch m.Shape {
				case Poly:
					b = Box{math.Inf(1), math.Inf(1), math.Inf(-1), math.Inf(-1)}
					for _, q := range m.Points {
						b = Box{min(b.X0, float64(q.X)), min(b.Y0, float64(q.Y)), max(b.X1, float64(q.X)), max(b.Y1, float64(q.Y))}
					}
				case Disc, Ring:
					b = Box{m.X - m.R, m.Y - m.R, m.X + m.R, m.Y + m.R}
				case Text:
					b = s.TextBox(m)
				}
				const edge = EdgeMM - 1.6 // discs and letters on the line of the frame
				if b.X0 < edge || b.Y0 < edge || b.X1 > s.Width-edge || b.Y1 > s.Height-edge {
					r.Fatalf("page %d: %s %q at %.1f to %.1f, %.1f to %.1f mm", i+1, m.Class, m.Text, b.X0, b.X1, b.Y0, b.Y1)
				}
			}
			if !strings.Contains(strings.ReplaceAll(strings.Join(said, ""), " ", ""), strings.ReplaceAll(CautionText, " ", "")) {
				r.Fatalf("page %d says %q", i+1, said)
			}
		}
	})
}

func TestAStripIsCutAtLargeSquares(t *testing.T) {
	o := Options{To: 60 * tick.Time(tick.Second), MMPerS: 25, Margin: 20}
	paper := Paper{Width: 297, Height: 210, Margin: EdgeMM}
	parts, err := cut(&o, paper, 0)
	if err != nil {
		t.Fatal(err)
	}
	// A4 is 297 mm wide; less two edges of 6, a margin of 20 and 1.5 beyond the end it is 263.5, which is 10.54 s.
	if got, want := parts[0], [2]tick.Time{0, 10.4e6}; got != want {
		t.Errorf("the first part runs from %d to %d, want %d", got[0], got[1], want[1])
	}
	for i, p := range parts[1:] {
		if p[0] != parts[i][1] {
			t.Errorf("part %d begins at %d, the one before ends at %d", i+1, p[0], parts[i][1])
		}
	}
	if last := parts[len(parts)-1][1]; last != o.To {
		t.Errorf("ends at %d", last)
	}
	parts, err = cut(&o, paper, 10*tick.Second)
	if err != nil || len(parts) != 6 || parts[5] != [2]tick.Time{50e6, 60e6} {
		t.Errorf("pages of ten seconds: %v, %v", parts, err)
	}
	o.To = 14e6
	if parts, _ = cut(&o, paper, 10*tick.Second); len(parts) != 2 || parts[1] != [2]tick.Time{4e6, 14e6} {
		t.Errorf("the last page of ten seconds is %v", parts)
	}
	o.To, o.MMPerS = 3600e6*24, 100
	var room *RoomError
	if _, err = cut(&o, paper, 0); !errors.As(err, &room) || room.What != "pages" {
		t.Errorf("a day on A4: %v", err)
	}
}

// A print is measured with calipers, so it carries a pulse of 1 mV at its gain, however
// low its leads are: a print of one low lead alone had none.
func TestEveryPrintOfLeadsHasAPulseAtItsGain(t *testing.T) {
	log := logs(t)["device_upper_rate.log"]
	flat := &lead.Record{}
	for l := range flat.MV {
		flat.MV[l] = make([]float32, log.Span/1000)
		flat.MV[l][100] = 0.2
	}
	in := Input{Log: log, Record: flat, Diagram: ladder.Build(log, ladder.Options{})}
	a4 := Paper{Width: 297, Height: 210}
	for _, gain := range []float64{5, 10, 20} {
		for name, o := range map[string]Options{
			"one lead":   {Leads: []lead.Name{lead.II}},
			"two leads":  {Leads: []lead.Name{lead.II, lead.V1}},
			"as a lane":  {Lanes: []string{"ladder", "lead:II"}},
			"paper form": {Paper: Form12{Columns: 4}},
		} {
			o.MMPerMV, o.Caution = gain, true
			form := StripForm
			if o.Paper.Columns > 0 {
				form = TwelveForm
			}
			pages, err := Sheets(in, o, a4, form)
			if err != nil {
				t.Fatal(err)
			}
			r := Report{Title: "x", Strip: Excerpt{In: in, O: o}}
			reported, err := r.Pages(a4)
			if err != nil {
				t.Fatal(err)
			}
			for i, p := range append(pages[:1:1], reported[0]) {
				if got := pulseHeight(p); got < gain-1e-4 || got > gain+1e-4 {
					t.Errorf("%s, %g mm/mV, print %d: a pulse of %g mm", name, gain, i, got)
				}
			}
		}
	}
}

// pulseHeight is the height of the first pulse on a page, mm; 0 where there is none.
func pulseHeight(s *Scene) float64 {
	for i := range s.Marks {
		if m := &s.Marks[i]; m.Class == Calibration && m.Shape == Poly {
			low, high := m.Points[0].Y, m.Points[0].Y
			for _, q := range m.Points {
				low, high = min(low, q.Y), max(high, q.Y)
			}
			return float64(high - low)
		}
	}
	return 0
}

// A window that is to fill its page has whole lines, within the strip, and holds what
// was asked for.
func TestAWindowFillsItsLines(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		in, o, p := anyPrint(r)
		o.Fill = true
		asked := o
		asked.fill(&in)
		if asked.To > in.Log.Span || asked.From >= in.Log.Span {
			r.Skip("not a window of the strip")
		}
		o.end = in.Log.Span
		o.fill(&in)
		parts, err := cut(&o, p, 0)
		if err != nil {
			r.Skip(err.Error())
		}
		from, to := parts[0][0], parts[len(parts)-1][1]
		if from > asked.From || to < asked.To || from < 0 || to > in.Log.Span {
			r.Fatalf("asked for %v to %v of %v, got %v to %v", asked.From, asked.To, in.Log.Span, from, to)
		}
		first, last := parts[0], parts[len(parts)-1]
		if whole := first[1] - first[0]; last[1]-last[0] != whole && !(from == 0 && to == in.Log.Span) {
			r.Fatalf("the last line is %v of %v long, and there is more strip", last[1]-last[0], whole)
		}
	})
}

// Lanes of a print that are too high move together as on the page; the scale stays, and
// where they would lie on one another the print is refused.
func TestLanesOfAPrintMoveTogetherBeforeItIsRefused(t *testing.T) {
	log := logs(t)["device_upper_rate.log"]
	in := Input{Log: log, Record: bumps(log)}
	o := Options{Caution: true, MMPerMV: 10}
	height := func(leads int) (float64, error) {
		o.Leads = nil
		for l := range leads {
			o.Leads = append(o.Leads, lead.Name(l))
		}
		pages, err := Sheets(in, o, Paper{Width: 297, Height: 150}, StripForm)
		if err != nil {
			return 0, err
		}
		return pages[0].Lanes[0].Y1 - pages[0].Lanes[0].Y0, nil
	}
	loose, err := height(2)
	if err != nil {
		t.Fatal(err)
	}
	closer, refused := false, false
	for n := 3; n <= 12; n++ {
		h, err := height(n)
		if err != nil {
			refused = true
		} else if h < loose {
			closer = true
		}
	}
	if !closer || !refused {
		t.Errorf("moved together: %v, refused: %v", closer, refused)
	}
}

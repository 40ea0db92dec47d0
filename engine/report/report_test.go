package report

import (
	"flag"
	"fmt"
	"math"
	"os"
	"strings"
	"testing"

	"escapement/engine/field"
	"escapement/engine/plan"
	"escapement/engine/press"
	"escapement/engine/scene"
	"escapement/engine/tick"
	"escapement/engine/timeline"
	"escapement/presets"
)

var update = flag.Bool("update", false, "rewrite the goldens")

func preset(t *testing.T, name string) *timeline.Timeline {
	t.Helper()
	file, ok := presets.Read(name)
	if !ok {
		t.Fatalf("no preset %q", name)
	}
	p, err := plan.Decode(file)
	if err != nil {
		t.Fatal(err)
	}
	c, err := timeline.Of(p, field.New())
	if err != nil {
		t.Fatal(err)
	}
	return c
}

func sheet(t *testing.T, name string) scene.Paper {
	t.Helper()
	p, err := scene.ParsePaper(name)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// sound looks at what must hold of every page: its texts lie inside the margins and do
// not overlap, the caution stands on it, and it says which page it is.
func sound(t *testing.T, pages []*scene.Scene) {
	t.Helper()
	for n, s := range pages {
		var boxes []scene.Box
		var texts []string
		caution := ""
		for i := range s.Marks {
			m := &s.Marks[i]
			if m.Shape != scene.Text {
				continue
			}
			b := s.TextBox(m)
			if b.X0 < 5 || b.Y0 < 5 || b.X1 > s.Width-5 || b.Y1 > s.Height-5 {
				t.Errorf("page %d: %q stands at %.1f, %.1f to %.1f, %.1f mm, off the sheet", n+1, m.Text, b.X0, b.Y0, b.X1, b.Y1)
			}
			for k, o := range boxes {
				if over(b, o) {
					t.Errorf("page %d: %q overlaps %q at %.1f, %.1f mm", n+1, m.Text, texts[k], b.X0, b.Y0)
				}
			}
			boxes, texts = append(boxes, b), append(texts, m.Text)
			if m.Class == scene.Caution {
				caution += m.Text + " "
			}
		}
		if strings.TrimSpace(caution) != scene.CautionText {
			t.Errorf("page %d has the caution %q", n+1, caution)
		}
		if want := fmt.Sprintf("page %d of %d", n+1, len(pages)); texts[len(texts)-1] != want {
			t.Errorf("the last text of page %d is %q, want %q", n+1, texts[len(texts)-1], want)
		}
	}
}

// over tells whether boxes share more than the leading of two lines may.
func over(a, b scene.Box) bool {
	const hair = 0.05
	return min(a.X1, b.X1)-max(a.X0, b.X0) > hair && min(a.Y1, b.Y1)-max(a.Y0, b.Y0) > hair
}

func TestEveryPresetHasASoundReport(t *testing.T) {
	for i, e := range presets.List() {
		if testing.Short() && i%6 != 0 {
			continue
		}
		t.Run(e.Name, func(t *testing.T) {
			c := preset(t, e.Name)
			for _, o := range []Options{{Date: "2026-12-01", Version: "test"}, {Paper: sheet(t, "letter-landscape"), To: min(c.Log.Span, tick.Time(12*tick.Second))}} {
				pages, err := Build(c, o)
				if err != nil {
					t.Fatal(err)
				}
				sound(t, pages)
			}
		})
	}
}

func TestPapersAndForms(t *testing.T) {
	c := preset(t, "dual-upper-rate-wenckebach")
	for _, name := range []string{"a4", "a4-landscape", "letter", "letter-landscape", "a3-landscape", "160x220"} {
		for _, form := range []scene.Form12{{}, {Columns: 4, Rhythm: true}} {
			pages, err := Build(c, Options{Paper: sheet(t, name), Form: form, MMPerMV: 5})
			if err != nil {
				t.Errorf("%s %v: %v", name, form, err)
				continue
			}
			sound(t, pages)
		}
	}
}

// A strip of 14 s at 25 mm/s on paper of 190 mm between the margins: each line goes on
// where the last one ended, and an event stands at its time to a thousandth of a
// millimetre.
func TestTheStripIsAtScaleAndGoesOn(t *testing.T) {
	c := preset(t, "wenckebach-4-3")
	pages, err := Build(c, Options{To: c.Log.Span})
	if err != nil {
		t.Fatal(err)
	}
	var covered float64
	for _, s := range pages {
		var axes []float64 // left ends of the lines' time axes
		for i := range s.Marks {
			if m := &s.Marks[i]; m.Shape == scene.Line && m.Class == scene.AxisLine && m.Y == m.Y2 && math.Abs(m.X2-m.X-50) > 1e-9 {
				covered += m.X2 - m.X
				axes = append(axes, m.X)
			}
		}
		for _, x := range axes {
			if x != axes[0] {
				t.Errorf("lines begin at %v mm", axes)
			}
		}
	}
	if want := c.Log.Span.Seconds() * 25; math.Abs(covered-want) > 1e-6 {
		t.Errorf("the lines are %.3f mm together, want %.3f", covered, want)
	}
	first := pages[0].Axis
	seen := 0
	for i := range pages[0].Marks {
		m := &pages[0].Marks[i]
		if m.Shape != scene.Disc || m.Class != scene.Sinus || m.Event == 0 {
			continue
		}
		at := c.Log.At(m.Event).T
		if x := first.X0 + at.Seconds()*25; x < pages[0].Width-10 {
			seen++
			if math.Abs(m.X-x) > 1e-3 {
				t.Errorf("the discharge at %v ms stands at %.4f mm, want %.4f", at, m.X, x)
			}
		}
	}
	if seen < 5 {
		t.Errorf("saw %d discharges on the first line", seen)
	}
}

func TestALineIsFiftyMillimetresLong(t *testing.T) {
	pages, err := Build(preset(t, "normal"), Options{})
	if err != nil {
		t.Fatal(err)
	}
	for i := range pages[0].Marks {
		if m := &pages[0].Marks[i]; m.Shape == scene.Line && m.Class == scene.AxisLine && m.Y == m.Y2 && math.Abs(m.X2-m.X-50) < 1e-9 {
			return
		}
	}
	t.Error("no line of 50 mm")
}

func TestRefusals(t *testing.T) {
	c := preset(t, "dual-upper-rate-wenckebach")
	for _, r := range []struct {
		name, want string
		o          Options
	}{
		{"window beyond the strip", "does not lie in the strip of 14000 ms", Options{From: 20 * 1e6}},
		{"window backwards", "does not lie in the strip", Options{From: 2e6, To: 1e6}},
		{"lanes too high", "a page has", Options{MMPerMV: 100}},
		{"paper too small", "each side can be 120 to 2000 mm", Options{Paper: scene.Paper{Width: 50, Height: 50}}},
		{"margin too wide", "a margin of 31 mm", Options{Paper: scene.Paper{Width: 210, Height: 297, Margin: 31}}},
		{"too many lines", "at most 200 are printed", Options{MMPerS: 5000, To: 14e6}},
	} {
		if _, err := Build(c, r.o); err == nil || !strings.Contains(err.Error(), r.want) {
			t.Errorf("%s: got %v, want %q", r.name, err, r.want)
		}
	}
	if _, err := scene.ParsePaper("a5000"); err == nil || !strings.Contains(err.Error(), "a4, letter, a3") {
		t.Errorf("an unknown paper gives %v", err)
	}
}

func TestTwoStripsOnOnePage(t *testing.T) {
	cases := [2]*timeline.Timeline{preset(t, "dual-treadmill-two-to-one"), preset(t, "dual-one-to-one-to-140")}
	list := []scene.Difference{{Label: "PVARP", Before: "300", After: "230", Change: "-70", Unit: "ms"}, {Label: "mean ventricular rate", Before: "65", After: "130", Change: "+65", Unit: "/min"}}
	pages, err := Compare(cases, [2]string{"before", "after"}, list, Options{})
	if err != nil {
		t.Fatal(err)
	}
	sound(t, pages)
	count := 0
	for _, l := range pages[0].Lanes {
		if l.Name == "ladder" {
			count++
		}
	}
	if count != 2 {
		t.Errorf("the first page has %d ladders", count)
	}
	all := places(pages)
	for _, want := range []string{"before: ", "after: ", "PVARP, ms", "+65"} {
		if !strings.Contains(all, want) {
			t.Errorf("the pages lack %q", want)
		}
	}
}

// Left alone, a comparison finds its differences, under names that say what they
// belong to.
func TestDifferencesAreFound(t *testing.T) {
	pages, err := Compare([2]*timeline.Timeline{preset(t, "dual-treadmill-two-to-one"), preset(t, "dual-one-to-one-to-140")}, [2]string{"before", "after"}, nil, Options{})
	if err != nil {
		t.Fatal(err)
	}
	sound(t, pages)
	all := places(pages)
	for _, want := range []string{"upper tracking rate", "adaptive AV, to", "intervention 1, to", "Warnings", "QRS rate"} {
		if !strings.Contains(all, " "+want+"\n") {
			t.Errorf("the pages lack %q", want)
		}
	}
}

func TestPagesPrint(t *testing.T) {
	pages, err := Build(preset(t, "dual-upper-rate-wenckebach"), Options{})
	if err != nil {
		t.Fatal(err)
	}
	var a, b strings.Builder
	if err := press.Pages(&a, pages); err != nil {
		t.Fatal(err)
	}
	if err := press.Pages(&b, pages); err != nil {
		t.Fatal(err)
	}
	if a.String() != b.String() {
		t.Error("the same pages give two different files")
	}
	if got := strings.Count(a.String(), "/Type/Page/") + strings.Count(a.String(), "/Type/Page\n"); got != 0 && got != len(pages) {
		t.Errorf("the file has %d pages, want %d", got, len(pages))
	}
}

func places(pages []*scene.Scene) string {
	var b strings.Builder
	for n, s := range pages {
		fmt.Fprintf(&b, "page %d, %g by %g mm\n", n+1, s.Width, s.Height)
		for i := range s.Marks {
			if m := &s.Marks[i]; m.Shape == scene.Text {
				fmt.Fprintf(&b, "%6.1f %6.1f %-10s %s\n", m.X, m.Y, m.Class, m.Text)
			}
		}
	}
	return b.String()
}

// What stands where on the pages of one plan.
func TestGolden(t *testing.T) {
	const file = "testdata/dual-upper-rate-wenckebach.golden"
	pages, err := Build(preset(t, "dual-upper-rate-wenckebach"), Options{Date: "2026-12-01", Version: "1.0"})
	if err != nil {
		t.Fatal(err)
	}
	got := places(pages)
	if *update {
		if err := os.MkdirAll("testdata", 0o755); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(file, []byte(got), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	if got != string(want) {
		t.Errorf("the pages changed; run with -update and look at the difference:\n%s", diff(string(want), got))
	}
}

// diff is the first line that differs.
func diff(want, got string) string {
	w, g := strings.Split(want, "\n"), strings.Split(got, "\n")
	for i := range w {
		if i >= len(g) || w[i] != g[i] {
			return fmt.Sprintf("line %d\n-%s\n+%s", i+1, w[i], strings.Join(g[min(i, len(g)):min(i+1, len(g))], ""))
		}
	}
	return "got more lines"
}

// Both strips stand on one page; what there is no room for is left out and named.
func TestBothStripsStandOnOnePage(t *testing.T) {
	lanes := strings.Fields("lead:I lead:II lead:V1 lead:V6 axis ladder device")
	pages, err := Compare([2]*timeline.Timeline{preset(t, "dual-treadmill-two-to-one"), preset(t, "dual-one-to-one-to-140")}, [2]string{"before", "after"}, nil, Options{Lanes: lanes})
	if err != nil {
		t.Fatal(err)
	}
	sound(t, pages)
	ladders := 0
	for _, l := range pages[0].Lanes {
		if l.Name == "ladder" {
			ladders++
		}
	}
	all := places(pages)
	if ladders != 2 || !strings.Contains(all, "Left out for want of room: ") || strings.Contains(all, "want of room: II") {
		t.Errorf("%d ladders on the first page:\n%s", ladders, all)
	}
}

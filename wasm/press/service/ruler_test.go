package service

import (
	"encoding/json"
	"fmt"
	"image"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"escapement/engine/event"
	"escapement/engine/field"
	"escapement/engine/plan"
	"escapement/engine/scene"
	"escapement/engine/timeline"
	"escapement/presets"
)

// dpi at which the pages are looked at; a dot is 0.042 mm.
const dpi = 600

const dotMM = 25.4 / dpi

// rendered is a page of a PDF as another program draws it.
func rendered(t *testing.T, pdf []byte) *image.Gray {
	t.Helper()
	if _, err := exec.LookPath("pdftoppm"); err != nil {
		t.Skip("pdftoppm is missing; `make test` installs it")
	}
	dir := t.TempDir()
	in := filepath.Join(dir, "print.pdf")
	if err := os.WriteFile(in, pdf, 0o600); err != nil {
		t.Fatal(err)
	}
	if out, err := exec.Command("pdftoppm", "-r", fmt.Sprint(dpi), "-f", "1", "-l", "1", "-gray", "-singlefile", in, filepath.Join(dir, "page")).CombinedOutput(); err != nil {
		t.Fatalf("%v: %s", err, out)
	}
	file, err := os.ReadFile(filepath.Join(dir, "page.pgm"))
	if err != nil {
		t.Fatal(err)
	}
	var w, h, most int
	if n, err := fmt.Sscanf(string(file[:min(len(file), 40)]), "P5\n%d %d\n%d\n", &w, &h, &most); n != 3 || most != 255 {
		t.Fatalf("%v: %q", err, file[:min(len(file), 40)])
	}
	return &image.Gray{Pix: file[len(file)-w*h:], Stride: w, Rect: image.Rect(0, 0, w, h)}
}

// dark is a dot that ink stands on; the grid and the paper are lighter.
const dark = 110

// down are the middles of the dark runs of a column of dots, in mm, within bounds;
// across those of a row.
func down(g *image.Gray, xMM, fromMM, toMM float64, below uint8) []float64 {
	x := int(xMM / dotMM)
	return runs(int(fromMM/dotMM), int(toMM/dotMM), func(i int) bool { return g.GrayAt(x, i).Y < below })
}

func across(g *image.Gray, yMM, fromMM, toMM float64, below uint8) []float64 {
	y := int(yMM / dotMM)
	return runs(int(fromMM/dotMM), int(toMM/dotMM), func(i int) bool { return g.GrayAt(i, y).Y < below })
}

func runs(from, to int, on func(int) bool) []float64 {
	var out []float64
	start := -1
	for i := from; i <= to; i++ {
		if on(i) && i < to {
			if start < 0 {
				start = i
			}
			continue
		}
		if start >= 0 {
			out = append(out, float64(start+i)/2*dotMM)
			start = -1
		}
	}
	return out
}

// A print through the handler, drawn by another program at 600 dots an inch, is right
// to 0.2 mm at 25 mm/s and 10 mm/mV: large squares of 5 mm, a pulse of 10 mm, a second
// of 25 mm, and an R-R of 25 mm a second between the peaks on paper.
func TestPrintsMeasureTrue(t *testing.T) {
	const plan, tolerance = "sinus-bradycardia", 0.2
	for _, c := range []struct{ name, route, more string }{
		{"strip on A4", "strip", "&paper=a4-landscape"},
		{"strip on letter", "strip", "&paper=letter-landscape"},
		{"twelve leads on A4", "twelve", "&paper=a4-landscape"},
		{"report on A4", "report", "&paper=a4"},
		{"report on letter", "report", "&paper=letter-landscape"},
	} {
		t.Run(c.name, func(t *testing.T) {
			query := "?plan=" + plan + "&leads=II,V3&ladder=plain&to_ms=6000&date=2026-12-01" + c.more
			w := ask(t, "/press/"+c.route+".pdf"+query, "")
			if w.Code != 200 {
				t.Fatalf("%d: %s", w.Code, w.Body)
			}
			page := rendered(t, w.Body.Bytes())
			s := laidOut(t, c.route, query)
			if got := float64(page.Bounds().Dx()) * dotMM; math.Abs(got-s.Width) > tolerance {
				t.Errorf("the page is %.2f mm wide, want %.2f", got, s.Width)
			}
			squares(t, page, s, tolerance)
			pulse(t, page, s, tolerance)
			peaks(t, page, s, plan, tolerance)
		})
	}
}

// laidOut is the first page as package scene lays it out: where on it to measure.
func laidOut(t *testing.T, name, query string) *scene.Scene {
	t.Helper()
	r, err := fromQuery(strings.TrimPrefix(query, "?"))
	if err != nil {
		t.Fatal(err)
	}
	lay := map[string]func(*Request) ([]*scene.Scene, error){"strip": strip, "twelve": twelve, "report": onePage}[name]
	pages, err := lay(r)
	if err != nil {
		t.Fatal(err)
	}
	return pages[0]
}

// lowest is the lane of the only lead that runs over the whole window.
func lowest(t *testing.T, s *scene.Scene) scene.Lane {
	t.Helper()
	i := slices.IndexFunc(s.Lanes, func(l scene.Lane) bool { return l.Name == "lead:II" })
	if i < 0 {
		t.Fatalf("no lane of lead II among %v", s.Lanes)
	}
	return s.Lanes[i]
}

// squares measures the coarse grid in a row of dots that no trace crosses.
func squares(t *testing.T, page *image.Gray, s *scene.Scene, tolerance float64) {
	t.Helper()
	l := lowest(t, s)
	left, right := s.Axis.X0, s.Axis.X0+6*25.0
	lines := across(page, l.Y1-0.3, left-1, right+1, 215)
	if len(lines) < 25 {
		t.Fatalf("%d lines of the grid", len(lines))
	}
	var steps []float64
	for _, x := range lines { // fine lines are there too: what is measured is that each stands on a whole mm
		at := (x - left)
		if off := math.Abs(at - math.Round(at)); off > tolerance {
			t.Errorf("a line of the grid at %.3f mm from the first", at)
		}
		steps = append(steps, at)
	}
	if got := steps[len(steps)-1] - steps[0]; math.Abs(got-150) > tolerance {
		t.Errorf("six seconds measure %.3f mm, want 150", got)
	}
}

// pulse measures the height of the calibration pulse in a column through its top.
func pulse(t *testing.T, page *image.Gray, s *scene.Scene, tolerance float64) {
	t.Helper()
	i := slices.IndexFunc(s.Marks, func(m scene.Mark) bool { return m.Class == scene.Calibration && m.Shape == scene.Poly })
	if i < 0 {
		t.Fatal("no pulse of 1 mV")
	}
	p := s.Marks[i].Points
	top, foot := float64(p[2].Y), float64(p[1].Y)
	mid := float64(p[2].X+p[3].X) / 2
	edge := down(page, mid, top-2, foot+2, dark)
	base := down(page, float64(p[0].X)+0.4, top-2, foot+2, dark)
	if len(edge) != 1 || len(base) != 1 {
		t.Fatalf("the pulse has its top at %v and its foot at %v", edge, base)
	}
	if got := base[0] - edge[0]; math.Abs(got-10) > tolerance {
		t.Errorf("1 mV measures %.3f mm, want 10", got)
	}
}

// peaks finds the R waves on paper, and compares their distances with those between
// the activations of the ventricles.
func peaks(t *testing.T, page *image.Gray, s *scene.Scene, preset string, tolerance float64) {
	t.Helper()
	file, _ := presets.Read(preset)
	p, err := plan.Decode(json.RawMessage(file))
	if err != nil {
		t.Fatal(err)
	}
	c, err := timeline.Of(p, field.New())
	if err != nil {
		t.Fatal(err)
	}
	var beats []float64 // ms
	for i := range c.Log.Events {
		if e := &c.Log.Events[i]; e.Kind == event.Activate && c.Log.Sites[e.Site].Name == "his" && e.T.MS() < 5400 {
			beats = append(beats, e.T.MS())
		}
	}
	l := lowest(t, s)
	var found []float64
	for _, at := range beats {
		x, best := int((s.Axis.X0+at*0.025)/dotMM), math.MaxInt
		first, last := 0, 0                 // of the dots on the peak's height
		for d := range 5 * dpi * 10 / 254 { // within 200 ms after the His bundle
			// Half a millimetre off the lane's edge: the stroke of the lane above reaches over it.
			switch y := top(page, x+d, int((l.Y0+0.5)/dotMM), int(l.Y1/dotMM)); {
			case y < best:
				best, first, last = y, x+d, x+d
			case y == best:
				last = x + d
			}
		}
		peak := float64(first+last) / 2 * dotMM
		found = append(found, peak)
	}
	if len(found) < 3 {
		t.Fatalf("%d beats", len(found))
	}
	for i := 1; i < len(found); i++ {
		got, want := found[i]-found[i-1], (beats[i]-beats[i-1])*0.025
		if math.Abs(got-want) > tolerance {
			t.Errorf("R-R %d measures %.3f mm, want %.3f", i, got, want)
		}
	}
}

// top is the first dark dot of a column.
func top(g *image.Gray, x, from, to int) int {
	for y := from; y < to; y++ {
		if g.GrayAt(x, y).Y < dark {
			return y
		}
	}
	return math.MaxInt
}

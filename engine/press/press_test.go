package press

import (
	"bytes"
	"encoding/xml"
	"errors"
	"fmt"
	"image/png"
	"math"
	"os"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"escapement/engine/event"
	"escapement/engine/ladder"
	"escapement/engine/lead"
	"escapement/engine/scene"
)

// drawing lays out one of package ladder's hand-written logs.
func drawing(t *testing.T, name string, o scene.Options) *scene.Scene {
	t.Helper()
	f, err := os.Open("../ladder/testdata/" + name)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	l, err := event.Parse(f)
	if err != nil {
		t.Fatal(err)
	}
	rec := &lead.Record{}
	for i := range rec.MV {
		rec.MV[i] = make([]float32, int(l.Span)/int(lead.Step))
		for k := range rec.MV[i] {
			rec.MV[i][k] = float32(math.Sin(float64(k) / 50))
		}
	}
	o.Leads = []lead.Name{lead.II}
	return scene.Strip(scene.Input{Log: l, Record: rec, Diagram: ladder.Build(l, ladder.Options{Form: ladder.Full})}, o)
}

// element is a path of an SVG file: its classes and where it begins and ends.
type element struct {
	class string
	x, y  float64
}

var numbers = regexp.MustCompile(`-?\d*\.?\d+(?:e-?\d+)?`)

func parse(t *testing.T, svg []byte) (attrs map[string]string, texts string, paths []element) {
	t.Helper()
	attrs = map[string]string{}
	d := xml.NewDecoder(bytes.NewReader(svg))
	for {
		token, err := d.Token()
		if token == nil {
			if err.Error() != "EOF" {
				t.Fatal(err)
			}
			return attrs, texts, paths
		}
		switch e := token.(type) {
		case xml.CharData:
			texts += string(e)
		case xml.StartElement:
			get := func(name string) string {
				for _, a := range e.Attr {
					if a.Name.Local == name {
						return a.Value
					}
				}
				return ""
			}
			if e.Name.Local == "svg" {
				attrs["width"], attrs["height"] = get("width"), get("height")
			}
			if e.Name.Local == "path" {
				p := element{class: get("class")}
				data := get("d")
				n := numbers.FindAllString(data, 2)
				p.x, _ = strconv.ParseFloat(n[0], 64)
				p.y, _ = strconv.ParseFloat(n[1], 64)
				paths = append(paths, p)
			}
		}
	}
}

// The SVG holds every painted mark of the scene once, in order, with its class
// and event, and its lines begin where the scene's lines begin.
func TestSVGHoldsTheMarksOfTheScene(t *testing.T) {
	for _, name := range []string{"normal.log", "node_block.log", "pvc.log", "escape.log", "bundle_block.log", "fusion.log", "device_upper_rate.log", "device_odd.log"} {
		s := drawing(t, name, scene.Options{Caution: true, Grid: true, Legend: true, Title: "A < B & C", Selected: 3})
		var b bytes.Buffer
		if err := SVG(&b, s); err != nil {
			t.Fatal(err)
		}
		attrs, _, paths := parse(t, b.Bytes())
		if got := attrs["width"]; math.Abs(millimetres(t, got)-s.Width) > 1e-4 {
			t.Errorf("%s: width is %s, want %v mm", name, got, s.Width)
		}
		if got := attrs["height"]; math.Abs(millimetres(t, got)-s.Height) > 1e-4 {
			t.Errorf("%s: height is %s, want %v mm", name, got, s.Height)
		}
		if paths[0].class != "paper" {
			t.Fatalf("%s: the first path is %q", name, paths[0].class)
		}
		i := 1
		for _, m := range s.Marks {
			if m.Class == scene.Wave || m.Class == scene.WindowArea {
				continue // never painted
			}
			class := m.Class.String()
			if m.Event != 0 {
				class += fmt.Sprintf(" e%d", m.Event)
			}
			if i >= len(paths) || paths[i].class != class {
				t.Fatalf("%s: mark %+v is not path %d", name, m, i)
			}
			x, y := m.X, m.Y
			if m.Shape == scene.Poly {
				x, y = float64(m.Points[0].X), float64(m.Points[0].Y)
			}
			if (m.Shape == scene.Line || m.Shape == scene.Poly) && (math.Abs(paths[i].x-x) > 1e-4 || math.Abs(paths[i].y-y) > 1e-4) {
				t.Errorf("%s: %s begins at %v, %v, want %v, %v", name, class, paths[i].x, paths[i].y, x, y)
			}
			i++
		}
		if i != len(paths) {
			t.Errorf("%s: %d paths, want %d", name, len(paths), i)
		}
	}
}

func millimetres(t *testing.T, s string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(strings.TrimSuffix(s, "mm"), 64)
	if err != nil || !strings.HasSuffix(s, "mm") {
		t.Fatalf("%q is not in millimetres", s)
	}
	return v
}

func TestTheCautionStandsOnEveryPrint(t *testing.T) {
	bare := drawing(t, "normal.log", scene.Options{})
	for name, print := range map[string]func(s *scene.Scene) ([]byte, error){
		"svg": func(s *scene.Scene) ([]byte, error) { var b bytes.Buffer; err := SVG(&b, s); return b.Bytes(), err },
		"pdf": func(s *scene.Scene) ([]byte, error) { var b bytes.Buffer; err := PDF(&b, s); return b.Bytes(), err },
		"png": func(s *scene.Scene) ([]byte, error) { var b bytes.Buffer; err := PNG(&b, s, 4); return b.Bytes(), err },
	} {
		if b, err := print(bare); !errors.Is(err, ErrNoCaution) || len(b) != 0 {
			t.Errorf("%s: a drawing without caution gave %d bytes and %v", name, len(b), err)
		}
		for _, mm := range []float64{1, 25} { // narrow and wide sheets break it differently
			s := drawing(t, "normal.log", scene.Options{Caution: true, MMPerS: mm})
			first, err := print(s)
			if err != nil || len(first) == 0 {
				t.Errorf("%s at %v mm/s: %d bytes, %v", name, mm, len(first), err)
			}
			if again, _ := print(s); !bytes.Equal(first, again) {
				t.Errorf("%s at %v mm/s: two prints of one drawing differ", name, mm)
			}
		}
	}
	var file bytes.Buffer
	if err := PDF(&file, drawing(t, "normal.log", scene.Options{Caution: true})); err != nil {
		t.Fatal(err)
	}
	if got := created.FindAll(file.Bytes(), -1); len(got) != 1 || string(got[0]) != "/CreationDate(D:20000101000000Z)" {
		t.Errorf("the PDF holds the dates %q", got)
	}
	var b bytes.Buffer
	if err := SVG(&b, drawing(t, "normal.log", scene.Options{Caution: true, Title: "A < B"})); err != nil {
		t.Fatal(err)
	}
	if _, texts, _ := parse(t, b.Bytes()); !strings.Contains(texts, scene.CautionText) || !strings.Contains(texts, "A < B") {
		t.Errorf("the SVG's own text is %q", texts)
	}
}

// Layout reckons with widths that no letter of the print exceeds.
func TestLettersFitTheirBoxes(t *testing.T) {
	texts := []string{scene.CautionText, "632", "AH 82", "µ·–’ü"}
	for r := ' '; r <= '~'; r++ {
		texts = append(texts, string(r))
	}
	for _, c := range scene.Classes() {
		if scene.Light.Style(c).Size == 0 {
			continue
		}
		f, err := face(c, 3)
		if err != nil {
			t.Fatal(err)
		}
		for _, text := range texts {
			if got, most := f.TextWidth(text), c.Width(text, 3); got > most+1e-9 {
				t.Errorf("%s: %q is %v mm wide, the layout allows %v", c, text, got, most)
			}
		}
	}
}

func TestPNGIsTrueToScale(t *testing.T) {
	s := drawing(t, "normal.log", scene.Options{Caution: true})
	var b bytes.Buffer
	if err := PNG(&b, s, 10); err != nil {
		t.Fatal(err)
	}
	img, err := png.Decode(&b)
	if err != nil {
		t.Fatal(err)
	}
	if got, want := img.Bounds().Dx(), int(s.Width*10+0.5); got != want {
		t.Errorf("%d dots wide, want %d", got, want)
	}
	if err := PNG(&b, s, 1000); err == nil {
		t.Error("a picture of thousands of millions of dots was not refused")
	}
}

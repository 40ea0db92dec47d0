// Package press prints a scene at true scale: as SVG, PDF or PNG. One millimetre
// of the scene is one millimetre on paper, so a print can be measured with real
// calipers.
//
// All three are painted by the same few lines over tdewolff/canvas, so they hold
// the same marks at the same places. Letters come from the Go fonts (Bigelow and
// Holmes, under the licence of the Go project), linked in as a Go module: in PDF
// as text in an embedded subset, which can be searched and copied; in SVG and PNG
// as outlines. Outlines, because an SVG that names a font looks different on the
// next machine, and one that embeds two whole fonts weighs 400 kB more than its
// drawing. The title, what the drawing says and the caution stand in an SVG as
// text too, in its title and desc elements, for screen readers.
//
// A scene without [scene.CautionText] is not printed: [ErrNoCaution].
//
// The same scene gives the same bytes, on every machine. Package canvas is large;
// nothing that is loaded with a page's first view may import this package.
package press

import (
	"bytes"
	"errors"
	"fmt"
	"html"
	"image/png"
	"io"
	"strings"

	"github.com/tdewolff/canvas"
	"github.com/tdewolff/canvas/renderers/pdf"
	"github.com/tdewolff/canvas/renderers/rasterizer"
	"github.com/tdewolff/canvas/renderers/svg"

	"escapement/engine/scene"
)

// ErrNoCaution says that the scene lacks the caution text that stands on every
// print.
var ErrNoCaution = errors.New("press: the drawing carries no caution text; lay it out with Options.Caution")

// SVG writes the scene as an SVG file whose width and height are in millimetres.
// Every path has a class attribute: the mark's class and, where it has one, its
// event as "e12".
func SVG(w io.Writer, s *scene.Scene) error {
	if err := check(s); err != nil {
		return err
	}
	var b bytes.Buffer
	r := svg.New(&b, s.Width, s.Height, &svg.Options{SizeUnits: "mm"})
	title, desc := words(s)
	fmt.Fprintf(&b, "<title>%s</title><desc>%s</desc>", html.EscapeString(title), html.EscapeString(desc))
	p := painter{ctx: canvas.NewContext(r), s: s, class: r.SetClass}
	if err := p.paint(); err != nil {
		return err
	}
	if err := r.Close(); err != nil {
		return fmt.Errorf("press: %w", err)
	}
	_, err := w.Write(b.Bytes())
	return err
}

// PDF writes the scene as a PDF file with one page of the scene's size.
func PDF(w io.Writer, s *scene.Scene) error { return Pages(w, []*scene.Scene{s}) }

// Pages writes a PDF file with one page for each scene, of the scene's size. Every one
// carries the caution.
func Pages(w io.Writer, pages []*scene.Scene) error {
	if len(pages) == 0 {
		return errors.New("press: a PDF without a page")
	}
	for _, s := range pages {
		if err := check(s); err != nil {
			return err
		}
	}
	var b bytes.Buffer
	r := pdf.New(&b, pages[0].Width, pages[0].Height, nil)
	title, desc := words(pages[0])
	r.SetInfo(title, desc, "", "", "escapement")
	for i, s := range pages {
		if i > 0 {
			r.NewPage(s.Width, s.Height)
		}
		p := painter{ctx: canvas.NewContext(r), s: s, text: true}
		if err := p.paint(); err != nil {
			return err
		}
	}
	if err := r.Close(); err != nil {
		return fmt.Errorf("press: %w", err)
	}
	out, err := steady(b.Bytes())
	if err != nil {
		return err
	}
	_, err = w.Write(out)
	return err
}

// The outline of a stroke keeps its overlaps. Cutting them out of a trace of 5000 points
// took four fifths of a picture's time; filled by winding, the dots come out the same.
func init() { canvas.FastStroke = true }

// maxPixels bounds a picture's size, about 400 MB in memory.
const maxPixels = 100e6

// PNG writes the scene as a picture with so many dots a millimetre (11.8 is 300
// an inch). It refuses a picture of more than 100 million dots.
func PNG(w io.Writer, s *scene.Scene, dotsPerMM float64) error {
	if err := check(s); err != nil {
		return err
	}
	if n := s.Width * s.Height * dotsPerMM * dotsPerMM; n > maxPixels || s.Width*dotsPerMM < 1 || s.Height*dotsPerMM < 1 {
		return fmt.Errorf("press: %.0f by %.0f mm at %g dots a millimetre is %.0f million dots, more than %.0f million or none",
			s.Width, s.Height, dotsPerMM, n/1e6, maxPixels/1e6)
	}
	r := rasterizer.New(s.Width, s.Height, canvas.DPMM(dotsPerMM), canvas.LinearColorSpace{})
	p := painter{ctx: canvas.NewContext(r), s: s}
	if err := p.paint(); err != nil {
		return err
	}
	r.Close()
	return png.Encode(w, r.Image) // r itself would be asked dot by dot
}

// check sees that the caution stands on the drawing, however it is broken into lines.
func check(s *scene.Scene) error {
	_, desc := words(s)
	if !strings.Contains(squeeze(desc), squeeze(scene.CautionText)) {
		return ErrNoCaution
	}
	return nil
}

func squeeze(t string) string { return strings.ReplaceAll(t, " ", "") }

// words are the title of a drawing and all its sentences.
func words(s *scene.Scene) (title, desc string) {
	var t, d []string
	for i := range s.Marks {
		switch m := &s.Marks[i]; m.Class {
		case scene.Title:
			t = append(t, m.Text)
		case scene.Statement, scene.Caution:
			d = append(d, m.Text)
		}
	}
	return strings.Join(t, " "), strings.Join(d, " ")
}

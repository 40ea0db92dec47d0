package press

import (
	"fmt"
	"sync"

	"github.com/tdewolff/canvas"
	"golang.org/x/image/font/gofont/gobold"
	"golang.org/x/image/font/gofont/goregular"

	"escapement/engine/scene"
)

// painter puts the marks of a scene onto a canvas renderer.
type painter struct {
	ctx   *canvas.Context
	s     *scene.Scene
	class func(...string) // SVG only
	text  bool            // letters as text, not as outlines
}

const mmPerPt = 25.4 / 72

var fonts = sync.OnceValues(func() (*canvas.FontFamily, error) {
	f := canvas.NewFontFamily("Go")
	if err := f.LoadFont(goregular.TTF, 0, canvas.FontRegular); err != nil {
		return nil, err
	}
	return f, f.LoadFont(gobold.TTF, 0, canvas.FontBold)
})

// face is the font of a text class.
func face(c scene.Class, fontMM float64) (*canvas.FontFace, error) {
	f, err := fonts()
	if err != nil {
		return nil, fmt.Errorf("press: %w", err)
	}
	s := scene.Light.Style(c)
	weight := canvas.FontRegular
	if s.Weight >= 600 {
		weight = canvas.FontBold
	}
	return f.Face(s.Size*fontMM/mmPerPt, canvas.Hex(s.Fill), weight), nil
}

func (p *painter) paint() error {
	p.ctx.SetCoordSystem(canvas.CartesianIV) // origin top left, y down
	p.ctx.SetStrokeCapper(canvas.ButtCap)
	p.ctx.SetStrokeJoiner(canvas.RoundJoin)
	p.ctx.SetFillColor(canvas.Hex(scene.Light.Paper))
	p.ctx.SetStrokeColor(canvas.Transparent)
	p.tag("paper")
	p.ctx.DrawPath(0, 0, canvas.Rectangle(p.s.Width, p.s.Height))
	for i := range p.s.Marks {
		m := &p.s.Marks[i]
		if m.Event != 0 {
			p.tag(m.Class.String(), fmt.Sprintf("e%d", m.Event))
		} else {
			p.tag(m.Class.String())
		}
		if err := p.mark(m); err != nil {
			return err
		}
	}
	return nil
}

func (p *painter) tag(classes ...string) {
	if p.class != nil {
		p.class(classes...)
	}
}

func (p *painter) mark(m *scene.Mark) error {
	style := scene.Light.Style(m.Class)
	switch m.Shape {
	case scene.Line:
		path := &canvas.Path{}
		path.MoveTo(m.X, m.Y)
		path.LineTo(m.X2, m.Y2)
		p.stroke(path, &style)
	case scene.Poly:
		path := &canvas.Path{}
		for i, q := range m.Points {
			if i == 0 {
				path.MoveTo(float64(q.X), float64(q.Y))
			} else {
				path.LineTo(float64(q.X), float64(q.Y))
			}
		}
		p.stroke(path, &style)
	case scene.Rect:
		p.fill(canvas.Rectangle(m.X2-m.X, m.Y2-m.Y).Translate(m.X, m.Y), style.Fill)
	case scene.Disc:
		p.fill(canvas.Circle(m.R).Translate(m.X, m.Y), style.Fill)
	case scene.Ring:
		p.stroke(canvas.Circle(m.R).Translate(m.X, m.Y), &style)
	case scene.Text:
		return p.letters(m, &style)
	}
	return nil
}

// stroke draws dashes as pieces of their own: the renderers differ in whether a
// dash is measured in millimetres or in widths of the line.
func (p *painter) stroke(path *canvas.Path, s *scene.Style) {
	if s.Stroke == "" || path.Empty() {
		return
	}
	if len(s.Dash) > 0 {
		path = path.Dash(0, s.Dash...)
	}
	p.ctx.SetFillColor(canvas.Transparent)
	p.ctx.SetStrokeColor(canvas.Hex(s.Stroke))
	p.ctx.SetStrokeWidth(s.Width)
	p.ctx.DrawPath(0, 0, path)
}

func (p *painter) fill(path *canvas.Path, colour string) {
	if colour == "" {
		return
	}
	p.ctx.SetStrokeColor(canvas.Transparent)
	p.ctx.SetFillColor(canvas.Hex(colour))
	p.ctx.DrawPath(0, 0, path)
}

func (p *painter) letters(m *scene.Mark, s *scene.Style) error {
	f, err := face(m.Class, p.s.FontMM)
	if err != nil {
		return err
	}
	if p.text {
		align := [...]canvas.TextAlign{scene.Start: canvas.Left, scene.Middle: canvas.Middle, scene.End: canvas.Right}[m.Anchor]
		p.ctx.DrawText(m.X, m.Y, canvas.NewTextLine(f, m.Text, align))
		return nil
	}
	path, width, err := f.ToPath(m.Text)
	if err != nil {
		return fmt.Errorf("press: text %q: %w", m.Text, err)
	}
	x := m.X
	switch m.Anchor {
	case scene.Middle:
		x -= width / 2
	case scene.End:
		x -= width
	}
	p.fill(path.Transform(canvas.Identity.Translate(x, m.Y).ReflectY()), s.Fill)
	return nil
}

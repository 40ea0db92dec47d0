package scene

import (
	"fmt"
	"math"

	"escapement/engine/tick"
)

// Edges of a page and limits of a print.
const (
	EdgeMM     = 6     // kept free where a paper names no margin: office printers do not reach it (common practice)
	RollMM     = 5080  // the longest side that PDF viewers show: 14400 points (ISO 32000-1, annex C.2)
	MostPages  = 60    // of one print
	betweenMM  = 3     // between two parts of a strip on one page
	leastTier  = 5.6   // height of a tier: the ladder gives way down to this before a strip is refused
	mostTier   = 19    // and takes what room is left up to this
	squareTime = 200e3 // a strip is cut at large squares of 0.2 s, in microseconds
)

// RoomError says that a drawing does not fit on its paper at its scale. True scale
// is what a print is for, so nothing is shrunk.
type RoomError struct {
	What      string // "height", "length" or "pages"
	Need, Has float64
}

func (e *RoomError) Error() string {
	if e.What == "pages" {
		return fmt.Sprintf("the drawing takes %.0f pages; at most %.0f are printed", e.Need, e.Has)
	}
	return fmt.Sprintf("the drawing needs %.0f mm of %s, there are %.0f mm", math.Ceil(e.Need), e.What, e.Has)
}

// Unit is what the numbers of the error count.
func (e *RoomError) Unit() string {
	if e.What == "pages" {
		return e.What
	}
	return "mm"
}

// Form is how a part of a print is drawn.
type Form struct {
	draw    func(Input, Options) *Scene
	longest tick.Dur // of one part; 0: as long as the paper is wide
}

// The forms: leads and ladder on one time axis, and the twelve leads in the form of
// [Options.Paper] over ten seconds, without one as on [Page12].
var (
	StripForm  = Form{draw: Strip}
	TwelveForm = Form{draw: twelve, longest: 10 * tick.Second}
)

func twelve(in Input, o Options) *Scene {
	if o.Paper.Columns == 0 {
		return Page12(in, o)
	}
	return Paper12(in, o)
}

// Roll draws a window on one sheet that is as large as the drawing. The error is a
// [*RoomError].
func Roll(in Input, o Options, f Form) (*Scene, error) {
	o.Pulse = true
	s := f.draw(in, o)
	if longest := max(s.Width, s.Height); longest > RollMM {
		return nil, &RoomError{"length", longest, RollMM}
	}
	return s, nil
}

// Sheets lays a window out on pages of a paper. What is wider than the page goes on
// below, cut at large squares, and then on the next page. Every page carries the
// scales and the caution, and the legend where asked for. The error is a [*RoomError] or says what is wrong with the paper.
func Sheets(in Input, o Options, p Paper, f Form) ([]*Scene, error) {
	o.Pulse, o.end = true, in.Log.Span
	o.fill(&in)
	if p.Margin == 0 {
		p.Margin = EdgeMM
	}
	p.fill()
	if err := p.check(); err != nil {
		return nil, err
	}
	parts, err := cut(&o, p, f.longest)
	if err != nil {
		return nil, err
	}
	b := folio{in: &in, o: o, paper: p, draw: f.draw}
	each, err := b.fit(parts)
	if err != nil {
		return nil, err
	}
	b.bind(b.systems(parts), each)
	return b.pages, nil
}

// cut divides the window into parts that are as wide as the page. Where a form has a
// length of its own, the last part has it too and begins within the one before.
func cut(o *Options, p Paper, longest tick.Dur) ([][2]tick.Time, error) {
	room := p.body() - o.Margin - pad
	most := tick.Time(room / o.MMPerS * 1e6)
	if longest > 0 {
		most = min(most, tick.Time(longest))
	}
	if o.Fill {
		o.widen(most)
	}
	if o.To-o.From <= most {
		return [][2]tick.Time{{o.From, o.To}}, nil
	}
	if most > squareTime {
		most -= most % squareTime
	}
	if n := math.Ceil(float64(o.To-o.From) / float64(max(most, 1))); room <= 0 || n > 40*MostPages {
		return nil, &RoomError{"pages", n, MostPages}
	}
	var parts [][2]tick.Time
	for t := o.From; t < o.To; t += most {
		parts = append(parts, [2]tick.Time{t, min(t+most, o.To)})
	}
	if last := &parts[len(parts)-1]; longest > 0 {
		last[0] = max(o.From, last[1]-most)
	}
	return parts, nil
}

// widen makes a window of whole lines, each of line, within the strip. Lines are cut
// at large squares where there are several.
func (o *Options) widen(line tick.Time) {
	if o.To-o.From > line && line > squareTime {
		line -= line % squareTime
	}
	if line <= 0 {
		return
	}
	length := (o.To - o.From + line - 1) / line * line
	o.To = min(o.From+length, o.end)
	o.From = max(0, o.To-length)
}

// mostCloser is the part of its height by which the signals of a print move together,
// as on the page, before it is refused: more, and nobody could tell the traces apart.
const mostCloser = 0.3

// folio is a print in the making.
type folio struct {
	in    *Input
	o     Options
	paper Paper
	draw  func(Input, Options) *Scene
	lanes []Lane // of a part: the foot names their scales
	pages []*Scene
}

// systems draws the parts of the strip, each without head and foot.
func (b *folio) systems(parts [][2]tick.Time) []*Scene {
	var out []*Scene
	for _, p := range parts {
		o := b.o
		o.From, o.To = p[0], p[1]
		o.Title, o.Statement, o.Legend, o.Caution = "", "", false, false
		out = append(out, b.draw(*b.in, o))
	}
	return out
}

// fit tells how many parts stand on a page, and gives the ladder the height with
// which they fill it.
func (b *folio) fit(parts [][2]tick.Time) (each int, err error) {
	rest, least := 0.0, 0.0
	for _, s := range b.systems(parts[:min(len(parts), 8)]) {
		rest, b.lanes = max(rest, s.Height), s.Lanes
	}
	page, end := b.frame(1, 2)
	room := end - page.y
	tiers := tiersOf(b.in, &b.o)
	if tiers > 0 {
		rest, least = rest-b.o.LadderMM, leastTier*tiers
	}
	each = min(int((room+betweenMM)/(rest+least+betweenMM)), len(parts))
	if short := rest + least - room; each == 0 && b.o.Closer == 0 && short <= mostCloser*rest {
		b.o.Closer = short + 1 // lanes end on whole millimetres
		return b.fit(parts)
	}
	if each == 0 {
		return 0, &RoomError{"height", rest + least + b.paper.Height - room, b.paper.Height}
	}
	if n := (len(parts) + each - 1) / each; n > MostPages {
		return 0, &RoomError{"pages", float64(n), MostPages}
	}
	if tiers > 0 {
		share := (room+betweenMM)/float64(each) - betweenMM - rest
		b.o.LadderMM = min(share, mostTier*tiers)
	}
	return each, nil
}

// bind puts the parts on pages.
func (b *folio) bind(systems []*Scene, each int) {
	of := (len(systems) + each - 1) / each
	for number := 1; len(systems) > 0; number++ {
		page, _ := b.frame(number, of)
		n := min(each, len(systems))
		page.Axis = systems[0].Axis
		page.Axis.X0 += b.paper.Margin
		for _, s := range systems[:n] {
			page.take(s, 0, page.y)
			page.y += s.Height + betweenMM
		}
		systems = systems[n:]
		whole := &sheet{Scene: &Scene{Width: b.paper.Width, Height: b.paper.Height, FontMM: b.o.FontMM, Axis: page.Axis}}
		whole.take(page.Scene, b.paper.Margin, b.paper.Margin)
		b.pages = append(b.pages, whole.Scene)
	}
}

// frame is an empty page: its head stands, and its foot hangs at the bottom. The
// room between them is from y to end.
func (b *folio) frame(number, of int) (page *sheet, end float64) {
	inner := b.paper.body()
	begin := func() *sheet {
		return &sheet{Scene: &Scene{FontMM: b.o.FontMM, Width: inner, Axis: Axis{T0: b.o.From, X0: b.o.Margin, MMPerS: b.o.MMPerS}}, in: b.in, o: b.o, room: newRoom(inner), y: 0}
	}
	page = begin()
	if number > 1 {
		page.o.Statement = ""
	}
	page.heading()
	foot := begin()
	foot.Lanes = b.lanes
	if b.o.Legend && foot.signs() {
		foot.legend()
	}
	if of > 1 {
		foot.o.Imprint = fmt.Sprintf("Page %d of %d. %s", number, of, foot.o.Imprint)
	}
	if b.o.Caution {
		foot.foot()
	}
	end = b.paper.Height - 2*b.paper.Margin - foot.y
	foot.Lanes = nil
	page.take(foot.Scene, 0, end)
	return page, end
}

// take adds the marks of another drawing, moved.
func (s *sheet) take(other *Scene, dx, dy float64) {
	for _, m := range other.Marks {
		s.mark(m.moved(dx, dy))
	}
	for _, l := range other.Lanes {
		l.Y0, l.Y1 = l.Y0+dy, l.Y1+dy
		s.Lanes = append(s.Lanes, l)
	}
}

func (m Mark) moved(dx, dy float64) Mark {
	m.X, m.X2, m.Y, m.Y2 = m.X+dx, m.X2+dx, m.Y+dy, m.Y2+dy
	if len(m.Points) > 0 {
		points := make([]Point, len(m.Points))
		for i, q := range m.Points {
			points[i] = Point{float32(float64(q.X) + dx), float32(float64(q.Y) + dy)}
		}
		m.Points = points
	}
	return m
}

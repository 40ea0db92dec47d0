package scene

import (
	"fmt"
	"strconv"

	"escapement/engine/tick"
)

// book is a report in the making: pages, and how far the last one is filled.
type book struct {
	paper                Paper
	title, date, version string
	caution              []string // in lines
	pages                []*Scene
	y, bottom            float64
}

func newBook(p Paper, title, date, version string) (*book, error) {
	p.fill()
	if err := p.check(); err != nil {
		return nil, err
	}
	b := &book{paper: p, title: title, date: date, version: version}
	b.caution = wrap(Caution, CautionText, reportFont, p.body())
	b.bottom = p.Height - p.Margin - b.footHeight()
	b.page()
	return b, nil
}

func (b *book) at() *Scene { return b.pages[len(b.pages)-1] }

func (b *book) put(m Mark) { b.at().Marks = append(b.at().Marks, m) }

func (b *book) page() {
	b.pages = append(b.pages, &Scene{Width: b.paper.Width, Height: b.paper.Height, FontMM: reportFont})
	b.y = b.paper.Margin
	if len(b.pages) > 1 && b.title != "" {
		line := wrap(Note, b.title, reportFont, b.paper.body())[0]
		b.text(Note, line)
		b.y += 1
	}
}

// fresh tells whether nothing but the running title stands on the page.
func (b *book) fresh() bool {
	return len(b.at().Marks) <= 1 && len(b.pages) > 1 || len(b.at().Marks) == 0
}

// need begins a page where so much has no room on this one.
func (b *book) need(mm float64) {
	if b.y+mm > b.bottom && !b.fresh() {
		b.page()
	}
}

// text sets one line at the left margin and moves on.
func (b *book) text(c Class, line string) {
	h := c.height(reportFont)
	b.put(Mark{Shape: Text, Class: c, X: b.paper.Margin, Y: b.y + ascent*h, Text: line})
	b.y += leading * h
}

// paragraph sets a text over the whole width.
func (b *book) paragraph(c Class, text string) {
	for _, line := range wrap(c, text, reportFont, b.paper.body()) {
		b.need(leading * c.height(reportFont))
		b.text(c, line)
	}
}

func (b *book) heading(statement, note string) {
	if b.title != "" {
		b.paragraph(Title, b.title)
	}
	b.paragraph(Statement, statement)
	b.paragraph(Body, note)
	b.y += 1.5
}

// embed puts a drawing on the page, its top left corner at x, y.
func (b *book) embed(s *Scene, x, y float64) {
	page := b.at()
	if page.Axis.MMPerS == 0 && s.Axis.MMPerS != 0 {
		page.Axis = s.Axis
		page.Axis.X0 += x
	}
	for _, l := range s.Lanes {
		l.Y0, l.Y1 = l.Y0+y, l.Y1+y
		page.Lanes = append(page.Lanes, l)
	}
	for _, m := range s.Marks {
		page.Marks = append(page.Marks, m.moved(x, y))
	}
}

// mostLines bounds how many lines of a strip are printed.
const mostLines = 200

// excerpt sets a strip in as many lines as it takes.
func (b *book) excerpt(e Excerpt) error {
	o, line := b.fit(e)
	end := b.end(e)
	if n := (end.Sub(o.From) + line - 1) / max(line, 1); n > mostLines {
		return fmt.Errorf("scene: from %.3f to %.3f s is %d lines of %.1f s on this paper; at most %d are printed", o.From.Seconds(), end.Seconds(), n, line.MS()/1000, mostLines)
	}
	for from := o.From; from < end; from = from.Add(line) {
		o.From, o.To = from, min(from.Add(line), end)
		s, err := b.system(e, o)
		if err != nil {
			return err
		}
		b.need(s.Height - pad)
		b.embed(s, b.paper.Margin-pad, b.y-pad)
		b.y += s.Height - pad
	}
	return nil
}

// end is where the printed part of a strip ends.
func (b *book) end(e Excerpt) tick.Time {
	if e.O.To != 0 {
		return min(e.O.To, e.In.Log.Span)
	}
	o, line := b.fit(e)
	return min(o.From.Add(line), e.In.Log.Span)
}

// has tells whether the first line of a strip has room on this page.
func (b *book) has(e Excerpt) bool {
	o, line := b.fit(e)
	o.To = min(o.From.Add(line), e.In.Log.Span)
	s, err := b.system(e, o)
	return err != nil || s.Height-pad <= b.bottom-b.y
}

// fit gives the options of a strip's lines and how much time a line holds.
func (b *book) fit(e Excerpt) (Options, tick.Dur) {
	o := e.O
	o.FontMM, o.Grid, o.Pulse = reportFont, true, true
	o.Title, o.Statement, o.Legend, o.Caution = "", "", false, false
	probe := o
	probe.fill(&e.In)
	o.Margin, o.MMPerS, o.MMPerMV, o.LadderMM = probe.Margin, probe.MMPerS, probe.MMPerMV, probe.LadderMM
	return o, fits(b.paper.body()+pad-o.Margin, o.MMPerS)
}

// leastRung is the least height of a ladder's unit on paper, mm.
const leastRung = 4.4

// system is one line of a strip. Where this page has no room for it, its ladder is
// drawn lower; where that does not help either, it is for a page of its own.
func (b *book) system(e Excerpt, o Options) (*Scene, error) {
	s := e.draw(o)
	whole := b.bottom - b.paper.Margin - running + pad
	for _, room := range [...]float64{b.bottom - b.y + pad, whole} {
		if s.Height <= room {
			return s, nil
		}
		if ladderUnits(&e) == 0 {
			continue
		}
		low := o
		low.LadderMM = max(leastRung*ladderUnits(&e), o.LadderMM-(s.Height-room))
		if t := e.draw(low); t.Height <= room {
			return t, nil
		}
	}
	return nil, fmt.Errorf("scene: the strip's lanes are %.0f mm high, less %.0f mm that the ladder can give, and a page has %.0f mm: print fewer leads or lanes, a lower gain, or larger paper",
		s.Height, o.LadderMM-leastRung*ladderUnits(&e), whole)
}

// running is the room that a running title takes, mm.
const running = 5

func ladderUnits(e *Excerpt) float64 { return tiersOf(&e.In, &e.O) }

func (e *Excerpt) draw(o Options) *Scene {
	if e.O.Paper.Columns > 0 {
		return Paper12(e.In, o)
	}
	return Strip(e.In, o)
}

// rulerMM is the length of the line that shows whether a print is at true scale.
const rulerMM = 50.0

// shown says which part of a strip is printed.
func shown(from, to, span tick.Time) string {
	s := func(t tick.Time) string { return trim(t.Seconds()) }
	if from == 0 && to == span {
		return "The whole strip of " + s(span) + " s. "
	}
	return "Shown: " + s(from) + " to " + s(to) + " s of " + s(span) + " s. "
}

// explainStrip explains a strip that stands above or, on the next page, below.
func (b *book) explainStrip(e Excerpt) {
	o, _ := b.fit(e)
	b.explain(e.In, o, shown(e.O.From, b.end(e), e.In.Log.Span))
}

// explain sets the scales, a line to check them by, and the signs.
func (b *book) explain(in Input, o Options, part string) {
	scales := part + trim(o.MMPerS) + " mm/s"
	if in.Record != nil {
		scales += ", " + trim(o.MMPerMV) + " mm/mV"
	}
	scales += scalesOf(in.Signals, func(*Sampled) bool { return true }) + ". Numbers in ms. This line is " + trim(rulerMM) + " mm long:"
	h := Note.height(reportFont)
	lines := wrap(Note, scales, reportFont, b.paper.body()-rulerMM-3)
	b.need(float64(2+len(lines)) * leading * h)
	for _, line := range lines {
		b.text(Note, line)
	}
	x, y := b.paper.Margin+Note.Width(lines[len(lines)-1], reportFont)+2, b.y-leading*h+0.5*ascent*h
	b.put(Mark{Shape: Line, Class: AxisLine, X: x, Y: y, X2: x + rulerMM, Y2: y})
	for _, at := range [...]float64{x, x + rulerMM} {
		b.put(Mark{Shape: Line, Class: AxisLine, X: at, Y: y - 1, X2: at, Y2: y + 1})
	}
	s := &sheet{Scene: &Scene{FontMM: reportFont, Width: b.paper.body() + 2*pad}, in: &in, o: o}
	if s.signs() {
		s.room = newRoom(s.Width)
		s.legend()
		b.need(s.y)
		b.embed(s.Scene, b.paper.Margin-pad, b.y)
		b.y += s.y
	}
	b.y += 2
}

func (b *book) footHeight() float64 {
	return 2 + leading*(Caution.height(reportFont)*float64(len(b.caution))+Note.height(reportFont))
}

// close numbers the pages and sets the foot of each.
func (b *book) close() []*Scene {
	for i, s := range b.pages {
		left := b.paper.Margin
		right, y := b.paper.Width-left, b.bottom+1
		mark := func(m Mark) { s.Marks = append(s.Marks, m) }
		mark(Mark{Shape: Line, Class: Rule, X: left, Y: y, X2: right, Y2: y})
		y++
		h := Caution.height(reportFont)
		for _, line := range b.caution {
			mark(Mark{Shape: Text, Class: Caution, X: left, Y: y + ascent*h, Text: line})
			y += leading * h
		}
		h = Note.height(reportFont)
		count := "page " + strconv.Itoa(i+1) + " of " + strconv.Itoa(len(b.pages))
		imprint := "escapement"
		for _, part := range [...]string{b.version, b.date} {
			if part != "" {
				imprint += " · " + part
			}
		}
		if fitted := wrap(Note, imprint, reportFont, right-left-Note.Width(count, reportFont)-4); len(fitted) > 0 {
			mark(Mark{Shape: Text, Class: Note, X: left, Y: y + ascent*h, Text: fitted[0]})
		}
		mark(Mark{Shape: Text, Class: Note, X: right, Y: y + ascent*h, Text: count, Anchor: End})
	}
	return b.pages
}

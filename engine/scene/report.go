package scene

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"escapement/engine/tick"
)

// Paper is a sheet of paper in millimetres.
type Paper struct {
	Width, Height float64
	Margin        float64 // on all sides; 0 is 10 mm
}

// papers by name; ISO 216 and the usual letter size of 8.5 by 11 inches.
var papers = []struct {
	name          string
	width, height float64
}{{"a4", 210, 297}, {"letter", 215.9, 279.4}, {"a3", 297, 420}}

// Limits of a sheet, mm. Narrower than the least no number fits beside its name.
const (
	leastPaper, mostPaper = 120, 2000
	usualMargin           = 10
)

// ParsePaper reads the name of a sheet: "a4", "letter" or "a3", each with
// "-landscape" behind it where it lies, or its size in millimetres, "200x250".
func ParsePaper(name string) (Paper, error) {
	base, lying := strings.CutSuffix(strings.ToLower(name), "-landscape")
	for _, p := range papers {
		if p.name != base {
			continue
		}
		if lying {
			return Paper{Width: p.height, Height: p.width}, nil
		}
		return Paper{Width: p.width, Height: p.height}, nil
	}
	if w, h, ok := strings.Cut(name, "x"); ok {
		width, err1 := strconv.ParseFloat(w, 64)
		height, err2 := strconv.ParseFloat(h, 64)
		if p := (Paper{Width: width, Height: height}); err1 == nil && err2 == nil {
			return p, p.check()
		}
	}
	return Paper{}, fmt.Errorf("scene: paper %q; it can be a4, letter, a3, one of them with -landscape, or a size in mm such as 200x250", name)
}

func (p *Paper) fill() {
	if p.Width == 0 && p.Height == 0 {
		p.Width, p.Height = papers[0].width, papers[0].height
	}
	if p.Margin == 0 {
		p.Margin = usualMargin
	}
}

func (p Paper) check() error {
	for _, v := range [...]float64{p.Width, p.Height} {
		if !(v >= leastPaper && v <= mostPaper) {
			return fmt.Errorf("scene: a sheet of %g by %g mm; each side can be %d to %d mm", p.Width, p.Height, leastPaper, mostPaper)
		}
	}
	if !(p.Margin >= 0 && p.Margin <= 30) {
		return fmt.Errorf("scene: a margin of %g mm; it can be 0 to 30 mm", p.Margin)
	}
	return nil
}

// body is the width between the margins.
func (p *Paper) body() float64 { return p.Width - 2*p.Margin }

// Excerpt is a part of a strip on paper. From and To of its options bound it; To 0
// is as much as one line holds, and what is longer runs on in further lines and on
// further pages. Margin, FontMM, Title, Statement, Legend, Caution, Grid and Pulse are the
// page's and are set by it. With columns in Paper it is drawn by [Paper12].
type Excerpt struct {
	In Input
	O  Options
}

// State says where the value of a setting comes from.
type State uint8

const (
	Usual   State = iota
	Changed       // other than the default
	Assumed       // not stated by the plan: its default
)

// The rows of a report are text as it is printed; an empty field is left out.
type (
	// Setting is a number of the plan.
	Setting struct {
		Group                      string // a new one begins with its name
		Label, Value, Unit, Normal string
		Word                       bool // the value is a text, not a number
		State                      State
	}
	// Reading is a measured number. Outside marks one that its normal range does not hold.
	Reading struct {
		Label, Value, Unit, Normal string
		Outside                    bool
	}
	// Remark is a finding: what else would look the same, and what the surface tells.
	Remark struct {
		Text, Note string
		Rivals     []string
	}
	// Sum is a number that follows from settings, with how it was reached.
	Sum struct{ Label, Value, Unit, Formula, Numbers string }
	// Difference is a line of a comparison.
	Difference struct {
		Group                              string // a new one begins with its name
		Label, Before, After, Change, Unit string
	}
)

// Report is what a report of one plan says. Nothing in it names a person. Date and
// Version are printed as they are given: layout knows no clock.
type Report struct {
	Title, Statement, Note string
	Strip                  Excerpt
	Warnings               []string
	Findings               []Remark
	Readings               []Reading
	Counted                []Reading // what the device did
	Sums                   []Sum
	Settings               []Setting
	Sources                []string // of the normal ranges
	Date, Version          string
}

// reportFont is the em size of usual text on paper, mm: 7.7 points.
const reportFont = 2.7

// Pages lays the report out on sheets of paper, the strip at true scale. It fails
// where the paper has no room for the strip's lanes, with the numbers.
func (r *Report) Pages(p Paper) ([]*Scene, error) {
	b, err := newBook(p, r.Title, r.Date, r.Version)
	if err != nil {
		return nil, err
	}
	b.heading(r.Statement, r.Note)
	rows := r.rows(b.columnWidth())
	if r.Strip.In.Log == nil {
		b.flow(rows, b.columns())
		return b.close(), nil
	}
	late := !b.has(r.Strip)
	if late { // a page with a title alone would be a waste
		b.explainStrip(r.Strip)
		b.flow(rows, b.columns())
		b.page()
	}
	if err := b.excerpt(r.Strip); err != nil {
		return nil, err
	}
	if !late {
		b.explainStrip(r.Strip)
		b.flow(rows, b.columns())
	}
	return b.close(), nil
}

// rows are all tables, the most read first.
func (r *Report) rows(w float64) []rowLine {
	var rows []rowLine
	rows = append(rows, remarks(w, r.Findings)...)
	rows = append(rows, warnings(w, r.Warnings)...)
	rows = append(rows, readings(w, "Intervals", "Medians of the whole strip.", r.Readings)...)
	rows = append(rows, readings(w, "What the device did", "", r.Counted)...)
	rows = append(rows, sums(w, r.Sums)...)
	rows = append(rows, settings(w, r.Settings)...)
	return append(rows, sources(w, r.Sources)...)
}

// A strip on paper begins its lines at multiples of this, so that they begin on a
// line of the grid.
const wholeStep = 200 * tick.Millisecond

// fits is how much time a line of so many millimetres holds.
func fits(mm, mmPerS float64) tick.Dur {
	d := tick.Dur(math.Floor(mm / mmPerS * 1e6))
	if d > wholeStep {
		d -= d % wholeStep
	}
	return d
}

package scene

import (
	"strings"

	"escapement/engine/lead"
	"escapement/engine/tick"
)

// Form12 is how a page sets the twelve leads: so many columns that follow one another
// in time, each of 12/Columns rows, over a rhythm strip or none. Columns are 4, 2 or 1
// (3x4, 6x2 and 12x1 in rows and columns; common practice); anything else is 4.
type Form12 struct {
	Columns int
	Rhythm  bool // the leads of [Options.Leads] below, each over the whole window
}

// ParseForm12 reads a form as the trade says it, rows by columns, "3x4", "6x2" or "12x1",
// with " + rhythm" after it or not. Spaces do not matter.
func ParseForm12(name string) (Form12, bool) {
	rows, rhythm := strings.CutSuffix(strings.ReplaceAll(name, " ", ""), "+rhythm")
	for columns, n := range [...]string{4: "3x4", 2: "6x2", 1: "12x1"} {
		if n == rows && n != "" {
			return Form12{Columns: columns, Rhythm: rhythm}, true
		}
	}
	return Form12{}, false
}

// order of the twelve leads on paper, column by column (common practice).
var order12 = [lead.Count]lead.Name{lead.I, lead.II, lead.III, lead.AVR, lead.AVL, lead.AVF, lead.V1, lead.V2, lead.V3, lead.V4, lead.V5, lead.V6}

// Page12 is the usual page of twelve leads: four columns of three over a rhythm
// strip of lead II ([Options.Leads] names others).
func Page12(in Input, o Options) *Scene {
	o.Paper = Form12{Columns: 4, Rhythm: true}
	return Paper12(in, o)
}

// Paper12 is a page of twelve leads in the form of [Options.Paper]. A window of ten
// seconds gives four columns of 2.5 s or two of 5 s. Time still runs from left to
// right over the whole page, so the ladder fits below it.
func Paper12(in Input, o Options) *Scene {
	if o.To == 0 {
		o.To = o.From.Add(10 * tick.Second)
		if in.Log != nil {
			o.To = min(o.To, in.Log.Span)
		}
	}
	rhythm := o.Leads
	if len(rhythm) == 0 {
		rhythm = []lead.Name{lead.II}
	}
	if !o.Paper.Rhythm {
		rhythm = nil
	}
	o.Leads = append(order12[:0:0], order12[:]...) // the margin holds all names
	s := begin(&in, o)
	if in.Record == nil {
		return s.finish(nil)
	}
	return s.finish(s.rows12(rhythm))
}

func (s *sheet) rows12(rhythm []lead.Name) []row {
	columns := s.o.Paper.Columns
	if columns != 1 && columns != 2 {
		columns = 4
	}
	rows := make([]row, lead.Count/columns)
	part := (s.o.To - s.o.From) / tick.Time(columns)
	for c := range columns {
		from := s.o.From + tick.Time(c)*part
		for i := range rows {
			rows[i].parts = append(rows[i].parts, s.lead(order12[c*len(rows)+i], from, from+part))
		}
	}
	for _, n := range rhythm {
		rows = append(rows, row{parts: []segment{s.lead(n, s.o.From, s.o.To)}})
	}
	return rows
}

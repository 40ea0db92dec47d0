package sweep

import (
	"encoding/json"
	"io"

	"escapement/engine/plan"
)

// Format is the "format" of a table as JSON.
const Format = "escapement-sweep/1"

// Table takes in the cells of a grid, in any order and in parts, and writes them.
type Table struct {
	g     *Grid
	cells []Cell
	there []bool
	n     int
}

// NewTable is a table without cells.
func NewTable(g *Grid) *Table {
	return &Table{g: g, cells: make([]Cell, g.Len()), there: make([]bool, g.Len())}
}

// Put takes in the cell of a point.
func (t *Table) Put(point int, c Cell) {
	if !t.there[point] {
		t.n++
	}
	t.cells[point], t.there[point] = c, true
}

// Cell is the cell of a point, or nil where it is not there yet.
func (t *Table) Cell(point int) *Cell {
	if !t.there[point] {
		return nil
	}
	return &t.cells[point]
}

// Done is how many points are there.
func (t *Table) Done() int { return t.n }

// Missing are the points that are not there.
func (t *Table) Missing() []int {
	var out []int
	for i, ok := range t.there {
		if !ok {
			out = append(out, i)
		}
	}
	return out
}

// Head describes a grid: what the axes are and how many points there are.
type Head struct {
	Format      string    `json:"format"`
	Fingerprint string    `json:"fingerprint"` // of plan and sweep
	Title       string    `json:"title"`
	X           AxisHead  `json:"x"`
	Y           *AxisHead `json:"y"` // null: a line
	Seeds       []uint64  `json:"seeds"`
	Of          int       `json:"of"` // points of the whole grid, x fastest
}

// AxisHead is an axis with its values as a plan file has them.
type AxisHead struct {
	Name   string `json:"name"`
	Label  string `json:"label"`
	Unit   string `json:"unit"`
	Values []any  `json:"values"`
}

// Head is the grid's.
func (g *Grid) Head() Head {
	h := Head{Format: Format, Fingerprint: g.Fingerprint(), Title: g.Plan.Title, X: describe(g.Sweep.X), Seeds: g.seeds, Of: g.Len()}
	if g.Sweep.Y != nil {
		y := describe(g.Sweep.Y)
		h.Y = &y
	}
	return h
}

// wire is a table as JSON, in columns.
type wire struct {
	Head
	Slice
}

// Slice is the cells of some points in columns: entry i of every list is of point
// Points[i].
type Slice struct {
	Points  []int    `json:"points"`
	Refused Words    `json:"refused"` // why the plan of a point cannot be
	Columns []Column `json:"columns"`
}

// Words is a word for every point: an index into List, or -1 for none.
type Words struct {
	List []string `json:"list"`
	At   []int    `json:"at"`
}

// Column is one outcome over the points. Number and its bounds are of numbers, null
// where no run gave one; N, Min and Max are left out with one seed. Words and Counts
// are of words: the commonest word of a point, and every word with the number of
// runs it came up in; Counts is left out for single words with one seed.
type Column struct {
	Name   string     `json:"name"`
	Label  string     `json:"label"`
	Unit   string     `json:"unit,omitempty"`
	Kind   string     `json:"kind"`
	Number []*float64 `json:"number,omitempty"`
	N      []int      `json:"n,omitempty"`
	Min    []*float64 `json:"min,omitempty"`
	Max    []*float64 `json:"max,omitempty"`
	Words  *Words     `json:"words,omitempty"`
	Counts [][][2]int `json:"counts,omitempty"` // by point: word, runs
}

// dictionary numbers words as they come.
type dictionary struct {
	list []string
	at   map[string]int
}

func (d *dictionary) index(w string) int {
	i, ok := d.at[w]
	if !ok {
		i = len(d.list)
		d.at[w] = i
		d.list = append(d.list, w)
	}
	return i
}

func newDictionary() *dictionary { return &dictionary{list: []string{}, at: map[string]int{}} }

// Slice puts the cells of points, in that order, into columns.
func (g *Grid) Slice(points []int, cell func(point int) *Cell) *Slice {
	s := &Slice{Points: points, Refused: Words{At: make([]int, 0, len(points))}, Columns: make([]Column, len(g.outcomes))}
	if s.Points == nil {
		s.Points = []int{}
	}
	why := newDictionary()
	for _, p := range points {
		at := -1
		if c := cell(p); c.Refused != "" {
			at = why.index(c.Refused)
		}
		s.Refused.At = append(s.Refused.At, at)
	}
	s.Refused.List = why.list
	for k, o := range g.outcomes {
		col := &s.Columns[k]
		*col = Column{Name: o.Name, Label: o.Label, Unit: o.Unit, Kind: string(o.Kind)}
		if o.Kind == plan.NumberOutcome {
			g.numberColumn(col, points, cell, k)
		} else {
			g.wordColumn(col, points, cell, k)
		}
	}
	return s
}

func (g *Grid) numberColumn(col *Column, points []int, cell func(int) *Cell, k int) {
	col.Number = make([]*float64, len(points))
	if len(g.seeds) > 1 {
		col.N, col.Min, col.Max = make([]int, len(points)), make([]*float64, len(points)), make([]*float64, len(points))
	}
	for i, p := range points {
		v := &cell(p).Values[k]
		if v.N == 0 {
			continue
		}
		col.Number[i] = &v.Mean
		if col.N != nil {
			col.N[i], col.Min[i], col.Max[i] = v.N, &v.Min, &v.Max
		}
	}
}

func (g *Grid) wordColumn(col *Column, points []int, cell func(int) *Cell, k int) {
	d := newDictionary()
	col.Words = &Words{At: make([]int, len(points))}
	many := len(g.seeds) > 1 || g.outcomes[k].Kind == plan.WordsOutcome
	if many {
		col.Counts = make([][][2]int, len(points))
	}
	for i, p := range points {
		col.Words.At[i] = -1
		counts := [][2]int{}
		for n, w := range cell(p).Values[k].Words {
			at := d.index(w.Word)
			if n == 0 {
				col.Words.At[i] = at
			}
			counts = append(counts, [2]int{at, w.N})
		}
		if many {
			col.Counts[i] = counts
		}
	}
	col.Words.List = d.list
}

// done are the points that are there, in order.
func (t *Table) done() []int {
	out := make([]int, 0, t.n)
	for i, ok := range t.there {
		if ok {
			out = append(out, i)
		}
	}
	return out
}

// WriteJSON writes what is there.
func (t *Table) WriteJSON(w io.Writer) error {
	out := wire{Head: t.g.Head(), Slice: *t.g.Slice(t.done(), t.Cell)}
	enc := json.NewEncoder(w)
	enc.SetEscapeHTML(false)
	return enc.Encode(&out)
}

func describe(a *plan.Axis) AxisHead {
	f := a.Described()
	out := AxisHead{Name: a.Name(), Label: f.Label, Unit: f.Unit}
	for _, v := range a.Values {
		out.Values = append(out.Values, a.Raw(v))
	}
	return out
}

package sweep

import (
	"encoding/json"
	"fmt"
	"slices"

	"escapement/engine/plan"
)

// Join takes in a table that [Table.WriteJSON] wrote of a part of the same grid. The
// error says why it is none, or which point it holds that is there already with
// other outcomes.
func (t *Table) Join(data []byte) error {
	var in wire
	if err := json.Unmarshal(data, &in); err != nil {
		return fmt.Errorf("no table of a sweep: %w", err)
	}
	if in.Format != Format {
		return fmt.Errorf("format is %q; allowed: %q", in.Format, Format)
	}
	if want := t.g.Fingerprint(); in.Fingerprint != want {
		return fmt.Errorf("a table of another plan or sweep (fingerprint %s, this one has %s)", in.Fingerprint, want)
	}
	if !in.whole(t.g) {
		return fmt.Errorf("columns that are not this sweep's, or do not have an entry for each of the %d points", len(in.Points))
	}
	for i, p := range in.Points {
		if p < 0 || p >= t.g.Len() {
			return fmt.Errorf("point %d; allowed: 0 to %d", p, t.g.Len()-1)
		}
		c, err := in.cell(t.g, i)
		if err != nil {
			return err
		}
		if t.there[p] && !same(&t.cells[p], &c) {
			return fmt.Errorf("point %d is there already, with other outcomes", p)
		}
		t.Put(p, c)
	}
	return nil
}

func same(a, b *Cell) bool {
	return a.Refused == b.Refused && slices.EqualFunc(a.Values, b.Values, func(x, y Reduced) bool {
		return x.N == y.N && x.Mean == y.Mean && x.Min == y.Min && x.Max == y.Max && slices.Equal(x.Words, y.Words)
	})
}

// whole tells whether the columns are the grid's and every list has an entry for every
// point.
func (s *Slice) whole(g *Grid) bool {
	n, many := len(s.Points), len(g.seeds) > 1
	if len(s.Refused.At) != n || len(s.Columns) != len(g.outcomes) {
		return false
	}
	for k, o := range g.outcomes {
		c := &s.Columns[k]
		ok := c.Name == o.Name && c.Kind == string(o.Kind)
		switch {
		case o.Kind == plan.NumberOutcome:
			ok = ok && len(c.Number) == n && (!many || len(c.N) == n && len(c.Min) == n && len(c.Max) == n)
		case n > 0:
			ok = ok && c.Words != nil && len(c.Words.At) == n && (!many && o.Kind == plan.WordOutcome || len(c.Counts) == n)
		}
		if !ok {
			return false
		}
	}
	return true
}

// cell takes entry i out of the columns again.
func (s *Slice) cell(g *Grid, i int) (Cell, error) {
	c := Cell{Values: make([]Reduced, len(g.outcomes))}
	var err error
	pick := func(list []string, at int) string {
		if at < 0 || at >= len(list) {
			err = fmt.Errorf("point %d: word %d of a list of %d", s.Points[i], at, len(list))
			return ""
		}
		return list[at]
	}
	if at := s.Refused.At[i]; at >= 0 {
		c.Refused = pick(s.Refused.List, at)
	}
	if c.Refused != "" {
		return c, err
	}
	for k := range s.Columns {
		col, v := &s.Columns[k], &c.Values[k]
		switch {
		case col.Kind == string(plan.NumberOutcome):
			if !v.number(col, i, len(g.seeds)) {
				err = fmt.Errorf("point %d: %s without its number of runs or its bounds", s.Points[i], col.Name)
			}
		case col.Counts != nil:
			v.N = len(g.seeds)
			for _, n := range col.Counts[i] {
				v.Words = append(v.Words, Count{pick(col.Words.List, n[0]), n[1]})
			}
		case col.Words.At[i] >= 0:
			v.N, v.Words = 1, []Count{{pick(col.Words.List, col.Words.At[i]), 1}}
		}
	}
	return c, err
}

// number takes in a number, and tells whether it is whole.
func (v *Reduced) number(col *Column, i, seeds int) bool {
	x := col.Number[i]
	if x == nil {
		return true
	}
	v.N, v.Mean, v.Min, v.Max = 1, *x, *x, *x
	if seeds == 1 {
		return true
	}
	if col.N[i] < 1 || col.N[i] > seeds || col.Min[i] == nil || col.Max[i] == nil {
		return false
	}
	v.N, v.Min, v.Max = col.N[i], *col.Min[i], *col.Max[i]
	return true
}

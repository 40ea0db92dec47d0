package sweep

import (
	"encoding/csv"
	"io"
	"strconv"
	"strings"

	"escapement/engine/plan"
)

// WriteCSV writes what is there, a line for each point: the values of the axes, the
// outcomes, and why a plan was refused. With several seeds a number is the mean, with
// its bounds beside it, and a word the commonest.
func (t *Table) WriteCSV(w io.Writer) error {
	g := t.g
	out := csv.NewWriter(w)
	many := len(g.seeds) > 1
	var head []string
	for _, a := range g.axes() {
		head = append(head, a.Name())
	}
	for _, o := range g.outcomes {
		head = append(head, o.Name)
		if many && o.Kind == plan.NumberOutcome {
			head = append(head, o.Name+"_min", o.Name+"_max")
		}
	}
	if err := out.Write(append(head, "refused")); err != nil {
		return err
	}
	for _, p := range t.done() {
		var line []string
		at := g.At(p)
		for i, a := range g.axes() {
			line = append(line, a.Text(at[i]))
		}
		c := &t.cells[p]
		for k, o := range g.outcomes {
			line = append(line, c.Values[k].text(o.Kind, many)...)
		}
		if err := out.Write(append(line, c.Refused)); err != nil {
			return err
		}
	}
	out.Flush()
	return out.Error()
}

// text is an outcome in a line: its cells.
func (v *Reduced) text(kind plan.OutcomeKind, many bool) []string {
	number := func(x float64) string {
		if v.N == 0 {
			return ""
		}
		return strconv.FormatFloat(x, 'f', -1, 64)
	}
	switch {
	case kind == plan.NumberOutcome && many:
		return []string{number(v.Mean), number(v.Min), number(v.Max)}
	case kind == plan.NumberOutcome:
		return []string{number(v.Mean)}
	case kind == plan.WordOutcome:
		return []string{v.Word()}
	}
	var all []string
	for _, w := range v.Words {
		all = append(all, w.Word)
	}
	return []string{strings.Join(all, " ")}
}

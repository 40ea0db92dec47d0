package sweep

import (
	"bytes"
	"context"
	"fmt"
	"testing"

	"escapement/engine/plan"
)

// grid makes the grid of a plan given in parts, as JSON.
func grid(t testing.TB, spanMS float64, heart, device, interventions, sweep string) *Grid {
	t.Helper()
	p, err := plan.Decode(fmt.Appendf(nil, `{"format":"escapement-plan/1","span_ms":%g,"heart":{%s},"pacemaker":%s,"interventions":[%s],"sweep":{%s}}`,
		spanMS, heart, device, interventions, sweep))
	if err != nil {
		t.Fatal(err)
	}
	g, err := New(p)
	if err != nil {
		t.Fatal(err)
	}
	return g
}

// all runs the whole grid.
func all(t testing.TB, g *Grid, s Settings) *Table {
	t.Helper()
	table := NewTable(g)
	s.Each = table.Put
	if st, err := g.Run(context.Background(), s); err != nil || st.Done != st.Of {
		t.Fatalf("%d of %d points (%v)", st.Done, st.Of, err)
	}
	return table
}

func written(t testing.TB, table *Table) string {
	t.Helper()
	var b bytes.Buffer
	if err := table.WriteJSON(&b); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

// get is a number of a cell, which must be there.
func (t *Table) get(test testing.TB, point int, name string) *Reduced {
	test.Helper()
	c := t.Cell(point)
	if c.Refused != "" {
		test.Fatalf("point %d (%v) is refused: %s", point, t.g.At(point), c.Refused)
	}
	for k, o := range t.g.outcomes {
		if o.Name == name {
			return &c.Values[k]
		}
	}
	test.Fatalf("the sweep has no outcome %s", name)
	return nil
}

// noAV is a node that conducts neither way.
const noAV = `"av_node":{"fast":{"ah_ms":null,"va_ms":null}}`

// still is a sinus node that gives no impulse on the strip.
const still = `"sinus":{"rate_bpm":10,"first_ms":60000}`

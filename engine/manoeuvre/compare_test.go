package manoeuvre

import (
	"encoding/json"
	"slices"
	"testing"

	"escapement/engine/plan"
	"escapement/presets"
)

func preset(t *testing.T, name string) *plan.Plan {
	t.Helper()
	b, ok := presets.Read(name)
	if !ok {
		t.Fatal("no preset " + name)
	}
	p, err := plan.Decode(b)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// Re-entry in the node and over a septal pathway: the train tells them apart by PPI -
// TCL, over 115 ms in the one and under it in the other (Michaud et al., JACC
// 2001;38:1163).
func TestTheTrainTellsTheCircuitsApart(t *testing.T) {
	c, err := Compare(preset(t, "avnrt-overdrive"), preset(t, "avrt-overdrive"), Usual(), 0)
	if err != nil {
		t.Fatal(err)
	}
	if len(c.Left) != 0 {
		t.Fatalf("left out: %v", c.Left)
	}
	i := slices.IndexFunc(c.Ranked, func(d Difference) bool { return d.Family == "ventricular_overdrive" })
	if i < 0 {
		t.Fatal("no train among the differences")
	}
	d := c.Ranked[i]
	a, b := d.Numbers[0][0], d.Numbers[1][0]
	if a.Name != "PPI - TCL" || a.Value == nil || b.Value == nil || *a.Value <= 115 || *b.Value >= 115 {
		j, _ := json.Marshal(d)
		t.Errorf("%s", j)
	}
	if !slices.IsSortedFunc(c.Ranked, func(x, y Difference) int { return int(y.MS - x.MS) }) {
		t.Error("not in order")
	}
	again, _ := Compare(preset(t, "avnrt-overdrive"), preset(t, "avrt-overdrive"), Usual(), 0)
	x, _ := json.Marshal(c)
	y, _ := json.Marshal(again)
	if string(x) != string(y) {
		t.Error("the same comparison twice gives two answers")
	}
}

// A heart differs from itself in nothing.
func TestAHeartDoesNotDifferFromItself(t *testing.T) {
	p := preset(t, "avnrt-typical")
	c, err := Compare(p, p, Usual(), 0)
	if err != nil || len(c.Ranked) != 0 || c.Tried == 0 {
		t.Errorf("%d of %d differ (%v)", len(c.Ranked), c.Tried, err)
	}
}

// The zone of the atrial extrastimulus in two pathways: conducted by the fast one when
// late, by the slow one when earlier, lost at the end; the tachycardia begins in the
// slow zone only.
func TestZonesAreInTheOrderOfTheirRefractoryPeriods(t *testing.T) {
	p := Usual()
	z, err := Map(preset(t, "avnrt-typical"), "right_atrium", []int{600}, p.Couplings)
	if err != nil {
		t.Fatal(err)
	}
	first := map[string]int{} // looked up only
	for i, k := range z.At {
		if k < 0 {
			continue
		}
		if w := z.Words[k]; first[w] == 0 {
			first[w] = z.Couplings[i]
		}
	}
	t.Log(z.Words, first)
	if z.Words[0] != "no_capture" {
		t.Errorf("at %d ms: %s", z.Couplings[0], z.Words[0])
	}
	slow, fast := 0, 0
	for i, k := range z.At {
		w := z.Words[k]
		if len(w) > 14 && w[:14] == "conducted_slow" {
			slow = z.Couplings[i]
		}
		if fast == 0 && len(w) >= 9 && w[:9] == "conducted" && (len(w) < 14 || w[:14] != "conducted_slow") {
			fast = z.Couplings[i]
		}
	}
	if slow == 0 || fast <= slow {
		t.Errorf("slow up to %d, fast from %d", slow, fast)
	}
}

func TestAPlanWithoutTachycardiaLeavesTheTrainOut(t *testing.T) {
	p := Usual()
	p.Couplings = []int{300}
	c, err := Compare(preset(t, "normal"), preset(t, "avnrt-typical"), p, 5)
	if err != nil || len(c.Left) != 1 {
		t.Errorf("%v (%v)", c.Left, err)
	}
}

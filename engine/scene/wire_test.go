package scene

import (
	"encoding/json"
	"slices"
	"testing"
)

// What is read from the wire form by its description is the scene.
func TestEncodeHoldsEveryMark(t *testing.T) {
	s := small()
	s.Marks = append(s.Marks, Mark{Shape: Text, Class: DimText, X: 1, Y: 2, Text: `a"b`, Anchor: End, Event: 7}, Mark{Shape: Ring, Class: Trace, R: 0.5, Text: "c"})
	meta, numbers := Encode(s)
	var m struct {
		Marks   int
		Classes []string
		Texts   []string
		Lanes   []struct{ Name string }
	}
	if err := json.Unmarshal(meta, &m); err != nil {
		t.Fatal(err)
	}
	if m.Marks != len(s.Marks) || !slices.Equal(m.Classes, []string{"trace", "axis", "dim-text"}) || !slices.Equal(m.Texts, []string{`a"b`, "c"}) || m.Lanes[0].Name != "axis" {
		t.Errorf("meta is %s", meta)
	}
	want := []float32{
		2, 0, 0, 0, 0, 0, 0, 0, 0, 0, 2,
		1, 1, 0, 0, 1, 0, 0, 0, 0, 0, 0,
		2, 0, 0, 0, 0, 0, 0, 0, 0, 0, 1,
		6, 2, 1, 2, 0, 0, 0, 1, 2, 7, 0,
		5, 0, 0, 0, 0, 0, 0.5, 2, 0, 0, 0,
		1, 2, 3, 4, 5, 6,
	}
	if !slices.Equal(numbers, want) {
		t.Errorf("numbers are\n%v, want\n%v", numbers, want)
	}
}

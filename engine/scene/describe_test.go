package scene

import (
	"encoding/json"
	"testing"
)

func TestEncodeCutsTrailingZeros(t *testing.T) {
	for _, c := range []struct {
		name string
		mark Mark
		want string
	}{
		{"line", Mark{Shape: Line, Class: Atrium, X: 1, Y: 2, X2: 3.00004, Y2: 4.5, Event: 7}, `[1,"atrium",1,2,3,4.5,0,"",0,7]`},
		{"grid", Mark{Shape: Line, Class: GridMinor, X: 1, X2: 1, Y2: 9}, `[1,"grid-minor",1,0,1,9]`},
		{"text", Mark{Shape: Text, Class: DimText, X: 1, Y: 2, Text: `a"b`, Anchor: End}, `[6,"dim-text",1,2,0,0,0,"a\"b",2]`},
		{"disc", Mark{Shape: Disc, Class: Sinus, R: 0.7, Event: 3}, `[4,"sinus",0,0,0,0,0.7,"",0,3]`},
		{"nothing", Mark{Shape: Text, Class: Title}, `[6,"title"]`},
	} {
		if got := string(c.mark.encode(nil, 5)); got != c.want {
			t.Errorf("%s: %s, want %s", c.name, got, c.want)
		}
	}
}

func TestDescribeNamesEveryPart(t *testing.T) {
	meta := Describe(small())
	want := `{"width":10,"height":5,"font_mm":3,"axis":{"t0_us":0,"x0":0,"mm_per_s":0},` +
		`"lanes":[{"name":"axis","label":"s","y0":0,"y1":5}],` +
		`"marks":[[2,"trace",0,0,0,0,0,"",0,0,0,2],[1,"axis",0,0,1],[2,"trace",0,0,0,0,0,"",0,0,2,1]]}`
	if got := string(meta); got != want {
		t.Errorf("got\n%s, want\n%s", got, want)
	}
	if !json.Valid(meta) {
		t.Error("not JSON")
	}
}

func small() *Scene {
	return &Scene{Width: 10, Height: 5, FontMM: 3, Marks: []Mark{
		{Shape: Poly, Class: Trace, Points: []Point{{1, 2}, {3, 4}}},
		{Shape: Line, Class: AxisLine, X2: 1},
		{Shape: Poly, Class: Trace, Points: []Point{{5, 6}}},
	}, Lanes: []Lane{{Name: "axis", Label: "s", Y1: 5}}}
}

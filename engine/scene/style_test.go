package scene

import (
	"encoding/json"
	"fmt"
	"math"
	"testing"
)

// luminance and contrast are those of WCAG 2.1 ("relative luminance", "contrast ratio").
func luminance(t *testing.T, hex string) float64 {
	var c [3]int
	if _, err := fmt.Sscanf(hex, "#%02X%02X%02X", &c[0], &c[1], &c[2]); err != nil {
		t.Fatalf("colour %q: %v", hex, err)
	}
	sum := 0.0
	for i, weight := range [3]float64{0.2126, 0.7152, 0.0722} {
		v := float64(c[i]) / 255
		if v <= 0.03928 {
			v /= 12.92
		} else {
			v = math.Pow((v+0.055)/1.055, 2.4)
		}
		sum += weight * v
	}
	return sum
}

func contrast(t *testing.T, a, b string) float64 {
	x, y := luminance(t, a), luminance(t, b)
	return (max(x, y) + 0.05) / (min(x, y) + 0.05)
}

// WCAG 2.1 AA asks 4.5:1 of text. Grid, halo and bars are background.
func TestContrastAgainstThePaper(t *testing.T) {
	for _, dark := range []bool{false, true} {
		p := PaletteFor(dark)
		for _, c := range Classes() {
			s := p.Style(c)
			for _, colour := range []string{s.Stroke, s.Fill} {
				switch colour {
				case "", p.GridMinor, p.GridMajor, p.Halo, p.Tint, p.Lost, p.Found:
					continue
				}
				if got := contrast(t, colour, p.Paper); got < 4.5 {
					t.Errorf("dark=%v %s: %s has %.2f:1 against the paper, want 4.5", dark, c, colour, got)
				}
				if got := contrast(t, colour, p.Halo); got < 3 {
					t.Errorf("dark=%v %s: %s has %.2f:1 on the halo, want 3", dark, c, colour, got)
				}
				for _, under := range []string{p.Lost, p.Found} {
					if got := contrast(t, colour, under); got < 3 {
						t.Errorf("dark=%v %s: %s has %.2f:1 on %s, want 3", dark, c, colour, got, under)
					}
				}
				if got := contrast(t, colour, p.Tint); got < 4.5 && (c == WindowText || c == Signal || c == Hatch) {
					t.Errorf("dark=%v %s: %s has %.2f:1 on a bar, want 4.5", dark, c, colour, got)
				}
			}
		}
	}
}

// Colour is never the only cue: classes that may stand in one tier with the same
// shape differ in dash or width as well.
func TestClassesOfOneTierDifferWithoutColour(t *testing.T) {
	for _, pair := range [][2]Class{{Node, NodeSlow}, {Node, Accessory}, {BundleLeft, BundleRight}, {His, BundleRight}, {Sinus, Atrium}, {Ventricle, Block}, {Block, Tail}, {Timer, Held}, {Signal, WindowEnd}, {WindowEdge, WindowEnd}, {Gone, New}, {Moved, Kept}} {
		a, b := Light.Style(pair[0]), Light.Style(pair[1])
		if a.Width == b.Width && fmt.Sprint(a.Dash) == fmt.Sprint(b.Dash) {
			t.Errorf("%s and %s differ in colour only", pair[0], pair[1])
		}
	}
}

func TestStylesJSONHoldsEveryClass(t *testing.T) {
	for _, dark := range []bool{false, true} {
		var got struct {
			Paper   string
			Classes map[string]Style
		}
		if err := json.Unmarshal(StylesJSON(dark), &got); err != nil {
			t.Fatal(err)
		}
		if len(got.Classes) != int(classEnd)-1 || got.Paper != PaletteFor(dark).Paper {
			t.Errorf("dark=%v: %d classes on %s", dark, len(got.Classes), got.Paper)
		}
	}
}

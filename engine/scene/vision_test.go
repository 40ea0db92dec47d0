package scene

import (
	"fmt"
	"math"
	"testing"
)

// What a dichromat sees of a colour, in linear light, sRGB primaries: matrices of
// Machado, Oliveira and Fernandes (IEEE TVCG 2009;15:1291) at full severity, from memory.
var dichromats = []struct {
	name string
	m    [3][3]float64
}{
	{"protanope", [3][3]float64{{0.152286, 1.052583, -0.204868}, {0.114503, 0.786281, 0.099216}, {-0.003882, -0.048116, 1.051998}}},
	{"deuteranope", [3][3]float64{{0.367322, 0.860646, -0.227968}, {0.280085, 0.672501, 0.047413}, {-0.011820, 0.042940, 0.968881}}},
	{"tritanope", [3][3]float64{{1.255528, -0.076749, -0.178779}, {-0.078411, 0.930809, 0.147602}, {0.004733, 0.691367, 0.303900}}},
}

func linear(t *testing.T, hex string) (c [3]float64) {
	var v [3]int
	if _, err := fmt.Sscanf(hex, "#%02X%02X%02X", &v[0], &v[1], &v[2]); err != nil {
		t.Fatalf("colour %q: %v", hex, err)
	}
	for i := range c {
		c[i] = float64(v[i]) / 255
		if c[i] <= 0.04045 {
			c[i] /= 12.92
		} else {
			c[i] = math.Pow((c[i]+0.055)/1.055, 2.4)
		}
	}
	return c
}

// seen is the colour in CIE L*a*b* (D65) through such an eye; m nil is every other one.
func seen(c [3]float64, m *[3][3]float64) [3]float64 {
	if m != nil {
		var d [3]float64
		for i := range d {
			d[i] = min(1, max(0, m[i][0]*c[0]+m[i][1]*c[1]+m[i][2]*c[2]))
		}
		c = d
	}
	f := func(v float64) float64 {
		if v > 216.0/24389 {
			return math.Cbrt(v)
		}
		return (24389.0/27*v + 16) / 116
	}
	x := f((0.4124*c[0] + 0.3576*c[1] + 0.1805*c[2]) / 0.95047)
	y := f(0.2126*c[0] + 0.7152*c[1] + 0.0722*c[2])
	z := f((0.0193*c[0] + 0.1192*c[1] + 0.9505*c[2]) / 1.08883)
	return [3]float64{116*y - 16, 500 * (x - y), 200 * (y - z)}
}

// Two of the drawing's colours are either far apart for every eye, or what they draw
// differs in its sign, which the third column names. A distance of 10 (CIE 1976) is
// plain at a glance; common practice.
func TestColoursAreToldApartByEveryEyeOrBySign(t *testing.T) {
	const plain = 10
	for _, dark := range []bool{false, true} {
		p := PaletteFor(dark)
		all := []struct{ name, hex string }{{"atrium", p.Atrium}, {"node", p.Node}, {"his", p.Purkinje}, {"ventricle", p.Ink}, {"device", p.Device}, {"block", p.Warning}}
		signs := map[string]string{
			"node block": "a block is a bar across the end of a stroke, labelled",
			"atrium his": "tiers of their own, named at the left",
		}
		for i := range all {
			for j := i + 1; j < len(all); j++ {
				a, b := linear(t, all[i].hex), linear(t, all[j].hex)
				pair := all[i].name + " " + all[j].name
				for k := -1; k < len(dichromats); k++ {
					eye, m := "every other", (*[3][3]float64)(nil)
					if k >= 0 {
						eye, m = dichromats[k].name, &dichromats[k].m
					}
					x, y := seen(a, m), seen(b, m)
					d := math.Sqrt((x[0]-y[0])*(x[0]-y[0]) + (x[1]-y[1])*(x[1]-y[1]) + (x[2]-y[2])*(x[2]-y[2]))
					if d < plain && signs[pair] == "" {
						t.Errorf("dark=%v, %s eye: %s are %.1f apart and have no sign", dark, eye, pair, d)
					}
					if d < plain {
						t.Logf("dark=%v, %s eye: %s are %.1f apart; %s", dark, eye, pair, d, signs[pair])
					}
				}
			}
		}
	}
}

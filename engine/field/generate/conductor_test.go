package main

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/spatial/r3"
)

// A dipole in a sphere has a series solution, with and without a core of another
// conductivity: general mathematics, derived by matching potentials and currents
// at both surfaces order by order.

// radialSeries is the surface potential, per unit of moment over 4 pi, of a
// dipole on the z axis at height b pointing along it, in a sphere of radius 1
// whose core of radius a (0: none) conducts s times as well.
func radialSeries(b, a, s, cosine float64) float64 {
	sum, p0, p1 := 0.0, 1.0, cosine // Legendre polynomials of order n-1 and n
	for n := 1.0; n < 120; n++ {
		below, above := -(n+1)/math.Pow(b, n+2), n*math.Pow(b, n-1) // of r^n below the dipole and r^-(n+1) above it
		g := n * (1 - s) / (s*n + n + 1) * math.Pow(a, 2*n+1)
		h := (n + 1) / n
		core := 0.0
		if a > 0 {
			core = g * (below + h*above) / (1 - g*h)
		}
		sum += (h*(above+core) + above + core) * p1
		p0, p1 = p1, ((2*n+1)*cosine*p1-n*p0)/(n+1)
	}
	return sum
}

func TestSphereAgainstTheSeries(t *testing.T) {
	x, tri := icosphere(2)
	sphere := func(radius, inside, outside float64) shell {
		s := shell{tri: orient(x, tri), inside: inside, outside: outside}
		for _, p := range x {
			s.x = append(s.x, r3.Scale(radius, p))
		}
		return s
	}
	var electrodes []r3.Vec
	for k := 0; k < 13; k++ {
		sin, cos := math.Sincos(math.Pi * float64(k) / 12)
		electrodes = append(electrodes, r3.Vec{X: sin * 0.8, Y: sin * 0.6, Z: cos})
	}
	// One small triangle as a double layer is a dipole of its area, at its centre.
	const size = 0.02
	dipole := func(b float64) []r3.Vec {
		return []r3.Vec{{X: size, Z: b}, {X: -size / 2, Y: size * math.Sqrt(3) / 2, Z: b}, {X: -size / 2, Y: -size * math.Sqrt(3) / 2, Z: b}}
	}
	area := 3 * math.Sqrt(3) / 4 * size * size
	for _, c := range []struct {
		name         string
		shells       []shell
		b, a, s, tol float64
	}{
		{"homogeneous", []shell{sphere(1, 1, 0)}, 0.5, 0, 1, 0.02},
		{"conducting core", []shell{sphere(1, 1, 0), sphere(0.4, 3, 1)}, 0.6, 0.4, 3, 0.03},
	} {
		cond, err := newConductor(c.shells, electrodes)
		if err != nil {
			t.Fatal(err)
		}
		got := cond.transfer(dipole(c.b), [][3]int{{0, 1, 2}}, false)
		mean := func(f func(int) float64) float64 {
			s := 0.0
			for k := range electrodes {
				s += f(k) / float64(len(electrodes))
			}
			return s
		}
		want := func(k int) float64 { return area / (4 * math.Pi) * radialSeries(c.b, c.a, c.s, electrodes[k].Z) }
		// The potential is known up to a constant, and a layer's sign is that of its
		// normal seen from the observer: compare without mean, sign by the first.
		g, w := mean(func(k int) float64 { return got.At(k, 0) }), mean(want)
		sign := 1.0
		if (got.At(0, 0)-g)*(want(0)-w) < 0 {
			sign = -1
		}
		off, size := 0.0, 0.0
		for k := range electrodes {
			d := sign*(got.At(k, 0)-g) - (want(k) - w)
			off, size = off+d*d, size+(want(k)-w)*(want(k)-w)
		}
		if r := math.Sqrt(off / size); r > c.tol {
			t.Errorf("%s: %.2f%% rms off the series", c.name, 100*r)
		} else {
			t.Logf("%s: %.2f%% rms off the series", c.name, 100*r)
		}
	}
}

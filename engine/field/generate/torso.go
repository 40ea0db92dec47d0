package main

import (
	"math"

	"gonum.org/v1/gonum/spatial/r3"
)

// torso meshes the body surface, a superellipsoid.
func (p *Parameters) torso() shell {
	c := &p.Conductor
	dirs, tri := icosphere(c.Subdivision)
	s := shell{tri: tri, inside: 1}
	for _, d := range dirs {
		// Stretched before it is put on the surface, so that triangles stay alike.
		d = r3.Unit(r3.Vec{X: d.X * c.Half.X, Y: d.Y * c.Half.Y, Z: d.Z * c.Half.Z})
		lo, hi := 1.0, 1000.0
		for range 50 {
			m := (lo + hi) / 2
			flat := math.Pow(math.Abs(m*d.X/c.Half.X), c.Flat) + math.Pow(math.Abs(m*d.Y/c.Half.Y), c.Flat)
			if math.Pow(flat, c.Tall/c.Flat)+math.Pow(math.Abs(m*d.Z/c.Half.Z), c.Tall) < 1 {
				lo = m
			} else {
				hi = m
			}
		}
		s.x = append(s.x, r3.Sub(r3.Scale(lo, d), r3.Vec{Z: c.Lower}))
	}
	s.tri = orient(s.x, s.tri)
	return s
}

// front is the point of the chest at a place to the left and up.
func (p *Parameters) front(x, z float64) r3.Vec {
	c := &p.Conductor
	tall := math.Pow(math.Abs((z+c.Lower)/c.Half.Z), c.Tall)
	q := math.Pow(1-tall, c.Flat/c.Tall) - math.Pow(math.Abs(x/c.Half.X), c.Flat)
	return r3.Vec{X: x, Y: -c.Half.Y * math.Pow(math.Max(q, 0), 1/c.Flat), Z: z}
}

// side is the point of the chest at a height and an angle from the left towards the front.
func (p *Parameters) side(angle, z float64) r3.Vec {
	c := &p.Conductor
	tall := math.Pow(math.Abs((z+c.Lower)/c.Half.Z), c.Tall)
	sin, cos := math.Sincos(radians(angle))
	k := math.Pow(1-tall, 1/c.Tall)
	r := k / math.Pow(math.Pow(math.Abs(cos)/c.Half.X, c.Flat)+math.Pow(math.Abs(sin)/c.Half.Y, c.Flat), 1/c.Flat)
	return r3.Vec{X: r * cos, Y: -r * sin, Z: z}
}

// electrodes in the order right arm, left arm, left leg, V1 to V6.
func (p *Parameters) electrodes() []r3.Vec {
	h := p.Electrodes
	return []r3.Vec{
		p.front(-135, 175), p.front(135, 175), p.front(100, -320),
		p.front(-22, h.V1V2), p.front(22, h.V1V2), p.front(55, (h.V1V2+h.V4V5V6)/2),
		p.front(88, h.V4V5V6), p.side(35, h.V4V5V6), p.side(5, h.V4V5V6),
	}
}

// bloodShells are the surfaces of the two cavities, a little off the muscle so
// that no two surfaces touch.
func (v *ventricles) bloodShells() []shell {
	var out []shell
	for _, tri := range [][][3]int{v.leftCavity(), v.rightCavity()} {
		s := shell{inside: v.p.Conductor.BloodRatio, outside: 1}
		index := map[int]int{}
		for _, t := range tri {
			var f [3]int
			for k, n := range t {
				i, ok := index[n]
				if !ok {
					i = len(s.x)
					index[n] = i
					s.x = append(s.x, v.cavityPoint(n))
				}
				f[k] = i
			}
			s.tri = append(s.tri, f)
		}
		s.tri = orient(s.x, s.tri)
		s.x = inset(s.x, s.tri, v.p.Conductor.BloodInset)
		out = append(out, s)
	}
	return out
}

// lidNode stands for the middle of the left cavity's lid, which is no node.
const lidNode = -2

func (v *ventricles) cavityPoint(n int) r3.Vec {
	if n != lidNode {
		return v.x[n]
	}
	var sum r3.Vec
	top := v.p.Ventricles.Rings - 1
	for i := range v.grid[LeftInner] {
		sum = r3.Add(sum, v.x[v.grid[LeftInner][i][top]])
	}
	return r3.Scale(1/float64(v.p.Ventricles.Columns), sum)
}

// leftCavity takes every other column of the endocardium and a flat lid.
func (v *ventricles) leftCavity() [][3]int {
	nt, top := v.p.Ventricles.Columns, v.p.Ventricles.Rings-1
	in := v.grid[LeftInner]
	var tri [][3]int
	for i := 0; i < nt; i += 2 {
		i1 := (i + 2) % nt
		for j := 0; j < top; j++ {
			tri = append(tri, [3]int{in[i][j], in[i1][j], in[i1][j+1]}, [3]int{in[i][j], in[i1][j+1], in[i][j+1]})
		}
		tri = append(tri, [3]int{v.apex[LeftInner], in[i1][0], in[i][0]})
	}
	for i := 0; i < nt; i += 2 {
		tri = append(tri, [3]int{in[i][top], in[(i+2)%nt][top], lidNode})
	}
	return tri
}

// rightCavity is the septum's right side, the free wall and a lid between them.
func (v *ventricles) rightCavity() [][3]int {
	top, out := v.p.Ventricles.Rings-1, v.grid[LeftOuter]
	var q ventricles // collects triangles without the collapsed ones
	for i := v.first; i < v.last; i++ {
		for j := v.p.Ventricles.RightRow; j < top; j++ {
			q.quad(out[i][j], out[i+1][j], out[i+1][j+1], out[i][j+1])
			q.quad(v.cavityWall(i, j), v.cavityWall(i+1, j), v.cavityWall(i+1, j+1), v.cavityWall(i, j+1))
		}
		q.quad(out[i][top], out[i+1][top], v.cavityWall(i+1, top), v.cavityWall(i, top))
	}
	return q.tri
}

// inset moves points against their normal.
func inset(x []r3.Vec, tri [][3]int, by float64) []r3.Vec {
	normal := make([]r3.Vec, len(x))
	for _, t := range tri {
		n := r3.Cross(r3.Sub(x[t[1]], x[t[0]]), r3.Sub(x[t[2]], x[t[0]]))
		for _, k := range t {
			normal[k] = r3.Add(normal[k], n)
		}
	}
	out := make([]r3.Vec, len(x))
	for i := range x {
		out[i] = r3.Sub(x[i], r3.Scale(by/r3.Norm(normal[i]), normal[i]))
	}
	return out
}

package main

import (
	"math"
	"sort"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/spatial/r3"
)

// shell is a closed surface at which conductivity changes, normals outwards.
type shell struct {
	x               []r3.Vec
	tri             [][3]int
	inside, outside float64 // conductivity over that of the torso
}

// conductor is a volume conductor of nested shells, solved by boundary elements:
// potential constant on each triangle, collocation at centroids, the angle a
// triangle sees itself under taken from the sum over its shell, and the
// undetermined constant removed by deflation. The first shell is the body
// surface, outside of which nothing conducts. See Barr, Ramsey, Spach 1977 and
// Oostendorp, van Oosterom 1989 (both from memory) for the method.
type conductor struct {
	points []r3.Vec   // triangle centroids, then electrodes
	weight *mat.Dense // electrodes x points: from the unbounded medium's potential to the real one
}

// newConductor solves for electrodes on the first shell. The potential there is
// the boundary integral taken at the electrode itself: averaging the
// neighbouring centroids would depend on the mesh.
func newConductor(shells []shell, electrodes []r3.Vec) (*conductor, error) {
	var all []corners
	var jump []float64 // inside minus outside
	var mean []float64
	var first []int
	for _, s := range shells {
		first = append(first, len(all))
		for _, t := range s.tri {
			all = append(all, corners{s.x[t[0]], s.x[t[1]], s.x[t[2]]})
			jump, mean = append(jump, s.inside-s.outside), append(mean, (s.inside+s.outside)/2)
		}
	}
	first = append(first, len(all))
	n, body := len(all), first[1]
	c := &conductor{}
	for _, t := range all {
		c.points = append(c.points, t.centroid())
	}
	m := mat.NewDense(n, n, nil)
	for k := range shells {
		for i := first[k]; i < first[k+1]; i++ {
			own := 0.0
			for j, t := range all {
				if j == i {
					continue
				}
				a := t.solidAngle(c.points[i])
				if j >= first[k] && j < first[k+1] {
					own += a
				}
				m.Set(i, j, -a*jump[j]/(4*math.Pi))
			}
			m.Set(i, i, mean[i]-(2*math.Pi-own)*jump[i]/(4*math.Pi))
			for j := 0; j < body; j++ {
				m.Set(i, j, m.At(i, j)+0.5/float64(body))
			}
		}
	}
	e := mat.NewDense(len(electrodes), n, nil)
	for k, r := range electrodes {
		at, owner := project(r, all[:body])
		c.points = append(c.points, at)
		own := 0.0
		for j, t := range all {
			if j == owner {
				continue
			}
			a := t.solidAngle(at)
			if j < body {
				own += a
			}
			e.Set(k, j, 2*a*jump[j]/(4*math.Pi))
		}
		e.Set(k, owner, 2*(2*math.Pi-own)*jump[owner]/(4*math.Pi))
	}
	var lu mat.LU
	lu.Factorize(m)
	var solved mat.Dense
	if err := lu.SolveTo(&solved, true, e.T()); err != nil {
		return nil, err
	}
	c.weight = mat.NewDense(len(electrodes), n+len(electrodes), nil)
	for k := range electrodes {
		for j := 0; j < n; j++ {
			c.weight.Set(k, j, solved.At(j, k))
		}
		c.weight.Set(k, n+k, 2)
	}
	return c, nil
}

// transfer is the potential at each electrode for one unit of potential in each
// triangle of a double layer. A closed layer makes none at a point outside, so
// there each row is made to sum to zero: this mends points that the insets left
// inside muscle.
func (c *conductor) transfer(x []r3.Vec, tri [][3]int, closed bool) *mat.Dense {
	o := mat.NewDense(len(c.points), len(tri), nil)
	area, total := make([]float64, len(tri)), 0.0
	for j, t := range tri {
		q := corners{x[t[0]], x[t[1]], x[t[2]]}
		area[j] = r3.Norm(r3.Cross(r3.Sub(q.b, q.a), r3.Sub(q.c, q.a)))
		total += area[j]
		for i, p := range c.points {
			o.Set(i, j, q.solidAngle(p)/(4*math.Pi))
		}
	}
	if closed {
		for i := range c.points {
			row := o.RawRowView(i)
			sum := 0.0
			for _, v := range row {
				sum += v
			}
			for j := range row {
				row[j] -= sum * area[j] / total
			}
		}
	}
	var out mat.Dense
	out.Mul(c.weight, o)
	return &out
}

// corners of a triangle.
type corners struct{ a, b, c r3.Vec }

func (t corners) centroid() r3.Vec {
	return r3.Scale(1.0/3, r3.Add(t.a, r3.Add(t.b, t.c)))
}

// solidAngle under which the triangle is seen from o, positive where its normal
// points away from o (van Oosterom and Strackee, IEEE Trans Biomed Eng
// 1983;30:125).
func (t corners) solidAngle(o r3.Vec) float64 {
	a, b, c := r3.Sub(t.a, o), r3.Sub(t.b, o), r3.Sub(t.c, o)
	la, lb, lc := r3.Norm(a), r3.Norm(b), r3.Norm(c)
	den := la*lb*lc + r3.Dot(a, b)*lc + r3.Dot(a, c)*lb + r3.Dot(b, c)*la
	return 2 * math.Atan2(r3.Dot(a, r3.Cross(b, c)), den)
}

// project finds the point of a triangulated surface next to r, kept off the
// triangle's edges, and the triangle's index.
func project(r r3.Vec, tri []corners) (r3.Vec, int) {
	order := make([]int, len(tri))
	for i := range order {
		order[i] = i
	}
	sort.SliceStable(order, func(i, j int) bool {
		return r3.Norm(r3.Sub(tri[order[i]].centroid(), r)) < r3.Norm(r3.Sub(tri[order[j]].centroid(), r))
	})
	best, at, owner := math.Inf(1), r3.Vec{}, none
	for _, k := range order[:min(24, len(order))] {
		p := tri[k].closest(r)
		if d := r3.Norm(r3.Sub(p, r)); d < best {
			best, at, owner = d, p, k
		}
	}
	return at, owner
}

// closest is the foot of r on the triangle's plane, its barycentric coordinates
// held at 0.02 or more.
func (t corners) closest(r r3.Vec) r3.Vec {
	u, v, w := r3.Sub(t.a, t.c), r3.Sub(t.b, t.c), r3.Sub(r, t.c)
	uu, uv, vv, uw, vw := r3.Dot(u, u), r3.Dot(u, v), r3.Dot(v, v), r3.Dot(u, w), r3.Dot(v, w)
	det := uu*vv - uv*uv
	p, q := (uw*vv-vw*uv)/det, (vw*uu-uw*uv)/det
	b := [3]float64{math.Max(p, 0.02), math.Max(q, 0.02), math.Max(1-p-q, 0.02)}
	sum := b[0] + b[1] + b[2]
	return r3.Add(r3.Scale(b[2]/sum, t.c), combine(b[0]/sum, t.a, b[1]/sum, t.b))
}

package main

import (
	"math"

	"gonum.org/v1/gonum/spatial/r3"
)

// stencil lists the neighbours of a node inside its layer, as steps in columns and rings.
var stencil = [8][2]int{{1, 0}, {0, 1}, {1, 1}, {1, -1}, {2, 1}, {2, -1}, {1, 2}, {1, -2}}

// depth of each layer: 0 at the inner surface, 1 at the outer one.
var depth = [layers]float64{LeftInner: 0, LeftMiddle: 0.5, LeftOuter: 1, RightInner: 0.5, RightOuter: 1}

// setDirections finds the tangents and the fibre direction at every node.
func (v *ventricles) setDirections() {
	s, c := &v.p.Ventricles, &v.p.Speeds
	for n := range v.x {
		around, along := v.toSeptum, v.toFront
		if v.ring[n] >= 0 {
			sin, cos := math.Sincos(radians(v.theta[v.column[n]]))
			around = combine(-sin, v.toSeptum, cos, v.toFront)
			radial := combine(cos, v.toSeptum, sin, v.toFront)
			sinp, cosp := math.Sincos(radians(v.phi[v.ring[n]]))
			along = r3.Unit(combine(-sinp*s.OuterLength, v.axis, cosp*s.OuterRadius, radial))
		}
		sin, cos := math.Sincos(radians(c.FibreInner + (c.FibreOuter-c.FibreInner)*depth[v.layer[n]]))
		v.around, v.along = append(v.around, around), append(v.along, along)
		v.fibre = append(v.fibre, combine(cos, around, sin, along))
	}
}

// muscle is the travel time between two nodes through muscle: the part along
// the mean fibre at one speed, the rest at another.
func (v *ventricles) muscle(a, b int, through bool) float64 {
	d := r3.Sub(v.x[b], v.x[a])
	length := r3.Norm(d)
	if length < 1e-9 {
		return 1e-3
	}
	sign := 1.0
	if r3.Dot(v.fibre[a], v.fibre[b]) < 0 {
		sign = -1
	}
	along := math.Abs(r3.Dot(d, r3.Unit(combine(1, v.fibre[a], sign, v.fibre[b]))))
	rest := math.Sqrt(math.Max(length*length-along*along, 0))
	across := v.p.Speeds.Across
	if through {
		across = v.p.Speeds.Through
	}
	return math.Hypot(along/v.p.Speeds.Along, rest/across)
}

// inner is the speed of the Purkinje-coupled endocardium between two rings.
func (v *ventricles) inner(j, j2 int, right bool) float64 {
	c := &v.p.Speeds
	switch {
	case float64(j+j2)/2 > c.BaseFrom*float64(v.p.Ventricles.Rings-1):
		return c.InnerBase
	case right:
		return c.InnerRight
	}
	return c.Inner
}

// leftInner is the travel time along the left endocardium, whose Purkinje
// network is faster along the axis than around it.
func (v *ventricles) leftInner(a, b int, speed float64) float64 {
	d := r3.Sub(v.x[b], v.x[a])
	around := math.Abs(r3.Dot(d, r3.Unit(r3.Add(v.around[a], v.around[b]))))
	along := math.Sqrt(math.Max(r3.Dot(d, d)-around*around, 0))
	return math.Hypot(around/(speed*v.p.Speeds.InnerAround), along/speed)
}

func (v *ventricles) distance(a, b int) float64 { return r3.Norm(r3.Sub(v.x[a], v.x[b])) }

// link joins two nodes; the faster of two travel times between them counts.
func (v *ventricles) link(a, b int, ms float64) {
	e := sorted(a, b)
	if old, ok := v.edges[e]; !ok || old > ms {
		v.edges[e] = ms
	}
}

func (v *ventricles) addEdges() {
	v.edges = map[[2]int]float64{}
	v.linkSheets()
	v.linkRight()
	v.linkSeams()
	v.linkThrough()
	v.linkApex()
}

// linkSheets joins the three layers of the left ventricle within themselves.
func (v *ventricles) linkSheets() {
	nt, nj, row := v.p.Ventricles.Columns, v.p.Ventricles.Rings, v.p.Ventricles.RightRow
	septal := func(i, j int) bool { return i >= v.first && i <= v.last && j >= row }
	for l := LeftInner; l <= LeftOuter; l++ {
		for i := 0; i < nt; i++ {
			for j := 0; j < nj; j++ {
				for _, s := range stencil {
					i2, j2 := (i+s[0])%nt, j+s[1]
					if j2 < 0 || j2 >= nj {
						continue
					}
					a, b := v.grid[l][i][j], v.grid[l][i2][j2]
					t := v.muscle(a, b, false)
					if l == LeftInner {
						t = math.Min(t, v.leftInner(a, b, v.inner(j, j2, false)))
					}
					if l == LeftOuter && septal(i, j) && septal(i2, j2) {
						t = math.Min(t, v.distance(a, b)/v.inner(j, j2, true))
					}
					v.link(a, b, t)
				}
			}
		}
	}
}

// linkRight joins the right free wall within its two layers and through them.
func (v *ventricles) linkRight() {
	nj, row := v.p.Ventricles.Rings, v.p.Ventricles.RightRow
	inside := func(i, j int) bool { return i >= v.first && i <= v.last && j >= row && j < nj }
	for i := v.first; i <= v.last; i++ {
		for j := row; j < nj; j++ {
			for _, s := range stencil {
				i2, j2 := i+s[0], j+s[1]
				if !inside(i2, j2) {
					continue
				}
				a, b := v.cavityWall(i, j), v.cavityWall(i2, j2)
				if a != b && (v.layer[a] == RightInner || v.layer[b] == RightInner) {
					v.link(a, b, math.Min(v.muscle(a, b, false), v.distance(a, b)/v.inner(j, j2, true)))
				}
				a, b = v.grid[RightOuter][i][j], v.grid[RightOuter][i2][j2]
				v.link(a, b, v.muscle(a, b, false))
			}
			for di := -1; di <= 1; di++ {
				for dj := -1; dj <= 1; dj++ {
					if inside(i+di, j+dj) {
						a, b := v.cavityWall(i, j), v.grid[RightOuter][i+di][j+dj]
						v.link(a, b, v.muscle(a, b, true))
					}
				}
			}
		}
	}
}

// linkSeams joins the right epicardium to the left one along its edges.
func (v *ventricles) linkSeams() {
	nt, nj, row := v.p.Ventricles.Columns, v.p.Ventricles.Rings, v.p.Ventricles.RightRow
	out, right := v.grid[LeftOuter], v.grid[RightOuter]
	for j := row; j < nj; j++ {
		for j2 := j - 1; j2 <= j+1; j2++ {
			if j2 < 0 || j2 >= nj {
				continue
			}
			for _, e := range [2][2]int{{v.first, (v.first + nt - 1) % nt}, {v.last, (v.last + 1) % nt}} {
				a, b := right[e[0]][j], out[e[1]][j2]
				v.link(a, b, v.muscle(a, b, false))
			}
		}
	}
	for i := v.first; i <= v.last; i++ {
		for di := -1; di <= 1; di++ {
			a, b := right[i][row], out[(i+di+nt)%nt][row-1]
			v.link(a, b, v.muscle(a, b, false))
		}
	}
}

// linkThrough joins the layers of the left ventricle through the wall.
func (v *ventricles) linkThrough() {
	nt, nj := v.p.Ventricles.Columns, v.p.Ventricles.Rings
	for l := LeftInner; l < LeftOuter; l++ {
		for i := 0; i < nt; i++ {
			for j := 0; j < nj; j++ {
				for di := -1; di <= 1; di++ {
					for j2 := max(j-1, 0); j2 <= min(j+1, nj-1); j2++ {
						a, b := v.grid[l][i][j], v.grid[l+1][(i+di+nt)%nt][j2]
						v.link(a, b, v.muscle(a, b, true))
					}
				}
			}
		}
	}
}

// linkApex joins the apex node of each layer to the two rings next to it.
func (v *ventricles) linkApex() {
	c := &v.p.Speeds
	for l := LeftInner; l <= LeftOuter; l++ {
		speed := (c.Along + c.Across) / 2
		if l == LeftInner {
			speed = c.Inner
		}
		for i := range v.grid[l] {
			for j := 0; j < 2; j++ {
				a := v.grid[l][i][j]
				v.link(a, v.apex[l], v.distance(a, v.apex[l])/speed)
			}
		}
	}
	v.link(v.apex[LeftInner], v.apex[LeftMiddle], v.distance(v.apex[LeftInner], v.apex[LeftMiddle])/c.Through)
	v.link(v.apex[LeftMiddle], v.apex[LeftOuter], v.distance(v.apex[LeftMiddle], v.apex[LeftOuter])/c.Through)
}

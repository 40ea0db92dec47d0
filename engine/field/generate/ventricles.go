package main

import (
	"math"

	"gonum.org/v1/gonum/spatial/r3"
)

// Layer is one sheet of ventricular nodes, numbered like [tissue.Kind]. The zero
// value is invalid.
type Layer int

const (
	_          Layer = iota
	LeftInner        // left endocardium
	LeftMiddle       // middle of the left wall and septum
	LeftOuter        // left epicardium and the right side of the septum
	RightInner       // right free wall, endocardium
	RightOuter       // right free wall, epicardium
	layers
)

const none = -1

// ventricles is the mesh. Nodes are found by layer, column and ring.
type ventricles struct {
	p                          *Parameters
	axis, toSeptum, toFront, c r3.Vec // the frame: base to apex, and the two across
	x                          []r3.Vec
	layer                      []Layer
	column, ring               []int // -1, -1 for the apex nodes
	grid                       [layers][][]int
	apex                       [layers]int
	theta, phi                 []float64
	first, last                int // columns at which the right ventricle is attached
	tri                        [][3]int
	along, around, fibre       []r3.Vec // directions at each node
	edges                      map[[2]int]float64
}

func buildVentricles(p *Parameters) *ventricles {
	v := &ventricles{p: p}
	v.setFrame()
	v.addNodes()
	v.addTriangles()
	v.tri = orient(v.x, v.tri)
	v.setDirections()
	v.addEdges()
	return v
}

func (v *ventricles) setFrame() {
	s := &v.p.Ventricles
	az, el, roll := radians(s.Azimuth), radians(s.Elevation), radians(s.Roll)
	v.c = s.Centre
	v.axis = r3.Unit(r3.Vec{X: math.Cos(el) * math.Cos(az), Y: -math.Cos(el) * math.Sin(az), Z: math.Sin(el)})
	right := r3.Vec{X: -1, Y: -1} // the right ventricle lies to the right and in front
	septum := r3.Unit(r3.Sub(right, r3.Scale(r3.Dot(v.axis, right), v.axis)))
	front := r3.Scale(-1, r3.Cross(v.axis, septum))
	v.toSeptum = combine(math.Cos(roll), septum, math.Sin(roll), front)
	v.toFront = combine(math.Cos(roll), front, -math.Sin(roll), septum)
}

// at is the point at a distance from the long axis, an angle around it and a
// distance along it from the centre.
func (v *ventricles) at(radius, theta, z float64) r3.Vec {
	t := radians(theta)
	across := combine(radius*math.Cos(t), v.toSeptum, radius*math.Sin(t), v.toFront)
	return r3.Add(v.c, r3.Add(r3.Scale(z, v.axis), across))
}

func (v *ventricles) add(x r3.Vec, l Layer, column, ring int) int {
	v.x, v.layer = append(v.x, x), append(v.layer, l)
	v.column, v.ring = append(v.column, column), append(v.ring, ring)
	return len(v.x) - 1
}

func (v *ventricles) addNodes() {
	s := &v.p.Ventricles
	for i := 0; i < s.Columns; i++ {
		v.theta = append(v.theta, float64(i)*360/float64(s.Columns)-180)
	}
	for j := 0; j < s.Rings; j++ {
		v.phi = append(v.phi, s.FirstRing+(s.LastRing-s.FirstRing)*float64(j)/float64(s.Rings-1))
	}
	for l := range v.grid {
		v.grid[l] = make([][]int, s.Columns)
		for i := range v.grid[l] {
			v.grid[l][i] = make([]int, s.Rings)
			for j := range v.grid[l][i] {
				v.grid[l][i][j] = none
			}
		}
	}
	for j := range v.phi {
		ri, zi, ro, zo := v.profile(j)
		for i, th := range v.theta {
			v.grid[LeftInner][i][j] = v.add(v.at(ri, th, zi), LeftInner, i, j)
			v.grid[LeftMiddle][i][j] = v.add(v.at((ri+ro)/2, th, (zi+zo)/2), LeftMiddle, i, j)
			v.grid[LeftOuter][i][j] = v.add(v.at(ro, th, zo), LeftOuter, i, j)
		}
	}
	v.addRight()
	v.apex[LeftInner] = v.add(r3.Add(v.c, r3.Scale(s.InnerLength, v.axis)), LeftInner, none, none)
	v.apex[LeftMiddle] = v.add(r3.Add(v.c, r3.Scale((s.InnerLength+s.OuterLength)/2, v.axis)), LeftMiddle, none, none)
	v.apex[LeftOuter] = v.add(r3.Add(v.c, r3.Scale(s.OuterLength, v.axis)), LeftOuter, none, none)
}

// profile is the radius and height along the axis of both surfaces at a ring.
func (v *ventricles) profile(j int) (innerR, innerZ, outerR, outerZ float64) {
	s := &v.p.Ventricles
	sin, cos := math.Sincos(radians(v.phi[j]))
	return s.InnerRadius * sin, s.InnerLength * cos, s.OuterRadius * sin, s.OuterLength * cos
}

// addRight lays the free wall of the right ventricle over the septum. Its inner
// surface shares the septum's nodes along the edges.
func (v *ventricles) addRight() {
	s := &v.p.Ventricles
	v.first, v.last = none, none
	for i, th := range v.theta {
		if th >= s.RightFrom-1e-6 && th <= s.RightTo+1e-6 {
			if v.first == none {
				v.first = i
			}
			v.last = i
		}
	}
	middle, half := (v.theta[v.last]+v.theta[v.first])/2, (v.theta[v.last]-v.theta[v.first])/2
	for j := s.RightRow; j < s.Rings; j++ {
		_, _, ro, zo := v.profile(j)
		f := float64(j-s.RightRow) / float64(s.Rings-1-s.RightRow)
		height := 0.0
		if f > 0 {
			height = math.Pow(math.Sin(math.Pi/2*math.Min(1, 1.15*f)), 0.8)
		}
		for i := v.first; i <= v.last; i++ {
			u := (v.theta[i] - middle) / half
			gap := s.RightGap * math.Pow(math.Max(0, math.Cos(math.Pi/2*u)), 0.8) * height * (1 + s.RightSkew*u)
			if i > v.first && i < v.last && j > s.RightRow {
				v.grid[RightInner][i][j] = v.add(v.at(ro+gap, v.theta[i], zo), RightInner, i, j)
			} else {
				gap = 0
			}
			v.grid[RightOuter][i][j] = v.add(v.at(ro+gap+s.RightWall, v.theta[i], zo), RightOuter, i, j)
		}
	}
}

// cavityWall is the right cavity's free wall at a place: its own node, or the
// septum's where the two meet.
func (v *ventricles) cavityWall(i, j int) int {
	if n := v.grid[RightInner][i][j]; n != none {
		return n
	}
	return v.grid[LeftOuter][i][j]
}

// outside is the epicardium at a place.
func (v *ventricles) outside(i, j int) int {
	if n := v.grid[RightOuter][i][j]; n != none {
		return n
	}
	return v.grid[LeftOuter][i][j]
}

// height of a node, 0 at the ring next to the apex (and the apex) and 1 at the base.
func (v *ventricles) height(n int) float64 {
	if v.ring[n] < 0 {
		return 0
	}
	return float64(v.ring[n]) / float64(v.p.Ventricles.Rings-1)
}

func radians(deg float64) float64 { return deg * math.Pi / 180 }

func combine(a float64, x r3.Vec, b float64, y r3.Vec) r3.Vec {
	return r3.Add(r3.Scale(a, x), r3.Scale(b, y))
}

package main

import (
	"math"
	"sort"

	"gonum.org/v1/gonum/spatial/r3"
)

// Chambers of the atria, as node kinds.
const (
	rightAtrium = iota
	leftAtrium
)

// atria are two thin shells: ellipsoids with holes for the valves and, on the
// right, the great veins. For the surface every triangle counts twice, as the
// outer and the inner side of the wall, joined by strips around the holes.
type atria struct {
	p       *Parameters
	centre  [2]r3.Vec
	x       []r3.Vec
	normal  []r3.Vec
	dir     []r3.Vec // from the chamber's centre, on the unit sphere
	chamber []int
	sheet   [][3]int // the shells
	skin    []r3.Vec // outer then inner points
	tri     [][3]int // closed surface on skin; point k belongs to node k % len(x)
	edges   map[[2]int]float64
}

func buildAtria(p *Parameters, v *ventricles) *atria {
	a := &atria{p: p, edges: map[[2]int]float64{}}
	place := func(d r3.Vec) r3.Vec {
		return r3.Add(v.c, r3.Add(r3.Scale(-d.X, v.axis), combine(d.Y, v.toSeptum, d.Z, v.toFront)))
	}
	a.addShell(rightAtrium, place(p.Atria.RightFrom), p.Atria.RightHalf, []hole{
		{v.axis, p.Atria.Valve},
		{r3.Unit(r3.Vec{X: 0.05, Y: 0.25, Z: 1}), 0.955}, // superior vena cava
		{r3.Unit(r3.Vec{X: 0.1, Y: 0.35, Z: -1}), 0.955}, // inferior vena cava
	})
	a.addShell(leftAtrium, place(p.Atria.LeftFrom), p.Atria.LeftHalf, []hole{{v.axis, p.Atria.Valve}})
	a.addSkin()
	a.linkWalls()
	a.linkChambers()
	return a
}

// hole is a cap cut out of a shell: where the direction's cosine to it is larger.
type hole struct {
	dir    r3.Vec
	cosine float64
}

func (a *atria) addShell(chamber int, centre, half r3.Vec, holes []hole) {
	a.centre[chamber] = centre
	dirs, faces := icosphere(2)
	var keep [][3]int
	used := map[int]int{}
	for _, t := range faces {
		open := false
		for _, h := range holes {
			mean := (r3.Dot(dirs[t[0]], h.dir) + r3.Dot(dirs[t[1]], h.dir) + r3.Dot(dirs[t[2]], h.dir)) / 3
			open = open || mean >= h.cosine
		}
		if !open {
			keep = append(keep, t)
			for _, n := range t {
				used[n] = 0
			}
		}
	}
	order := make([]int, 0, len(used))
	for n := range used {
		order = append(order, n)
	}
	sort.Ints(order)
	for _, n := range order {
		used[n] = len(a.x)
		d := dirs[n]
		a.x = append(a.x, r3.Add(centre, r3.Vec{X: d.X * half.X, Y: d.Y * half.Y, Z: d.Z * half.Z}))
		a.normal = append(a.normal, r3.Unit(r3.Vec{X: d.X / half.X, Y: d.Y / half.Y, Z: d.Z / half.Z}))
		a.dir, a.chamber = append(a.dir, d), append(a.chamber, chamber)
	}
	for _, t := range keep {
		f := [3]int{used[t[0]], used[t[1]], used[t[2]]}
		face := r3.Cross(r3.Sub(a.x[f[1]], a.x[f[0]]), r3.Sub(a.x[f[2]], a.x[f[0]]))
		if r3.Dot(face, a.normal[f[0]]) < 0 {
			f[0], f[2] = f[2], f[0]
		}
		a.sheet = append(a.sheet, f)
	}
}

func (a *atria) addSkin() {
	n, w := len(a.x), a.p.Atria.Wall/2
	for _, side := range []float64{w, -w} {
		for k := range a.x {
			a.skin = append(a.skin, r3.Add(a.x[k], r3.Scale(side, a.normal[k])))
		}
	}
	a.tri = append(a.tri, a.sheet...)
	for _, t := range a.sheet {
		a.tri = append(a.tri, [3]int{t[2] + n, t[1] + n, t[0] + n})
	}
	owners := edgeOwners(a.sheet)
	for _, t := range a.sheet {
		for k := 0; k < 3; k++ {
			if i, j := t[k], t[(k+1)%3]; len(owners[sorted(i, j)]) == 1 {
				a.tri = append(a.tri, [3]int{j, i, i + n}, [3]int{j, i + n, j + n})
			}
		}
	}
}

// linkWalls joins each node to its neighbours and theirs.
func (a *atria) linkWalls() {
	n := len(a.x)
	next := make([]map[int]bool, n)
	for i := range next {
		next[i] = map[int]bool{}
	}
	for _, t := range a.sheet {
		for k := 0; k < 3; k++ {
			next[t[k]][t[(k+1)%3]], next[t[k]][t[(k+2)%3]] = true, true
		}
	}
	for i := 0; i < n; i++ {
		reach := map[int]bool{}
		for j := range next[i] {
			reach[j] = true
			for k := range next[j] {
				reach[k] = true
			}
		}
		for j := range reach {
			if j > i {
				a.edges[[2]int{i, j}] = a.distance(i, j) / a.speed(i, j)
			}
		}
	}
}

// speed of the wall between two nodes.
func (a *atria) speed(i, j int) float64 {
	s := &a.p.Atria
	speed := s.Speed
	if a.crista(i) && a.crista(j) {
		speed = s.SpeedCrista
	}
	if a.internodal(i) && a.internodal(j) {
		speed = max(speed, s.SpeedInternodal)
	}
	return speed
}

// internodal tells whether a node lies within a band of about twenty degrees on
// either side of the shortest way from the sinus exit to the AV node's inputs:
// the terminal crest and the rim of the fossa lead impulses down to the node
// faster than the walls around them.
func (a *atria) internodal(n int) bool {
	if a.chamber[n] != rightAtrium {
		return false
	}
	from, to := r3.Unit(a.p.Atria.Exit), r3.Unit(a.p.Atria.Septum)
	pole := r3.Unit(r3.Cross(from, to))
	d := a.dir[n]
	middle := r3.Unit(r3.Add(from, to))
	return math.Abs(r3.Dot(d, pole)) < 0.34 && r3.Dot(d, middle) > r3.Dot(from, middle)-0.1
}

// crista tells whether a node lies on the crista terminalis, a strip down the
// back of the right atrium's lateral wall.
func (a *atria) crista(n int) bool {
	d := a.dir[n]
	level := r3.Unit(r3.Vec{X: d.X + 1e-9, Y: d.Y + 1e-9, Z: 1e-9})
	return a.chamber[n] == rightAtrium && r3.Dot(level, r3.Unit(r3.Vec{X: -0.55, Y: 0.75})) > 0.93
}

// linkChambers joins the atria: Bachmann's bundle over the roof, the rim of the
// oval fossa and the coronary sinus.
func (a *atria) linkChambers() {
	s := &a.p.Atria
	right := func(x, y, z float64) int { return a.near(rightAtrium, r3.Vec{X: x, Y: y, Z: z}) }
	left := func(x, y, z float64) int { return a.near(leftAtrium, r3.Vec{X: x, Y: y, Z: z}) }
	join := func(i, j int, ms float64) { a.edges[sorted(i, j)] = ms }
	roof, root, far := right(0.35, -0.35, 0.85), left(-0.5, -0.55, 0.67), left(0.45, -0.45, 0.75)
	join(roof, root, a.distance(roof, root)/s.SpeedBachmann)
	join(root, far, 1.1*a.distance(root, far)/s.SpeedBachmann)
	start := right(-0.2, 0, 0.95)
	join(start, roof, 1.1*a.distance(start, roof)/s.SpeedBachmann)
	f0, f1 := right(0.75, 0.65, 0.1), left(-0.85, -0.3, -0.3)
	join(f0, f1, a.distance(f0, f1)/s.Speed+s.Fossa)
	c0, c1 := a.sinusMouth(), left(-0.35, 0.5, -0.8)
	join(c0, c1, a.distance(c0, c1)/s.Speed+s.Sinus)
}

// sinusMouth is the right atrial node at the mouth of the coronary sinus.
func (a *atria) sinusMouth() int { return a.near(rightAtrium, r3.Vec{X: 0.65, Y: 0.55, Z: -0.55}) }

// near is the node of a chamber that lies most in a direction from its centre.
func (a *atria) near(chamber int, dir r3.Vec) int {
	best, found := math.Inf(-1), none
	dir = r3.Unit(dir)
	for n := range a.x {
		if a.chamber[n] == chamber {
			if d := r3.Dot(a.dir[n], dir); d > best {
				best, found = d, n
			}
		}
	}
	return found
}

func (a *atria) distance(i, j int) float64 { return r3.Norm(r3.Sub(a.x[i], a.x[j])) }

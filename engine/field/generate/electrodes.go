package main

import (
	"fmt"
	"math"

	"escapement/engine/field/tissue"

	"gonum.org/v1/gonum/spatial/r3"
)

// Electrodes within the heart. Their potential is that of the sources in an
// unbounded medium: of the same double layer as the leads', and of the front in the
// conduction system. An electrode against a wall has muscle on one side and blood on
// the other, so the mean of their conductivities counts (a source at the plane
// between two half spaces, by the method of images; from memory). The body's
// surface is too far away to matter between electrodes 5 mm apart. Places and
// distances are choices after common practice.
const (
	offWall      = 2.0 // of an electrode's middle from the wall, mm
	apart        = 5.0 // tip and ring of a pair, mm
	closeBy      = 8.0 // triangles so near to an electrode are divided into closeParts squared, mm
	closeParts   = 12
	nearBy       = 20.0
	nearParts    = 4
	hisBelow     = 1.0 // of the conduction system under the endocardium, mm
	hisMV        = 0.5 // peak to peak of H between the distal electrodes before the 30 Hz filter, which leaves about 0.3; usual sizes are 0.1 to 0.5 mV (from memory)
	largestRow   = 32000
	solidEnclose = 1e-3 // of a closed surface seen from outside, of the full angle
)

// pair is two electrodes; the signal is the tip's potential less the ring's.
type pair struct {
	name      string
	tip, ring r3.Vec
	blood     bool // in a cavity
}

// wall is a point of the right side of the septum or the right endocardium at theta
// and a height, so many mm off it into the cavity. A height over 1 goes on straight.
func (v *ventricles) wall(l Layer, theta, height, off float64) r3.Vec {
	nt, top := v.p.Ventricles.Columns, v.p.Ventricles.Rings-1
	u, w := (theta+180)/360*float64(nt), height*float64(top)
	i, j := int(math.Floor(u)), min(int(math.Floor(w)), top-1)
	var at, out r3.Vec
	for a := 0; a < 2; a++ {
		for b := 0; b < 2; b++ {
			n := v.node(l, (i+a)%nt, j+b)
			share := math.Abs(1-float64(a)-(u-float64(i))) * math.Abs(1-float64(b)-(w-float64(j)))
			if b == 0 && w-float64(j) > 1 { // beyond the last ring
				share = -share
			}
			at = r3.Add(at, r3.Scale(share, v.x[n]))
			out = r3.Add(out, r3.Scale(share, v.inward(n)))
		}
	}
	return r3.Add(at, r3.Scale(off, r3.Unit(out)))
}

// inward is the surface's normal at a node, out of the muscle.
func (v *ventricles) inward(n int) r3.Vec {
	var sum r3.Vec
	for _, t := range v.tri {
		if t[0] == n || t[1] == n || t[2] == n {
			sum = r3.Add(sum, r3.Cross(r3.Sub(v.x[t[1]], v.x[t[0]]), r3.Sub(v.x[t[2]], v.x[t[0]])))
		}
	}
	return r3.Unit(sum)
}

// in is a point so many mm inside (or, negative, outside) the wall of a chamber of
// the atria, in a direction from its centre.
func (a *atria) in(chamber int, dir r3.Vec, off float64) r3.Vec {
	n := a.near(chamber, dir)
	if off < 0 {
		off -= a.p.Atria.Wall / 2
	} else {
		off += a.p.Atria.Wall / 2
	}
	return r3.Sub(a.x[n], r3.Scale(off, a.normal[n]))
}

// along is the point at a distance from one towards another.
func along(from, to r3.Vec, mm float64) r3.Vec {
	return r3.Add(from, r3.Scale(mm, r3.Unit(r3.Sub(to, from))))
}

// pairs are the electrodes of the usual catheters, and a lead in a lateral vein.
func pairs(v *ventricles, a *atria) []pair {
	s := &a.p.Atria
	rv := func(name string, l Layer, theta, height, ringTheta, ringHeight float64) pair {
		tip := v.wall(l, theta, height, offWall)
		return pair{name, tip, along(tip, v.wall(l, ringTheta, ringHeight, offWall+1), apart), true}
	}
	high := a.in(rightAtrium, s.Exit, offWall)
	all := []pair{{"HRA", high, along(high, a.in(rightAtrium, r3.Vec{X: s.Exit.X, Y: s.Exit.Y - 0.6, Z: s.Exit.Z + 0.3}, offWall+1), apart), true}}
	// The catheter lies over the tricuspid ring, its tip on the septum of the ventricle.
	his := func(h float64) r3.Vec { return v.wall(LeftOuter, 4, h, offWall) }
	septum := a.in(rightAtrium, s.Septum, offWall)
	all = append(all,
		pair{"HISp", septum, along(septum, a.centre[rightAtrium], apart), true},
		pair{"HISd", his(0.99), along(his(0.99), septum, apart), true})
	// The coronary sinus runs outside the left atrium above the mitral ring, from its
	// mouth at the septum round the back to the side.
	for k, name := range [5]string{"CS9-10", "CS7-8", "CS5-6", "CS3-4", "CS1-2"} {
		place := func(at float64) r3.Vec { return a.in(leftAtrium, sinusCourse(v, at), -offWall) }
		at := float64(k) / 4
		tip, back := place(at), at
		ring := tip
		for ring == tip { // the next node of the wall towards the mouth
			back -= 0.05
			ring = place(back)
		}
		all = append(all, pair{name, tip, along(tip, ring, apart), false})
	}
	all = append(all,
		rv("RVA", RightInner, -12, 3.0/8, -12, 6.0/8),
		rv("RVS", LeftOuter, 0, 4.0/8, 0, 6.0/8),
		rv("RVOT", RightInner, 36, 7.5/8, 36, 4.0/8))
	n := v.grid[LeftOuter][0][5]
	vein := r3.Add(v.x[n], r3.Scale(offWall, v.inward(n)))
	up := v.grid[LeftOuter][0][7]
	return append(all, pair{"LV", vein, along(vein, r3.Add(v.x[up], r3.Scale(offWall, v.inward(up))), apart), false})
}

// sinusCourse is the direction from the left atrium's centre to a place of the
// coronary sinus, 0 at its mouth and 1 at the side, just above the mitral ring.
func sinusCourse(v *ventricles, at float64) r3.Vec {
	from, to := radians(50), radians(190)
	angle := from + (to-from)*at
	around := combine(math.Cos(angle), v.toSeptum, -math.Sin(angle), v.toFront)
	return combine(0.7, v.axis, 0.7, around)
}

// strands of the conduction system from the His bundle's top, in the order in
// which package field names them: the His bundle, the right and the left bundle.
func strands(v *ventricles) [][2]r3.Vec {
	top := v.wall(LeftOuter, 2, 1.08, -hisBelow)
	fork := along(top, v.wall(LeftOuter, 8, 0.7, -hisBelow), hisLength)
	right := v.wall(LeftOuter, 0, 5.2/8, -hisBelow)
	left := v.wall(LeftInner, -5, 6.0/8, -hisBelow)
	return [][2]r3.Vec{{top, fork}, {fork, right}, {fork, left}}
}

// hisLength of the His bundle, mm (about 20; from memory).
const hisLength = 18

// bipoles computes all rows and strands.
func bipoles(m *model) []tissue.Bipole {
	var out []tissue.Bipole
	wet := (1 + m.p.Conductor.BloodRatio) / 2
	swing := m.p.Conductor.Amplitude * m.p.Conductor.PotentialSwing
	threads := strands(m.v)
	for _, e := range pairs(m.v, m.a) {
		medium := 1.0
		if e.blood {
			medium = wet
		}
		b := tissue.Bipole{Name: e.name, Rows: []tissue.Row{
			rowOf(e, m.v.x, m.v.tri, swing/medium),
			rowOf(e, m.a.skin, m.a.tri, swing*m.p.Atria.Amplitude/medium),
		}}
		for _, s := range threads {
			b.Strands = append(b.Strands, strandOf(e, s, 1/medium))
		}
		out = append(out, b)
	}
	low, high := 0.0, 0.0
	for i := range out {
		if out[i].Name == "HISd" {
			for _, x := range out[i].Strands[0] {
				low, high = math.Min(low, float64(x)), math.Max(high, float64(x))
			}
		}
	}
	for i := range out {
		for k := range out[i].Strands {
			for j := range out[i].Strands[k] {
				out[i].Strands[k][j] *= float32(hisMV / (high - low))
			}
		}
	}
	return out
}

// strandOf is the signal of a dipole of unit strength that points down the thread.
func strandOf(e pair, s [2]r3.Vec, scale float64) tissue.Strand {
	var out tissue.Strand
	dir := r3.Unit(r3.Sub(s[1], s[0]))
	at := func(r, q r3.Vec) float64 {
		d := r3.Sub(r, q)
		return r3.Dot(dir, d) / math.Pow(r3.Norm(d), 3)
	}
	for k := range out {
		q := combine(1-float64(k)/(tissue.StrandPlaces-1), s[0], float64(k)/(tissue.StrandPlaces-1), s[1])
		out[k] = float32(scale * (at(e.tip, q) - at(e.ring, q)))
	}
	return out
}

// rowOf is a surface's row: solid angles from the tip less those from the ring.
func rowOf(e pair, x []r3.Vec, tri [][3]int, mv float64) tissue.Row {
	seen := func(t corners) float64 { return (t.solidAngle(e.tip) - t.solidAngle(e.ring)) / (4 * math.Pi) }
	var w []float64 // of all pieces, triangle by triangle
	var area []float64
	parts := make([]int, len(tri))
	total, tip, ring := 0.0, 0.0, 0.0
	for k, t := range tri {
		q := corners{x[t[0]], x[t[1]], x[t[2]]}
		tip, ring = tip+q.solidAngle(e.tip), ring+q.solidAngle(e.ring)
		d := math.Min(q.distance(e.tip), q.distance(e.ring))
		switch {
		case d < closeBy:
			parts[k] = closeParts
		case d < nearBy:
			parts[k] = nearParts
		default:
			parts[k] = 1
		}
		for _, s := range q.divide(parts[k]) {
			w = append(w, seen(s))
			area = append(area, s.area())
			total += s.area()
		}
	}
	if math.Abs(tip)+math.Abs(ring) > solidEnclose*4*math.Pi {
		panic(fmt.Sprintf("electrodes %s: inside muscle, or the surface is not closed (%.3g, %.3g of the full angle)", e.name, tip/(4*math.Pi), ring/(4*math.Pi)))
	}
	sum, largest := 0.0, 0.0
	for _, v := range w {
		sum += v
	}
	for k := range w {
		w[k] = mv * (w[k] - sum*area[k]/total)
		largest = math.Max(largest, math.Abs(w[k]))
	}
	return pack(w, parts, largest/largestRow)
}

// pack rounds weights; what rounding leaves is carried on, so that they still sum to zero.
func pack(w []float64, parts []int, step float64) tissue.Row {
	row := tissue.Row{Step: float32(step)}
	sum, before, at := 0.0, 0.0, 0
	next := func() int16 {
		sum += w[at] / step
		at++
		now := math.Round(sum)
		out := int16(now - before)
		before = now
		return out
	}
	for k, n := range parts {
		if n == 1 {
			row.Far = append(row.Far, next())
			continue
		}
		row.Far = append(row.Far, 0)
		near := tissue.Near{Tri: uint16(k), N: uint8(n)}
		for range n * n {
			near.W = append(near.W, next())
		}
		row.Near = append(row.Near, near)
	}
	return row
}

func (t corners) area() float64 {
	return r3.Norm(r3.Cross(r3.Sub(t.b, t.a), r3.Sub(t.c, t.a))) / 2
}

// distance to the triangle, near enough: to its corners, middle and edges' middles.
func (t corners) distance(o r3.Vec) float64 {
	d := math.Inf(1)
	for _, p := range []r3.Vec{t.a, t.b, t.c, t.centroid(), combine(0.5, t.a, 0.5, t.b), combine(0.5, t.b, 0.5, t.c), combine(0.5, t.c, 0.5, t.a)} {
		d = math.Min(d, r3.Norm(r3.Sub(p, o)))
	}
	return d
}

// divide gives n*n equal triangles in the order of [tissue.Parts].
func (t corners) divide(n int) []corners {
	if n == 1 {
		return []corners{t}
	}
	at := func(i, j int) r3.Vec {
		u, v := float64(i)/float64(n), float64(j)/float64(n)
		return r3.Add(r3.Scale(1-u-v, t.c), combine(u, t.a, v, t.b))
	}
	var out []corners
	for i := range n {
		for j := 0; i+j < n; j++ {
			out = append(out, corners{at(i+1, j), at(i, j+1), at(i, j)})
			if i+j < n-1 {
				out = append(out, corners{at(i+1, j+1), at(i, j+1), at(i+1, j)})
			}
		}
	}
	return out
}

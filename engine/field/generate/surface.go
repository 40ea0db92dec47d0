package main

import "gonum.org/v1/gonum/spatial/r3"

// addTriangles lists the closed surface of the muscle: both endocardia, the
// epicardium and the rims at the base. Their orientation is settled by [orient].
func (v *ventricles) addTriangles() {
	nt, nj := v.p.Ventricles.Columns, v.p.Ventricles.Rings
	in, out := v.grid[LeftInner], v.grid[LeftOuter]
	top := nj - 1
	for i := 0; i < nt; i++ {
		i1 := (i + 1) % nt
		for j := 0; j < top; j++ {
			v.quad(in[i][j], in[i1][j], in[i1][j+1], in[i][j+1])
		}
		v.tri = append(v.tri, [3]int{v.apex[LeftInner], in[i1][0], in[i][0]})
	}
	for i := 0; i < nt; i++ {
		i1 := (i + 1) % nt
		for j := 0; j < top; j++ {
			v.quad(v.outside(i, j), v.outside(i, j+1), v.outside(i1, j+1), v.outside(i1, j))
		}
		v.tri = append(v.tri, [3]int{v.apex[LeftOuter], v.outside(i, 0), v.outside(i1, 0)})
	}
	for i := v.first; i < v.last; i++ {
		for j := v.p.Ventricles.RightRow; j < top; j++ {
			v.quad(out[i][j], out[i][j+1], out[i+1][j+1], out[i+1][j])
			v.quad(v.cavityWall(i, j), v.cavityWall(i+1, j), v.cavityWall(i+1, j+1), v.cavityWall(i, j+1))
		}
	}
	for i := 0; i < nt; i++ {
		i1 := (i + 1) % nt
		v.quad(in[i][top], in[i1][top], out[i1][top], out[i][top])
	}
	for i := v.first; i < v.last; i++ {
		v.quad(v.cavityWall(i, top), v.cavityWall(i+1, top), v.grid[RightOuter][i+1][top], v.grid[RightOuter][i][top])
	}
	// The step where the right epicardium meets the left one at the base.
	a, b := v.first, v.last
	v.tri = append(v.tri,
		[3]int{out[a][top], v.grid[RightOuter][a][top], out[(a+nt-1)%nt][top]},
		[3]int{out[b][top], out[(b+1)%nt][top], v.grid[RightOuter][b][top]})
}

// quad adds two triangles, leaving out those that have collapsed.
func (v *ventricles) quad(a, b, c, d int) {
	for _, t := range [2][3]int{{a, b, c}, {a, c, d}} {
		if t[0] != t[1] && t[1] != t[2] && t[2] != t[0] {
			v.tri = append(v.tri, t)
		}
	}
}

// orient turns the triangles of a closed surface so that neighbours agree and
// normals point outwards (the enclosed volume is positive).
func orient(x []r3.Vec, tri [][3]int) [][3]int {
	out := append([][3]int(nil), tri...)
	owners := edgeOwners(tri)
	seen := make([]bool, len(out))
	for s := range out {
		if seen[s] {
			continue
		}
		seen[s] = true
		for queue := []int{s}; len(queue) > 0; queue = queue[1:] {
			t := queue[0]
			for k := 0; k < 3; k++ {
				a, b := out[t][k], out[t][(k+1)%3]
				l := owners[sorted(a, b)]
				if len(l) != 2 {
					continue
				}
				o := l[0]
				if o == t {
					o = l[1]
				}
				if seen[o] {
					continue
				}
				if runs(out[o], a, b) {
					out[o][0], out[o][2] = out[o][2], out[o][0]
				}
				seen[o] = true
				queue = append(queue, o)
			}
		}
	}
	if volume(x, out) < 0 {
		for i := range out {
			out[i][0], out[i][2] = out[i][2], out[i][0]
		}
	}
	return out
}

func edgeOwners(tri [][3]int) map[[2]int][]int {
	owners := map[[2]int][]int{}
	for t := range tri {
		for k := 0; k < 3; k++ {
			e := sorted(tri[t][k], tri[t][(k+1)%3])
			owners[e] = append(owners[e], t)
		}
	}
	return owners
}

// runs tells whether the triangle's boundary goes from a to b.
func runs(t [3]int, a, b int) bool {
	for k := 0; k < 3; k++ {
		if t[k] == a && t[(k+1)%3] == b {
			return true
		}
	}
	return false
}

// volume enclosed by the surface, in cubic millimetres, negative if inside out.
func volume(x []r3.Vec, tri [][3]int) float64 {
	sum := 0.0
	for _, t := range tri {
		sum += r3.Dot(x[t[0]], r3.Cross(x[t[1]], x[t[2]]))
	}
	return sum / 6
}

func sorted(a, b int) [2]int {
	if a > b {
		return [2]int{b, a}
	}
	return [2]int{a, b}
}

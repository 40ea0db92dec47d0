package main

import (
	"math"

	"gonum.org/v1/gonum/spatial/r3"
)

// icosphere is a unit sphere from an icosahedron whose faces were divided in
// four n times.
func icosphere(n int) (x []r3.Vec, tri [][3]int) {
	g := (1 + math.Sqrt(5)) / 2
	for _, c := range [12][3]float64{{-1, g, 0}, {1, g, 0}, {-1, -g, 0}, {1, -g, 0}, {0, -1, g}, {0, 1, g},
		{0, -1, -g}, {0, 1, -g}, {g, 0, -1}, {g, 0, 1}, {-g, 0, -1}, {-g, 0, 1}} {
		x = append(x, r3.Unit(r3.Vec{X: c[0], Y: c[1], Z: c[2]}))
	}
	tri = [][3]int{{0, 11, 5}, {0, 5, 1}, {0, 1, 7}, {0, 7, 10}, {0, 10, 11}, {1, 5, 9}, {5, 11, 4}, {11, 10, 2}, {10, 7, 6}, {7, 1, 8},
		{3, 9, 4}, {3, 4, 2}, {3, 2, 6}, {3, 6, 8}, {3, 8, 9}, {4, 9, 5}, {2, 4, 11}, {6, 2, 10}, {8, 6, 7}, {9, 8, 1}}
	for ; n > 0; n-- {
		middles := map[[2]int]int{}
		middle := func(a, b int) int {
			e := sorted(a, b)
			if _, ok := middles[e]; !ok {
				x = append(x, r3.Unit(r3.Add(x[a], x[b])))
				middles[e] = len(x) - 1
			}
			return middles[e]
		}
		var finer [][3]int
		for _, t := range tri {
			p, q, r := middle(t[0], t[1]), middle(t[1], t[2]), middle(t[2], t[0])
			finer = append(finer, [3]int{t[0], p, r}, [3]int{t[1], q, p}, [3]int{t[2], r, q}, [3]int{p, q, r})
		}
		tri = finer
	}
	return x, tri
}

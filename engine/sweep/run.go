package sweep

import (
	"context"
	"runtime"
	"sync"
)

// Settings are how a grid is run. The zero value runs all of it on all cores.
type Settings struct {
	Workers int   // 0: one for each core
	Points  []int // in this order; nil: all
	Budget  int   // stop after so many points; 0: no bound

	// Each takes a cell as soon as it is there, in no fixed order; it is never called
	// by two workers at once. nil: nobody asks.
	Each func(point int, c Cell)
}

// Status tells how far a run came.
type Status struct {
	Done, Of int // points
}

// Run runs points. The error is the context's, where that ended it; what Each has had
// stands, and the rest may be run later.
func (g *Grid) Run(ctx context.Context, s Settings) (Status, error) {
	points := s.Points
	if points == nil {
		points = g.Part(1, 1)
	}
	st := Status{Of: len(points)}
	if s.Budget > 0 && s.Budget < len(points) {
		points = points[:s.Budget]
	}
	workers := s.Workers
	if workers <= 0 {
		workers = runtime.GOMAXPROCS(0)
	}
	workers = min(workers, len(points))
	if workers <= 1 {
		return g.alone(ctx, points, s.Each, st)
	}
	var (
		mu   sync.Mutex
		next int
		wait sync.WaitGroup
	)
	for range workers {
		wait.Go(func() {
			w := g.NewWorker()
			for {
				mu.Lock()
				if next == len(points) || ctx.Err() != nil {
					mu.Unlock()
					return
				}
				from, to := next, min(next+batch, len(points))
				next = to
				mu.Unlock()
				for _, p := range points[from:to] {
					if ctx.Err() != nil {
						return
					}
					c := w.Point(p)
					mu.Lock()
					st.Done++
					if s.Each != nil {
						s.Each(p, c)
					}
					mu.Unlock()
				}
			}
		})
	}
	wait.Wait()
	return st, ctx.Err()
}

// batch is how many points a worker takes at a time: neighbours share a heart.
const batch = 16

// alone runs points on the caller's goroutine.
func (g *Grid) alone(ctx context.Context, points []int, each func(int, Cell), st Status) (Status, error) {
	w := g.NewWorker()
	for _, p := range points {
		if err := ctx.Err(); err != nil {
			return st, err
		}
		c := w.Point(p)
		st.Done++
		if each != nil {
			each(p, c)
		}
	}
	return st, nil
}

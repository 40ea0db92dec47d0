package sim

import (
	"fmt"
	"strings"
	"testing"

	"escapement/engine/event"
	"escapement/engine/plan"
)

// strip is a run with the questions that the checks ask of it.
type strip struct {
	*event.Log
	t *testing.T
}

// play runs a heart and interventions given as JSON. Every log is validated.
func play(t *testing.T, spanMS float64, heart string, interventions ...string) strip {
	t.Helper()
	p, err := plan.Decode(fmt.Appendf(nil, `{"format":"escapement-plan/1","span_ms":%g,"heart":{%s},"interventions":[%s]}`, spanMS, heart, strings.Join(interventions, ",")))
	if err != nil {
		t.Fatal(err)
	}
	l, err := Run(p)
	if err != nil {
		t.Fatal(err)
	}
	for _, e := range event.Validate(l) {
		t.Error(e)
	}
	return strip{l, t}
}

func stimulus(atMS float64, site string) string {
	return fmt.Sprintf(`{"at_ms":%.4f,"do":"stimulate","site":%q}`, atMS, site)
}

func train(atMS float64, site string, cycleMS float64, count int, extras ...float64) string {
	e := strings.Join(strings.Fields(fmt.Sprint(extras)), ",")
	return fmt.Sprintf(`{"at_ms":%.4f,"do":"train","site":%q,"cycle_ms":%.4f,"count":%d,"extras_ms":%s}`, atMS, site, cycleMS, count, e)
}

// times are the depolarisations of a site, in ms.
func (s strip) times(site string) []float64 {
	id := s.Site(site)
	var out []float64
	for i := range s.Events {
		if e := &s.Events[i]; e.Kind == event.Activate && e.Site == id {
			out = append(out, e.T.MS())
		}
	}
	return out
}

// blocks counts the blocks in a path in a direction.
func (s strip) blocks(path string, d event.Dir, rule event.Rule) int {
	id, n := s.Path(path), 0
	for i := range s.Events {
		if e := &s.Events[i]; e.Kind == event.Block && e.Path == id && e.Dir == d && e.Rule == rule {
			n++
		}
	}
	return n
}

// crossing are the conduction times from one site to another: for each
// depolarisation of from, the time to the depolarisation of to that it led to,
// or -1 where it led to none.
func (s strip) crossing(from, to string) []float64 {
	a, z := s.Site(from), s.Site(to)
	at := map[event.ID]float64{}
	for i := range s.Events {
		e := &s.Events[i]
		if e.Kind != event.Activate || e.Site != z {
			continue
		}
		for c := s.At(e.Cause); c != nil && c.Kind == event.Activate; c = s.At(c.Cause) {
			if c.Site == a {
				at[c.ID] = e.T.Sub(c.T).MS()
				break
			}
		}
	}
	var out []float64
	for i := range s.Events {
		if e := &s.Events[i]; e.Kind == event.Activate && e.Site == a {
			if d, ok := at[e.ID]; ok {
				out = append(out, d)
			} else {
				out = append(out, -1)
			}
		}
	}
	return out
}

// threshold finds by bisection the value between lo, where yes is false, and hi,
// where it is true, at which it turns, to tol.
func threshold(lo, hi, tol float64, yes func(float64) bool) float64 {
	for hi-lo > tol {
		if mid := (lo + hi) / 2; yes(mid) {
			hi = mid
		} else {
			lo = mid
		}
	}
	return hi
}

func near(t *testing.T, name string, got, want, tol float64) {
	t.Helper()
	if d := got - want; d > tol || d < -tol || d != d {
		t.Errorf("%s = %.3f, want %.3f ± %g", name, got, want, tol)
	}
}

func diffs(ts []float64) []float64 {
	var d []float64
	for i := 1; i < len(ts); i++ {
		d = append(d, ts[i]-ts[i-1])
	}
	return d
}

// exact is the tolerance of checks marked exact.
const exact = 1.0

// quiet is a sinus node whose impulses never leave it, out of the way of pacing
// from elsewhere.
const quiet = `"sinus":{"rate_bpm":60,"exit":{"up":null,"drop":"1:0"}}`

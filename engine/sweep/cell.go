package sweep

import (
	"slices"
	"strings"

	"escapement/engine/measure"
	"escapement/engine/tick"
)

// Cell is the outcomes of one point, over its seeds.
type Cell struct {
	Refused string    // the plan of this point cannot be, with one seed at least, and why; the rest is empty
	Values  []Reduced // in the order of Grid.Outcomes
}

// Reduced is one outcome over the seeds of a point. Runs without the number are not
// counted.
type Reduced struct {
	N              int // runs that gave it; 0: none
	Mean, Min, Max float64
	Words          []Count // commonest first, then by name; of a word or words
}

// Count is in how many runs a word came up.
type Count struct {
	Word string
	N    int
}

// Word is the commonest word, or "".
func (r *Reduced) Word() string {
	if len(r.Words) == 0 {
		return ""
	}
	return r.Words[0].Word
}

// numbers gives the number of an outcome in one run, and whether there is one.
var numbers = map[string]func(*measure.Tally) (float64, bool){
	"v_rate_bpm":                   func(t *measure.Tally) (float64, bool) { return t.VV.BPM(), t.VV > 0 },
	"v_interval_min_ms":            func(t *measure.Tally) (float64, bool) { return length(t.VVLeast) },
	"v_interval_max_ms":            func(t *measure.Tally) (float64, bool) { return length(t.VVLongest) },
	"longest_pause_ms":             func(t *measure.Tally) (float64, bool) { return length(t.Longest) },
	"av_min_ms":                    func(t *measure.Tally) (float64, bool) { return length(t.AVLeast) },
	"av_max_ms":                    func(t *measure.Tally) (float64, bool) { return length(t.AVLongest) },
	"atrial_paced_percent":         func(t *measure.Tally) (float64, bool) { return percent(t.AP, t.AP+t.AS) },
	"ventricular_paced_percent":    func(t *measure.Tally) (float64, bool) { return percent(t.VP, t.VP+t.VS) },
	"av_synchronous_percent":       func(t *measure.Tally) (float64, bool) { return percent(t.Synchronous, t.QRSs) },
	"fusion_percent":               func(t *measure.Tally) (float64, bool) { return percent(t.Fusion, t.QRSs) },
	"loop_cycle_ms":                func(t *measure.Tally) (float64, bool) { return length(t.LoopCycle) },
	"mode_switches":                func(t *measure.Tally) (float64, bool) { return float64(t.ModeChanges), true },
	"atrial_no_capture_count":      func(t *measure.Tally) (float64, bool) { return float64(t.LostA), true },
	"ventricular_no_capture_count": func(t *measure.Tally) (float64, bool) { return float64(t.LostV), true },
	"vulnerable_stimuli":           func(t *measure.Tally) (float64, bool) { return float64(t.Vulnerable), true },
}

func length(d tick.Dur) (float64, bool) { return d.MS(), d > 0 }

func percent(n, of int) (float64, bool) {
	if of == 0 {
		return 0, false
	}
	return 100 * float64(n) / float64(of), true
}

// word gives the word of an outcome in one run.
var word = map[string]func(*measure.Tally) string{
	"pattern":      func(t *measure.Tally) string { return t.Pattern },
	"endless_loop": func(t *measure.Tally) string { return t.LoopEnd.String() },
	"va_synchrony": synchrony,
}

func synchrony(t *measure.Tally) string {
	switch {
	case t.Synchrony == 0:
		return "none"
	case t.SynchronyAtClose:
		return "sustained"
	}
	return "ended"
}

// words gives the words of an outcome in one run.
var words = map[string]func(*run) []string{
	"findings": func(r *run) []string { return r.findings },
	"warnings": func(r *run) []string { return r.warnings },
}

// reduce makes a cell of the runs of a point, which are in the order of the seeds.
func (g *Grid) reduce(runs []run) Cell {
	c := Cell{Values: make([]Reduced, len(g.outcomes))}
	for i := range runs {
		if runs[i].refused != "" {
			c.Refused = runs[i].refused
			return c
		}
	}
	for k := range g.outcomes {
		v := &c.Values[k]
		for i := range runs {
			v.add(g.outcomes[k].Name, &runs[i])
		}
		if v.N > 0 {
			v.Mean /= float64(v.N)
		}
		slices.SortFunc(v.Words, func(a, b Count) int {
			if a.N != b.N {
				return b.N - a.N
			}
			return strings.Compare(a.Word, b.Word)
		})
	}
	return c
}

// add takes in one run; Mean is the sum until all are in.
func (v *Reduced) add(name string, r *run) {
	if f := numbers[name]; f != nil {
		x, ok := f(&r.tally)
		if !ok {
			return
		}
		if v.N == 0 || x < v.Min {
			v.Min = x
		}
		if v.N == 0 || x > v.Max {
			v.Max = x
		}
		v.N++
		v.Mean += x
		return
	}
	v.N++
	if f := word[name]; f != nil {
		v.count(f(&r.tally))
		return
	}
	for _, w := range words[name](r) {
		v.count(w)
	}
}

func (v *Reduced) count(w string) {
	for i := range v.Words {
		if v.Words[i].Word == w {
			v.Words[i].N++
			return
		}
	}
	v.Words = append(v.Words, Count{w, 1})
}

// Number gives an outcome that is a number in one run, and whether the run has one.
func Number(outcome string, t *measure.Tally) (float64, bool) { return numbers[outcome](t) }

// Word gives an outcome that is one word in one run.
func Word(outcome string, t *measure.Tally) string { return word[outcome](t) }

package pacer_test

import (
	"cmp"
	"fmt"
	"math/rand/v2"
	"slices"
	"strings"
)

// world is what the leads of a device see: signals in the atrium and the ventricle
// at whole milliseconds, and answers to its stimuli. It knows nothing of hearts:
// it has to be varied, not likely.
type world struct {
	a, v    []bool   // by millisecond
	answers []answer // signals that follow a stimulus
	holdA   int      // after a stimulus the tissue is deaf so long: later signals of this chamber are lost
	holdV   int
}

// answer is a signal in a chamber some time after a stimulus in a chamber.
type answer struct {
	stimulus, signal byte  // 'A' or 'V'
	after            []int // by stimulus, round and round; 0: no answer this time
	n                int
}

func newWorld(span int) *world {
	return &world{a: make([]bool, span), v: make([]bool, span)}
}

// copy is a world that can be lived through again.
func (w *world) copy() *world {
	c := *w
	c.a = append([]bool(nil), w.a...)
	c.v = append([]bool(nil), w.v...)
	c.answers = append([]answer(nil), w.answers...)
	return &c
}

func (w *world) chamber(c byte) []bool {
	if c == 'A' {
		return w.a
	}
	return w.v
}

// mark plans a signal; one past the end of the strip, or at its start, is lost.
func (w *world) mark(c byte, ms int) {
	if s := w.chamber(c); ms > 0 && ms < len(s) {
		s[ms] = true
	}
}

// every plans signals at from, from+step and so on.
func (w *world) every(c byte, from, step int) *world {
	for t := from; t < len(w.a); t += step {
		w.mark(c, t)
	}
	return w
}

// at plans single signals.
func (w *world) at(c byte, ms ...int) *world {
	for _, t := range ms {
		w.mark(c, t)
	}
	return w
}

// answering plans an answer.
func (w *world) answering(stimulus, signal byte, after ...int) *world {
	w.answers = append(w.answers, answer{stimulus: stimulus, signal: signal, after: after})
	return w
}

// stimulus lets the world answer.
func (w *world) stimulus(c byte, ms int) {
	hold := w.holdV
	if c == 'A' {
		hold = w.holdA
	}
	s := w.chamber(c)
	for t := ms + 1; t <= ms+hold && t < len(s); t++ {
		s[t] = false
	}
	for i := range w.answers {
		r := &w.answers[i]
		if r.stimulus != c {
			continue
		}
		if after := r.after[r.n%len(r.after)]; after > 0 {
			w.mark(r.signal, ms+after)
		}
		r.n++
	}
}

// record is a stimulus ("AP", "VP") or a signal with its use ("A tracked").
type record struct {
	ms   float64
	what string
}

func format(rs []record) string {
	var b strings.Builder
	for i, r := range rs {
		if i > 0 {
			b.WriteString(", ")
		}
		fmt.Fprintf(&b, "%v %s", r.ms, r.what)
	}
	return b.String()
}

// life is what a device did: stimuli and signals in order, and the windows that ended
// within the strip, as "400 pvarp, 650" by beginning and name.
type life struct{ records, windows []record }

// runSteps lives through the world with the fixed-step device.
func runSteps(s stepSettings, w *world) life {
	var l life
	d := newStepDevice(s)
	watch := newWatch(d)
	for t := 1; t < len(w.a); t++ {
		say := func(what string) { l.records = append(l.records, record{float64(t), what}) }
		d.tick()
		if w.a[t] && s.mode.sensesA {
			say("A " + d.senseA())
		}
		if w.v[t] && s.mode.pacesV {
			say("V " + d.senseV())
		}
		a, v := d.pace()
		if a {
			say("AP")
			w.stimulus('A', t)
		}
		if v {
			say("VP")
			w.stimulus('V', t)
		}
		l.windows = append(l.windows, watch.look(t)...)
	}
	inOrder(l.windows)
	return l
}

// watch looks at the counters of a device after each step and tells the windows that
// have ended. One that begins and ends within a step is none.
type watch struct {
	counters []namedCounter
	from     []int // where the window began; -1: none is open
	starts   []int
}

func newWatch(d *stepDevice) *watch {
	w := &watch{counters: d.windows()}
	w.from, w.starts = make([]int, len(w.counters)), make([]int, len(w.counters))
	for i := range w.from {
		w.from[i] = -1
	}
	w.look(0)
	return w
}

func (w *watch) look(now int) (ended []record) {
	for i, c := range w.counters {
		anew := c.starts != w.starts[i]
		w.starts[i] = c.starts
		if w.from[i] >= 0 && (anew || !c.open()) {
			ended = append(ended, record{float64(w.from[i]), fmt.Sprintf("%s, %d", c.name, now)})
			w.from[i] = -1
		}
		if anew && c.open() {
			w.from[i] = now
		}
	}
	return ended
}

func inOrder(rs []record) {
	slices.SortFunc(rs, func(a, b record) int {
		return cmp.Or(cmp.Compare(a.ms, b.ms), cmp.Compare(a.what, b.what))
	})
}

// dice draws settings and worlds. Where grain is above 1 every number is a multiple
// of it, so that signals fall on the very ends of intervals far more often.
type dice struct {
	*rand.Rand
	grain int
}

// between draws from lo to hi, both possible, rounded down to the grain but not to 0.
func (d dice) between(lo, hi int) int {
	if hi <= lo {
		return lo
	}
	return max(d.grain, (lo+d.IntN(hi-lo+1))/d.grain*d.grain)
}

func (d dice) chance(percent int) bool { return d.IntN(100) < percent }

// orOff is between, or 0 in one case in three.
func (d dice) orOff(lo, hi int) int {
	if d.chance(33) {
		return 0
	}
	return d.between(lo, hi)
}

func (d dice) settings() stepSettings {
	s := stepSettings{mode: stepModes[d.IntN(len(stepModes))], base: d.IntN(3)}
	if d.chance(40) {
		s.mode = stepModes[0]
	}
	s.lower = d.between(400, 1800)
	if d.chance(90) {
		s.upper = d.between(300, min(750, s.lower))
	}
	s.paced = d.between(60, min(350, s.lower-150))
	s.sensed = d.between(30, s.paced)
	s.pvarp = d.between(150, 500)
	s.pvab = d.orOff(20, min(250, s.pvarp))
	s.afterPVC, s.counts = d.orOff(200, 550), d.chance(50)
	s.past = d.chance(50)
	s.pavb = d.orOff(10, min(100, s.paced-1))
	s.crosstalk = d.orOff(60, 140)
	s.safety = s.crosstalk > s.pavb && d.chance(75)
	s.vrp = d.between(100, min(500, s.lower-100))
	s.arp = d.between(120, min(500, s.lower-100))
	s.blanking = d.orOff(20, min(150, s.arp))
	if d.chance(30) {
		s.noise = d.between(60, 200)
	}
	return s
}

// rhythm draws a world: a sinus rhythm or flutter with or without conduction, an
// idioventricular rhythm, premature beats, noise, far-field and T-wave signals, and
// answers to stimuli.
func (d dice) rhythm(span int) *world {
	w := newWorld(span)
	d.atria(w)
	if d.chance(30) {
		jitter := d.IntN(100)
		for t, cycle := d.between(50, 900), d.between(280, 1500); t < span; t += cycle + d.IntN(jitter+1) {
			w.mark('V', t/d.grain*d.grain)
		}
	}
	for _, c := range []byte{'A', 'V'} {
		if d.chance(60) {
			for range d.IntN(8) {
				w.mark(c, d.between(50, span))
			}
		}
		if d.chance(25) {
			d.noise(w, c)
		}
	}
	if d.chance(25) {
		echo(w, 'V', 'A', d.between(20, 150)) // far-field R
	}
	if d.chance(15) {
		echo(w, 'V', 'V', d.between(180, 400)) // T wave
	}
	for _, r := range []struct {
		stimulus, signal byte
		lo, hi, percent  int
	}{
		{'A', 'V', 80, 350, 60}, // conduction
		{'V', 'A', 100, 450, 50},
		{'A', 'V', 5, 140, 30}, // crosstalk
		{'V', 'A', 20, 150, 20},
		{'V', 'V', 180, 400, 15},
	} {
		if !d.chance(r.percent) {
			continue
		}
		after := make([]int, 1+d.IntN(5))
		for i := range after {
			if d.chance(80) {
				after[i] = d.between(r.lo, r.hi)
			}
		}
		w.answering(r.stimulus, r.signal, after...)
	}
	w.holdA, w.holdV = d.orOff(50, 300), d.orOff(50, 300)
	return w
}

// atria draws what the atria do, and the beats they conduct.
func (d dice) atria(w *world) {
	if d.chance(20) {
		return
	}
	cycle, conducts := d.between(350, 1500), d.IntN(120)
	if d.chance(15) {
		cycle = d.between(180, 340)
	}
	delay, jitter := d.between(80, 350), 0
	if d.chance(50) {
		jitter = d.IntN(80)
	}
	for t := d.between(20, 900); t < len(w.a); t += cycle + d.IntN(jitter+1) {
		p := t / d.grain * d.grain
		w.mark('A', p)
		if d.chance(conducts) {
			w.mark('V', p+delay)
		}
		if d.chance(5) {
			cycle = d.between(350, 1500)
		}
	}
}

// noise draws a burst.
func (d dice) noise(w *world, c byte) {
	gap := d.between(8, 120)
	for t, n := d.between(500, len(w.a)), 5+d.IntN(25); n > 0; t, n = t+gap, n-1 {
		w.mark(c, t)
	}
}

// echo adds to every signal of one chamber one in a chamber some time later.
func echo(w *world, from, to byte, after int) {
	s := append([]bool(nil), w.chamber(from)...)
	for t, there := range s {
		if there {
			w.mark(to, t+after)
		}
	}
}
